"""`rheo batch`: many files of readings to one table."""

from __future__ import annotations

import contextlib
from collections.abc import Callable, Iterator
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from rheo.cli import terminal
from rheo.cli.options import Json, one_of, optional_quantity
from rheo.cli.readings_options import (
    Columns,
    Dimensions,
    GeometryKind,
    columns_of,
    full_scale_of,
    geometry_text,
    sweep_of,
)
from rheo.cli.stopped import Stopped
from rheo.errors import InputError, in_percent

if TYPE_CHECKING:
    from rheo.batches import BatchResult, Row

SUFFIXES = (".csv", ".tsv", ".txt", ".xlsx", ".xls", ".ods")
# So many lines of each kind are shown; the table has them all.
_SHOWN = 40


def batch(
    folder: Annotated[
        Path, typer.Argument(metavar="FOLDER", help=f"Its files ending in {', '.join(SUFFIXES)}.")
    ],
    out: Annotated[
        Path | None,
        typer.Option(
            "--out",
            metavar="TABLE",
            help="Write a .csv or .xlsx table; a batch that was stopped goes on from the journal "
            "beside it.",
        ),
    ] = None,
    reference: Annotated[
        Path | None,
        typer.Option("--reference", metavar="READINGS", help="Compare each file with this lot."),
    ] = None,
    rates: Annotated[
        list[str] | None,
        typer.Option(
            "--rate",
            metavar="RATE",
            help="Shear rate of the comparison: '50 1/s'; may be repeated.",
        ),
    ] = None,
    models: Annotated[
        list[str] | None,
        typer.Option(
            "--model",
            "-m",
            metavar="KEY",
            help="Only this model; may be repeated. All when absent.",
        ),
    ] = None,
    weighting: Annotated[
        str, typer.Option("--weighting", "-w", help="relative or absolute.")
    ] = "relative",
    geometry: GeometryKind = None,
    dimensions: Dimensions = None,
    columns: Columns = None,
    sheet: Annotated[str | None, typer.Option("--sheet", help="Sheet of a workbook.")] = None,
    sweep: Annotated[
        str, typer.Option("--sweep", help="Branch to fit: up, down or both.")
    ] = "both",
    full_scale: Annotated[
        str | None, typer.Option("--full-scale", help="Torque at full scale: '10 mN.m'.")
    ] = None,
    recursive: Annotated[
        bool, typer.Option("--recursive", "-r", help="Look in the folders inside it too.")
    ] = False,
    workers: Annotated[
        int | None, typer.Option("--workers", min=1, help="Processes; one a core when absent.")
    ] = None,
    fresh: Annotated[
        bool, typer.Option("--fresh", help="Fit every file again, whatever the journal says.")
    ] = False,
    as_json: Json = False,
) -> None:
    """Many files to one table: fits, screening, drift.

    The drift is that from a reference lot. A bad file is listed with its reason and stops nothing.
    """
    from rheo.batches import batch as run_batch
    from rheo.batches import write_table
    from rheo.batches.job import Settings
    from rheo.batches.journal import journal_path
    from rheo.batches.table import check_table
    from rheo.fitting.weighting import WEIGHTINGS

    if out is not None:
        check_table(out)
    if weighting not in WEIGHTINGS:
        raise InputError(
            f"found '{weighting[:60]}'; it must be {one_of(WEIGHTINGS)}", "--weighting"
        )
    if rates and reference is None:
        raise InputError("a shear rate needs --reference", "--rate")
    settings = Settings(
        models=tuple(models) if models else None,
        weighting=weighting,
        columns=tuple((columns_of(columns) or {}).items()) or None,
        geometry=geometry_text(geometry, dimensions),
        sheet=sheet,
        sweep=sweep_of(sweep),
        full_scale_torque=full_scale_of(full_scale),
    )
    asked = [optional_quantity(rate, "1/s", "--rate") for rate in rates or []]
    files = _files(folder, recursive, out)
    journal = None if out is None else journal_path(out)
    if fresh and journal is not None:
        journal.unlink(missing_ok=True)
    with _stop_said(len(files), journal) as count, _progress(quiet=as_json) as tell:

        def progress(done: int, total: int) -> None:
            count(done)
            tell(done, total)

        result = run_batch(
            files,
            settings,
            reference,
            [rate for rate in asked if rate is not None] or None,
            workers=workers,
            journal=journal,
            progress=progress,
        )
    # Within the folder a file's name says enough.
    result = replace(result, rows=tuple(row.named(_name(row, folder)) for row in result.rows))
    if out is not None:
        write_table(result, out)
    if as_json:
        terminal.print_json(
            {"rates": list(result.rates), "files": [row.as_dict() for row in result.rows]}
        )
    else:
        _show(result, out)
    if not result.fitted:
        raise InputError(
            f"none of its {len(result.rows)} files could be fitted; the first: "
            f"{result.rows[0].reason}",
            str(folder),
        )


def _files(folder: Path, recursive: bool, out: Path | None) -> list[Path]:
    if not folder.is_dir():
        what = "it is a file" if folder.exists() else "there is no such folder"
        raise InputError(f"{what}; give a folder with files of readings", str(folder))
    found = sorted(folder.rglob("*") if recursive else folder.iterdir())
    own = None if out is None else out.resolve()
    files = [
        path
        for path in found
        if path.suffix.lower() in SUFFIXES
        and not path.name.startswith((".", "~$"))
        and path.is_file()
        and path.resolve() != own
    ]
    if not files:
        raise InputError(
            f"there is no file of readings in it; they end in {', '.join(SUFFIXES)}", str(folder)
        )
    return files


@contextlib.contextmanager
def _stop_said(total: int, journal: Path | None) -> Iterator[Callable[[int], None]]:
    """Return what is told how many files are done; after Ctrl-C say what is kept of them."""
    from rheo.batches.journal import rows_in

    done: list[int] = []
    try:
        yield done.append
    except KeyboardInterrupt:
        if journal is None:
            raise Stopped(
                f"Stopped after {max(done, default=0)} of {total} files; nothing is kept. With "
                "--out a batch keeps what is done and goes on from there."
            ) from None
        # Rows may have come to the journal since progress was last told. Before it is told at
        # all, what stands in the journal may be of a batch with other settings.
        kept = rows_in(journal) if done else 0
        raise Stopped(
            f"Stopped. {kept} of {total} files are kept in {journal}; the same command goes "
            "on from there."
        ) from None


@contextlib.contextmanager
def _progress(quiet: bool) -> Iterator[Callable[[int, int], None]]:
    """Return what shows the progress on standard error, where that is a terminal."""
    from rich.console import Console
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, TimeRemainingColumn

    console = Console(stderr=True)
    if quiet or not console.is_terminal:
        yield lambda done, total: None  # noqa: ARG005
        return
    bar = Progress(
        "Files", BarColumn(), MofNCompleteColumn(), TimeRemainingColumn(), console=console
    )
    with bar:
        task = bar.add_task("", total=None)
        yield lambda done, total: bar.update(task, completed=done, total=total)


def _show(result: BatchResult, out: Path | None) -> None:
    console = terminal.console()
    fitted, failed = result.fitted, result.failed
    again = f", {result.taken_up} of them taken up from the journal" if result.taken_up else ""
    terminal.heading(console, f"{len(result.rows)} files", f"{len(fitted)} fitted{again}")
    rows = sorted(fitted, key=lambda row: row.drifted is not True)
    terminal.table(
        console,
        ["file", "model", "parameters in SI", "RMS\nerror", "cautions", "drift"],
        [_cells(row) for row in rows[:_SHOWN]],
        left=3,
        least_wanted=(4,),
    )
    _more(len(rows))
    if failed:
        terminal.heading(console, "Not fitted", f"{len(failed)}")
        terminal.values(console, ((row.file, row.reason) for row in failed[:_SHOWN]))
        _more(len(failed))
    if out is not None:
        console.print()
        terminal.sentence(console, f"Table: {out}", indent=0)


def _cells(row: Row) -> tuple[object, ...]:
    from rheo.models import model_record

    symbols = {one.key: one.symbol for one in model_record(row.best).parameters}
    known = {symbols.get(key, key): one for key, one in row.values.items() if one is not None}
    drift = [one.ratio for one in row.drift if one.beyond_doubt and one.ratio is not None]
    return (
        row.file,
        row.best,
        ", ".join(f"{key} {value:.3g}" for key, value in known.items()),
        "" if row.rms_relative_error is None else in_percent(row.rms_relative_error, 1),
        len(row.cautions) or "",
        ", ".join(f"{ratio - 1:+.0%}" for ratio in drift),
    )


def _name(row: Row, folder: Path) -> str:
    path = Path(row.file)
    return str(path.relative_to(folder)) if path.is_relative_to(folder) else row.file


def _more(count: int) -> None:
    if count > _SHOWN:
        terminal.sentence(terminal.console(), f"… and {count - _SHOWN} more")
