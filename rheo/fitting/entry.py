"""Fit every model to the same readings and rank them."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution, FitError
from rheo.fitting.final import global_minimum
from rheo.fitting.fits import Fits
from rheo.fitting.problem import CurveProblem, Problem
from rheo.fitting.ranking import ROUNDING, aicc, akaike_weights, order
from rheo.fitting.result import Fit
from rheo.fitting.search import search
from rheo.fitting.weighting import Instrument, Weighting, resolve_weighting
from rheo.models import ModelRecord, model_record, model_records
from rheo.readings import FlowCurve

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Task:
    """Readings that models are to be fitted to.

    Parameters
    ----------
    solve : callable
        ``solve(record) -> (problem, parameters, sum of squares)`` at the global minimum.
    observed : array, shape (n,)
        Measured readings.
    distinct : int
        Number of different settings among them.
    points : array of int, shape (n,)
        Their indices as the user gave them.
    extra : int
        Number of parameters that each model has on top of its own.
    cautions : tuple of Caution
        What the readings gave cause for.
    """

    solve: Callable[[ModelRecord], tuple[Problem, FloatArray, float]]
    observed: FloatArray
    distinct: int
    points: NDArray[np.intp]
    extra: int = 0
    cautions: tuple[Caution, ...] = ()


def fit(
    data: FlowCurve,
    models: str | Sequence[str] | None = None,
    weighting: str | Instrument | Weighting = "relative",
) -> Fits:
    """Fit flow-curve models to readings and rank them.

    Weighted least squares from a global search, so that no starting value is needed and no local
    minimum is returned; the last pass and the covariance are lmfit's.

    Parameters
    ----------
    data : FlowCurve
        Points of a flow curve. Points that the user excluded are left out.
    models : str or sequence of str, optional
        Model keys; all models when absent.
    weighting : str or Instrument
        ``relative`` (constant percentage), ``absolute`` (constant deviation) or an Instrument.

    Returns
    -------
    Fits

    Raises
    ------
    FitError
        If no model can be fitted to so few readings.
    InputError
        For an unknown model or weighting.
    """
    weights = resolve_weighting(weighting)
    return rank(curve_task(data, weights), _records(models), weights)


def curve_task(curve: FlowCurve, weights: Weighting) -> Task:
    """Return the task of fitting a flow curve."""
    used = np.ones(curve.rate.size, bool) if curve.excluded is None else ~curve.excluded
    points = np.flatnonzero(used)
    rate, stress = curve.rate[points], curve.stress[points]

    def solve(record: ModelRecord) -> tuple[Problem, FloatArray, float]:
        problem = CurveProblem(record, rate, stress, weights)
        starts = search(record, rate, stress, weights.sigma(stress))
        return problem, *global_minimum(problem, starts)

    return Task(solve, stress, np.unique(rate).size, points)


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
        raise FitError(_nothing_fitted(count, skipped), "fit")
    solved = [task.solve(record) for record in fitted]
    least = ROUNDING**2 * float(np.sum((task.observed / weights.sigma(task.observed)) ** 2))
    sizes = [parameters.size for _, parameters, _ in solved]
    criteria = aicc([max(total, least) for *_, total in solved], count, sizes)
    shares = akaike_weights(criteria)
    places = order(criteria.tolist(), sizes)
    ranking = tuple(
        Fit(*solved[i], float(criteria[i]), float(shares[i]), task.points) for i in places
    )
    return Fits(ranking, weights, skipped, (*task.cautions, *_skipped_caution(skipped)))


def _records(models: str | Sequence[str] | None) -> list[ModelRecord]:
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
    needed = parameters + (1 if alone else 3)
    if count < needed:
        return f"{parameters} parameters need at least {needed} readings; there are {count}"
    if task.distinct < parameters:
        return (
            f"{parameters} parameters need readings at {parameters} different settings or more; "
            f"there are {task.distinct}"
        )
    return ""


def _nothing_fitted(count: int, skipped: Mapping[str, str]) -> str:
    if len(skipped) == 1:
        (key, reason), *_ = skipped.items()
        return f"{key} cannot be fitted: {reason}"
    return (
        f"there {'is' if count == 1 else 'are'} {count} reading{'' if count == 1 else 's'} to fit; "
        "at least 4 at different shear rates are needed to compare models"
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
