"""The readings of a case, as its file says they are to be read."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path
from typing import Any, get_args

import numpy as np

from rheo.case.complaints import words_of
from rheo.case.paths import inside_folder
from rheo.case.readings_blocks import ReadingsBlock, Sweep
from rheo.case.schema import INSTRUMENT, Case
from rheo.case.solids_state import basis_of
from rheo.errors import CaseError, Caution
from rheo.fitting import Instrument
from rheo.readings import Readings, read_readings, screen

SWEEPS = get_args(Sweep)
_STILL_DEVELOPING = (
    "Leave them out, or use a longer tube; the entrance loss that is fitted is the same number of "
    "diameters at every flow."
)


def readings_of(case: Case, number: int = 0) -> Readings:
    """Return one set of the readings of a case.

    Parameters
    ----------
    case : Case
        The case; its folder is where its files are looked for.
    number : int
        Which of its sets, counted from 0.

    Returns
    -------
    Readings
        With the points left out that the case excludes.

    Raises
    ------
    InputError
        If they cannot be read; the place names the file, its line and column.
    """
    return _with_excluded(case, number, _whole(case, number))


def _whole(case: Case, number: int) -> Readings:
    block = case.readings[number]
    place = _place(case, number)
    source, name = _source(case, block, place)
    readings = read_readings(
        source,
        columns={key: heading or None for key, heading in block.columns.items()} or None,
        geometry=None if block.geometry is None else block.geometry.as_stated(),
        sheet=block.sheet,
        units=block.units or None,
        block=block.block,
        decimal=block.decimal,
        full_scale_torque=_plain(block.full_scale_torque),
        name=name,
    )
    return replace(readings, **_said(case, block, readings))


def _place(case: Case, number: int) -> str:
    return words_of(("readings", number) if len(case.readings) > 1 else ("readings",))


def branch_of(readings: Readings, sweep: str) -> Readings:
    """Return the readings of the branch that is to be fitted.

    Parameters
    ----------
    readings : Readings
        All of them.
    sweep : str
        ``up``, ``down`` or ``both``.

    Raises
    ------
    CaseError
        If the readings have no such branch.
    """
    if sweep not in SWEEPS:
        raise CaseError(f"found '{sweep[:60]}'; it must be {', '.join(SWEEPS)}", "sweep")
    if sweep == "both":
        return readings
    branch = readings.branch
    wanted = np.zeros(len(readings), dtype=bool) if branch is None else branch == sweep
    if not wanted.any():
        words = [] if branch is None else sorted({str(word) for word in branch if word})
        found = f"only {', '.join(words)}" if words else "no branch at all"
        raise CaseError(
            f"sweep is '{sweep}', and {found} was found in the readings; "
            "use 'both', or a file with a column for the branch",
            readings.source,
        )
    return readings.select(wanted)


def weighting_of(
    name: str, percent_of_reading: float, percent_of_full_scale: float, readings: Readings
) -> str | Instrument:
    """Return the weighting that `rheo.fit` takes.

    Parameters
    ----------
    name : str
        ``relative``, ``absolute`` or ``instrument``.
    percent_of_reading, percent_of_full_scale : float
        For ``instrument`` [%].
    readings : Readings
        Their full-scale torque is the full scale of ``instrument``.

    Raises
    ------
    CaseError
        If the full scale is not known.
    """
    if name != INSTRUMENT:
        return name
    if not can_be_weighted(readings):
        raise CaseError(
            "weighting 'instrument' needs a geometry and the torque at full scale; "
            "give full_scale_torque, such as '10 mN.m'",
            readings.source,
        )
    return Instrument(
        percent_of_reading, percent_of_full_scale, float(readings.full_scale_torque or 0.0)
    )


def can_be_weighted(readings: Readings) -> bool:
    """Return whether weights of an instrument are known: by geometry and torque at full scale."""
    return readings.full_scale_torque is not None and readings.geometry is not None


def _source(case: Case, block: ReadingsBlock, place: str) -> tuple[Path | bytes, str]:
    if block.text is not None:
        return block.text.encode("utf-8"), f"{place} text"
    name = block.file or ""
    try:
        path = inside_folder(name, case.folder, case.allow_outside)
    except CaseError as error:
        raise CaseError(error.sentence, f"{place} file") from None
    if not path.exists():
        raise CaseError(
            f"there is no file '{name[:200]}' in the folder of the case; put it there, or write "
            "the name of one that is",
            f"{place} file",
        )
    return path, name


def _said(case: Case, block: ReadingsBlock, readings: Readings) -> dict[str, Any]:
    """What the case says of the readings beside the file."""
    said: dict[str, Any] = {"density": readings.density or float(case.product.density)}
    solids = case.product.solids
    particle = block.particle_diameter or (solids.diameter if solids is not None else None)
    if particle is not None:
        said["particle_diameter"] = float(particle)
    if block.stress_per_degree is not None:
        said["stress_per_degree"] = float(block.stress_per_degree)
    if block.nominal_form is not None:
        said["nominal_form"] = block.nominal_form
    if block.temperature is not None:
        said["temperature"] = np.full(len(readings), float(block.temperature))
    if block.solids_fraction is not None:
        said["solids_fraction"] = np.full(len(readings), float(block.solids_fraction))
        said["solids_basis"] = basis_of(block.solids_fraction)
    return said


def _with_excluded(case: Case, number: int, readings: Readings) -> Readings:
    block = case.readings[number]
    if not block.exclude:
        return readings
    if max(block.exclude) > len(readings):
        raise CaseError(
            f"there is no reading {max(block.exclude)} in {readings.source}; "
            f"they are numbered 1 to {len(readings)}",
            f"{_place(case, number)} exclude",
        )
    return readings.with_excluded([number - 1 for number in block.exclude])


def _plain(value: float | None) -> float | None:
    return None if value is None else float(value)


def all_readings(case: Case) -> tuple[Readings, ...]:
    """Return every set of the readings of a case.

    Raises
    ------
    InputError
        For the first that cannot be read.
    """
    return without_excluded(case, whole_readings(case))


def whole_readings(case: Case) -> tuple[Readings, ...]:
    """Return every set of the readings of a case, with no point left out.

    Raises
    ------
    InputError
        For the first that cannot be read.
    """
    return tuple(_whole(case, number) for number in range(len(case.readings)))


def without_excluded(case: Case, whole: Sequence[Readings]) -> tuple[Readings, ...]:
    """Return `whole_readings` with the points left out that the case excludes.

    Raises
    ------
    InputError
        If a point is excluded that is not there.
    """
    return tuple(_with_excluded(case, number, one) for number, one in enumerate(whole))


def screened(case: Case, readings: Readings) -> tuple[Caution, ...]:
    """Return what is doubtful in readings, but for what the fit of the case takes into account.

    Parameters
    ----------
    case : Case
        Where it fits slip or the entrance loss, readings that show it are as they should be.
    readings : Readings
        One of its sets.

    Returns
    -------
    tuple of Caution
        From `rheo.screen`.
    """
    fitted = {"slip"} if case.fit.slip else set()
    fitted |= {"entrance-loss"} if case.fit.entrance else set()
    found = tuple(one for one in screen(readings) if one.code not in fitted)
    if not case.fit.entrance:
        return found
    return tuple(
        replace(one, advice=_STILL_DEVELOPING) if one.code == "developing-flow" else one
        for one in found
    )
