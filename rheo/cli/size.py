"""`rheo size`: every size against the limits."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from rheo.cli import terminal
from rheo.cli.options import CaseFile, Json, Outside, UnitsOption
from rheo.cli.terminal import Units

if TYPE_CHECKING:
    from rich.console import Console

    from rheo.line import PipeSize
    from rheo.line.size_words import Candidate
    from rheo.line.sizing import Sizing


def size(
    case: CaseFile,
    units: UnitsOption = Units.metric,
    as_json: Json = False,
    allow_outside: Outside = False,
) -> None:
    """Every catalogue size against the limits; the size to take."""
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
    sizes = [one.size for one in sizing.candidates]
    shared, labels = _short_labels(sizes)
    terminal.heading(out, "Sizes", shared)
    best = [i for i, one in enumerate(sizing.candidates) if one is sizing.recommended]
    headings = [
        "size",
        "",
        f"pressure\n{unit_label('pressure', units)}",
        f"velocity\n{unit_label('velocity', units)}",
        "wall rate\n1/s",
        f"start-up\n{unit_label('pressure', units)}",
        *(["cost\na year"] if priced else []),
    ]
    rows = [
        (label, *_cells(one, units, priced))
        for label, one in zip(labels, sizing.candidates, strict=True)
    ]
    terminal.table(out, headings, rows, left=2, bold_rows=best, least_wanted=(5, 4, 3))
    terminal.sentence(out, sizing.sentence, "bold", units=units)
    _show_moves(out, sizing, units)
    _show_reasons(out, sizing, units)
    terminal.cautions(out, sizing.cautions, units)
    terminal.safety(out, sizing.safety)


def _short_labels(sizes: list[PipeSize]) -> tuple[str, list[str]]:
    """Return what all names share, for the heading, and the labels without it."""
    if len({size.standard for size in sizes}) > 1:
        return "", [size.name for size in sizes]
    standard = "" if sizes[0].standard == "own" else sizes[0].standard
    schedules = {size.label.partition(" schedule ")[2] for size in sizes}
    if len(schedules) > 1 or schedules == {""}:
        return standard, [size.label for size in sizes]
    shared = f"{standard} schedule {schedules.pop()}"
    return shared, [size.label.partition(" schedule ")[0] for size in sizes]


def _cells(one: Candidate, units: str, priced: bool) -> tuple[Any, ...]:
    from rheo.report.display import shown
    from rheo.report.numbers import number, with_interval

    def cell(value: float, quantity: str) -> str:
        return number(float(shown(value, quantity, units)))

    pressure = cell(one.pressure, "pressure")
    if one.pressure_interval is not None:
        value, low, high = shown([one.pressure, *one.pressure_interval], "pressure", units)
        pressure = with_interval(float(value), float(low), float(high))
    verdict = terminal.text("passes", "green") if one.passes else terminal.text("fails", "red")
    cells = [
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


def _show_reasons(out: Console, sizing: Sizing, units: str) -> None:
    from rheo.report.restate import restated

    failing = [one for one in sizing.candidates if not one.passes]
    if not failing:
        return
    terminal.heading(out, "Why sizes fail")
    rows = [(one.size.name, restated("; ".join(one.reasons), units)) for one in failing]
    terminal.values(out, rows)
