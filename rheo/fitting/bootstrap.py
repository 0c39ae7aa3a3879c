"""Bootstrap of a fit: new readings drawn and fitted again, all replicates at once.

B. Efron & R. J. Tibshirani, An Introduction to the Bootstrap, Chapman & Hall (1993), chapters 6
and 9.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError
from rheo.fitting.core import minimise
from rheo.fitting.problem import Problem, coordinates
from rheo.fitting.residuals import weighted
from rheo.fitting.scaling import instrument_of, with_instrument

if TYPE_CHECKING:
    from rheo.fitting.result import Fit

FloatArray = NDArray[np.float64]

KINDS = ("residual", "parametric")
# A replicate's parameters need not be known better than a small part of their scatter; along a
# valley that the readings do not close, further steps move the parameters and not the curve.
# Where each reading is an integral, the ends of an interval move by less than 1e-4 of its width.
_TOLERANCE, _COARSE = 1e-7, 1e-5
_STEPS = 12
_DAMPING = 1e-6
# Replicates times readings fitted together, so that memory stays small; where each reading is an
# integral over the flow curve, so that its nodes stay in the processor's cache.
_BLOCK, _INTEGRALS = 40_000, 2_500
_ONE_RATE = ("cone-plate", "spindle")


def bootstrap_parameters(
    fit: Fit,
    count: int,
    seed: int = 1,
    kind: str = "residual",
    progress: Callable[[int], None] | None = None,
) -> FloatArray:
    """Return the parameters of refits to drawn readings.

    Parameters
    ----------
    fit : Fit
        A fitted model with more readings than free parameters.
    count : int
        Number of replicates, 1 or more.
    seed : int
        Of the random numbers.
    kind : str
        ``residual``: the weighted residuals of the fit are drawn with replacement, enlarged by
        sqrt(n/(n - p)) for the parameters that were fitted; ``parametric``: normal residuals of
        the fit's own scatter, or of the instrument's where the weighting states it and it is
        larger. The scatter is itself known from n - p residuals only: each replicate has one of
        its own, so that percentiles are as wide as intervals by Student's t.
    progress : callable, optional
        Told after each block how many replicates were in it; what it raises ends the work.

    Returns
    -------
    array, shape (count, p)
        The model's parameters, then those of the instrument or of a scaling law.

    Raises
    ------
    InputError
        For a count below 1, an unknown kind, or as many free parameters as readings.
    """
    if count < 1:
        raise InputError(f"the number of replicates is {count}; it must be 1 or more", "bootstrap")
    if kind not in KINDS:
        raise InputError(f"unknown kind '{kind}'; there are {', '.join(KINDS)}", "bootstrap")
    if fit.freedom < 1:
        raise InputError(
            f"{fit.observed.size} readings and {int(fit.final.free.sum())} free parameters leave "
            "no scatter to draw from; more readings are needed",
            "bootstrap",
        )
    readings = drawn_readings(fit, count, seed, kind)
    start = fit.final.parameters
    scale = coordinates(fit.problem)
    found = np.empty((count, start.size))
    problem = _near(fit)
    integrates = _integrates(problem)
    step = max(1, (_INTEGRALS if integrates else _BLOCK) // fit.observed.size)
    for first in range(0, count, step):
        some = readings[first : first + step]
        found[first : first + step] = minimise(
            weighted([problem], [len(some)], some, rough=True),
            np.repeat(start[np.newaxis], len(some), axis=0),
            scale,
            steps=_STEPS,
            damping=_DAMPING,
            tolerance=_COARSE if integrates else _TOLERANCE,
        ).parameters
        if progress is not None:
            progress(len(some))
    return found


def _near(fit: Fit) -> Problem:
    """Return the problem of a fit, with solutions that start from the fit's own shear rates."""
    flows = np.all(np.isfinite(fit.rates) & (fit.rates > 0))
    return with_instrument(fit.problem, rough_rates=fit.rates) if flows else fit.problem


def _integrates(problem: Problem) -> bool:
    readings = instrument_of(problem)
    return readings is not None and readings.geometry.key not in _ONE_RATE


def drawn_readings(fit: Fit, count: int, seed: int, kind: str) -> FloatArray:
    """Return readings (count, n) as they might have come out, all above 0.

    A residual that would take a reading to 0 or below is drawn again.
    """
    random = np.random.default_rng(seed)
    predicted = fit.predicted
    sigma = fit.problem.weighting.sigma(predicted)
    known = fit.problem.weighting.known
    scatter = max(fit.scatter, 1.0) if known else fit.scatter
    spread = np.ones((count, 1))
    if scatter == fit.scatter:
        spread = np.sqrt(fit.freedom / random.chisquare(fit.freedom, size=(count, 1)))
    own = (predicted - fit.observed) / fit.problem.weighting.sigma(fit.observed)
    own = own - own.mean()
    size = np.sqrt(np.mean(own**2))
    own = own * (scatter / size) if size > 0 else own

    def residuals(shape: tuple[int, ...]) -> FloatArray:
        if kind == "parametric":
            return random.standard_normal(shape) * scatter
        return random.choice(own, size=shape)

    readings = predicted + sigma * spread * residuals((count, predicted.size))
    wrong = readings <= 0
    while wrong.any():
        row, column = np.nonzero(wrong)
        moved = sigma[column] * spread[row, 0] * residuals(column.shape)
        readings[wrong] = predicted[column] + np.abs(moved)
        wrong = readings <= 0
    return readings
