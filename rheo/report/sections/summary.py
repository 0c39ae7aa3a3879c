"""The answer in sight: what the whole note comes to."""

from __future__ import annotations

import re

from rheo.case.result import CaseResult
from rheo.line.sizing import Sizing
from rheo.report.case_pictures import wall_rate_words
from rheo.report.display import text
from rheo.report.document import Answer, Block, Paragraph, Section
from rheo.report.numbers import number
from rheo.report.sections.pressure import pressure_text
from rheo.report.text import one_line
from rheo.report.words import capital

_REGIMES = ("laminar", "transition", "turbulent")


def answer_cells(
    result: CaseResult, sizing: Sizing | None, system: str = "metric"
) -> tuple[tuple[str, str, str], ...]:
    """Return the answer strip: name, value and remark of each result.

    Parameters
    ----------
    result : CaseResult
        Of `run_case`.
    sizing : Sizing or None
        The comparison of sizes, where there is one.
    system : str
        Unit system.

    Returns
    -------
    tuple of (str, str, str)
        Pressure, wall shear rate, regime, model, size, start-up.
    """
    line = result.line
    inside = {True: "inside the measured range", False: "outside the measured range"}
    regimes = [str(part.regime) for part in line.parts if part.kind == "pipe"]
    furthest = max(regimes, key=_REGIMES.index, default="not known")
    start = line.start_up
    restarts = "upper estimate"
    if start.rating is not None:
        allowed = text(start.rating, "pressure", system)
        within = "within" if bool(start.restarts) else "above"
        restarts = f"upper estimate, {within} the {allowed} at hand"
    cells = [
        (
            "Pressure that the pump adds",
            pressure_text(result.doubt, system),
            f"at {text(result.flow, 'flow', system)}; ± is the 95 % interval by all causes",
        ),
        (
            "Wall shear rate",
            wall_rate_words(result, system),
            "measured range not known"
            if result.inside_measured_range is None
            else inside[result.inside_measured_range],
        ),
        ("Regime", furthest, _reynolds(result)),
        ("Model", capital(result.chosen.record.name), result.chosen.record.equation),
        ("Start-up pressure", text(float(start.pressure), "pressure", system), restarts),
    ]
    if sizing is not None:
        best = sizing.recommended
        cells.insert(4, ("Recommended size", "none" if best is None else best.size.name, ""))
    return tuple(cells)


def _reynolds(result: CaseResult) -> str:
    pipes = result.pipes
    if not pipes:
        return ""
    nearest = max(pipes, key=lambda pipe: float(pipe.velocity) / float(pipe.critical_velocity))
    return (
        f"Re {number(float(nearest.reynolds), 2)}, laminar flow ends at "
        f"{number(float(nearest.critical_reynolds), 2)}"
    )


def summary_section(result: CaseResult, sizing: Sizing | None, system: str) -> Section:
    """Return the untitled first section."""
    blocks: list[Block] = [Answer(answer_cells(result, sizing, system))]
    if result.cautions:
        count = len(result.cautions)
        words = "is 1 Caution" if count == 1 else f"are {count} Cautions"
        blocks.append(Paragraph(f"There {words}; all of them are listed under Cautions."))
    blocks += [Paragraph(sentence, "safety") for sentence in result.line.safety]
    return Section("", tuple(blocks))


def purpose_section(result: CaseResult) -> Section:
    """Return the section on what the note is for."""
    case = result.case
    line, product = one_line(case.line.name, 80), one_line(case.product.name, 80)
    words = (
        f"To find the pressure, the pump duty and the pipe size for {product} in "
        f"the {line}, from viscometer readings."
    )
    blocks: list[Block] = [Paragraph(words)]
    # Line ends inside a paragraph are those of the file, not the author's.
    paragraphs = re.split(r"\n\s*\n", case.notes.strip())
    blocks += [Paragraph(" ".join(one.split())) for one in paragraphs if one.strip()]
    return Section("Purpose", tuple(blocks))
