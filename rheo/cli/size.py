"""`rheo size`: every size against the limits."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from rheo.cli import terminal
from rheo.cli.options import CaseFile, Json, Outside, UnitsOption
from rheo.cli.terminal import Units

if TYPE_CHECKING:
    from rich.console import Console

    from rheo.line.size_words import Candidate
    from rheo.line.sizing import Sizing


def size(
    case: CaseFile,
    units: UnitsOption = Units.metric,
    as_json: Json = False,
    allow_outside: Outside = False,
) -> None:
    """Every catalogue size against the limits of the case, and the size to take."""
    from rheo.case import load_case, run_case
    from rheo.case.as_data import data

    sizing = run_case(load_case(case, allow_outside)).sizing
    if as_json:
        terminal.print_json(data(sizing))
    else:
        _show(terminal.console(), sizing, units.value)


def _show(out: Console, sizing: Sizing, units: str) -> None:
    from rheo.report.display import unit_label

    priced = any(one.annual_cost is not None for one in sizing.candidates)
    standards = {one.size.standard for one in sizing.candidates}
    alike = standards.pop() if len(standards) == 1 else ""
    terminal.heading(out, "Sizes", "" if alike == "own" else alike)
    best = [i for i, one in enumerate(sizing.candidates) if one is sizing.recommended]
    headings = [
        "size",
        "",
        f"pressure\n{unit_label('pressure', units)}",
        f"velocity\n{unit_label('velocity', units)}",
        "wall rate\n1/s",
        f"start-up\n{unit_label('pressure', units)}",
    ]
    if priced:
        headings.append("cost\na year")
    terminal.table(
        out,
        headings,
        (_row(one, units, priced, bool(alike)) for one in sizing.candidates),
        left=2,
        bold_rows=best,
    )
    terminal.sentence(out, sizing.sentence, "bold")
    _show_moves(out, sizing, units)
    _show_reasons(out, sizing)
    terminal.cautions(out, sizing.cautions)
    terminal.safety(out, sizing.safety)


def _row(one: Candidate, units: str, priced: bool, alike: bool) -> tuple[Any, ...]:
    from rheo.report.display import shown
    from rheo.report.numbers import number, with_interval

    def cell(value: float, quantity: str) -> str:
        return number(float(shown(value, quantity, units)))

    pressure = cell(one.pressure, "pressure")
    if one.pressure_interval is not None:
        ends = shown([one.pressure, *one.pressure_interval], "pressure", units)
        pressure = with_interval(*(float(end) for end in ends))
    verdict = terminal.text("passes", "green") if one.passes else terminal.text("fails", "red")
    cells = [
        one.size.label if alike else one.size.name,
        verdict,
        pressure,
        cell(one.velocity, "velocity"),
        cell(one.wall_rate, "rate"),
        cell(one.start_up_pressure, "pressure"),
    ]
    if priced:
        cells.append("" if one.annual_cost is None else number(one.annual_cost))
    return tuple(cells)


def _show_moves(out: Console, sizing: Sizing, units: str) -> None:
    if sizing.choice_by_draw:
        likely = ", ".join(f"{name} {_percent(share)}" for name, share in sizing.choice_by_draw)
        terminal.sentence(out, f"Over the doubt in the product the choice would be: {likely}.")
    if len({name for _, name in sizing.choice_by_flow}) > 1:
        flows = ", ".join(
            f"{name} at {terminal.given(flow, 'flow', units)}"
            for flow, name in sizing.choice_by_flow
        )
        terminal.sentence(out, f"Over the spread of the flow: {flows}.")


def _percent(share: float) -> str:
    return f"{100 * share:.0f} %" if share >= 0.005 else "under 1 %"


def _show_reasons(out: Console, sizing: Sizing) -> None:
    failing = [one for one in sizing.candidates if not one.passes]
    if not failing:
        return
    terminal.heading(out, "Why sizes fail")
    terminal.values(out, [(one.size.name, "; ".join(one.reasons)) for one in failing])
