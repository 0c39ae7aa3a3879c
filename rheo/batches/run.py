"""Run a batch."""

from __future__ import annotations

import contextlib
import os
from collections.abc import Callable, Iterable, Sequence
from concurrent.futures import Executor
from dataclasses import dataclass
from pathlib import Path

from rheo import __version__
from rheo.batches.job import Job, Settings, digest_of, read_one
from rheo.batches.journal import Journal
from rheo.batches.reference import (
    Reference,
    curve_with_doubt,
    mean_temperature,
    rates_to_compare,
)
from rheo.batches.row import Row
from rheo.batches.workers import run_jobs
from rheo.errors import InputError
from rheo.fitting import fit
from rheo.fitting.any_state import at_several_solids, at_several_temperatures
from rheo.fitting.entry import records_of
from rheo.fitting.weighting import resolve_weighting

Progress = Callable[[int, int], None]

# Files fitted together. Which these are follows from the list of files alone, so that the number
# of processes changes nothing, not even the rounding.
TOGETHER = 50


@dataclass(frozen=True)
class BatchResult:
    """What a batch came to.

    Parameters
    ----------
    rows : tuple of Row
        One a file, in the order given.
    rates : tuple of float
        Shear rates of the comparison with the reference lot [1/s]; empty without one.
    taken_up : int
        How many rows an earlier batch left in the journal.
    """

    rows: tuple[Row, ...]
    rates: tuple[float, ...] = ()
    taken_up: int = 0

    @property
    def fitted(self) -> tuple[Row, ...]:
        """The rows with a fit."""
        return tuple(row for row in self.rows if row.fitted)

    @property
    def failed(self) -> tuple[Row, ...]:
        """The rows of bad files, each with its reason."""
        return tuple(row for row in self.rows if not row.fitted)


def batch(
    paths: Iterable[str | os.PathLike[str]],
    settings: Settings | None = None,
    reference: str | os.PathLike[str] | None = None,
    rates: Sequence[float] | None = None,
    executor: Executor | None = None,
    workers: int | None = None,
    journal: str | os.PathLike[str] | None = None,
    progress: Progress | None = None,
) -> BatchResult:
    """Read, screen and fit many files of readings.

    Parameters
    ----------
    paths : iterable of path
        The files; a bad one gets a row with the reason and stops nothing.
    settings : Settings, optional
        How they are read and fitted.
    reference : path, optional
        Readings of a reference lot; each file is compared with it.
    rates : sequence of float, optional
        Shear rates of the comparison [1/s], inside those of the reference; three of them when
        absent.
    executor : concurrent.futures.Executor, optional
        Where the work is done, such as that of a cluster; its processes must see the files under
        the same paths. Processes on all cores of this machine when absent.
    workers : int, optional
        Number of these; it changes nothing in the result.
    journal : path, optional
        File in which rows are kept as they come. Rows of an earlier batch with the same settings
        are taken up from it, except of files whose content has changed.
    progress : callable, optional
        ``progress(done, total)`` in files.

    Returns
    -------
    BatchResult

    Raises
    ------
    InputError
        For no file at all, an unknown model or weighting, a reference that cannot be fitted, or a
        journal that cannot be written.
    """
    files = tuple(dict.fromkeys(os.fspath(path) for path in paths))
    if not files:
        raise InputError("there is no file; give at least one", "batch")
    how = settings or Settings()
    resolve_weighting(how.weighting)
    records_of(how.models)
    if workers is not None and workers < 1:
        raise InputError(f"the number of workers is {workers}; it must be 1 or more", "workers")
    other = None if reference is None else _reference(Path(reference), rates, how)
    with contextlib.ExitStack() as stack:
        kept: dict[str, Row] = {}
        log: Journal | None = None
        if journal is not None:
            log = stack.enter_context(_journal(Path(journal), f"{__version__} {how} {other}"))
            kept = _unchanged(log.rows, files)
        rows = dict(kept)

        def done(found: list[Row]) -> None:
            new = [row for row in found if row.file not in rows]
            rows.update((row.file, row) for row in new)
            if log is not None:
                log.add(new)
            if progress is not None:
                progress(len(rows), len(files))

        done([])

        jobs = [
            Job(files[first : first + TOGETHER], how, other)
            for first in range(0, len(files), TOGETHER)
        ]
        jobs = [job for job in jobs if not rows.keys() >= set(job.files)]
        if jobs:
            run_jobs(jobs, done, executor, workers or os.cpu_count() or 1)
    return BatchResult(
        tuple(rows[file] for file in files), () if other is None else other.rates, len(kept)
    )


def _reference(path: Path, rates: Sequence[float] | None, settings: Settings) -> Reference:
    try:
        data = path.read_bytes()
    except OSError as error:
        reason = "there is no such file" if not path.exists() else error.strerror
        raise InputError(reason or "it cannot be read", str(path)) from None
    readings = read_one(data, str(path), settings)
    for several, what in (
        (at_several_temperatures, "temperatures"),
        (at_several_solids, "solids fractions"),
    ):
        if several(readings):
            raise InputError(
                f"the reference lot has readings at several {what}; it must have one", str(path)
            )
    fits = fit(readings, settings.models, settings.weighting)
    chosen = rates_to_compare(fits, rates, path)
    curve = curve_with_doubt(fits, chosen, mean_temperature(readings))
    return Reference(chosen, curve, digest_of(data))


def _journal(path: Path, stamp: str) -> Journal:
    try:
        return Journal(path, stamp)
    except OSError as error:
        reason = error.strerror or "it is no file"
        raise InputError(f"the journal cannot be written: {reason}", str(path)) from None


def _unchanged(rows: dict[str, Row], files: Sequence[str]) -> dict[str, Row]:
    """Return the rows of files whose content is what it was; a file not read is tried again."""
    found = {}
    for file in files:
        row = rows.get(file)
        if row is None or not row.digest:
            continue
        try:
            if digest_of(Path(file).read_bytes()) == row.digest:
                found[file] = row
        except OSError:
            # It is gone or may not be read: its new row will say so.
            continue
    return found
