"""What a fit is asked: readings, their weights, and a model's predictions of them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache, cached_property
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.coordinates import Coordinates
from rheo.fitting.weighting import Weighting
from rheo.models import Model, ModelRecord, Parameter

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]


class Problem(Protocol):
    """Readings with a model's predictions of them; parameters of shape (..., p)."""

    @property
    def record(self) -> ModelRecord:
        """The model."""

    @property
    def extra(self) -> tuple[Parameter, ...]:
        """Parameters of the instrument, after those of the model."""

    @property
    def observed(self) -> FloatArray:
        """Measured readings, shape (n,)."""

    @property
    def weighting(self) -> Weighting:
        """How much each reading counts."""

    @property
    def order(self) -> NDArray[np.intp]:
        """Indices of the readings in rising order of the setting, shape (n,)."""

    @property
    def rough_rates(self) -> FloatArray:
        """Shear rates [1/s] that the readings are about, shape (n,)."""

    def predict(self, parameters: FloatArray) -> FloatArray:
        """Return predicted readings, shape (..., n)."""

    def sensitivity(self, parameters: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Return predicted readings (b, n) and their derivatives (b, p, n)."""

    def rates(self, parameters: FloatArray) -> FloatArray:
        """Return the shear rates [1/s] to which the readings belong, shape (n,)."""


@dataclass(frozen=True, eq=False)
class CurveProblem:
    """Measured stresses at known shear rates.

    Parameters
    ----------
    record : ModelRecord
        The model.
    rate, observed : array, shape (n,)
        Shear rate [1/s] and measured shear stress [Pa].
    weighting : Weighting
        How much each reading counts.
    """

    record: ModelRecord
    rate: FloatArray
    observed: FloatArray
    weighting: Weighting

    @property
    def extra(self) -> tuple[Parameter, ...]:
        """None: a flow curve has no instrument."""
        return ()

    @cached_property
    def order(self) -> NDArray[np.intp]:
        """Indices of the readings in rising order of the shear rate."""
        return np.argsort(self.rate, kind="stable")

    @property
    def rough_rates(self) -> FloatArray:
        """The shear rates [1/s] of the readings."""
        return self.rate

    def predict(self, parameters: FloatArray) -> FloatArray:
        """Return predicted stresses [Pa], shape (..., n)."""
        return self.record.stress(self.rate, *columns_of(parameters))

    def sensitivity(self, parameters: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Return predicted stresses (b, n) and their derivatives (b, p, n)."""
        columns = columns_of(parameters)
        predicted = self.record.stress(self.rate, *columns)
        slopes = np.empty((*parameters.shape, self.rate.size))
        for index, column in enumerate(self.record.jacobian(self.rate, *columns)):
            slopes[..., index, :] = column
        return predicted, slopes

    def rates(self, parameters: FloatArray) -> FloatArray:  # noqa: ARG002
        """Return the shear rates [1/s] of the readings."""
        return self.rate


def columns_of(parameters: FloatArray) -> list[FloatArray]:
    """Return parameters of shape (..., p) one by one, each with a trailing axis."""
    return [parameters[..., index, np.newaxis] for index in range(parameters.shape[-1])]


def bare_model(record: ModelRecord, values: Sequence[FloatArray]) -> Model:
    """Return a model without a check of its values: a search stays inside the bounds by itself."""
    model = object.__new__(Model)
    object.__setattr__(model, "record", record)
    parameters = dict(zip(record.parameter_keys, values, strict=True))
    object.__setattr__(model, "parameters", parameters)
    return model


def parameter_keys(problem: Problem) -> tuple[str, ...]:
    """Return the keys of all parameters of a problem, the model's first."""
    return (*problem.record.parameter_keys, *(extra.key for extra in problem.extra))


def bounds(problem: Problem) -> tuple[FloatArray, FloatArray]:
    """Return lower and upper bounds of all parameters, shape (p,)."""
    every = (*problem.record.parameters, *problem.extra)
    return np.array([one.lower for one in every]), np.array([one.upper for one in every])


def coordinates(problem: Problem) -> Coordinates:
    """Return the coordinates in which a problem is searched."""
    roots = (*_roots(problem.record.key, problem.record), *(False for _ in problem.extra))
    return Coordinates.for_bounds(*bounds(problem), np.array(roots, dtype=bool))


@cache
def _roots(key: str, record: ModelRecord) -> tuple[bool, ...]:  # noqa: ARG001
    """Say which parameters have an infinite influence at a bound of 0, as Casson's yield stress."""
    middle = [np.asarray(np.clip(1.0, one.lower, one.upper)) for one in record.parameters]
    found = []
    for index, parameter in enumerate(record.parameters):
        values = list(middle)
        values[index] = np.asarray(parameter.lower)
        with np.errstate(all="ignore"):
            slope = record.jacobian(np.asarray(1.0), *values)[index]
        found.append(parameter.lower == 0.0 and not np.isfinite(slope).all())
    return tuple(found)


def is_allowed(problem: Problem, parameters: FloatArray) -> BoolArray:
    """Say which rows of parameters (b, p) are flow curves by the model's record."""
    rule = problem.record.allowed
    if rule is None:
        return np.ones(len(parameters), dtype=bool)
    return rule(*parameters.T[: len(problem.record.parameters)])
