"""One fit over readings at several temperatures or solids fractions."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import Caution, InputError
from rheo.fitting.entry import rank, records_of, task_of
from rheo.fitting.final import Final, global_minima
from rheo.fitting.fits import Fits
from rheo.fitting.problem import CurveProblem, Problem, bounds
from rheo.fitting.reading_problem import ReadingProblem
from rheo.fitting.reading_task import TOLERANCE
from rheo.fitting.result import Fit
from rheo.fitting.scaling import ScaledProblem
from rheo.fitting.search import QUICK, search
from rheo.fitting.task import Task
from rheo.fitting.weighting import Instrument, Weighting, resolve_weighting
from rheo.models import Model, ModelRecord
from rheo.models.state_curve import ScaledCurve, ScalingLaw
from rheo.readings import FlowCurve, Readings

FloatArray = NDArray[np.float64]

# States nearer to each other than this share of their range are taken as one.
_APART = 0.05
# With one slope for all, readings moved to one state do not lie on one curve: minima there are
# starts only. Many starts that are still apart find more than few that have met.
_ON_CURVE, _IN_INSTRUMENT = (replace(QUICK, kept=kept, steps=1) for kept in (12, 6))


@dataclass(frozen=True, eq=False)
class ScaledFits(Fits):
    """Models fitted over readings at several states, with a law for their parameters.

    The ranking, the parameters and the intervals are those of `Fits`, at the reference state; the
    slopes stand among each fit's parameters.

    Parameters
    ----------
    law : ScalingLaw
        How the parameters follow the state.
    states : array, shape (n,)
        State of each reading that was fitted.
    origin : ScaledFits, optional
        The same fits about the state at which they were made, where that is another.
    """

    law: ScalingLaw | None = None
    states: FloatArray | None = None
    origin: ScaledFits | None = None

    @property
    def _law(self) -> ScalingLaw:
        assert self.law is not None
        return self.law

    @property
    def as_made(self) -> ScaledFits:
        """The fits about the state at which they were made; their draws serve about any other."""
        return self if self.origin is None else self.origin

    @property
    def range(self) -> tuple[float, float]:
        """Smallest and largest state among the readings."""
        assert self.states is not None
        return float(self.states.min()), float(self.states.max())

    def source(self, key: str | None = None) -> ScaledCurve:
        """Return the flow curve as a function of the state, of the best model or of one named."""
        fit = self.best if key is None else self[key]
        return self._curve(fit, fit.final.parameters)

    def at(self, state: ArrayLike, key: str | None = None) -> Model:
        """Return the flow curve at a state; `cautions_at` says whether that is inside the data."""
        return self.source(key)(state)

    def _curve(self, fit: Fit, parameters: FloatArray) -> ScaledCurve:
        return ScaledCurve(fit.record, self._law, tuple(np.moveaxis(parameters, -1, 0)))

    def about(self, reference: float) -> ScaledFits:
        """Return the same fits with their parameters given at another state.

        The flow curves, the ranking and the draws stay: exp(slope * x) about one state is that
        about another times a constant, by which the parameters move.

        Parameters
        ----------
        reference : float
            The state at which parameters are to be given; inside the readings.

        Returns
        -------
        ScaledFits
        """
        origin = self.as_made
        if reference == self._law.reference:
            return self
        if reference == origin._law.reference:
            return origin
        law = replace(origin._law, reference=float(reference))
        ranking = tuple(_moved(fit, law) for fit in origin.ranking)
        return replace(origin, ranking=ranking, law=law, origin=origin)

    def cautions_at(self, state: float, place: str = "") -> tuple[Caution, ...]:
        """Return a Caution for a state outside those of the readings."""
        low, high = self.range
        slack = 1e-6 * max(abs(low), abs(high))
        if low - slack <= state <= high + slack:
            return ()
        law = self._law
        shown, *ends = (f"{_shown(law, value)}" for value in (state, low, high))
        return (
            Caution(
                f"outside-measured-{law.state.split()[-1]}",
                f"The {law.state} is {shown}; the readings were taken between {ends[0]} and "
                f"{ends[1]}.",
                f"Take readings at this {law.state} before relying on the curve there.",
                place,
            ),
        )

    def misfit_by_state(self, key: str | None = None) -> dict[float, float]:
        """Return the root mean square relative error [-] of the readings about each state."""
        assert self.states is not None
        fit = self.best if key is None else self[key]
        order = np.argsort(self.states, kind="stable")
        apart = np.diff(self.states[order]) > _APART * np.ptp(self.states)
        groups = np.split(order, np.flatnonzero(apart) + 1)
        return {
            float(np.mean(self.states[group])): float(
                np.sqrt(np.mean(fit.relative_errors[group] ** 2))
            )
            for group in groups
        }


@dataclass(frozen=True, eq=False)
class _MovedFit(Fit):
    """A fit with its parameters given at another state than that about which it was made."""

    origin: Fit

    @cached_property
    def final(self) -> Final:
        """The origin's, moved; a parameter at a bound there lies as far beyond it as it moves."""
        before, own = self.origin.problem, self.problem
        assert isinstance(before, ScaledProblem)
        assert isinstance(own, ScaledProblem)
        found = self.origin.final
        x = float(before.law.x(own.law.reference))
        parameters = _about(own.law, before, found.parameters)
        count = len(own.record.parameters)
        change = np.eye(parameters.size)
        for i, index in enumerate(own.law.slope_of(own.record)):
            if index is not None:
                change[i, i] = np.exp(found.parameters[count + index] * x)
                change[i, count + index] = parameters[i] * x
        change = change[np.ix_(found.free, found.free)]
        return replace(
            found, parameters=parameters, covariance=change @ found.covariance @ change.T
        )

    def model_of(self, parameters: FloatArray) -> Model:
        """Return the flow curve at parameters of shape (..., p), none beyond its bounds."""
        low, high = bounds(self.problem)
        count = parameters.shape[-1]
        return super().model_of(np.clip(parameters, low[:count], high[:count]))

    def bootstrap(self, count: int, seed: int = 1, kind: str = "residual") -> Model | ScaledCurve:
        """Return the origin's, which as a function of the state is the same."""
        return self.origin.bootstrap(count, seed, kind)


def _moved(fit: Fit, law: ScalingLaw) -> Fit:
    """Return a fit with its parameters given at the reference of a law."""
    before = fit.problem
    assert isinstance(before, ScaledProblem)
    return _MovedFit(
        replace(before, law=law),
        _about(law, before, fit.minimum),
        fit.minimum_sum_of_squares,
        fit.aicc,
        fit.weight,
        fit.points,
        fit,
    )


def _about(law: ScalingLaw, problem: ScaledProblem, parameters: FloatArray) -> FloatArray:
    return np.array(problem.curve(parameters).about(law).values)


def _shown(law: ScalingLaw, value: float) -> str:
    return f"{value - 273.15:.1f} °C" if law.unit == "K" else f"{100.0 * value:.4g} %"


def fit_scaled(
    data: FlowCurve | Readings,
    states: ArrayLike,
    law: ScalingLaw,
    models: str | Sequence[str] | None = None,
    weighting: str | Instrument | Weighting = "relative",
) -> ScaledFits:
    """Fit models over readings at several states and rank them.

    Parameters
    ----------
    data : FlowCurve or Readings
        With a geometry the fit is made in what was measured. What the user excluded is left out.
    states : array_like, shape (n,)
        State of every reading, those excluded too.
    law : ScalingLaw
        How the parameters follow the state.
    models, weighting
        As for `rheo.fit`.

    Returns
    -------
    ScaledFits

    Raises
    ------
    FitError
        If no model can be fitted to so few readings.
    InputError
        If there are not as many states as readings, or all states are the same.
    """
    weights = resolve_weighting(weighting)
    task = task_of(data, weights)
    every = np.asarray(states, dtype=float)
    if every.ndim != 1 or every.size <= int(task.points.max()):
        raise InputError(
            f"{law.state} has {every.size} values; give one for each reading", law.state
        )
    used = every[task.points]
    if np.ptp(used) <= 1e-9 * np.abs(used).max():
        raise InputError(
            f"all readings have the same {law.state}; at least two are needed", law.state
        )

    def solve(records: Sequence[ModelRecord]) -> list[tuple[Problem, FloatArray, float]]:
        return _solve(task, records, law, used)

    scaled = replace(task, solve=solve, extra=2)
    found = rank(scaled, records_of(models), weights)
    return ScaledFits(found.ranking, found.weighting, found.skipped, found.data_cautions, law, used)


def _solve(
    task: Task, records: Sequence[ModelRecord], law: ScalingLaw, states: FloatArray
) -> list[tuple[Problem, FloatArray, float]]:
    bases = task.pose(records)
    problems = [ScaledProblem(base, law, states) for base in bases]
    rate, stress = _curve_of(bases[0])
    x = law.x(states)
    slope = _common_slope(rate, stress, x)
    sigma = bases[0].weighting.sigma(task.observed) / task.observed
    at_reference = stress * np.exp(-slope * x)
    exact = isinstance(bases[0], CurveProblem)
    found = search(
        records, rate, at_reference, sigma * at_reference, _ON_CURVE if exact else _IN_INSTRUMENT
    )
    starts = [
        _with_slopes(one, len(problem.extra), slope)
        for one, problem in zip(found, problems, strict=True)
    ]
    minima = global_minima(problems, starts, *(() if exact else (TOLERANCE,)))
    return [(problem, *one) for problem, one in zip(problems, minima, strict=True)]


def _curve_of(base: CurveProblem | ReadingProblem) -> tuple[FloatArray, FloatArray]:
    if isinstance(base, CurveProblem):
        return base.rate, base.observed
    rate, stress = base.geometry.nominal(base.setting, base.observed)
    return np.asarray(rate), np.asarray(stress)


def _common_slope(rate: FloatArray, stress: FloatArray, x: FloatArray) -> float:
    """Return the slope of ln(stress) by x when ln(stress) is quadratic in ln(rate)."""
    log_rate = np.log(rate)
    columns = np.stack([np.ones_like(x), log_rate, log_rate**2, x], axis=-1)
    scale = np.maximum(np.abs(columns).max(axis=0), 1e-300)
    found, *_ = np.linalg.lstsq(columns / scale, np.log(stress), rcond=None)
    return float(found[-1] / scale[-1])


def _with_slopes(starts: FloatArray, count: int, slope: float) -> FloatArray:
    """Return starts (c·k, p + count) with several slopes for each."""
    tries = np.array([[1.0, 1.0], [1.0, 0.0], [1.5, 0.3], [0.5, 1.0]])[:, :count]
    tries = np.unique(tries, axis=0) * slope
    return np.concatenate(
        [np.repeat(starts, len(tries), axis=0), np.tile(tries, (len(starts), 1))], axis=-1
    )
