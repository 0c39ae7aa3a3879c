"""From a case to its result: readings, fit, line."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from rheo.case.all_cautions import all_cautions
from rheo.case.join import joined
from rheo.case.load_readings import all_readings, branch_of, weighting_of
from rheo.case.result import CaseResult
from rheo.case.schema import AUTO, Case
from rheo.case.solids_state import (
    at_solids,
    follows_solids,
    product_solids,
    solids_basis,
)
from rheo.errors import CaseError, InputError
from rheo.fitting import Fit, Fits, fit
from rheo.fitting.any_state import (
    at_several_solids,
    at_several_temperatures,
    fit_readings,
    given_at,
    refuse_several,
    used_states,
)
from rheo.fitting.scaled_fits import ScaledFits
from rheo.line import (
    CentrifugalPump,
    DisplacementPump,
    Product,
    operating_point,
    solve_line,
)
from rheo.line.constants import GRAVITY
from rheo.line.thickness import thicker
from rheo.readings import Readings

ROOM_TEMPERATURE = 293.15


@dataclass(frozen=True, eq=False)
class FittedCase:
    """The first half of a result, which does not depend on the line.

    Parameters
    ----------
    readings : tuple of Readings
        Each set as read.
    fitted : Readings
        What was fitted: the sets joined, the branch chosen.
    fits : Fits
        The ranked models.
    chosen : Fit
        The model that is used.
    product : Product
        Flow curve, draws and properties, as the line uses them.
    """

    readings: tuple[Readings, ...]
    fitted: Readings
    fits: Fits
    chosen: Fit
    product: Product


def fit_models(case: Case, readings: Sequence[Readings] | None = None) -> Fits:
    """Fit the models of a case and rank them.

    What comes of it depends on the readings and on the case's `fit` but for its `model`.

    Parameters
    ----------
    case : Case
        The case.
    readings : sequence of Readings, optional
        One a set of the case, where they have been read already; they are read when absent.

    Returns
    -------
    Fits
        The ranked models; of readings at several temperatures or solids fractions, with parameters
        given at the middle one.

    Raises
    ------
    InputError
        If readings cannot be read or fitted.
    """
    sets = all_readings(case) if readings is None else tuple(readings)
    return _fits(case, _to_fit(case, sets))


def drawn_from(case: Case, fits: Fits) -> str | None:
    """Return the key of the model that flow curves are drawn from; None for all of them."""
    return None if case.fit.model == AUTO else fits[case.fit.model].key


def fit_case(
    case: Case, readings: Sequence[Readings] | None = None, fits: Fits | None = None
) -> FittedCase:
    """Go from a case to its product: readings, ranked models, draws.

    Parameters
    ----------
    case : Case
        The case.
    readings : sequence of Readings, optional
        One a set of the case, where they have been read already; they are read when absent.
    fits : Fits, optional
        From `fit_models` for the same readings, where that has been done already.

    Returns
    -------
    FittedCase
        What `run_case` starts from.

    Raises
    ------
    InputError
        If readings cannot be read or fitted.
    """
    sets = all_readings(case) if readings is None else tuple(readings)
    fitted = _to_fit(case, sets)
    solids_basis(case, fitted)
    fits = given_at(
        _fits(case, fitted) if fits is None else fits,
        _temperature(case, fitted),
        product_solids(case, fitted),
    )
    chosen = fits.best if case.fit.model == AUTO else fits[case.fit.model]
    return FittedCase(sets, fitted, fits, chosen, _product(case, fitted, fits, chosen))


def run_case(
    case: Case, readings: Sequence[Readings] | None = None, fitted: FittedCase | None = None
) -> CaseResult:
    """Go from a case to its result.

    Parameters
    ----------
    case : Case
        From `load_case`, or made in Python.
    readings : sequence of Readings, optional
        One a set of the case, where they have been read already; they are read when absent.
    fitted : FittedCase, optional
        From `fit_case` for the same readings, fit, product and doubt, where only the line, the
        duty or the pump is another.

    Returns
    -------
    CaseResult
        Readings, ranked models, duty of the line, Cautions; SI throughout.

    Raises
    ------
    InputError
        If readings cannot be read or fitted, or the line cannot be worked out; the sentence says
        what was found and what is allowed.
    """
    found = fit_case(case, readings) if fitted is None else fitted
    sets, fits, chosen, product = found.readings, found.fits, found.chosen, found.product
    pump = None if case.pump is None else case.pump.build()
    route, method = case.line.build(), case.line.friction_method
    operating = None if pump is None else operating_point(route, product, pump, method)
    efficiency = _efficiency(case, None if operating is None else operating.pump)
    line = solve_line(
        route,
        product,
        float(case.duty.flow),
        efficiency=efficiency,
        rating=_rating(case, pump, product),
        method=method,
    )
    cautions = all_cautions(case, found, line, operating)
    return CaseResult(
        case, sets, found.fitted, fits, chosen, product, line, pump, efficiency, operating, cautions
    )


def judged_anew(result: CaseResult, case: Case) -> CaseResult:
    """Return a result for a case that is the same but for what `JUDGES` names.

    Parameters
    ----------
    result : CaseResult
        Of `run_case`.
    case : Case
        With other words, limits, sizes to compare or costs.

    Returns
    -------
    CaseResult
        That of `run_case`; the line is not worked out again.
    """
    found = FittedCase(result.readings, result.fitted, result.fits, result.chosen, result.product)
    return result.judged_by(case, all_cautions(case, found, result.line, result.operating))


def _to_fit(case: Case, sets: tuple[Readings, ...]) -> Readings:
    """Return the sets joined, each with the branch that is to be fitted."""
    if len(sets) != len(case.readings):
        raise CaseError(
            f"{len(sets)} sets of readings are given and the case has {len(case.readings)}; "
            "give one for each",
            "readings",
        )
    return joined(
        [branch_of(one, block.sweep) for one, block in zip(sets, case.readings, strict=True)]
    )


def _fits(case: Case, readings: Readings) -> Fits:
    wanted = case.fit
    weighting = weighting_of(
        wanted.weighting,
        float(wanted.percent_of_reading or 0.0),
        float(wanted.percent_of_full_scale or 0.0),
        readings,
    )
    several = at_several_temperatures(readings) or at_several_solids(readings)
    if wanted.entrance or wanted.slip:
        try:
            refuse_several(readings, "fit")
        except InputError as error:
            raise CaseError(error.sentence, error.place) from None
    if several:
        return fit_readings(readings, wanted.models, weighting, solids_form=wanted.solids_form)
    return fit(
        readings,
        models=wanted.models,
        weighting=weighting,
        entrance=wanted.entrance,
        slip=wanted.slip,
    )


def _product(case: Case, readings: Readings, fits: Fits, chosen: Fit) -> Product:
    given = case.product
    doubt = case.doubt
    rates = chosen.rates[chosen.rates > 0]
    solids = product_solids(case, readings)
    warm = fits.range if isinstance(fits, ScaledFits) and not follows_solids(fits) else None
    product = Product(
        model=at_solids(fits.source(chosen.key), fits, solids),
        density=float(given.density),
        temperature=_temperature(case, readings),
        heat_capacity=_plain(given.heat_capacity),
        vapour_pressure=_plain(given.vapour_pressure),
        static_yield_stress=_plain(given.static_yield_stress),
        measured_rates=(float(rates.min()), float(rates.max())) if rates.size else None,
        temperature_range=warm,
        solids_fraction=solids,
        draws=tuple(
            at_solids(one, fits, solids)
            for one in fits.draws(doubt.draws, doubt.seed, drawn_from(case, fits))
        ),
        name=given.name,
    )
    factor = given.stress_factor
    return product if factor is None else thicker(product, float(factor))


def _temperature(case: Case, readings: Readings) -> float:
    """Temperature of the product [K]: as given, else that of the readings."""
    if case.product.temperature is not None:
        return float(case.product.temperature)
    taken = used_states(readings, "temperature")
    return ROOM_TEMPERATURE if taken is None else float(np.mean(taken))


def _efficiency(case: Case, pump: CentrifugalPump | DisplacementPump | None) -> float | None:
    """Efficiency at the duty: of the pump's points where there are any, else the one given.

    The points are those of the pump as it is used, corrected for viscosity where that was due.
    """
    if isinstance(pump, CentrifugalPump):
        at_duty = pump.efficiency(float(case.duty.flow))
        if at_duty is not None and np.isfinite(at_duty) and at_duty > 0:
            return float(at_duty)
    return None if case.pump is None else _plain(case.pump.efficiency)


def _rating(
    case: Case, pump: CentrifugalPump | DisplacementPump | None, product: Product
) -> float | None:
    """Pressure that is at hand to start the line [Pa]."""
    rated = None if case.pump is None else _plain(case.pump.rated_pressure)
    if not isinstance(pump, CentrifugalPump):
        return rated
    at_hand = max(pump.heads) * float(np.asarray(product.density)) * GRAVITY
    return at_hand if rated is None else min(rated, at_hand)


def _plain(value: float | None) -> float | None:
    return None if value is None else float(value)
