"""Every figure of a result, for the page and for the note."""

from __future__ import annotations

import numpy as np

from rheo.case.result import CaseResult
from rheo.errors import InputError
from rheo.fitting import Fit
from rheo.fitting.scaled_fits import ScaledFits
from rheo.line.product import FlowCurveSource, Product, interval
from rheo.line.result import PartResult
from rheo.line.sizing import Sizing
from rheo.models import Model
from rheo.readings.solids import in_words
from rheo.report import line_pictures as line
from rheo.report.case_readings import case_points, model_at, temperature_law
from rheo.report.display import shown, text, unit_label
from rheo.report.figures import Curve, flow_curve, residuals
from rheo.report.figures.flow_curve import solids_groups, temperature_groups
from rheo.report.numbers import number
from rheo.report.picture import FloatArray, Picture
from rheo.report.text import one_line
from rheo.report.words import capital

_GRID = 121
# A rival whose Akaike weight is below this is not drawn, and no more than so many are.
_LEAST_WEIGHT = 1e-6
_MOST_RIVALS = 3


def flow_curve_picture(
    result: CaseResult,
    *,
    viscosity: bool = False,
    log: bool = True,
    fit: Fit | None = None,
    system: str = "metric",
) -> Picture:
    """Draw the readings, the chosen model with its band, its rivals, and the rates in the line.

    Parameters
    ----------
    result : CaseResult
        Of `run_case`.
    viscosity, log : bool
        Viscosity instead of stress; logarithmic axes.
    fit : Fit, optional
        The model to look at; the chosen one when absent. Only the chosen one has a band.
    system : str
        Unit system.

    Returns
    -------
    Picture
        Its points carry the numbers of the readings, counted over all sets.
    """
    looked_at = fit or result.chosen
    points = case_points(result, looked_at)
    seen = result.wall_rates
    reach = [points.rate.min(), points.rate.max(), *(seen or ())]
    grid = np.geomspace(0.8 * min(reach), 1.25 * max(reach), _GRID)
    warm = result.product.temperature
    law = temperature_law(result)
    at = "" if law is None else f", {text(warm, 'temperature', system)}"
    rivals = [
        Curve(f"{capital(one.record.name)}{at}", grid, _stress(model_at(result, one, warm), grid))
        for one in result.fits
        if one.key != looked_at.key and one.weight > _LEAST_WEIGHT
    ]
    return flow_curve(
        points.rate,
        points.stress,
        temperature=points.temperature,
        solids=points.solids,
        branch=points.branch,
        excluded=points.left_out,
        flagged=points.flagged,
        chosen=_chosen_curves(result, looked_at, points.temperature, grid, system)
        if points.solids is None
        else _curves_by_solids(result, looked_at, points.solids, grid),
        rivals=rivals[:_MOST_RIVALS],
        in_line=seen,
        viscosity=viscosity,
        log=log,
        system=system,
    )


def _chosen_curves(
    result: CaseResult, fit: Fit, temperature: FloatArray | None, grid: FloatArray, system: str
) -> list[Curve]:
    name = capital(fit.record.name)
    product = result.product
    if temperature is None or temperature_law(result) is None:
        kelvins, names = [product.temperature], [name]
    else:
        groups, words = temperature_groups(temperature, temperature.size, system)
        kelvins = [float(temperature[groups == n].mean()) for n in range(len(words))]
        names = [f"{name}, {word}" for word in words]
    found = []
    for style, (kelvin, words_) in enumerate(zip(kelvins, names, strict=True)):
        low = high = None
        if fit.key == result.chosen.key:
            low, high = _band(product, kelvin, grid)
        stress = _stress(model_at(result, fit, kelvin), grid)
        found.append(Curve(words_, grid, stress, low, high, style))
    return found


def _curves_by_solids(
    result: CaseResult, fit: Fit, solids: FloatArray, grid: FloatArray
) -> list[Curve]:
    """Return the curve at the solids of each group of readings, and at the product's own."""
    name, product, fits = capital(fit.record.name), result.product, result.fits
    assert isinstance(fits, ScaledFits)
    groups, words = solids_groups(solids)
    own = product.solids_fraction
    low, high = _band(product, product.temperature, grid) if fit is result.chosen else (None, None)
    found = []
    for group, word in enumerate(words):
        share = float(solids[groups == group].mean())
        mine = own is not None and abs(own - share) < 1e-6
        stress = _stress(fits.at(share, fit.key), grid)
        band = (low, high) if mine else (None, None)
        found.append(Curve(f"{name}, {word}", grid, stress, *band, group))
        own = None if mine else own
    if own is not None:
        stress = _stress(model_at(result, fit, None), grid)
        words_ = f"{name}, {in_words(own)} solids, as pumped"
        found.append(Curve(words_, grid, stress, low, high, len(words)))
    return found


def _stress(model: Model, grid: FloatArray) -> FloatArray:
    return np.asarray(model.stress(grid), dtype=float)


def _band(
    product: Product, kelvin: float, grid: FloatArray
) -> tuple[FloatArray, FloatArray] | tuple[None, None]:
    """Return the middle 95 % of the stress over the product's draws [Pa]."""
    if not product.draws:
        return None, None

    def stress(source: FlowCurveSource) -> FloatArray:
        return product.model_at(kelvin, source).stress(grid[:, np.newaxis])

    return interval(product.over_draws(stress))


def residuals_picture(
    result: CaseResult, fit: Fit | None = None, system: str = "metric"
) -> Picture:
    """Draw the residuals of the chosen fit, or of another."""
    looked_at = fit or result.chosen
    points = case_points(result, looked_at)
    flowing = looked_at.rates > 0
    return residuals(
        looked_at.rates[flowing],
        looked_at.observed[flowing],
        looked_at.predicted[flowing],
        flagged=points.flagged[points.fitted][flowing],
        usual=looked_at.rms_relative_error,
        name=capital(looked_at.record.name),
        index=points.fitted[flowing],
        system=system,
    )


def shear_rates_picture(result: CaseResult, system: str = "metric") -> Picture:
    """Draw where the shear rates fall: measured, in the line, at common plant duties."""
    points = case_points(result)
    return line.rates_picture(result.line, np.unique(points.rate[points.fitted]), system)


def pressure_picture(result: CaseResult, system: str = "metric") -> Picture:
    """Draw pressure and elevation along the line."""
    return line.pressure_picture(result.line, result.line.start_up.rating, system)


def drawing_picture(result: CaseResult, system: str = "metric") -> Picture:
    """Draw the line."""
    return line.drawing_picture(result.line, system)


def system_curve_picture(result: CaseResult, system: str = "metric") -> Picture:
    """Draw the system curve with the pump and the operating point."""
    rating = result.line.start_up.rating
    return line.system_picture(result.system_curve, result.line, result.operating, rating, system)


def velocity_picture(
    result: CaseResult, part: PartResult | None = None, system: str = "metric"
) -> Picture | None:
    """Draw the velocity across a pipe; None where its flow is not laminar."""
    return line.velocity_picture(result.line, part, system)


def doubt_picture(result: CaseResult) -> Picture:
    """Draw the doubt budget."""
    return line.doubt_picture(result.doubt)


def sizing_of(result: CaseResult) -> tuple[Sizing | None, str]:
    """Return the comparison of sizes; or None, and the sentence that says why there is none."""
    try:
        return result.sizing, ""
    except InputError as error:
        return None, error.sentence


def sizes_picture(result: CaseResult, system: str = "metric") -> Picture | None:
    """Draw the candidate sizes; None where the case names none to compare."""
    sizing, _ = sizing_of(result)
    if sizing is None:
        return None
    return line.sizes_picture(sizing, result.limits.pressure, currency(result), system)


def currency(result: CaseResult) -> str:
    """Return the currency of the case, short enough for a heading."""
    return "" if result.case.cost is None else one_line(result.case.cost.currency, 16)


def wall_rate_words(result: CaseResult, system: str = "metric") -> str:
    """Return the wall shear rates of the line in words, such as ``45 to 110 1/s``."""
    if result.wall_rates is None:
        return "not known"
    low, high = (number(float(v)) for v in shown(result.wall_rates, "rate", system))
    unit = unit_label("rate", system)
    return f"{low} {unit}" if low == high else f"{low} to {high} {unit}"
