"""The solids of the product: at which of several the flow curve is taken, and what to say of it."""

from __future__ import annotations

from rheo.case.quantity import Quantity
from rheo.case.schema import Case
from rheo.errors import CaseError, Caution
from rheo.fitting import Fits
from rheo.fitting.any_state import used_states
from rheo.fitting.scaled_fits import ScaledFits
from rheo.line.product import FlowCurveSource
from rheo.models import Model
from rheo.readings import Readings
from rheo.readings.solids import in_words, read_share
from rheo.readings.sweeps import SAME_SOLIDS

SOLIDS = "solids fraction"


def basis_of(share: Quantity | None) -> str:
    """Return whether a share of the case is by ``volume`` or ``mass``; empty where not said."""
    written = None if share is None else share.written
    return read_share(written)[1] if isinstance(written, str) else ""


def solids_basis(case: Case, readings: Readings) -> str:
    """Return by what the solids of readings and product are: volume, mass, or not said.

    Raises
    ------
    CaseError
        If one is by mass and the other by volume.
    """
    own, given = readings.solids_basis, basis_of(case.product.solids_fraction)
    if readings.solids_fraction is not None and own and given and own != given:
        raise CaseError(
            f"it is by {given}, and the solids of the readings are by {own}; give both by one",
            "product solids_fraction",
        )
    return own or given


def product_solids(case: Case, readings: Readings) -> float | None:
    """Return the solids fraction of the product [-]; None where nothing is known of it.

    As the case gives it, else that of the readings, and of several the largest, so that the line
    is not made for a product that is too thin.
    """
    given = case.product.solids_fraction
    if given is not None:
        return float(given)
    taken = used_states(readings, "solids_fraction")
    return None if taken is None else float(taken.max())


def follows_solids(fits: Fits) -> bool:
    """Return whether the fitted flow curve is known as a function of the solids."""
    return isinstance(fits, ScaledFits) and fits.law is not None and fits.law.state == SOLIDS


def at_solids(source: FlowCurveSource, fits: Fits, solids: float | None) -> FlowCurveSource:
    """Return a flow curve at the product's solids, where it is a function of these."""
    if isinstance(source, Model) or not follows_solids(fits) or solids is None:
        return source
    return source(solids)


def solids_state_cautions(
    case: Case, readings: Readings, fits: Fits, solids: float | None
) -> tuple[Caution, ...]:
    """Return what is doubtful in the solids at which the flow curve was taken.

    Parameters
    ----------
    case : Case
        The case.
    readings : Readings
        What was fitted.
    fits : Fits
        What came of it.
    solids : float or None
        Of the product [-].
    """
    by = solids_basis(case, readings)
    given = case.product.solids_fraction
    name = case.product.name
    taken = used_states(readings, "solids_fraction")
    if solids is None:
        return ()
    if taken is None:
        return (
            Caution(
                "solids-not-in-model",
                f"The product is said to hold {in_words(solids, by)} of solids, and the readings "
                "do not say how much they held, so the flow curve does not follow it.",
                "Give the solids of the readings, in a column or in the case, or take readings of "
                "the product as it will be pumped.",
                name,
            ),
        )
    if follows_solids(fits) and isinstance(fits, ScaledFits):
        unsaid = _not_given(float(taken.min()), solids, by, name) if given is None else ()
        return (*unsaid, *fits.cautions_at(solids, name))
    mean = float(taken.mean())
    if given is None or abs(solids - mean) <= SAME_SOLIDS * max(solids, mean):
        return ()
    return (
        Caution(
            "solids-of-readings",
            f"The readings were taken at {in_words(mean, by)} of solids and the product is pumped "
            f"at {in_words(solids, by)}.",
            "Take readings at the solids of the line, or at two around it.",
            name,
        ),
    )


def _not_given(low: float, solids: float, by: str, name: str) -> tuple[Caution, ...]:
    return (
        Caution(
            "solids-not-given",
            f"The readings hold {in_words(low)} to {in_words(solids, by)} of solids and the case "
            f"does not say how much is pumped; the most, {in_words(solids, by)}, is taken.",
            f"Give solids_fraction of the product, such as '{in_words(solids)}'.",
            name,
        ),
    )
