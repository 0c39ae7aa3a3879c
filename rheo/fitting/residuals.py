"""Weighted residuals of several problems at once, as the least-squares core takes them."""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.core import Evaluate, IntArray
from rheo.fitting.gap_readings import GapRates
from rheo.fitting.problem import Problem, columns_of, is_allowed
from rheo.fitting.reading_problem import ReadingProblem
from rheo.fitting.reading_slopes import GAPS, in_gap
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
    stack = Stack(problems, counts)
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
            width = len(problem.record.parameters) + len(problem.extra)
            predicted[part], slopes[part, :width] = problem.sensitivity(parameters[part, :width])
        return predicted, slopes

    return sensitivities


def _in_one_gap(
    problems: Sequence[Problem], counts: Sequence[int], rough: bool
) -> Sensitivities | None:
    """Return the sensitivities of readings in one gap, all models in one call; None for others.

    Each search starts its solutions from the rates of its last one.
    """
    gaps = [one for one in problems if isinstance(one, ReadingProblem) and one.geometry.key in GAPS]
    if len(gaps) < len(problems):
        return None
    stack = Stack(gaps, counts)
    first = gaps[0]
    bob = np.repeat(first.rough_rates[np.newaxis], sum(counts), axis=0)
    drop = np.full_like(bob, np.nan)

    def sensitivities(parameters: FloatArray, rows: IntArray) -> tuple[FloatArray, FloatArray]:
        parts = []
        for problem, part in stack.split(rows):
            width = len(problem.record.parameters)
            parts.append((problem.record, columns_of(parameters[part, :width]), part))
        curves = SeveralCurves(parts, rows.size)
        known = None if np.isnan(drop[rows]).any() else drop[rows]
        begin = GapRates(bob[rows], known, rough)
        predicted, found, rates = in_gap(
            first.geometry.key, curves, first.setting, first.geometry.dimensions, begin
        )
        slopes = np.zeros((*parameters.shape, first.setting.size))
        slopes[:, : found.shape[1]] = found
        settled = np.isfinite(predicted)
        bob[rows] = np.where(settled, rates.bob, first.rough_rates)
        drop[rows] = np.where(settled, np.asarray(rates.drop, dtype=float), _LITTLE)
        if known is None:
            for problem, part in stack.split(rows):
                _made_good(problem, parameters[part], predicted[part], slopes[part])
        return predicted, slopes

    return sensitivities


def _made_good(
    problem: ReadingProblem, parameters: FloatArray, predicted: FloatArray, slopes: FloatArray
) -> None:
    """Work out in full, in place, the rows whose quick solution did not settle.

    This is for the rows that a search starts from; later ones it need not visit.
    """
    missed = np.isnan(predicted).any(axis=-1)
    if missed.any():
        width = len(problem.record.parameters)
        again = problem.sensitivity(parameters[missed, :width])
        predicted[missed], slopes[missed, :width] = again
