"""A lot against a reference lot: the ratio of their stresses, and its doubt."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from rheo.batches.row import Drift
from rheo.errors import Caution, InputError
from rheo.fitting import Fits
from rheo.fitting.intervals import LEVEL, t_quantile
from rheo.fitting.scaled_fits import ScaledFits
from rheo.readings import Readings

FloatArray = NDArray[np.float64]

# A rate this little beyond the readings is still one at which they were taken.
_AT_THE_END = 1e-6
# A lot measured this much warmer or colder than the reference [K] differs for that alone.
_SAME_TEMPERATURE = 1.0


@dataclass(frozen=True)
class CurveWithDoubt:
    """Stresses of a fitted curve at given rates, with their standard errors.

    Parameters
    ----------
    log_stress : tuple of float or None
        ln(stress/Pa); None at a rate outside those measured.
    variance : tuple of float or None
        Of ln(stress) [-]; None where the readings leave it unknown.
    freedom : int
        Readings less free parameters.
    temperature : float or None
        Mean of the readings [K].
    """

    log_stress: tuple[float | None, ...]
    variance: tuple[float | None, ...]
    freedom: int
    temperature: float | None


@dataclass(frozen=True)
class Reference:
    """The lot that others are compared with.

    Parameters
    ----------
    rates : tuple of float
        Shear rates of the comparison [1/s].
    curve : CurveWithDoubt
        The reference's own stresses there.
    digest : str
        SHA-256 of the file.
    """

    rates: tuple[float, ...]
    curve: CurveWithDoubt
    digest: str


def mean_temperature(readings: Readings) -> float | None:
    """Return the mean temperature of readings [K], None where it is not known."""
    taken = readings.temperature
    return None if taken is None else float(np.mean(taken))


def rates_to_compare(
    fits: Fits, rates: Sequence[float] | None, name: str | Path
) -> tuple[float, ...]:
    """Return the rates [1/s] asked for, or three inside the reference's own.

    Raises
    ------
    InputError
        For a rate that is not above 0, or outside those of the reference.
    """
    measured = fits.best.rates[fits.best.rates > 0]
    low, high = float(measured.min()), float(measured.max())
    if rates is None:
        inner = np.geomspace(low, high, 5)[1:4]
        return (
            tuple(dict.fromkeys(float(f"{rate:.2g}") for rate in inner)) if low < high else (low,)
        )
    wanted = tuple(dict.fromkeys(float(rate) for rate in rates))
    for rate in wanted:
        if not (np.isfinite(rate) and rate > 0):
            raise InputError(f"a shear rate is {rate:g} 1/s; it must be above 0", "rates")
        if not low * (1 - _AT_THE_END) <= rate <= high * (1 + _AT_THE_END):
            raise InputError(
                f"the shear rate {rate:g} 1/s lies outside those of the reference "
                f"({low:.3g} to {high:.3g} 1/s)",
                str(name),
            )
    return wanted


def curve_with_doubt(
    fits: Fits, rates: Sequence[float], temperature: float | None
) -> CurveWithDoubt:
    """Return the best fit's stresses at the rates [1/s], with their standard errors."""
    best = fits.best
    at = np.asarray(rates, dtype=float)
    measured = best.rates[best.rates > 0]
    inside = (at >= measured.min() * (1 - _AT_THE_END)) & (at <= measured.max() * (1 + _AT_THE_END))
    stress = best.model.stress(at)
    slopes = best.jacobian(at) / stress[:, np.newaxis]
    variance = np.einsum("ri,ij,rj->r", slopes, best.covariance, slopes)
    known = inside & np.isfinite(variance) & (variance >= 0) & (best.freedom > 0)
    return CurveWithDoubt(
        tuple(float(np.log(one)) if ok else None for one, ok in zip(stress, inside, strict=True)),
        tuple(float(one) if ok else None for one, ok in zip(variance, known, strict=True)),
        best.freedom,
        temperature,
    )


def compared(
    fits: Fits, readings: Readings, reference: Reference
) -> tuple[tuple[Drift, ...], tuple[Caution, ...]]:
    """Return a lot against the reference, and what to know of the comparison.

    The doubt of ln(ratio) is that of both fitted curves, with Welch and Satterthwaite's degrees
    of freedom (B. L. Welch, Biometrika 34 (1947) 28). It holds the scatter of the readings only:
    what a second filling of the instrument would change is not in it.
    """
    if isinstance(fits, ScaledFits):
        state = "temperature" if fits.law is None else fits.law.state
        return (), (
            Caution(
                "drift-not-compared",
                f"The readings are at several {state}s, so the lot was not compared with the "
                "reference.",
                f"Put the readings at the reference's {state} in a file of their own.",
                "reference",
            ),
        )
    own = curve_with_doubt(fits, reference.rates, mean_temperature(readings))
    drift = tuple(
        _drift(rate, index, own, reference.curve) for index, rate in enumerate(reference.rates)
    )
    return drift, (*_beyond(drift), *_other_temperature(own, reference.curve))


def _drift(rate: float, index: int, own: CurveWithDoubt, other: CurveWithDoubt) -> Drift:
    first, second = own.log_stress[index], other.log_stress[index]
    if first is None or second is None:
        return Drift(rate, None)
    shift = first - second
    ratio = float(np.exp(shift))
    spreads = own.variance[index], other.variance[index]
    if spreads[0] is None or spreads[1] is None:
        return Drift(rate, ratio)
    total = spreads[0] + spreads[1]
    shares = spreads[0] ** 2 / own.freedom + spreads[1] ** 2 / other.freedom
    freedom = max(1, int(total**2 / shares)) if shares > 0 else own.freedom + other.freedom
    reach = t_quantile(freedom, 0.5 + 0.5 * LEVEL) * total**0.5
    return Drift(rate, ratio, float(np.exp(shift - reach)), float(np.exp(shift + reach)))


def _beyond(drift: Sequence[Drift]) -> tuple[Caution, ...]:
    sure = [one for one in drift if one.beyond_doubt and one.ratio is not None]
    if not sure:
        return ()
    listed = ", ".join(f"{one.ratio or 0.0:.3g} at {one.rate:.3g} 1/s" for one in sure)
    return (
        Caution(
            "drift-from-reference",
            f"The stress over that of the reference lot is {listed}: more than the scatter of both "
            "sets of readings explains.",
            "Look whether the lot is in its limits; measure it again with a fresh filling first.",
            "reference",
        ),
    )


def _other_temperature(own: CurveWithDoubt, other: CurveWithDoubt) -> tuple[Caution, ...]:
    if own.temperature is None or other.temperature is None:
        return ()
    apart = own.temperature - other.temperature
    if abs(apart) <= _SAME_TEMPERATURE:
        return ()
    return (
        Caution(
            "reference-at-other-temperature",
            f"The lot was measured {abs(apart):.3g} K {'warmer' if apart > 0 else 'colder'} than "
            "the reference.",
            "Compare lots at one temperature.",
            "reference",
        ),
    )
