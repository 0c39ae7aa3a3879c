"""What a flow-curve model is: one record, and the model with its parameter values."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import InputError

FloatArray = NDArray[np.float64]
Formula = Callable[..., FloatArray]


@dataclass(frozen=True)
class Parameter:
    """One parameter of a model.

    Parameters
    ----------
    key : str
        Name in code, files and JSON.
    symbol : str
        Symbol in tables.
    unit : str
        SI unit as text; ``-`` when dimensionless; may name the flow index (``Pa.s^n``).
    description : str
        The trade's words for it.
    lower, upper : float
        The range in which a value is accepted and searched, ends included.
    """

    key: str
    symbol: str
    unit: str
    description: str
    lower: float
    upper: float


@dataclass(frozen=True)
class Separable:
    """How a model splits into shape and size, for variable projection.

    The stress is ``sum(coefficient_j * basis_j(rate, *shape))`` with coefficients of 0 or
    more, so that a search is needed over the shape only (Golub & Pereyra 1973).

    Parameters
    ----------
    shape : tuple of str
        Names of the shape coordinates, in order; none for a model that is linear.
    grid : callable
        ``grid(rate) -> tuple of 1-D arrays``, one an entry of `shape`: values that cover every
        curve that data at these rates can tell apart.
    basis : callable
        ``basis(rate, *shape) -> tuple of arrays``, one a coefficient, broadcast.
    to_parameters : callable
        ``to_parameters(shape, coefficients) -> tuple`` of parameter values in record order.
    logarithmic : tuple of bool
        Whether a shape coordinate is searched in its logarithm.
    """

    shape: tuple[str, ...]
    grid: Callable[[FloatArray], tuple[FloatArray, ...]]
    basis: Callable[..., tuple[FloatArray, ...]]
    to_parameters: Callable[[tuple[Any, ...], tuple[Any, ...]], tuple[Any, ...]]
    logarithmic: tuple[bool, ...] = ()


@dataclass(frozen=True)
class ModelRecord:
    """Everything that the program knows of one flow-curve model.

    Formulas take the shear rate (or stress) first, then the parameters in record order, all
    broadcast against each other.

    Parameters
    ----------
    key, name, equation : str
        Registry key, the field's name, the equation as text.
    parameters : tuple of Parameter
        In the order in which the formulas take them.
    stress : callable
        Shear stress [Pa] from shear rate [1/s].
    log_slope : callable
        d ln(stress)/d ln(rate) [-] at a shear rate above 0.
    jacobian : callable
        d stress/d parameter at a shear rate: a tuple of arrays in record order.
    source, validity : str
        Where the equation was published; where it may be used.
    separable : Separable
        The split used to find the global least-squares fit.
    rate : callable, optional
        Shear rate [1/s] from shear stress [Pa] in closed form; solved when absent.
    yield_stress : callable, optional
        Yield stress [Pa] from the parameters; 0 when absent.
    moment_ratio : callable, optional
        ``moment_ratio(k, rate, *parameters)`` in closed form for k = 0, 1, 2: the integral of
        stress^k rate d(stress) up to `rate`, over stress^(k+1) rate [-].
    check : callable, optional
        Raises InputError on a combination of values that is no flow curve.
    allowed : callable, optional
        Says which combinations pass `check`, as an array; all when absent.
    """

    key: str
    name: str
    equation: str
    parameters: tuple[Parameter, ...]
    stress: Formula
    log_slope: Formula
    jacobian: Callable[..., tuple[FloatArray, ...]]
    source: str
    validity: str
    separable: Separable
    rate: Formula | None = None
    yield_stress: Formula | None = None
    moment_ratio: Formula | None = None
    check: Callable[..., None] | None = None
    allowed: Callable[..., NDArray[np.bool_]] | None = None

    @property
    def parameter_keys(self) -> tuple[str, ...]:
        """Keys of the parameters, in order."""
        return tuple(parameter.key for parameter in self.parameters)

    @property
    def has_yield_stress(self) -> bool:
        """Whether the model has a yield stress."""
        return self.yield_stress is not None


def _validated(record: ModelRecord, values: Mapping[str, ArrayLike]) -> dict[str, FloatArray]:
    place = f"model {record.key}"
    allowed = ", ".join(record.parameter_keys)
    for key in values:
        if key not in record.parameter_keys:
            raise InputError(f"unknown parameter '{key}'; it takes {allowed}", place)
    checked: dict[str, FloatArray] = {}
    for parameter in record.parameters:
        if parameter.key not in values:
            raise InputError(f"parameter '{parameter.key}' is missing; it takes {allowed}", place)
        try:
            value = np.asarray(values[parameter.key], dtype=float)
        except (TypeError, ValueError):
            raise InputError(
                f"{parameter.key} is {values[parameter.key]!r}; it must be a number", place
            ) from None
        good = (value >= parameter.lower) & (value <= parameter.upper)
        if not np.all(good):
            worst = value[~good].flat[0] if value.ndim else value
            raise InputError(
                f"{parameter.key} is {float(worst):g}; it must lie between {parameter.lower:g} "
                f"and {parameter.upper:g} {parameter.unit}",
                place,
            )
        checked[parameter.key] = value
    if record.check is not None:
        record.check(*checked.values())
    return checked


@dataclass(frozen=True, eq=False)
class Model:
    """A flow curve: a model record with parameter values, scalars or arrays.

    Parameters
    ----------
    record : ModelRecord
        Which equation.
    parameters : mapping of str to array
        SI values; arrays broadcast against each other and against the rates given.

    Raises
    ------
    InputError
        For an unknown, missing or impossible parameter.
    """

    record: ModelRecord
    parameters: Mapping[str, FloatArray] = field(default_factory=dict)

    def __post_init__(self) -> None:
        object.__setattr__(self, "parameters", _validated(self.record, self.parameters))

    def __iter__(self) -> Iterator[FloatArray]:
        return iter(self.parameters.values())

    @property
    def key(self) -> str:
        """Registry key of the model."""
        return self.record.key

    @property
    def shape(self) -> tuple[int, ...]:
        """Shape to which the parameters broadcast; ``()`` for scalars."""
        return np.broadcast_shapes(*(value.shape for value in self))

    @property
    def yield_stress(self) -> FloatArray:
        """Yield stress [Pa], 0 for a model without one; shape of the parameters."""
        if self.record.yield_stress is None:
            return np.zeros(self.shape)
        return np.broadcast_to(self.record.yield_stress(*self), self.shape)

    def stress(self, rate: ArrayLike) -> FloatArray:
        """Return the shear stress [Pa] at a shear rate [1/s] of 0 or more.

        At rest a model with a yield stress returns the yield stress, the limit from above.
        """
        return self.record.stress(_not_negative(rate, "shear rate"), *self)

    def rate(self, stress: ArrayLike) -> FloatArray:
        """Return the shear rate [1/s] at a shear stress [Pa] of 0 or more; 0 below yield."""
        from rheo.models.inverse import rate_from_stress

        return rate_from_stress(self, _not_negative(stress, "shear stress"))

    def viscosity(self, rate: ArrayLike) -> FloatArray:
        """Return the apparent viscosity stress/rate [Pa.s] at a shear rate [1/s] above 0."""
        rate = _not_negative(rate, "shear rate")
        if np.any(rate == 0):
            raise InputError("shear rate is 0; a viscosity needs a shear rate above 0")
        return self.stress(rate) / rate

    def log_slope(self, rate: ArrayLike) -> FloatArray:
        """Return d ln(stress)/d ln(rate) [-] at a shear rate [1/s] above 0."""
        return self.record.log_slope(_not_negative(rate, "shear rate"), *self)

    def jacobian(self, rate: ArrayLike) -> FloatArray:
        """Return d stress/d parameter at a shear rate; parameters along a new last axis."""
        rate = _not_negative(rate, "shear rate")
        shape = np.broadcast_shapes(rate.shape, self.shape)
        columns = [np.broadcast_to(one, shape) for one in self.record.jacobian(rate, *self)]
        return np.stack(columns, axis=-1)

    def with_new_axis(self) -> Model:
        """Return the same model with a trailing axis, to broadcast against nodes or points."""
        return self.map(lambda value: value[..., np.newaxis])

    def map(self, change: Callable[[FloatArray], FloatArray]) -> Model:
        """Return a model whose parameter arrays are reshaped or indexed by `change`."""
        changed = object.__new__(Model)
        object.__setattr__(changed, "record", self.record)
        object.__setattr__(
            changed, "parameters", {key: change(value) for key, value in self.parameters.items()}
        )
        return changed

    def at(self, index: Any) -> Model:
        """Return the model with each parameter array indexed alike, by number, slice or mask."""
        return self.map(lambda value: value[index])

    def __repr__(self) -> str:
        values = ", ".join(
            f"{key}={float(value):.6g}" if value.ndim == 0 else f"{key}=array{value.shape}"
            for key, value in self.parameters.items()
        )
        return f"model({self.key!r}, {values})"


def _not_negative(values: ArrayLike, what: str) -> FloatArray:
    array = np.asarray(values, dtype=float)
    wrong = (array < 0) | np.isinf(array)
    if np.any(wrong):
        worst = float(array[wrong].flat[0]) if array.ndim else float(array)
        raise InputError(f"{what} is {worst:g}; it must be a finite number of 0 or more")
    return array
