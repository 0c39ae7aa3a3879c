"""Models fitted to many flow curves at once, for batches of files.

The model that `rheo.fit` chooses, at the same minimum, by searches that all curves take together.
What a curve is fitted with moves its numbers by rounding only.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from rheo.errors import FitError
from rheo.fitting.coordinates import Coordinates
from rheo.fitting.core import Evaluate, minimise
from rheo.fitting.entry import curve_task, rank, records_of
from rheo.fitting.final import Final, covariance
from rheo.fitting.fits import Fits
from rheo.fitting.many_grid import Curves, grid_starts, on_nodes
from rheo.fitting.problem import CurveProblem, Problem, bounds, columns_of, coordinates
from rheo.fitting.result import Fit
from rheo.fitting.task import Task
from rheo.fitting.weighting import Instrument, Weighting, resolve_weighting
from rheo.models import ModelRecord
from rheo.readings import FlowCurve

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

# Minima of the grid that are followed, by the number of shape coordinates, and for how long.
_STARTS = (1, 3, 12, 16)
_FIRST_STEPS, _FIRST_TOLERANCE = 12, 1e-3
_FOLLOWED = 4
_STEPS, _TOLERANCE = 40, 1e-9
_LAST_STEPS, _LAST_TOLERANCE = 200, 1e-15
_FAR, _NEAR = 1e-3, 1e-6
# Padded lengths are powers of 2, so that they say nothing of a curve's neighbours.
_SHORTEST = 8
# A parameter whose whole effect is below this share of every reading is at its bound of 0.
_NO_EFFECT, _SAME = 1e-9, 1e-12


def fit_curves(
    curves: Sequence[FlowCurve],
    models: str | Sequence[str] | None = None,
    weighting: str | Instrument | Weighting = "relative",
) -> list[Fits | FitError]:
    """Fit flow-curve models to each of many flow curves.

    Parameters
    ----------
    curves : sequence of FlowCurve
        Points that the user excluded are left out.
    models : str or sequence of str, optional
        Model keys; all models when absent.
    weighting : str or Instrument
        As for `rheo.fit`.

    Returns
    -------
    list of Fits or FitError
        For each curve what `rheo.fit` gives, or why there is nothing. The best fit is brought to
        its minimum as exactly. A model with more parameters than the readings can tell, which
        has many minima in their scatter, may be left in another of them than `rheo.fit` finds;
        such a model is not the best.

    Raises
    ------
    InputError
        For an unknown model or weighting.
    """
    weights = resolve_weighting(weighting)
    records = records_of(models)
    found: list[Fits | FitError] = []
    tasks: list[tuple[int, Task, FloatArray]] = []
    for curve in curves:
        try:
            task = curve_task(curve, weights)
        except FitError as error:
            found.append(error)
            continue
        tasks.append((len(found), task, curve.rate[task.points]))
        found.append(FitError("not fitted", "fit"))
    for together in _by_length(tasks):
        minima = _all_minima(records, _padded(together, weights))
        for row, (place, task, rate) in enumerate(together):
            own = {key: (values[row], float(left[row])) for key, (values, left) in minima.items()}
            found[place] = _ranked(records, task, rate, own, weights)
    _polish([one for one in found if isinstance(one, Fits)])
    return found


def _by_length(
    tasks: Sequence[tuple[int, Task, FloatArray]],
) -> list[list[tuple[int, Task, FloatArray]]]:
    groups: dict[int, list[tuple[int, Task, FloatArray]]] = {}
    for one in tasks:
        groups.setdefault(_padded_length(one[2].size), []).append(one)
    return list(groups.values())


def _padded_length(count: int) -> int:
    return max(_SHORTEST, 1 << (count - 1).bit_length())


def _padded(tasks: Sequence[tuple[int, Task, FloatArray]], weights: Weighting) -> Curves:
    return padded_curves([(rate, task.observed) for _, task, rate in tasks], weights)


def padded_curves(points: Sequence[tuple[FloatArray, FloatArray]], weights: Weighting) -> Curves:
    """Return rates and stresses as `Curves`; what fills them up repeats the last point."""
    width = _padded_length(max(rate.size for rate, _ in points))
    rate, stress = np.empty((2, len(points), width))
    precision = np.zeros_like(rate)
    for row, (at, observed) in enumerate(points):
        rate[row], stress[row] = at[-1], observed[-1]
        rate[row, : at.size], stress[row, : at.size] = at, observed
        precision[row, : at.size] = 1.0 / weights.sigma(observed)
    return Curves(rate, stress, precision)


def _ranked(
    records: Sequence[ModelRecord],
    task: Task,
    rate: FloatArray,
    minima: dict[str, tuple[FloatArray, float]],
    weights: Weighting,
) -> Fits | FitError:
    def solve(wanted: Sequence[ModelRecord]) -> list[tuple[Problem, FloatArray, float]]:
        return [
            (CurveProblem(record, rate, task.observed, weights), *minima[record.key])
            for record in wanted
        ]

    try:
        return rank(
            Task(solve, task.pose, task.observed, task.distinct, task.points), records, weights
        )
    except FitError as error:
        return error


def _all_minima(
    records: Sequence[ModelRecord], curves: Curves
) -> dict[str, tuple[FloatArray, FloatArray]]:
    """Return parameters (c, p) and sums of squares (c,) of each model."""
    with np.errstate(all="ignore"):
        nodes = on_nodes(curves)
        found = {}
        for record in records:
            starts = _STARTS[min(len(record.separable.shape), len(_STARTS) - 1)]
            rows, first = [], []
            for some in nodes:
                values, real = grid_starts(record, some, starts)
                curve, place = np.nonzero(real)
                rows.append(some.members[curve])
                first.append(values[curve, place])
            order = np.argsort(np.concatenate(rows), kind="stable")
            found[record.key] = _minima(
                record, curves, np.concatenate(rows)[order], np.concatenate(first)[order]
            )
    return found


def _minima(
    record: ModelRecord, curves: Curves, rows: IntArray, start: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Follow starts (r, p) of the curves `rows`, in rising order; return the best of each."""
    if len(rows) > len(curves.rate):
        near = _searched(record, curves.at(rows), start, _FIRST_STEPS, _FAR, _FIRST_TOLERANCE)
        kept = _lowest_of_each(rows, near[1], _FOLLOWED)
        rows, start = rows[kept], near[0][kept]
    values, left, converged = _searched(record, curves.at(rows), start, _STEPS, _NEAR, _TOLERANCE)
    best = _lowest_of_each(rows, left, 1)
    values, left = values[best], left[best]
    far = np.flatnonzero(~converged[best])
    if far.size:
        values[far], left[far], _ = _searched(
            record, curves.at(far), values[far], _LAST_STEPS, _NEAR, _TOLERANCE
        )
    return _snapped(record, curves, values, left)


def _lowest_of_each(rows: IntArray, left: FloatArray, count: int) -> IntArray:
    """Return indices of the lowest sums of squares of each row, the rows in rising order."""
    order = np.lexsort((left, rows))
    ranked = rows[order]
    place = np.arange(ranked.size) - np.searchsorted(ranked, ranked)
    kept = order[place < count]
    return kept[np.argsort(rows[kept], kind="stable")]


def _searched(
    record: ModelRecord,
    curves: Curves,
    start: FloatArray,
    steps: int,
    damping: float,
    tolerance: float,
) -> tuple[FloatArray, FloatArray, BoolArray]:
    one = CurveProblem(record, curves.rate[0], curves.stress[0], resolve_weighting("relative"))
    scales = Coordinates.stacked([coordinates(one)], [len(start)])
    found = minimise(_weighted(record, curves), start, scales, steps, damping, tolerance)
    return found.parameters, found.sum_of_squares, found.converged


def _weighted(record: ModelRecord, curves: Curves) -> Evaluate:
    """Return the function that `core.minimise` asks for, with a curve for every search."""
    target = curves.stress * curves.precision

    def evaluate(parameters: FloatArray, rows: IntArray) -> tuple[FloatArray, FloatArray]:
        rate, precision = curves.rate[rows], curves.precision[rows]
        columns = columns_of(parameters)
        residual = record.stress(rate, *columns) * precision - target[rows]
        if record.allowed is not None:
            residual[~record.allowed(*parameters.T)] = np.inf
        slopes = np.empty((*parameters.shape, rate.shape[-1]))
        for index, column in enumerate(record.jacobian(rate, *columns)):
            slopes[:, index] = column * precision
        return residual, slopes

    return evaluate


def _snapped(
    record: ModelRecord, curves: Curves, values: FloatArray, left: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Move parameters without effect to their bound of 0, where the fit is as good there."""
    columns = columns_of(values)
    stress = record.stress(curves.rate, *columns)
    moved = values.copy()
    for index, slope in enumerate(record.jacobian(curves.rate, *columns)):
        if record.parameters[index].lower == 0.0:
            effect = np.max(np.abs(columns[index] * slope / stress), axis=-1)
            moved[effect < _NO_EFFECT, index] = 0.0
    changed = np.flatnonzero((moved != values).any(axis=-1))
    if changed.size:
        some = curves.at(changed)
        residual = _weighted(record, some)(moved[changed], np.arange(changed.size))[0]
        total = np.einsum("bn,bn->b", residual, residual)
        good = total <= left[changed] * (1.0 + _SAME)
        values[changed[good]], left[changed[good]] = moved[changed[good]], total[good]
    return values, left


def _polish(found: Sequence[Fits]) -> None:
    """Bring the best fit of each curve to its minimum, with its covariance; in place."""
    groups: dict[tuple[str, int], list[Fit]] = {}
    for fits in found:
        width = _padded_length(fits.best.observed.size)
        groups.setdefault((fits.best.key, width), []).append(fits.best)
    for together in groups.values():
        record = together[0].record
        weights = together[0].problem.weighting
        curves = padded_curves(
            [(fit.problem.rough_rates, fit.observed) for fit in together], weights
        )
        start = np.array([fit.minimum for fit in together])
        with np.errstate(all="ignore"):
            values, left, _ = _searched(record, curves, start, _LAST_STEPS, _NEAR, _LAST_TOLERANCE)
            values, left = _snapped(record, curves, values, left)
        for fit, parameters, total in zip(together, values, left, strict=True):
            if total > fit.minimum_sum_of_squares:
                parameters, total = fit.minimum, fit.minimum_sum_of_squares
            lower, upper = bounds(fit.problem)
            free = (parameters > lower) & (parameters < upper)
            whole = covariance(fit.problem, parameters, float(total), free)
            # What `Fit.final` would find by lmfit's last pass, which starts at this minimum.
            vars(fit)["final"] = Final(parameters, float(total), free, whole)
