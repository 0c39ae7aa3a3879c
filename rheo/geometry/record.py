"""What a geometry is: one record, and the geometry with its dimensions."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import InputError
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

        Parameters and errors as for `predict`.
        """
        _, symbol, unit = SETTINGS[self.record.setting]
        at = _not_negative(setting, f"{SETTINGS[self.record.setting][0]} {symbol}", unit)
        dimensions = tuple(self.dimensions.values())
        moving = at > 0
        rate, stress = self.record.sheared_at(model, np.where(moving, at, 1.0), *dimensions)
        rate, stress = np.broadcast_arrays(rate, stress)
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
        return np.where(moving, setting, np.where(np.isnan(at), np.nan, 0.0))

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
        return rate, stress

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
