"""A geometry with its dimensions."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import Caution, InputError
from rheo.geometry.flow_points import FlowPoints
from rheo.geometry.record import SETTINGS, GeometryRecord
from rheo.models import Model
from rheo.models.monotone import LARGEST_RATE

FloatArray = NDArray[np.float64]


def _validated(record: GeometryRecord, values: Mapping[str, ArrayLike]) -> dict[str, FloatArray]:
    place = f"geometry {record.key}"
    allowed = ", ".join(record.dimension_keys)
    for key in values:
        if key not in record.dimension_keys:
            raise InputError(f"unknown dimension '{key}'; it takes {allowed}", place)
    checked: dict[str, FloatArray] = {}
    for dimension in record.dimensions:
        given = values.get(dimension.key, dimension.default)
        if given is None:
            raise InputError(f"dimension '{dimension.key}' is missing; it takes {allowed}", place)
        try:
            value = np.asarray(given, dtype=float)
        except (TypeError, ValueError):
            raise InputError(f"{dimension.key} is {given!r}; it must be a number", place) from None
        good = (value >= dimension.lower) & (value <= dimension.upper)
        if not np.all(good):
            raise InputError(
                f"{dimension.key} is {float(value[~good].flat[0]):g}; it must lie between "
                f"{dimension.lower:g} and {dimension.upper:g} {dimension.unit}",
                place,
            )
        checked[dimension.key] = value
    _require_broadcast(checked, place)
    if record.check is not None:
        record.check(*checked.values())
    return checked


def _require_broadcast(values: Mapping[str, FloatArray], place: str) -> None:
    try:
        np.broadcast_shapes(*(value.shape for value in values.values()))
    except ValueError:
        sizes = ", ".join(f"{key} {value.shape}" for key, value in values.items() if value.ndim)
        raise InputError(
            f"the dimensions have sizes that do not fit together: {sizes}", place
        ) from None


@dataclass(frozen=True, eq=False)
class Geometry:
    """A place where a fluid is sheared: a geometry record with its dimensions.

    Dimensions may be arrays, such as a tube diameter for every reading. They broadcast against
    the settings and against the parameters of the model.

    Parameters
    ----------
    record : GeometryRecord
        Which geometry.
    dimensions : mapping of str to array
        SI values; those with a default may be left out.

    Raises
    ------
    InputError
        For an unknown, missing or impossible dimension.
    """

    record: GeometryRecord
    dimensions: Mapping[str, FloatArray] = field(default_factory=dict)

    def __post_init__(self) -> None:
        object.__setattr__(self, "dimensions", _validated(self.record, self.dimensions))

    @property
    def key(self) -> str:
        """Registry key of the geometry."""
        return self.record.key

    @property
    def shape(self) -> tuple[int, ...]:
        """Shape to which the dimensions broadcast; ``()`` for scalars."""
        return np.broadcast_shapes(*(value.shape for value in self.dimensions.values()))

    def map(self, change: Callable[[FloatArray], FloatArray]) -> Geometry:
        """Return the geometry with `change` applied to each dimension: to reshape or index."""
        changed = object.__new__(Geometry)
        object.__setattr__(changed, "record", self.record)
        object.__setattr__(
            changed, "dimensions", {key: change(value) for key, value in self.dimensions.items()}
        )
        return changed

    def replaced(self, **dimensions: ArrayLike) -> Geometry:
        """Return the geometry with other values for some dimensions, validated."""
        given = {key: np.asarray(value) for key, value in dimensions.items()}
        return Geometry(self.record, {**self.dimensions, **given})

    def predict(self, model: Model, setting: ArrayLike) -> FloatArray:
        """Return the reading that a fluid gives at a setting.

        Parameters
        ----------
        model : Model
            Flow curve; its parameters may be arrays.
        setting : array_like
            Angular speed [rad/s] or flow [m3/s], 0 or more. At 0 the reading is its limit from
            above, which a yield stress keeps above 0.

        Returns
        -------
        array
            Torque [N m] or pressure drop [Pa], in the shape to which all arguments broadcast;
            NaN where the setting is NaN.

        Raises
        ------
        InputError
            If a setting is negative or infinite.
        """
        rate, stress = self.sheared(model, setting)
        return self.record.reading_at(model, rate, stress, *self.dimensions.values())

    def sheared(self, model: Model, setting: ArrayLike) -> tuple[FloatArray, FloatArray]:
        """Return shear rate [1/s] and stress [Pa] where the stress is largest.

        The rate is infinite at a setting that the flow curve cannot carry, because its stress
        levels off; the stress is then the one at which it does.

        Parameters and errors as for `predict`.
        """
        _, symbol, unit = SETTINGS[self.record.setting]
        at = _not_negative(setting, f"{SETTINGS[self.record.setting][0]} {symbol}", unit)
        dimensions = tuple(self.dimensions.values())
        moving = at > 0
        rate, stress = self.record.sheared_at(model, np.where(moving, at, 1.0), *dimensions)
        rate = np.where(rate < LARGEST_RATE, rate, np.inf)
        shape = np.broadcast_shapes(at.shape, model.shape, self.shape)
        rate, stress = np.broadcast_to(rate, shape), np.broadcast_to(stress, shape)
        if np.all(moving):
            return rate, stress
        unknown = np.isnan(at)
        rest = np.where(unknown, np.nan, self.record.rest_stress(model, *dimensions))
        return (
            np.where(moving, rate, np.where(unknown, np.nan, 0.0)),
            np.where(moving, stress, rest),
        )

    def setting_for_rate(self, model: Model, rate: ArrayLike) -> FloatArray:
        """Return the setting at which the largest shear rate in the geometry is `rate` [1/s].

        Returns
        -------
        array
            Angular speed [rad/s] or flow [m3/s]; 0 at a rate of 0, NaN at NaN.

        Raises
        ------
        InputError
            If a rate is negative or infinite.
        """
        at = _not_negative(rate, "shear rate", "1/s")
        moving = at > 0
        setting = self.record.setting_at(
            model, np.where(moving, at, 1.0), *self.dimensions.values()
        )
        setting = np.where(moving, setting, np.where(np.isnan(at), np.nan, 0.0))
        return np.broadcast_to(setting, np.broadcast_shapes(at.shape, model.shape, self.shape))

    def nominal(
        self, setting: ArrayLike, reading: ArrayLike, form: str | None = None
    ) -> tuple[FloatArray, FloatArray]:
        """Return shear rate [1/s] and stress [Pa] as if the fluid were Newtonian.

        Parameters
        ----------
        setting : array_like
            Angular speed [rad/s] or flow [m3/s].
        reading : array_like
            Torque [N m] or pressure drop [Pa].
        form : str, optional
            A key of ``record.nominal_forms``; the first of them when absent.

        Returns
        -------
        tuple of array
            Shear rate and shear stress.

        Raises
        ------
        InputError
            For a form that this geometry does not have.
        """
        convert = _chosen(self.record.nominal_forms, form, "nominal", self.record.key)
        rate, stress = convert(
            np.asarray(setting, dtype=float),
            np.asarray(reading, dtype=float),
            *self.dimensions.values(),
        )
        shape = np.broadcast_shapes(np.shape(rate), np.shape(stress), self.shape)
        return np.broadcast_to(rate, shape), np.broadcast_to(stress, shape)

    def flow_points(
        self, setting: ArrayLike, reading: ArrayLike, form: str | None = None
    ) -> FlowPoints:
        """Return true shear rates and stresses from a set of readings, without a model.

        Parameters
        ----------
        setting, reading : array_like, shape (n,)
            Angular speed [rad/s] or flow [m3/s]; torque [N m] or pressure drop [Pa].
        form : str, optional
            A key of ``record.inverse_forms``; the first of them when absent.

        Returns
        -------
        FlowPoints
            Where the stress is largest, with the smoothed local slope that was used.

        Raises
        ------
        InputError
            For an unknown form, fewer than 3 different settings, or readings that do not rise.
        """
        convert = _chosen(self.record.inverse_forms, form, "inverse", self.record.key)
        return convert(
            np.asarray(setting, dtype=float),
            np.asarray(reading, dtype=float),
            *self.dimensions.values(),
        )

    def cautions(self, model: Model, setting: ArrayLike) -> tuple[Caution, ...]:
        """Return what speaks against the figures of this geometry at the settings given."""
        rate, _ = self.sheared(model, setting)
        return self.record.cautions(model, rate, *self.dimensions.values())

    def __repr__(self) -> str:
        values = ", ".join(
            f"{key}={float(value):.6g}" if value.ndim == 0 else f"{key}=array{value.shape}"
            for key, value in self.dimensions.items()
        )
        return f"geometry({self.key!r}, {values})"


def _chosen(
    forms: Mapping[str, Callable[..., Any]], form: str | None, kind: str, key: str
) -> Callable[..., Any]:
    name = next(iter(forms)) if form is None else form
    if name not in forms:
        raise InputError(
            f"unknown {kind} form '{name}'; it has {', '.join(forms)}", f"geometry {key}"
        )
    return forms[name]


def _not_negative(values: ArrayLike, what: str, unit: str) -> FloatArray:
    array = np.asarray(values, dtype=float)
    wrong = (array < 0) | np.isinf(array)
    if np.any(wrong):
        worst = float(array[wrong].flat[0]) if array.ndim else float(array)
        raise InputError(f"{what} is {worst:g} {unit}; it must be a finite number of 0 or more")
    return array
