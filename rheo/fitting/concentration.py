"""One fit over several solids contents, so that a line can be checked at the thickest product."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import InputError
from rheo.fitting.scaled_fits import ScaledFits, fit_scaled
from rheo.fitting.weighting import Instrument, Weighting
from rheo.models import Parameter
from rheo.models.state_curve import ScalingLaw
from rheo.readings import FlowCurve, Readings

_LARGEST = 300.0


def _law(form: str, reference: float) -> ScalingLaw:
    if form not in _FORMS:
        raise InputError(f"unknown form '{form}'; there are {', '.join(_FORMS)}", "form")
    exponent, equation, source = _FORMS[form]
    return ScalingLaw(
        state="solids fraction",
        unit="-",
        reference=reference,
        exponent=exponent,
        slope=Parameter(
            "solids_slope", "b_η", "-", "slope of the viscosity by solids", -_LARGEST, _LARGEST
        ),
        yield_slope=Parameter(
            "yield_solids_slope",
            "b_y",
            "-",
            "slope of the yield stress by solids",
            -_LARGEST,
            _LARGEST,
        ),
        equation=equation,
        source=source,
    )


EXPONENTIAL = "exponential"
_FORMS = {
    EXPONENTIAL: (
        lambda fraction, at: fraction - at,
        "K(φ) = K(φ_ref) exp[b(φ - φ_ref)]",
        "D. G. Thomas, AIChE J. 7 (1961) 431 and 9 (1963) 310 for flocculated suspensions "
        "(from memory)",
    ),
    "power": (
        lambda fraction, at: np.log(fraction / at),
        "K(φ) = K(φ_ref) (φ/φ_ref)^b",
        "D. G. Thomas, AIChE J. 7 (1961) 431: yield stress as the third power of the volume "
        "fraction (from memory)",
    ),
}
FORMS: tuple[str, ...] = tuple(_FORMS)


def fit_concentrations(
    data: FlowCurve | Readings,
    fractions: ArrayLike | None = None,
    models: str | Sequence[str] | None = None,
    weighting: str | Instrument | Weighting = "relative",
    form: str = EXPONENTIAL,
    reference: float | None = None,
) -> ScaledFits:
    """Fit models over readings at several solids fractions and rank them.

    Indices are shared; viscosities, consistency and time constants follow the solids with one
    slope, the yield stress with one of its own.

    Parameters
    ----------
    data : FlowCurve or Readings
        All readings, one fraction after another.
    fractions : array_like, shape (n,), optional
        Solids of each reading [-], above 0 and below 1: all by volume or all by mass, as the
        laws hold in either within the range of the readings; those of the data when absent.
    models, weighting
        As for `rheo.fit`.
    form : str
        ``exponential`` in the fraction, or ``power`` of it.
    reference : float, optional
        Fraction [-] at which the parameters are given; the middle one when absent.

    Returns
    -------
    ScaledFits
        ``.at(fraction)`` is the flow curve at a solids fraction.

    Raises
    ------
    InputError
        If there are no fractions, one is not between 0 and 1, all are the same, or the form is
        unknown.
    FitError
        If there are too few readings.
    """
    given = data.solids_fraction if fractions is None else fractions
    if given is None:
        raise InputError("the readings have no solids fractions; give one for each", "fractions")
    solids = np.atleast_1d(np.asarray(given, dtype=float))
    if not ((solids > 0) & (solids < 1)).all():
        worst = solids[~((solids > 0) & (solids < 1))][0]
        raise InputError(
            f"a solids fraction is {worst:g}; it must lie between 0 and 1 (0.35 for 35 %)",
            "fractions",
        )
    low, high = float(solids.min()), float(solids.max())
    middle = float(np.median(solids))
    at = middle if reference is None else float(reference)
    if not low <= at <= high:
        raise InputError(
            f"the reference fraction is {at:g}; it must lie between {low:g} and {high:g}",
            "reference",
        )
    return fit_scaled(data, solids, _law(form, middle), models, weighting).about(at)
