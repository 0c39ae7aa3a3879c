"""Options that several commands share, and texts of the command line as quantities."""

from __future__ import annotations

from collections.abc import Iterable
from pathlib import Path
from typing import Annotated

import typer

from rheo.cli.terminal import Units
from rheo.errors import InputError

Json = Annotated[
    bool, typer.Option("--json", help="Print only JSON, in SI units, on standard output.")
]
CaseFile = Annotated[Path, typer.Argument(metavar="CASE.toml", help="The case file.")]
Outside = Annotated[
    bool,
    typer.Option("--allow-outside", help="Let the case name files outside its own folder."),
]
OutFolder = Annotated[
    Path | None,
    typer.Option("--out", metavar="FOLDER", help="Write note (HTML, PDF) and workbook there."),
]
UnitsOption = Annotated[Units, typer.Option("--units", help="Units of the tables.")]


def quantity(value: str, target: str, option: str) -> float:
    """Return a text of the command line in SI; `option` is the place of an error."""
    from rheo.units import parse_quantity

    return parse_quantity(value, target, option)


def one_of(words: Iterable[str]) -> str:
    """Return words as a choice: ``up, down or both``."""
    *first, last = words
    return f"{', '.join(first)} or {last}" if first else last


def in_range(
    value: str, target: str, option: str, most: float, like: str, above: float = 0.0
) -> float:
    """Return a text in SI, above `above` and at most `most`.

    Parameters
    ----------
    value : str
        As given.
    target : str
        SI unit.
    option : str
        Place of an error.
    most : float
        Upper end, in that unit.
    like : str
        An example for the sentence.
    above : float
        Lower end, left out.

    Raises
    ------
    InputError
        If it is outside.
    """
    found = quantity(value, target, option)
    if not above < found <= most:
        unit = target.replace("^", "").replace("*", ".")
        raise InputError(
            f"found '{value[:60]}'; it must be above {above:g} {unit} and at most {most:g} {unit}, "
            f"{like}",
            option,
        )
    return found


def optional_quantity(value: str | None, target: str, option: str) -> float | None:
    """Return a text in SI, or None when the option was not given."""
    return None if value is None else quantity(value, target, option)


def solids_option(value: str | None, by: str, option: str = "--solids") -> float | None:
    """Return a share of solids [-] such as ``25 %``, or None when the option was not given.

    Raises
    ------
    InputError
        If it is not between 0 and 1, or by mass where readings are by volume or the reverse.
    """
    if value is None:
        return None
    from rheo.readings.solids import read_share

    share, said = read_share(value, option)
    if not 0.0 < share < 1.0:
        raise InputError(f"found '{value[:60]}'; it must be above 0 and below 100 %", option)
    if said and by and said != by:
        raise InputError(
            f"'{value[:60]}' is by {said}, and the solids of the readings are by {by}", option
        )
    return share


def named_values(pairs: list[str], option: str) -> dict[str, str]:
    """Split texts such as ``flow_index=0.5`` into names and values.

    Raises
    ------
    InputError
        If a text has no equals sign, or a name is given twice.
    """
    found: dict[str, str] = {}
    for pair in pairs:
        name, sign, value = pair.partition("=")
        name, value = name.strip(), value.strip()
        if not sign or not name or not value:
            raise InputError(f"found '{pair[:60]}'; write it like name=value", option)
        if name in found:
            raise InputError(f"'{name[:60]}' is given twice; give it once", option)
        found[name] = value
    return found


def si_unit(unit: str) -> str:
    """Return the unit of a record as `rheo.units` reads it."""
    return "dimensionless" if unit == "-" else unit
