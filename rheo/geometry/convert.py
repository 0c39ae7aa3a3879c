"""What a fluid feels in one geometry, and the settings of others at which it feels the same.

"This pipe at 4 m3/h works at 38 1/s; on your cup and bob that is 22 rpm."
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import Caution, InputError
from rheo.geometry.dimensioned import Geometry
from rheo.geometry.record import SETTINGS
from rheo.models import Model

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class ShearPoint:
    """One geometry at one setting.

    Parameters
    ----------
    geometry : Geometry
        Where the fluid is sheared.
    setting : array
        Angular speed [rad/s] or flow [m3/s].
    reading : array
        Torque [N m] or pressure drop [Pa] that the fluid gives there.
    rate, stress, viscosity : array
        Shear rate [1/s], stress [Pa] and apparent viscosity [Pa.s] where the stress is largest;
        the viscosity is infinite where the fluid is at rest.
    nominal_rate, nominal_stress : array
        What a Newtonian conversion makes of the setting and the reading.
    cautions : tuple of Caution
        What speaks against the figures.
    """

    geometry: Geometry
    setting: FloatArray
    reading: FloatArray
    rate: FloatArray
    stress: FloatArray
    viscosity: FloatArray
    nominal_rate: FloatArray
    nominal_stress: FloatArray
    cautions: tuple[Caution, ...] = ()

    def as_dict(self) -> dict[str, Any]:
        """Return the point as plain data for JSON, SI values."""
        record = self.geometry.record
        return {
            "geometry": record.key,
            "name": record.name,
            "place": record.place,
            record.setting: _plain(self.setting),
            record.reading: _plain(self.reading),
            "rate": _plain(self.rate),
            "stress": _plain(self.stress),
            "viscosity": _plain(self.viscosity),
            "nominal_rate": _plain(self.nominal_rate),
            "nominal_stress": _plain(self.nominal_stress),
            "cautions": [caution.as_dict() for caution in self.cautions],
        }


@dataclass(frozen=True, eq=False)
class Conversion:
    """A geometry at a setting, and others in which the fluid is sheared at the same rate.

    Parameters
    ----------
    source : ShearPoint
        What was asked about.
    targets : mapping of str to ShearPoint
        By the names that the caller gave, in that order.
    """

    source: ShearPoint
    targets: Mapping[str, ShearPoint]

    def as_dict(self) -> dict[str, Any]:
        """Return the conversion as plain data for JSON, SI values."""
        return {
            "source": self.source.as_dict(),
            "targets": {name: point.as_dict() for name, point in self.targets.items()},
        }


def shear_point(model: Model, geometry: Geometry, setting: ArrayLike) -> ShearPoint:
    """Return what a fluid feels in a geometry at a setting.

    Parameters
    ----------
    model : Model
        Flow curve; its parameters may be arrays.
    geometry : Geometry
        Where it is sheared.
    setting : array_like
        Angular speed [rad/s] or flow [m3/s], 0 or more.

    Returns
    -------
    ShearPoint
        In the shape to which all arguments broadcast.

    Raises
    ------
    InputError
        If a setting is negative or infinite.
    """
    rate, stress = geometry.sheared(model, setting)
    at = np.broadcast_to(np.asarray(setting, dtype=float), rate.shape)
    reading = geometry.record.reading_at(model, rate, stress, *geometry.dimensions.values())
    moving = rate > 0
    viscosity = np.where(moving, stress / np.where(moving, rate, 1.0), np.inf)
    nominal_rate, nominal_stress = geometry.nominal(at, reading)
    return ShearPoint(
        geometry=geometry,
        setting=at,
        reading=reading,
        rate=rate,
        stress=stress,
        viscosity=np.where(np.isnan(rate), np.nan, viscosity),
        nominal_rate=nominal_rate,
        nominal_stress=nominal_stress,
        cautions=geometry.record.cautions(model, rate, *geometry.dimensions.values()),
    )


def shear_point_at_rate(model: Model, geometry: Geometry, rate: ArrayLike) -> ShearPoint:
    """Return the setting, and all the rest, at which the largest shear rate is `rate` [1/s].

    Arguments and errors as for `shear_point`.
    """
    return shear_point(model, geometry, geometry.setting_for_rate(model, rate))


def convert(
    model: Model,
    source: Geometry,
    setting: ArrayLike,
    targets: Mapping[str, Geometry] | Sequence[Geometry],
) -> Conversion:
    """Find the settings of other geometries at which a fluid is sheared as in the first.

    Parameters
    ----------
    model : Model
        Flow curve; its parameters may be arrays.
    source : Geometry
        The pipe, or the instrument, that is asked about.
    setting : array_like
        Its flow [m3/s] or angular speed [rad/s].
    targets : mapping of str to Geometry, or sequence of Geometry
        Where the same shear rate is wanted. Those of a sequence are named by their keys,
        numbered from the second of a kind on.

    Returns
    -------
    Conversion
        Rate, stress and viscosity are those where the stress is largest: wall, bob, rim.

    Raises
    ------
    InputError
        If a setting is negative or infinite, or the fluid only slides or rests at it.
    """
    start = shear_point(model, source, setting)
    if targets and np.any(start.rate == 0):
        name, symbol, _ = SETTINGS[source.record.setting]
        raise InputError(
            f"the fluid is not sheared at this {name} {symbol}; give one at which it is",
            f"geometry {source.key}",
        )
    named = targets if isinstance(targets, Mapping) else _named(targets)
    return Conversion(
        start,
        {
            name: shear_point_at_rate(model, geometry, start.rate)
            for name, geometry in named.items()
        },
    )


def sentence(conversion: Conversion) -> str:
    """Return the conversion of single settings as one plain English sentence.

    Raises
    ------
    InputError
        If the conversion holds arrays.
    """
    start = conversion.source
    if start.rate.ndim:
        raise InputError("a sentence needs a single setting and a single flow curve")
    name = start.geometry.record.name
    parts = [f"The {name} at {_shown(start)} works at {float(start.rate):.4g} 1/s"]
    parts += [f"on {other} that is {_shown(point)}" for other, point in conversion.targets.items()]
    return "; ".join(parts) + "."


def _shown(point: ShearPoint) -> str:
    value = float(point.setting)
    if point.geometry.record.setting == "angular_speed":
        return f"{value * 30.0 / np.pi:.4g} rpm"
    return f"{value * 3600.0:.4g} m3/h"


def _named(geometries: Sequence[Geometry]) -> dict[str, Geometry]:
    named: dict[str, Geometry] = {}
    for geometry in geometries:
        alike = sum(other.key == geometry.key for other in named.values())
        named[geometry.key if alike == 0 else f"{geometry.key} {alike + 1}"] = geometry
    return named


def _plain(values: FloatArray) -> Any:
    plain = np.asarray(values).astype(object)
    plain[~np.isfinite(values)] = None
    return plain.tolist()
