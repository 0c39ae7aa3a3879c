"""The way up, the way down, or both: what the branch does to the fit, and the stress at rest."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import InputError, in_percent
from rheo.fitting.any_state import fit_readings
from rheo.fitting.concentration import EXPONENTIAL
from rheo.fitting.fits import Fits
from rheo.fitting.intervals import t_quantile
from rheo.fitting.weighting import Instrument, Weighting
from rheo.geometry import Geometry
from rheo.geometry.vane import static_yield_stress
from rheo.models.record import Model
from rheo.readings import FlowCurve, Readings

FloatArray = NDArray[np.float64]

_RATES = 41


@dataclass(frozen=True)
class StaticYieldStress:
    """Yield stress after rest, which a start must overcome; not that of the flowing product.

    Parameters
    ----------
    value : float
        [Pa].
    low, high : float
        95 % interval [Pa]; NaN where one measurement tells nothing of it.
    origin : str
        Where it comes from, in words.
    """

    value: float
    low: float
    high: float
    origin: str


def static_from_vane(peak_torque: ArrayLike, vane: Geometry) -> StaticYieldStress:
    """Return the static yield stress from peak torques of a vane (Nguyen & Boger 1983).

    Parameters
    ----------
    peak_torque : array_like
        One largest torque [N m] a start, of one or more starts from rest.
    vane : Geometry
        Of kind ``vane``.

    Returns
    -------
    StaticYieldStress
        The mean, with its interval by Student's t where there are two starts or more.

    Raises
    ------
    InputError
        For another geometry, or a torque that is not above 0.
    """
    if vane.key != "vane":
        raise InputError(f"the geometry is '{vane.key}'; a peak torque needs a vane", "vane")
    peaks = np.atleast_1d(np.asarray(peak_torque, dtype=float))
    if peaks.size == 0 or not (np.isfinite(peaks) & (peaks > 0)).all():
        raise InputError("peak torques must be given, each above 0 N.m", "peak_torque")
    found = static_yield_stress(peaks, **vane.dimensions)
    value = float(found.mean())
    reach = np.nan
    if found.size > 1:
        error = float(found.std(ddof=1)) / np.sqrt(found.size)
        reach = t_quantile(found.size - 1, 0.975) * error
    starts = "1 start" if found.size == 1 else f"{found.size} starts"
    return StaticYieldStress(
        value, max(value - reach, 0.0), value + reach, f"vane, peak torque of {starts}"
    )


@dataclass(frozen=True, eq=False)
class SweepComparison:
    """The same models fitted to the way up, the way down and both.

    Parameters
    ----------
    up, down, both : Fits
        Ranked models of each.
    rate : array, shape (m,)
        Shear rates [1/s] that both branches have.
    difference : array, shape (m,)
        Stress on the way down over that on the way up, less 1 [-], by the best model of each.
    """

    up: Fits
    down: Fits
    both: Fits
    rate: FloatArray
    difference: FloatArray

    @property
    def loop_share(self) -> float:
        """Area between the branches over that under the way up [-]; above 0 if down is lower."""
        over = self.up.best.model.stress(self.rate)
        under = over * (1.0 + self.difference)
        return float(np.trapezoid(over - under, self.rate) / np.trapezoid(over, self.rate))

    @property
    def static_yield_stress(self) -> StaticYieldStress | None:
        """The yield stress of the way up, for start-up; None where its best model has none.

        The product is least broken down at the foot of the way up, so that this is nearer to the
        stress at rest than the yield stress of the way down. After a longer rest it can be higher.
        """
        for fit in self.up:
            if fit.record.has_yield_stress and fit.aicc <= self.up.best.aicc + 2.0:
                return _from_curve(fit.model, fit.parameters.get("yield_stress"))
        return None

    @property
    def sentence(self) -> str:
        """What the loop comes to, in one sentence."""
        share = self.loop_share
        side = "below" if share > 0 else "above"
        worst = float(self.difference[np.argmax(np.abs(self.difference))])
        return (
            f"The way down lies {in_percent(abs(share), 1)} {side} the way up on the whole, and at "
            f"most {in_percent(abs(worst), 1)} {'below' if worst < 0 else 'above'} it."
        )


def _from_curve(model: Model, parameter: object) -> StaticYieldStress:
    low = float(getattr(parameter, "low", np.nan))
    high = float(getattr(parameter, "high", np.nan))
    return StaticYieldStress(
        float(model.yield_stress), low, high, f"way up, {model.record.name} carried down to rest"
    )


def compare_sweeps(
    data: FlowCurve | Readings,
    models: str | Sequence[str] | None = None,
    weighting: str | Instrument | Weighting = "relative",
    temperature: float | None = None,
    solids: float | None = None,
    solids_form: str = EXPONENTIAL,
) -> SweepComparison:
    """Fit the way up, the way down and both, and say how far they lie apart.

    Parameters
    ----------
    data : FlowCurve or Readings
        With a branch for each reading. Several temperatures or solids fractions are fitted
        together.
    models, weighting
        As for `rheo.fit`.
    temperature : float, optional
        Where there are several, the temperature [K] of the comparison.
    solids, solids_form : float and str, optional
        As for `fit_readings`.

    Returns
    -------
    SweepComparison

    Raises
    ------
    InputError
        If either branch is missing.
    FitError
        If a branch has too few readings.
    """
    up, down = (_branch(data, word) for word in ("up", "down"))
    on_way_up, on_way_down, together = (
        fit_readings(one, models, weighting, temperature, solids, solids_form)
        for one in (up, down, data)
    )
    over, under = on_way_up.best, on_way_down.best
    low = max(over.rates.min(), under.rates.min())
    high = min(over.rates.max(), under.rates.max())
    if not low < high:
        raise InputError("the branches have no shear rates in common", "branch")
    rate = np.geomspace(low, high, _RATES)
    difference = under.model.stress(rate) / over.model.stress(rate) - 1.0
    return SweepComparison(on_way_up, on_way_down, together, rate, difference)


def _branch(data: FlowCurve | Readings, word: str) -> FlowCurve | Readings:
    branch = data.branch
    chosen = np.zeros(len(data), dtype=bool) if branch is None else np.asarray(branch) == word
    if not chosen.any():
        raise InputError(f"there is no way {word} among the readings", "branch")
    return data.select(chosen)
