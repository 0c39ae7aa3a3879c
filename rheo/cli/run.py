"""`rheo run`: from a case file to the duty, on the terminal and in files."""

from __future__ import annotations

from typing import TYPE_CHECKING

from rheo.cli import terminal
from rheo.cli.options import CaseFile, Json, OutFolder, Outside, UnitsOption
from rheo.cli.terminal import Units
from rheo.errors import InputError

if TYPE_CHECKING:
    from pathlib import Path

    from rich.console import Console

    from rheo.case import CaseResult


def run(
    case: CaseFile,
    units: UnitsOption = Units.metric,
    as_json: Json = False,
    allow_outside: Outside = False,
    out: OutFolder = None,
) -> None:
    """From readings to a duty and a design note: the main job.

    Reads the case, its readings, fits and ranks the models, works out the line, and says how far
    to trust each number.
    """
    from rheo.case import load_case, run_case

    if out is not None and out.exists() and not out.is_dir():
        raise InputError("it is no folder; give one, which is made where it is not there", str(out))
    result = run_case(load_case(case, allow_outside))
    written: tuple[Path, ...] = ()
    if out is not None:
        from rheo.report import write_note

        written = write_note(result, out, system=units.value)
    if as_json:
        terminal.print_json(result.as_dict())
    else:
        _show(result, units.value)
        for path in written:
            terminal.console().print(terminal.line(f"Written: {path}"))


def _show(result: CaseResult, units: str) -> None:
    from rheo.cli.show_fits import show_fits, show_readings
    from rheo.cli.show_line import (
        show_answer,
        show_doubt,
        show_duty,
        show_parts,
        show_rates,
    )

    out = terminal.console()
    title = result.case.title or result.case.product.name
    out.print(terminal.line(title, "bold reverse"))
    show_answer(out, result.line, result.doubt, units, result.cautions)
    for one in result.readings:
        show_readings(out, one, units)
    show_fits(out, result.fits, result.chosen)
    show_duty(out, result.line, units, result.efficiency)
    show_rates(out, result.line)
    _show_pump(out, result, units)
    show_parts(out, result.line, units)
    terminal.heading(out, "Start-up")
    terminal.sentence(out, result.line.start_up.sentence, units=units)
    _show_asked_for(out, result, units)
    show_doubt(out, result.doubt, units)
    terminal.cautions(out, result.cautions, units)
    terminal.safety(out, (*result.line.safety, result.line.start_up.safety))


def _show_pump(out: Console, result: CaseResult, units: str) -> None:
    point = result.operating
    if point is None:
        return
    terminal.heading(out, "Pump and line")
    terminal.sentence(out, point.sentence, "" if point.found else "bold yellow", units=units)


def _show_asked_for(out: Console, result: CaseResult, units: str) -> None:
    from rheo.report.display import text

    if result.holding is not None:
        terminal.heading(out, "Holding tube")
        terminal.sentence(out, result.holding.sentence, units=units)
        terminal.sentence(out, result.holding.safety, "dim")
    if result.cleaning is not None:
        terminal.heading(out, "Cleaning in place")
        pressure = text(result.cleaning.differential_pressure, "pressure", units)
        terminal.sentence(
            out,
            f"{text(result.cleaning.flow, 'flow', units)} of water gives "
            f"{text(result.cleaning.velocity, 'velocity', units)} in the widest pipe, at "
            f"{pressure}.",
        )
        terminal.sentence(out, result.cleaning.safety, "dim")
