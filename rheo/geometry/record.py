"""What a geometry is: one record."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution
from rheo.geometry.flow_points import FlowPoints
from rheo.models import Model

FloatArray = NDArray[np.float64]
Relation = Callable[..., FloatArray]
PairRelation = Callable[..., tuple[FloatArray, FloatArray]]

SETTINGS = {
    "angular_speed": ("angular speed", "ω", "rad/s"),
    "flow": ("flow", "Q", "m^3/s"),
}
READINGS = {
    "torque": ("torque", "M", "N*m"),
    "pressure_drop": ("pressure drop", "ΔP", "Pa"),
}


@dataclass(frozen=True)
class Dimension:
    """One dimension of a geometry.

    Parameters
    ----------
    key : str
        Name in code, files and JSON.
    symbol : str
        Symbol in tables.
    unit : str
        SI unit as text; ``-`` when dimensionless.
    description : str
        The trade's words for it.
    lower, upper : float
        The range in which a value is accepted, ends included.
    default : float, optional
        Value when none is given; None for a dimension that must be given.
    """

    key: str
    symbol: str
    unit: str
    description: str
    lower: float
    upper: float
    default: float | None = None


def _yield_stress(model: Model, *_: FloatArray) -> FloatArray:
    return model.yield_stress


def _no_cautions(model: Model, *_: FloatArray) -> tuple[Caution, ...]:
    return ()


@dataclass(frozen=True)
class GeometryRecord:
    """Everything that the program knows of one geometry.

    Relations take the flow curve first where they need one, then their variable, then the
    dimensions in record order, all broadcast against each other. Rates and settings that they
    are given are above 0.

    Parameters
    ----------
    key, name : str
        Registry key, the field's name.
    setting, reading : str
        What is set (a key of `SETTINGS`) and what is read (a key of `READINGS`).
    place : str
        Where the stress is largest: "bob", "rim", "wall", "cone".
    dimensions : tuple of Dimension
        In the order in which the relations take them.
    setting_at : callable
        ``setting_at(model, rate, *dimensions)``: setting at which the largest shear rate is `rate`.
    sheared_at : callable
        ``sheared_at(model, setting, *dimensions)``: largest shear rate and stress at a setting.
    reading_at : callable
        ``reading_at(model, rate, stress, *dimensions)``: reading at a largest shear rate, which
        may be 0, and stress.
    nominal_forms : mapping of str to callable
        ``form(setting, reading, *dimensions)``: rate and stress by a Newtonian conversion. The
        first is the one that `Geometry.nominal` takes unless another is named.
    nominal_note : str
        Which conversion the first form is, and what the others are.
    inverse_forms : mapping of str to callable
        ``form(setting, reading, *dimensions)``: flow points from a set of readings, without a
        model. The first is the one that `Geometry.flow_points` takes unless another is named.
    source, validity : str
        Where the relations were published; where they may be used.
    rest_stress : callable
        ``rest_stress(model, *dimensions)``: largest stress as the setting falls to 0; the yield
        stress unless the fluid can slide as a block.
    cautions : callable
        ``cautions(model, rate, *dimensions)``: what speaks against the relations at a largest
        shear rate, a tuple of Caution.
    check : callable, optional
        Raises InputError on dimensions that do not fit together.
    """

    key: str
    name: str
    setting: str
    reading: str
    place: str
    dimensions: tuple[Dimension, ...]
    setting_at: Relation
    sheared_at: PairRelation
    reading_at: Relation
    nominal_forms: Mapping[str, PairRelation]
    nominal_note: str
    inverse_forms: Mapping[str, Callable[..., FlowPoints]]
    source: str
    validity: str
    rest_stress: Relation = _yield_stress
    cautions: Callable[..., tuple[Caution, ...]] = _no_cautions
    check: Callable[..., None] | None = None

    @property
    def dimension_keys(self) -> tuple[str, ...]:
        """Keys of the dimensions, in order."""
        return tuple(dimension.key for dimension in self.dimensions)

    def describe(self) -> dict[str, Any]:
        """Return what a menu or a help text needs, as plain data.

        Returns
        -------
        dict
            Key, name, setting and reading with symbol and SI unit, nominal forms, validity,
            source, and for each dimension its symbol, unit, description, range and default.
        """
        setting, setting_symbol, setting_unit = SETTINGS[self.setting]
        reading, reading_symbol, reading_unit = READINGS[self.reading]
        return {
            "key": self.key,
            "name": self.name,
            "place": self.place,
            "setting": {
                "key": self.setting,
                "name": setting,
                "symbol": setting_symbol,
                "unit": setting_unit,
            },
            "reading": {
                "key": self.reading,
                "name": reading,
                "symbol": reading_symbol,
                "unit": reading_unit,
            },
            "nominal_forms": list(self.nominal_forms),
            "inverse_forms": list(self.inverse_forms),
            "nominal_note": self.nominal_note,
            "validity": self.validity,
            "source": self.source,
            "dimensions": [
                {
                    "key": dimension.key,
                    "symbol": dimension.symbol,
                    "unit": dimension.unit,
                    "description": dimension.description,
                    "lower": dimension.lower,
                    "upper": dimension.upper,
                    "default": dimension.default,
                }
                for dimension in self.dimensions
            ],
        }
