"""Readings and ranked models as tables."""

from __future__ import annotations

from typing import TYPE_CHECKING

from rheo.cli import terminal

if TYPE_CHECKING:
    from rich.console import Console

    from rheo.fitting import Fit, Fits
    from rheo.readings import Readings


def show_readings(out: Console, readings: Readings, units: str) -> None:
    """Write what was read: how many, from where, over which range."""
    from rheo.report.display import shown, unit_label
    from rheo.report.numbers import number

    curve = readings.flow_curve()
    rates, stresses = curve.rate[curve.used], curve.stress[curve.used]
    left_out = len(curve) - rates.size
    geometry = readings.geometry
    span = None
    if readings.temperature is not None:
        warm = shown(readings.temperature, "temperature", units)
        low, high = float(warm.min()), float(warm.max())
        label = unit_label("temperature", units)
        span = f"{number(low)} {label}"
        if high - low > 0.05:
            span = f"{number(low)} to {number(high)} {label}"
    terminal.heading(out, "Readings", readings.source)
    terminal.values(
        out,
        [
            ("number", f"{len(curve)}" + (f", {left_out} left out by you" if left_out else "")),
            ("shear rate", f"{number(float(rates.min()))} to {number(float(rates.max()))} 1/s"),
            ("stress", f"{number(float(stresses.min()))} to {number(float(stresses.max()))} Pa"),
            ("temperature", span),
            ("solids", _solids(readings)),
            (
                "geometry",
                "none: shear rates and stresses as given"
                if geometry is None
                else f"{geometry.record.name}; fitted in {_fitted(readings)}",
            ),
        ],
    )


def _solids(readings: Readings) -> str | None:
    """Return the range of the solids fractions in words."""
    from rheo.readings.solids import in_words

    share, by = readings.solids_fraction, readings.solids_basis
    if share is None:
        return None
    low, high = (in_words(float(end)) for end in (share.min(), share.max()))
    ends = low if low == high else f"{low.removesuffix(' %')} to {high}"
    return f"{ends} by {by}" if by else ends


def _fitted(readings: Readings) -> str:
    geometry = readings.geometry
    return "stress" if geometry is None else geometry.record.reading.replace("_", " ")


def show_fits(out: Console, fits: Fits, chosen: Fit) -> None:
    """Write the ranking, why the first is first, and the parameters of the chosen model."""
    from rheo.report.numbers import number

    terminal.heading(out, "Models", f"weighting: {fits.weighting.name}")
    place = next(index for index, fit in enumerate(fits.ranking) if fit is chosen)
    terminal.table(
        out,
        ("model", "parameters", "AICc", "Akaike\nweight", "RMS\nerror", "worst\nerror"),
        (
            (
                fit.key,
                fit.parameter_count,
                _aicc(fit),
                f"{fit.weight:.2f}",
                f"{100 * fit.rms_relative_error:.2g} %",
                f"{100 * fit.worst_relative_error:.2g} %",
            )
            for fit in fits.ranking
        ),
        bold_rows=(place,),
        least_wanted=(1, 5, 2),
    )
    terminal.sentence(out, fits.reason)
    if chosen is not fits.best:
        terminal.sentence(out, f"You chose {chosen.record.name}; it is used from here on.")
    terminal.heading(
        out, f"{chosen.record.name[:1].upper()}{chosen.record.name[1:]}", chosen.record.equation
    )
    _show_state(out, fits)
    words = {one.key: one.description for one in chosen.record.parameters}
    terminal.table(
        out,
        ("", "parameter", "value", "standard\nerror", "95 % interval"),
        (
            (
                one.symbol,
                words.get(key, key.replace("_", " ")),
                f"{number(one.value, 4)} {_unit(one.unit)}".strip(),
                number(one.stderr, 2),
                f"{number(one.low)} to {number(one.high)}",
            )
            for key, one in chosen.parameters.items()
        ),
        left=2,
        least_wanted=(3, 1),
    )


def _aicc(fit: Fit) -> str:
    needed = fit.readings_for_aicc
    return f"{fit.aicc:.1f}" if needed is None else f"needs {needed} readings"


def _show_state(out: Console, fits: Fits) -> None:
    """Write at which temperature the parameters are given, and how they follow it."""
    from rheo.fitting.scaled_fits import ScaledFits
    from rheo.report.numbers import number

    if not isinstance(fits, ScaledFits) or fits.law is None:
        return
    at = f"{number(100.0 * fits.law.reference)} %"
    if fits.law.unit == "K":
        at = f"{fits.law.reference - 273.15:.1f} °C"
    terminal.sentence(
        out, f"One fit over every {fits.law.state}; values at {at}, and {fits.law.equation}."
    )


def _unit(unit: str) -> str:
    return "" if unit == "-" else unit
