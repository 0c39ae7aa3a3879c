"""Sizes compared."""

from __future__ import annotations

from rheo.line.size_words import Candidate
from rheo.line.sizing import Sizing
from rheo.report.display import shown, text, unit_label
from rheo.report.document import Block, Cautions, Figure, Paragraph, Section, Table
from rheo.report.line_pictures import sizes_picture
from rheo.report.numbers import number, with_interval
from rheo.report.restate import restated
from rheo.report.words import without_shared_words


def sizes_section(
    sizing: Sizing, pressure_limit: float | None, currency: str, system: str
) -> Section:
    """Return the section that compares sizes.

    Parameters
    ----------
    sizing : Sizing
        The comparison.
    pressure_limit : float or None
        Largest differential pressure [Pa].
    currency : str
        Unit of the costs.
    system : str
        Unit system.

    Returns
    -------
    Section
        With the figure, and a table with the reason for each size that fails.
    """
    blocks: list[Block] = [
        Paragraph(restated(sizing.sentence, system), "lead"),
        Figure(sizes_picture(sizing, pressure_limit, currency, system)),
        sizes_table(sizing, currency, system),
    ]
    moves = moves_sentence(sizing, system)
    if moves:
        blocks.append(Paragraph(moves))
    if sizing.cautions:
        blocks.append(Cautions(sizing.cautions))
    return Section("Sizes compared", tuple(blocks))


def _state(one: Candidate, sizing: Sizing) -> str:
    if one is sizing.recommended:
        return "chosen"
    return "" if one.passes else "muted"


def _pressure(one: Candidate, system: str) -> str:
    if one.pressure_interval is None:
        return number(float(shown(one.pressure, "pressure", system)))
    values = shown([one.pressure, *one.pressure_interval], "pressure", system).tolist()
    return with_interval(values[0], values[1], values[2])


def sizes_table(sizing: Sizing, currency: str, system: str) -> Table:
    """Return every size against the limits, with the reason where it fails."""
    priced = any(one.annual_cost is not None for one in sizing.candidates)
    pressure = unit_label("pressure", system)
    head = [
        "Size",
        "Verdict",
        f"Inside [{unit_label('diameter', system)}]",
        f"Velocity [{unit_label('velocity', system)}]",
        f"Wall shear rate [{unit_label('rate', system)}]",
        f"Pressure [{pressure}]",
        f"Start-up [{pressure}]",
    ]
    if priced:
        head.append(f"Cost [{currency}/year]")
    rows = []
    shared, short = without_shared_words([one.size.name for one in sizing.candidates])
    for one, name in zip(sizing.candidates, short, strict=True):
        verdict = "recommended" if one is sizing.recommended else "passes"
        row = [
            name,
            verdict if one.passes else "fails",
            number(float(shown(one.size.inside_diameter, "diameter", system))),
            number(float(shown(one.velocity, "velocity", system))),
            number(one.wall_rate),
            _pressure(one, system),
            number(float(shown(one.start_up_pressure, "pressure", system))),
        ]
        if priced:
            row.append("" if one.annual_cost is None else number(one.annual_cost))
        rows.append((*row, restated("; ".join(one.reasons), system)))
    return Table(
        (*head, "Limits not kept"),
        tuple(rows),
        numeric=tuple(range(2, len(head))),
        caption=(
            f"Every size{f' of {shared}' if shared else ''} against the limits; ± by readings and "
            "model choice"
        ),
        states=tuple(_state(one, sizing) for one in sizing.candidates),
        widths=(1.1, 1.3, *[0.8] * (len(head) - 2), 2.4),
    )


def moves_sentence(sizing: Sizing, system: str) -> str:
    """Say how the choice moves with the doubt in the product and with the flow."""
    parts = []
    if sizing.choice_by_draw:
        shares = [f"{name} in {number(100 * share, 2)} %" for name, share in sizing.choice_by_draw]
        parts.append(f"Over the likely flow curves the choice is {', '.join(shares)}.")
    if sizing.choice_by_flow:
        flows = [f"{name} at {text(flow, 'flow', system)}" for flow, name in sizing.choice_by_flow]
        parts.append(f"With the flow it is {', '.join(flows)}.")
    return " ".join(parts)
