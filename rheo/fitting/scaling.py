"""Readings at several temperatures or solids fractions, as one problem of least squares."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.problem import CurveProblem, Problem, bare_model, columns_of
from rheo.fitting.reading_problem import ReadingProblem
from rheo.fitting.reading_slopes import RELATIONS
from rheo.fitting.weighting import Weighting
from rheo.geometry import Geometry
from rheo.models import ModelRecord, Parameter
from rheo.models.state_curve import ScaledCurve, ScalingLaw

FloatArray = NDArray[np.float64]

_SHARE = 1e-6
# A wild slope tried on the way must not overflow.
_LARGEST_POWER = 200.0


@dataclass(frozen=True, eq=False)
class ScaledProblem:
    """Readings at several states, predicted from one flow curve and a scaling law.

    Parameters
    ----------
    base : CurveProblem or ReadingProblem
        The readings, in stress or in what the instrument measured.
    law : ScalingLaw
        How the parameters follow the state.
    state : array, shape (n,)
        State of each reading.
    """

    base: CurveProblem | ReadingProblem
    law: ScalingLaw
    state: FloatArray

    @property
    def record(self) -> ModelRecord:
        """The model."""
        return self.base.record

    @cached_property
    def extra(self) -> tuple[Parameter, ...]:
        """The slopes, after the parameters of the model."""
        return self.law.extra(self.record)

    @property
    def observed(self) -> FloatArray:
        """Measured readings, shape (n,)."""
        return self.base.observed

    @property
    def weighting(self) -> Weighting:
        """How much each reading counts."""
        return self.base.weighting

    @property
    def order(self) -> NDArray[np.intp]:
        """Indices of the readings in rising order of the setting."""
        return self.base.order

    @cached_property
    def _x(self) -> FloatArray:
        return self.law.x(self.state)

    @property
    def rough_rates(self) -> FloatArray:
        """Shear rates [1/s] that the readings are about, shape (n,)."""
        return self.base.rough_rates

    @property
    def geometry(self) -> Geometry | None:
        """Where the fluid was sheared; None for a flow curve."""
        return self.base.geometry if isinstance(self.base, ReadingProblem) else None

    @property
    def setting(self) -> FloatArray:
        """Speed, flow or shear rate of each reading, shape (n,)."""
        return self.base.setting if isinstance(self.base, ReadingProblem) else self.base.rate

    def curve(self, parameters: FloatArray) -> ScaledCurve:
        """Return the flow curve as a function of the state, at parameters of shape (..., p)."""
        return ScaledCurve(self.record, self.law, tuple(np.moveaxis(parameters, -1, 0)))

    def _power(self, slope: FloatArray) -> FloatArray:
        return np.clip(slope * self._x, -_LARGEST_POWER, _LARGEST_POWER)

    def columns(self, parameters: FloatArray) -> list[FloatArray]:
        """Return the model's parameters (..., n) at each reading."""
        values = columns_of(parameters)
        count = len(self.record.parameters)
        rows = zip(
            values[:count], self.law.slope_of(self.record), self.record.parameters, strict=True
        )
        return [
            value
            if index is None
            else np.minimum(value * np.exp(self._power(values[count + index])), one.upper)
            for value, index, one in rows
        ]

    def predict(self, parameters: FloatArray) -> FloatArray:
        """Return predicted readings, shape (..., n)."""
        return self._predict(self.columns(parameters))

    def _predict(self, columns: list[FloatArray]) -> FloatArray:
        base = self.base
        if isinstance(base, CurveProblem):
            return np.asarray(self.record.stress(base.rate, *columns))
        model = bare_model(self.record, columns)
        relation, dimensions = base.geometry.record, base.geometry.dimensions.values()
        rate, stress = relation.sheared_at(model, base.setting, *dimensions)
        return relation.reading_at(model, rate, stress, *dimensions)

    def sensitivity(self, parameters: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Return predicted readings (b, n) and their derivatives (b, p, n)."""
        columns = self.columns(parameters)
        predicted, local = self._local(columns)
        return predicted, self.chained(parameters, columns, local)

    def chained(
        self, parameters: FloatArray, columns: list[FloatArray], local: FloatArray
    ) -> FloatArray:
        """Return derivatives (b, p, n) from those by each reading's own parameters."""
        slopes = np.zeros((*parameters.shape, local.shape[-1]))
        count = len(columns)
        for i, (column, index) in enumerate(
            zip(columns, self.law.slope_of(self.record), strict=True)
        ):
            if index is None:
                slopes[:, i] = local[:, i]
                continue
            power = self._power(parameters[:, count + index, np.newaxis])
            slopes[:, i] = local[:, i] * np.exp(power)
            slopes[:, count + index] += local[:, i] * column * self._x
        return slopes

    def _local(self, columns: list[FloatArray]) -> tuple[FloatArray, FloatArray]:
        """Return readings (b, n) and derivatives (b, p, n) by each reading's own parameters."""
        base = self.base
        if isinstance(base, CurveProblem):
            predicted = np.asarray(self.record.stress(base.rate, *columns))
            found = self.record.jacobian(base.rate, *columns)
            return predicted, np.stack([np.broadcast_to(one, predicted.shape) for one in found], 1)
        relation = RELATIONS.get(base.geometry.key)
        if relation is not None:
            model = bare_model(self.record, columns)
            reading, slopes, *_ = relation(
                model, base.setting, base.geometry.dimensions, base.rough_rates, base.rough
            )
            if not np.isnan(reading).any():
                return reading, slopes
        predicted = self._predict(columns)
        slopes = np.empty((predicted.shape[0], len(columns), predicted.shape[-1]))
        for i, column in enumerate(columns):
            step = _SHARE * np.where(column > 0, column, 1.0)
            moved = [value + step if j == i else value for j, value in enumerate(columns)]
            slopes[:, i] = (self._predict(moved) - predicted) / step
        return predicted, slopes

    def rates(self, parameters: FloatArray) -> FloatArray:
        """Return the shear rates [1/s] to which the readings belong, shape (n,)."""
        base = self.base
        if isinstance(base, CurveProblem):
            return base.rate
        model = bare_model(self.record, self.columns(parameters))
        rate, _ = base.geometry.record.sheared_at(
            model, base.setting, *base.geometry.dimensions.values()
        )
        return np.broadcast_to(rate, base.setting.shape)


def instrument_of(problem: Problem) -> ReadingProblem | None:
    """Return the readings of an instrument on which a problem rests; None for a flow curve."""
    base = problem.base if isinstance(problem, ScaledProblem) else problem
    return base if isinstance(base, ReadingProblem) else None


def with_instrument(problem: Problem, **changes: Any) -> Problem:
    """Return a problem with fields of its `instrument_of` changed; a flow curve as it is."""
    readings = instrument_of(problem)
    if readings is None:
        return problem
    changed = replace(readings, **changes)
    return replace(problem, base=changed) if isinstance(problem, ScaledProblem) else changed
