"""Whether a fitted model describes the readings at all."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution, in_percent
from rheo.fitting.problem import Problem

# Readings of good practice scatter by a few percent; a fit worse than this is no fit.
_LARGE_RMS = 0.10
# Chance of so few runs at which signs are held to be systematic, and the size from which it counts.
_FEW_RUNS = 0.01
_VISIBLE = 1e-4
# Chance at which scatter beyond the instrument's own is held to be real.
_TOO_LARGE = 0.01


class Judged(Protocol):
    """What the judgement looks at."""

    @property
    def problem(self) -> Problem:
        """What was fitted."""

    @property
    def points(self) -> NDArray[np.intp]:
        """Indices of the readings as the user gave them."""

    @property
    def rms_relative_error(self) -> float:
        """Root mean square of the relative errors [-]."""

    @property
    def worst_relative_error(self) -> float:
        """Largest size of a relative error [-]."""

    @property
    def worst_point(self) -> int:
        """Index of the reading with that error."""

    @property
    def relative_errors(self) -> NDArray[np.float64]:
        """Relative errors [-]."""

    @property
    def runs(self) -> tuple[int, float]:
        """Runs of residual signs, and the chance of so few."""

    @property
    def weighted_ss(self) -> float:
        """Weighted sum of squares [-]."""

    @property
    def freedom(self) -> int:
        """Readings less free parameters."""


def misfit_cautions(fit: Judged) -> tuple[Caution, ...]:
    """Say whether a fit misses the readings in a way that scatter does not explain."""
    return tuple(_misfits(fit))


def _misfits(fit: Judged) -> Iterator[Caution]:
    name = fit.problem.record.name
    rms, worst = fit.rms_relative_error, fit.worst_relative_error
    if rms > _LARGE_RMS:
        large = np.flatnonzero(np.abs(fit.relative_errors) > _LARGE_RMS)
        yield Caution(
            "misfit",
            f"{name} misses the readings by {in_percent(rms)} (RMS), at worst {in_percent(worst)} "
            f"at reading {fit.worst_point + 1}.",
            "Look at the residuals: check the readings named, or fit a narrower range.",
            name,
            tuple(int(point) for point in fit.points[large]),
        )
    runs, chance = fit.runs
    if chance < _FEW_RUNS and rms > _VISIBLE:
        yield Caution(
            "systematic-residuals",
            f"The residuals of {name} change sign only {runs - 1} times along the rate (chance "
            f"{chance:.2g}): they are systematic, with an RMS of {in_percent(rms, 2)}.",
            "The curve has a shape that this model has not; do not extrapolate.",
            name,
        )
    if fit.problem.weighting.known and fit.freedom > 0:
        from scipy.special import chdtrc

        beyond = float(chdtrc(fit.freedom, fit.weighted_ss))
        if beyond < _TOO_LARGE:
            ratio = float(np.sqrt(fit.weighted_ss / fit.freedom))
            yield Caution(
                "scatter-beyond-instrument",
                f"The residuals of {name} are {ratio:.2g} times what the instrument's accuracy "
                "allows.",
                "Either the model or the accuracy stated is wrong, or the product changed.",
                name,
            )
