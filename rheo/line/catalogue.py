"""Pipe sizes that can be bought: steel schedules, hygienic tubes, and the user's own."""

from __future__ import annotations

import csv
import difflib
from dataclasses import dataclass
from functools import cache
from importlib import resources

from rheo.errors import InputError
from rheo.line.checks import require_positive

# Common practice: DN of a nominal pipe size in inches; 25 times it from 4 in upwards.
_DN = {
    0.125: 6, 0.25: 8, 0.375: 10, 0.5: 15, 0.75: 20, 1.0: 25, 1.25: 32, 1.5: 40, 2.0: 50,
    2.5: 65, 3.0: 80, 3.5: 90,
}  # fmt: skip
_CARBON = ("5", "10", "20", "30", "40", "60", "80", "100", "120", "140", "160", "STD", "XS", "XXS")
_STAINLESS = ("5S", "10S", "40S", "80S")
_HYGIENIC_FILE = "hygienic_tubes.csv"

STANDARDS = {
    "ASME B36.10M": "Welded and seamless wrought steel pipe, by schedule (from `fluids`)",
    "ASME B36.19M": "Stainless steel pipe, schedules 5S to 80S (from `fluids`)",
    "ISO 2037": "Stainless steel tubes for the food industry",
    "ASME BPE": "Bioprocessing equipment, hygienic tube",
    "DIN 11866 A": "Stainless steel tubes for aseptic, chemical and pharmaceutical industry, row A",
}


@dataclass(frozen=True)
class PipeSize:
    """One size of pipe or tube.

    Parameters
    ----------
    standard : str
        The standard that lists it, or ``own`` for the user's own.
    label : str
        What it is called there, such as ``DN 50 schedule 40`` or ``51``.
    inside_diameter, outside_diameter, wall : float
        Nominal dimensions [m]; `outside_diameter` and `wall` are 0 when not known.
    """

    standard: str
    label: str
    inside_diameter: float
    outside_diameter: float = 0.0
    wall: float = 0.0

    def __post_init__(self) -> None:
        require_positive(self.inside_diameter, "inside_diameter [m]", f"size {self.label}")

    @property
    def name(self) -> str:
        """Standard and label, the text by which `pipe_size` finds it."""
        return self.label if self.standard == "own" else f"{self.standard} {self.label}"


def _nominal(inches: float) -> str:
    whole = int(inches)
    rest = {0.0: "", 0.125: "1/8", 0.25: "1/4", 0.375: "3/8", 0.5: "1/2", 0.75: "3/4"}
    text = " ".join(part for part in (str(whole) if whole else "", rest[inches - whole]) if part)
    return f"{text} in"


def _metres(millimetres: float) -> float:
    return round(millimetres / 1e3, 8)


@cache
def _steel(standard: str, schedules: tuple[str, ...]) -> tuple[PipeSize, ...]:
    from fluids.piping import schedule_lookup

    found = []
    for schedule in schedules:
        for inches, inside, outside, wall in zip(*schedule_lookup[schedule], strict=True):
            nominal = _DN.get(inches, round(25 * inches))
            label = f"DN {nominal} ({_nominal(inches)}) schedule {schedule}"
            found.append(
                PipeSize(standard, label, _metres(inside), _metres(outside), _metres(wall))
            )
    return tuple(found)


@cache
def _hygienic() -> tuple[PipeSize, ...]:
    text = resources.files("rheo.line").joinpath("data", _HYGIENIC_FILE).read_text("utf-8")
    found = []
    for row in csv.DictReader(text.splitlines()):
        outside, wall = float(row["outside_diameter_mm"]), float(row["wall_mm"])
        found.append(
            PipeSize(
                row["standard"],
                row["size"],
                _metres(outside - 2 * wall),
                _metres(outside),
                _metres(wall),
            )
        )
    return tuple(found)


@cache
def catalogue(standard: str | None = None, schedule: str | None = None) -> tuple[PipeSize, ...]:
    """Return the sizes of a standard, the smallest first.

    Parameters
    ----------
    standard : str, optional
        A key of `STANDARDS`; every standard when absent.
    schedule : str, optional
        A steel schedule, such as ``40`` or ``10S``.

    Returns
    -------
    tuple of PipeSize
        In order of inside diameter.

    Raises
    ------
    InputError
        For an unknown standard or schedule; the sentence names those that exist.
    """
    if standard is not None and standard not in STANDARDS:
        raise InputError(f"unknown standard '{standard}'; there are {', '.join(STANDARDS)}")
    sizes = (*_steel("ASME B36.10M", _CARBON), *_steel("ASME B36.19M", _STAINLESS), *_hygienic())
    if schedule is not None:
        ending = f" schedule {schedule}"
        known = _CARBON + _STAINLESS
        if schedule not in known:
            raise InputError(f"unknown schedule '{schedule}'; there are {', '.join(known)}")
        sizes = tuple(size for size in sizes if size.label.endswith(ending))
    chosen = [size for size in sizes if standard in (None, size.standard)]
    return tuple(sorted(chosen, key=lambda size: (size.inside_diameter, size.name)))


def _plain(text: str) -> str:
    return "".join(text.casefold().replace("sch.", "schedule").split())


@cache
def _by_text() -> dict[str, PipeSize]:
    found: dict[str, PipeSize] = {}
    for size in catalogue():
        spellings = [size.name]
        if size.standard.startswith("ASME B36"):
            nominal, rest = size.label.split(" (")
            inches, schedule = rest.split(") ")
            # Without its standard too: the schedules of the two steel standards do not overlap.
            spellings += [
                size.label,
                f"{nominal} {schedule}",
                f"{size.standard} {nominal} {schedule}",
                f"{inches} {schedule}",
                f"{size.standard} {inches} {schedule}",
            ]
        for spelling in spellings:
            found[_plain(spelling)] = size
    return found


def pipe_size(text: str) -> PipeSize:
    """Find a size by its name, such as ``ISO 2037 51`` or ``DN 50 schedule 40``.

    Raises
    ------
    InputError
        If no standard lists it; the sentence gives the nearest that is listed.
    """
    found = _by_text().get(_plain(str(text)))
    if found is None:
        near = difflib.get_close_matches(_plain(str(text)), _by_text(), n=1, cutoff=0.5)
        hint = f" (nearest: '{_by_text()[near[0]].name}')" if near else ""
        raise InputError(
            f"unknown pipe size '{str(text)[:60]}'{hint}; write it like 'ISO 2037 51', "
            "'ASME BPE 2 in', 'DIN 11866 A DN 50' or 'DN 50 schedule 40', "
            "or give inside_diameter"
        )
    return found
