"""The choice of model: the ranking, the reason, the parameters, the residuals."""

from __future__ import annotations

import numpy as np

from rheo.fitting import Fit, Fits
from rheo.models.state_curve import ScalingLaw
from rheo.report.document import Block, Cautions, Facts, Figure, Paragraph, Table
from rheo.report.numbers import exact, number, with_doubt
from rheo.report.picture import Picture
from rheo.report.scripts import unit_words
from rheo.report.words import capital, percent


def ranking_table(fits: Fits, chosen: Fit) -> Table:
    """Return the fitted models in order, the chosen one marked."""
    rows = tuple(
        (
            capital(fit.record.name),
            str(fit.parameter_count),
            number(fit.aicc, 4)
            if fit.readings_for_aicc is None
            else f"needs {fit.readings_for_aicc} readings",
            percent(fit.weight),
            percent(fit.rms_relative_error),
            percent(fit.worst_relative_error),
            number(fit.runs[1], 2),
        )
        for fit in fits
    )
    return Table(
        (
            "Model",
            "Parameters",
            "AICc [-]",
            "Akaike weight",
            "RMS error",
            "Worst error",
            "Chance of so few runs [-]",
        ),
        rows,
        numeric=(1, 2, 3, 4, 5, 6),
        caption="Models fitted to the same readings with the same weights",
        states=tuple("chosen" if fit.key == chosen.key else "" for fit in fits),
    )


def parameter_table(fit: Fit, law: ScalingLaw | None = None) -> Table:
    """Return the parameters of a fit with their intervals, at the reference of a law."""
    at = ""
    if law is not None:
        where = f"{exact(round(law.reference, 2))} {law.unit}"
        if law.unit == "-":
            where = f"{exact(round(100.0 * law.reference, 4))} %"
        at = f"; values at {where}, {law.equation}"
    words = {one.key: one.description for one in fit.record.parameters}
    rows = tuple(
        (
            words.get(one.key, one.key.replace("_", " ")),
            one.symbol,
            unit_words(one.unit),
            with_doubt(one.value, one.stderr) if one.stderr > 0 else number(one.value, 4),
            number(one.low),
            number(one.high),
            one.note or (f"at its {one.bound} bound" if one.bound else ""),
        )
        for one in fit.parameters.values()
    )
    return Table(
        ("Parameter", "Symbol", "Unit", "Value ± standard error", "95 % from", "to", "Remark"),
        rows,
        numeric=(3, 4, 5),
        caption=f"{capital(fit.record.name)}: {fit.record.equation}{at}",
    )


def fit_blocks(fits: Fits, chosen: Fit, picture: Picture) -> list[Block]:
    """Return the blocks that explain one fit.

    Parameters
    ----------
    fits : Fits
        All models.
    chosen : Fit
        The one in use, which the user may have chosen against the ranking.
    picture : Picture
        The residuals.

    Returns
    -------
    list of Block
        Reason, ranking, parameters, residuals, Cautions.
    """
    reason = fits.reason
    if chosen.key != fits.best.key:
        reason = (
            f"{capital(chosen.record.name)} was chosen by the user. "
            f"By the ranking it would be another: {fits.reason}"
        )
    law = getattr(fits, "law", None)
    facts = (
        ("Readings fitted", str(int(np.size(chosen.observed)))),
        ("Weighting", fits.weighting.name),
        ("Where the model may be used", chosen.record.validity),
        ("Source", chosen.record.source),
    )
    blocks: list[Block] = [
        Paragraph(reason, "lead"),
        ranking_table(fits, chosen),
        parameter_table(chosen, law if isinstance(law, ScalingLaw) else None),
        Facts(facts),
        Figure(picture),
    ]
    if chosen.cautions:
        blocks.append(Cautions(chosen.cautions))
    return blocks
