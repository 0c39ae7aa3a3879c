"""Fit every model to the same readings and rank them."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution, FitError, InputError
from rheo.fitting.final import global_minima
from rheo.fitting.fits import Fits
from rheo.fitting.problem import CurveProblem, Problem
from rheo.fitting.ranking import ROUNDING, aicc, akaike_weights, fewest_readings, order
from rheo.fitting.reading_task import reading_task
from rheo.fitting.result import Fit
from rheo.fitting.search import search
from rheo.fitting.task import Task
from rheo.fitting.weighting import Instrument, Weighting, resolve_weighting
from rheo.models import ModelRecord, model_record, model_records
from rheo.readings import FlowCurve, Readings

FloatArray = NDArray[np.float64]


def fit(
    data: FlowCurve | Readings,
    models: str | Sequence[str] | None = None,
    weighting: str | Instrument | Weighting = "relative",
    entrance: bool = False,
    slip: bool = False,
) -> Fits:
    """Fit flow-curve models to readings and rank them.

    Weighted least squares from a global search, so that no starting value is needed and no local
    minimum is returned; the last pass and the covariance are lmfit's.

    Parameters
    ----------
    data : FlowCurve or Readings
        Points of a flow curve, or readings of an instrument. With a geometry the fit is made in
        what was measured: residuals are predicted less measured torque or pressure drop. What the
        user excluded is left out.
    models : str or sequence of str, optional
        Model keys; all models when absent.
    weighting : str or Instrument
        ``relative`` (constant percentage), ``absolute`` (constant deviation) or an Instrument, in
        the unit of what is fitted: stress, torque or pressure drop.
    entrance, slip : bool
        For tube readings: whether to fit the entrance loss (in diameters) and the slip
        coefficient with the model; they stand among the fit's parameters.

    Returns
    -------
    Fits

    Raises
    ------
    FitError
        If no model can be fitted to so few readings.
    InputError
        For an unknown model or weighting, or an entrance loss or slip asked of other readings
        than those of tubes that differ.
    """
    weights = resolve_weighting(weighting)
    return rank(task_of(data, weights, entrance, slip), records_of(models), weights)


def task_of(
    data: FlowCurve | Readings, weights: Weighting, entrance: bool = False, slip: bool = False
) -> Task:
    """Return the task that data stand for."""
    if isinstance(data, Readings) and data.geometry is not None:
        return reading_task(data, weights, entrance, slip)
    if entrance or slip:
        raise InputError("entrance loss and slip need tube readings with a geometry", "fit")
    return curve_task(data.flow_curve() if isinstance(data, Readings) else data, weights)


def curve_task(curve: FlowCurve, weights: Weighting) -> Task:
    """Return the task of fitting a flow curve."""
    used = np.ones(curve.rate.size, bool) if curve.excluded is None else ~curve.excluded
    points = np.flatnonzero(used)
    if points.size == 0:
        raise FitError("all points are excluded; there must be at least one to fit", "fit")
    rate, stress = curve.rate[points], curve.stress[points]

    def pose(records: Sequence[ModelRecord]) -> list[CurveProblem]:
        return [CurveProblem(record, rate, stress, weights) for record in records]

    def solve(records: Sequence[ModelRecord]) -> list[tuple[Problem, FloatArray, float]]:
        problems = pose(records)
        starts = search(records, rate, stress, weights.sigma(stress))
        minima = global_minima(problems, starts)
        return [(problem, *found) for problem, found in zip(problems, minima, strict=True)]

    return Task(solve, pose, stress, np.unique(rate).size, points)


def rank(task: Task, records: Iterable[ModelRecord], weights: Weighting) -> Fits:
    """Fit each model to a task and rank them."""
    wanted = list(records)
    count = task.observed.size
    skipped = {
        record.key: reason
        for record in wanted
        if (reason := _reason_to_skip(record, task, alone=len(wanted) == 1))
    }
    fitted = [record for record in wanted if record.key not in skipped]
    if not fitted:
        fewest = fewest_readings(min(len(one.parameters) for one in wanted) + task.extra)
        raise FitError(_nothing_fitted(count, skipped, fewest), "fit")
    solved = task.solve(fitted)
    least = ROUNDING**2 * float(np.sum((task.observed / weights.sigma(task.observed)) ** 2))
    sizes = [parameters.size for _, parameters, _ in solved]
    criteria = aicc([max(total, least) for *_, total in solved], count, sizes)
    shares = akaike_weights(criteria)
    places = order(criteria.tolist(), sizes)
    ranking = tuple(
        Fit(*solved[i], float(criteria[i]), float(shares[i]), task.points) for i in places
    )
    return Fits(ranking, weights, skipped, (*task.cautions, *_skipped_caution(skipped)))


def records_of(models: str | Sequence[str] | None) -> list[ModelRecord]:
    """Return the records of the models named; of all when none is."""
    if models is None:
        return list(model_records().values())
    keys = [models] if isinstance(models, str) else list(models)
    if not keys:
        raise FitError("no model was named; name one, or leave `models` out for all", "models")
    return [model_record(key) for key in dict.fromkeys(keys)]


def _reason_to_skip(record: ModelRecord, task: Task, alone: bool) -> str:
    """Return why a model cannot be fitted, or an empty text."""
    parameters = len(record.parameters) + task.extra
    count = task.observed.size
    # AICc needs n - k - 1 above 0, k counting the variance too; a model named alone is not ranked.
    needed = parameters + 1 if alone else fewest_readings(parameters)
    if count < needed:
        return f"{parameters} parameters need at least {needed} readings; there are {count}"
    if task.distinct < parameters:
        return (
            f"{parameters} parameters need readings at {parameters} different settings or more; "
            f"there are {task.distinct}"
        )
    return ""


def _nothing_fitted(count: int, skipped: Mapping[str, str], fewest: int) -> str:
    if len(skipped) == 1:
        (key, reason), *_ = skipped.items()
        return f"{key} cannot be fitted: {reason}"
    return (
        f"there {'is' if count == 1 else 'are'} {count} reading{'' if count == 1 else 's'} to fit; "
        f"at least {fewest} at different shear rates are needed to compare these models; a single "
        "model that is named needs fewer"
    )


def _skipped_caution(skipped: Mapping[str, str]) -> tuple[Caution, ...]:
    if not skipped:
        return ()
    return (
        Caution(
            "models-skipped",
            "Not fitted: "
            + "; ".join(f"{key} ({reason})" for key, reason in skipped.items())
            + ".",
            "Take more readings to compare these models too.",
            "fit",
        ),
    )
