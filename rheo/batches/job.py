"""What one process does: read some files, screen them, fit them together, compare them."""

from __future__ import annotations

import hashlib
import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path

from rheo.batches.reference import Reference, compared, mean_temperature
from rheo.batches.row import Row
from rheo.case.load_readings import branch_of
from rheo.errors import Caution, InputError, merge_cautions
from rheo.fitting import Fits, Instrument
from rheo.fitting.any_state import at_several_solids, at_several_temperatures, fit_readings
from rheo.fitting.many_curves import fit_curves
from rheo.readings import Readings, read_readings, screen

# A file may be such that the program fails at it; the others must not suffer for it.
UNFORESEEN = (
    ArithmeticError,
    AssertionError,
    AttributeError,
    LookupError,
    MemoryError,
    RuntimeError,
    TypeError,
    ValueError,
)


@dataclass(frozen=True)
class Settings:
    """How every file of a batch is read and fitted.

    Parameters
    ----------
    models : tuple of str or None
        Model keys; None for all.
    weighting : str or Instrument
        As for `rheo.fit`.
    columns : tuple of pairs of str, or None
        Quantity and heading, as `rheo.read_readings` takes them.
    geometry : str or None
        As it is written in a file; wins over the file's own.
    sheet : str or None
        Sheet of a workbook.
    sweep : str
        Branch to fit: ``up``, ``down`` or ``both``.
    full_scale_torque : float or None
        [N m]
    """

    models: tuple[str, ...] | None = None
    weighting: str | Instrument = "relative"
    columns: tuple[tuple[str, str], ...] | None = None
    geometry: str | None = None
    sheet: str | None = None
    sweep: str = "both"
    full_scale_torque: float | None = None


@dataclass(frozen=True)
class Job:
    """Files that one process takes together.

    Parameters
    ----------
    files : tuple of str
        Their paths, which are their names in the result.
    settings : Settings
        How they are read and fitted.
    reference : Reference or None
        The lot to compare with.
    """

    files: tuple[str, ...]
    settings: Settings
    reference: Reference | None


def digest_of(data: bytes) -> str:
    """Return the SHA-256 of a file's content in hexadecimal digits."""
    return hashlib.sha256(data).hexdigest()


def read_one(data: bytes, name: str, settings: Settings) -> Readings:
    """Return the readings of a file, as they are to be fitted.

    Raises
    ------
    InputError
        If they cannot be read, or lack the branch.
    """
    found = read_readings(
        data,
        columns=None if settings.columns is None else dict(settings.columns),
        geometry=settings.geometry,
        sheet=settings.sheet,
        full_scale_torque=settings.full_scale_torque,
        name=name,
    )
    return branch_of(found, settings.sweep)


def run_job(job: Job) -> list[Row]:
    """Return a row for each file of a job, in order; a bad file's row says why."""
    read: dict[str, tuple[Readings, str]] = {}
    rows: dict[str, Row] = {}
    for file in job.files:
        digest = ""
        try:
            data = Path(file).read_bytes()
            digest = digest_of(data)
            read[file] = read_one(data, Path(file).name, job.settings), digest
        except OSError as error:
            rows[file] = Row(file, digest, error.strerror or "it cannot be read")
        except InputError as error:
            rows[file] = Row(file, digest, str(error).removeprefix(f"{Path(file).name}: "))
        except UNFORESEEN as error:
            rows[file] = Row(file, digest, _unforeseen(error))
    fitted = _fitted({file: readings for file, (readings, _) in read.items()}, job.settings)
    for file, (readings, digest) in read.items():
        rows[file] = _row(file, digest, readings, fitted[file], job.reference)
    return [rows[file] for file in job.files]


def _fitted(read: Mapping[str, Readings], settings: Settings) -> dict[str, Fits | InputError | str]:
    """Fit flow curves together, readings of an instrument one by one."""
    plain = [
        file
        for file, readings in read.items()
        if readings.geometry is None
        and not (at_several_temperatures(readings) or at_several_solids(readings))
    ]
    found: dict[str, Fits | InputError | str] = {}
    try:
        curves = [read[file].flow_curve() for file in plain]
        found.update(
            zip(plain, fit_curves(curves, settings.models, settings.weighting), strict=True)
        )
    except UNFORESEEN:
        # One of them is at fault; which one shows when each is fitted by itself.
        found = {}
    for file, readings in read.items():
        if file not in found:
            found[file] = _fitted_alone(readings, settings)
    return found


def _fitted_alone(readings: Readings, settings: Settings) -> Fits | InputError | str:
    try:
        return fit_readings(readings, settings.models, settings.weighting)
    except InputError as error:
        return error
    except UNFORESEEN as error:
        return _unforeseen(error)


def _unforeseen(error: BaseException) -> str:
    words = " ".join(f"{type(error).__name__}: {error}".split())
    return f"it could not be worked out ({words[:200]})"


def _row(
    file: str,
    digest: str,
    readings: Readings,
    fits: Fits | InputError | str,
    reference: Reference | None,
) -> Row:
    if not isinstance(fits, Fits):
        return Row(file, digest, str(fits), len(readings))
    try:
        return _full_row(file, digest, readings, fits, reference)
    except InputError as error:
        return Row(file, digest, str(error), len(readings))
    except UNFORESEEN as error:
        return Row(file, digest, _unforeseen(error), len(readings))


def _full_row(
    file: str, digest: str, readings: Readings, fits: Fits, reference: Reference | None
) -> Row:
    best = fits.best
    more: Sequence[Caution] = ()
    drift, said = compared(fits, readings, reference) if reference is not None else ((), more)
    flowing = best.rates[best.rates > 0]
    return Row(
        file,
        digest,
        points=len(readings),
        geometry="" if readings.geometry is None else readings.geometry.key,
        temperature=mean_temperature(readings),
        lowest_rate=float(flowing.min()),
        highest_rate=float(flowing.max()),
        best=best.key,
        values={key: _known(one.value) for key, one in best.parameters.items()},
        errors={key: _known(one.stderr) for key, one in best.parameters.items()},
        aicc={fit.key: _known(fit.aicc) for fit in fits.ranking},
        weight=_known(best.weight),
        rms_relative_error=_known(best.rms_relative_error),
        worst_relative_error=_known(best.worst_relative_error),
        drift=drift,
        cautions=merge_cautions(readings.cautions, screen(readings), fits.cautions, said),
    )


def _known(value: float) -> float | None:
    return float(value) if math.isfinite(value) else None
