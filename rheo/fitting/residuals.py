"""Weighted residuals of several problems at once, as the least-squares core takes them."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import TypeGuard

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.core import Evaluate, IntArray
from rheo.fitting.gap_readings import GapRates
from rheo.fitting.problem import Problem, columns_of, is_allowed
from rheo.fitting.reading_problem import ReadingProblem
from rheo.fitting.reading_slopes import GAPS, in_gap
from rheo.fitting.scaling import ScaledProblem, instrument_of, with_instrument
from rheo.fitting.several import SeveralCurves
from rheo.fitting.stack import Stack

FloatArray = NDArray[np.float64]
# Where no drop of the rate across the gap is known: any start will do.
_LITTLE = -0.1

Sensitivities = Callable[[FloatArray, IntArray], tuple[FloatArray, FloatArray]]


def weighted(
    problems: Sequence[Problem],
    counts: Sequence[int],
    observed: FloatArray | None = None,
    rough: bool = False,
) -> Evaluate:
    """Return the function that `core.minimise` asks for, for problems of the same readings.

    Parameters
    ----------
    problems : sequence of Problem
        Predictions of the same readings with the same weights.
    counts : sequence of int
        Number of searches of each.
    observed : array, shape (b, n), optional
        Readings for each search, in place of the problems' own; weights are found from them.

    rough : bool
        Whether predictions right to 1e-6 will do, on the way to a minimum.

    Returns
    -------
    callable
        ``evaluate(parameters, rows) -> (residuals, sensitivities)``, both over sigma.
    """
    stack = Stack(
        [with_instrument(one, rough=True) for one in problems] if rough else problems, counts
    )
    measured = problems[0].observed if observed is None else observed
    precision = 1.0 / problems[0].weighting.sigma(measured)
    target = measured * precision
    sensitivities = _in_one_gap(problems, counts, rough) or _one_by_one(stack)

    def evaluate(parameters: FloatArray, rows: IntArray) -> tuple[FloatArray, FloatArray]:
        predicted, slopes = sensitivities(parameters, rows)
        for problem, part in stack.split(rows):
            if problem.record.allowed is not None:
                predicted[part][~is_allowed(problem, parameters[part])] = np.inf
        if observed is None:
            return predicted * precision - target, slopes * precision
        weight = precision[rows]
        return predicted * weight - target[rows], slopes * weight[:, np.newaxis, :]

    return evaluate


def _one_by_one(stack: Stack[Problem]) -> Sensitivities:
    def sensitivities(parameters: FloatArray, rows: IntArray) -> tuple[FloatArray, FloatArray]:
        readings = stack.kinds[0].observed.size
        predicted = np.empty((rows.size, readings))
        slopes = np.zeros((*parameters.shape, readings))
        for problem, part in stack.split(rows):
            width = _width(problem)
            predicted[part], slopes[part, :width] = problem.sensitivity(parameters[part, :width])
        return predicted, slopes

    return sensitivities


def _in_one_gap(
    problems: Sequence[Problem], counts: Sequence[int], rough: bool
) -> Sensitivities | None:
    """Return the sensitivities of readings in one gap, all models in one call; None for others.

    Each search starts its solutions from the rates of its last one.
    """
    gaps = [_in_gap(one) for one in problems]
    first = gaps[0]
    if first is None or None in gaps:
        return None
    stack = Stack(problems, counts)
    bob = np.repeat(first.rough_rates[np.newaxis], sum(counts), axis=0)
    drop = np.full_like(bob, np.nan)

    def sensitivities(parameters: FloatArray, rows: IntArray) -> tuple[FloatArray, FloatArray]:
        parts = []
        for problem, part in stack.split(rows):
            own = parameters[part, : _width(problem)]
            columns = problem.columns(own) if _is_scaled(problem) else columns_of(own)
            parts.append((problem.record, columns, part))
        curves = SeveralCurves(parts, rows.size)
        known = None if np.isnan(drop[rows]).any() else drop[rows]
        begin = GapRates(bob[rows], known, rough)
        predicted, found, rates = in_gap(
            first.geometry.key, curves, first.setting, first.geometry.dimensions, begin
        )
        slopes = np.zeros((*parameters.shape, first.setting.size))
        for (problem, part), (_, columns, _) in zip(stack.split(rows), parts, strict=True):
            width, local = _width(problem), found[part]
            if _is_scaled(problem):
                slopes[part, :width] = problem.chained(parameters[part, :width], columns, local)
            else:
                slopes[part, :width] = local[:, :width]
        settled = np.isfinite(predicted)
        bob[rows] = np.where(settled, rates.bob, first.rough_rates)
        drop[rows] = np.where(settled, np.asarray(rates.drop, dtype=float), _LITTLE)
        if known is None:
            for problem, part in stack.split(rows):
                _made_good(problem, parameters[part], predicted[part], slopes[part])
        return predicted, slopes

    return sensitivities


def _in_gap(problem: Problem) -> ReadingProblem | None:
    """Return the readings of a problem where they are of one gap."""
    base = instrument_of(problem)
    return base if base is not None and base.geometry.key in GAPS else None


def _is_scaled(problem: Problem) -> TypeGuard[ScaledProblem]:
    return isinstance(problem, ScaledProblem)


def _width(problem: Problem) -> int:
    return len(problem.record.parameters) + len(problem.extra)


def _made_good(
    problem: Problem, parameters: FloatArray, predicted: FloatArray, slopes: FloatArray
) -> None:
    """Work out in full, in place, the rows whose quick solution did not settle.

    This is for the rows that a search starts from; later ones it need not visit.
    """
    missed = np.isnan(predicted).any(axis=-1)
    if missed.any():
        width = _width(problem)
        again = problem.sensitivity(parameters[missed, :width])
        predicted[missed], slopes[missed, :width] = again
