"""Which column of a table is which quantity: by meaning, or by the user's word."""

from __future__ import annotations

import difflib
import re
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

from rheo.errors import Caution, ReadingsError, UnitError
from rheo.readings.grid import shown
from rheo.readings.headings import Meaning, meaning, unit_problem
from rheo.readings.quantities import (
    BY_KEY,
    CONVERTED_PAIRS,
    MEASURED_PAIRS,
    MIXED_PAIRS,
    Quantity,
)

Choice = str | int | None
_UNIT_AT_END = re.compile(r"\s*(\[[^\[\]]*\]|\([^()]*\))\s*$")


@dataclass(frozen=True)
class UserChoice:
    """The user's word on columns and units, which wins over what headings mean.

    Parameters
    ----------
    columns : mapping of str to str, int or None
        By quantity: a heading, or the number of a column counted from 1, or None for a quantity
        that is not to be used.
    units : mapping of str to str
        Unit by quantity.
    """

    columns: Mapping[str, Choice]
    units: Mapping[str, str]

    def chosen(self, headings: Sequence[str], allowed: Sequence[int]) -> dict[int, str]:
        """Return the quantity of each column that the user chose in a row of headings."""
        found: dict[int, str] = {}
        for key, choice in self.columns.items():
            index = _position(choice, headings, allowed)
            if index is not None:
                found[index] = key
        return found


def user_choice(
    columns: Mapping[str, Choice] | None, units: Mapping[str, str] | None, place: str
) -> UserChoice:
    """Check what the user says of columns and units.

    Raises
    ------
    ReadingsError
        For a quantity that does not exist, or a choice that is no heading or number.
    UnitError
        For a unit that does not measure its quantity.
    """
    for given, word in ((columns, "columns"), (units, "units")):
        for key in given or {}:
            if key not in BY_KEY:
                raise ReadingsError(
                    f"unknown quantity '{shown(key)}'{_near(key, BY_KEY)}; "
                    f"there are {', '.join(BY_KEY)}",
                    f"{place}, {word}",
                )
    for key, choice in (columns or {}).items():
        if isinstance(choice, bool) or not isinstance(choice, str | int | None):
            raise ReadingsError(
                f"{choice!r} is no column; give its heading, or its number counted from 1",
                f"{place}, column for {key}",
            )
    for key, unit in (units or {}).items():
        problem = unit_problem(BY_KEY[key], str(unit))
        if problem:
            raise UnitError(problem, f"{place}, unit of {key}")
    return UserChoice(dict(columns or {}), {key: str(unit) for key, unit in (units or {}).items()})


def check_choices_found(
    choice: UserChoice, tables: Sequence[tuple[Sequence[str], Sequence[int]]], place: str
) -> None:
    """Refuse a column that the user chose and no table has.

    Raises
    ------
    ReadingsError
        Naming the headings that come nearest.
    """
    for key, wanted in choice.columns.items():
        if wanted is None or any(
            _position(wanted, headings, allowed) is not None for headings, allowed in tables
        ):
            continue
        if isinstance(wanted, int):
            width = max((len(headings) for headings, _ in tables), default=0)
            raise ReadingsError(
                f"there is no column {wanted}; the columns are numbered 1 to {width}",
                f"{place}, column for {key}",
            )
        known = [heading for headings, _ in tables for heading in headings if heading]
        raise ReadingsError(
            f"there is no column '{shown(wanted)}'{_near(wanted, known)}; {_headings(known)}",
            f"{place}, column for {key}",
        )


def _headings(known: Iterable[str]) -> str:
    listed = [f"'{shown(heading)}'" for heading in dict.fromkeys(known)]
    if not listed:
        return "no heading was found"
    more = f" and {len(listed) - 12} more" if len(listed) > 12 else ""
    return f"the headings are {', '.join(listed[:12])}{more}"


def _near(wanted: str, known: Iterable[str]) -> str:
    """Return the one or two names that come nearest, with or without their units."""
    names: dict[str, str] = {}
    for name in known:
        names.setdefault(_without_unit(name), name)
        names.setdefault(_plain(name).casefold(), name)
    aim = _plain(str(wanted))[:80]
    found = [
        *difflib.get_close_matches(aim.casefold(), names, n=2, cutoff=0.5),
        *difflib.get_close_matches(_without_unit(aim), names, n=1, cutoff=0.5),
    ]
    near = list(dict.fromkeys(f"'{shown(names[name])}'" for name in found))[:2]
    return f" (did you mean {' or '.join(near)}?)" if near else ""


def _position(choice: Choice, headings: Sequence[str], allowed: Sequence[int]) -> int | None:
    if choice is None:
        return None
    if isinstance(choice, int):
        return choice - 1 if choice - 1 in allowed else None
    wanted = _plain(choice)
    for forms in (_plain, lambda text: _plain(text).casefold(), _without_unit):
        aim = forms(wanted)
        for index in allowed:
            if index < len(headings) and headings[index] and forms(headings[index]) == aim:
                return index
    return None


def _plain(text: str) -> str:
    return re.sub(r"\s+", " ", text).strip()


def _without_unit(text: str) -> str:
    return _UNIT_AT_END.sub("", _plain(text)).casefold()


@dataclass(frozen=True)
class Column:
    """A column that holds a quantity.

    Parameters
    ----------
    index : int
        Place in the row, counted from 0.
    quantity : Quantity
        What it holds.
    heading, unit : str
        Heading as it stands in the file; unit in which its numbers are read.
    stated : bool
        Whether the file or the user said the unit.
    mapped : bool
        Whether the user chose the column.
    problem : str
        Why its unit cannot be used; empty when it can.
    """

    index: int
    quantity: Quantity
    heading: str
    unit: str
    stated: bool
    mapped: bool = False
    problem: str = ""


def find_columns(
    headings: Sequence[str],
    units: Sequence[str],
    allowed: Sequence[int],
    choice: UserChoice,
    place: str,
) -> tuple[tuple[Column, ...], tuple[Caution, ...]]:
    """Return the columns that hold quantities, one a quantity.

    Parameters
    ----------
    headings, units : sequence of str
        Row of headings and row of units, empty text where there is none.
    allowed : sequence of int
        Indices of the columns that belong to the table.
    choice : UserChoice
        The user's word.
    place : str
        What a Caution refers to.
    """
    mapped = choice.chosen(headings, allowed)
    found: dict[str, list[tuple[int, Column]]] = {}
    for index in allowed:
        heading = headings[index] if index < len(headings) else ""
        below = units[index] if index < len(units) else ""
        if index in mapped:
            column = _mapped_column(index, mapped[index], heading, below)
            rank = 0
        else:
            known = meaning(heading, below)
            if known is None or known.quantity.key in choice.columns:
                continue
            column, rank = _meant_column(index, heading, known), known.rank
        found.setdefault(column.quantity.key, []).append((rank, column))
    kept: list[Column] = []
    cautions: list[Caution] = []
    for key, candidates in found.items():
        candidates.sort(key=lambda pair: (not pair[1].mapped, pair[0], pair[1].index))
        best_rank, best = candidates[0]
        kept.append(_with_user_unit(best, choice.units.get(key)))
        same = [column for rank, column in candidates[1:] if rank == best_rank]
        if same and not best.mapped:
            others = " and ".join(f"'{shown(column.heading)}'" for column in same)
            cautions.append(
                Caution(
                    code="several-columns",
                    sentence=f"The {best.quantity.name} is taken from '{shown(best.heading)}'; "
                    f"{others} could mean it as well.",
                    advice="Choose the column if it should be another.",
                    place=place,
                )
            )
    return tuple(kept), tuple(cautions)


def _meant_column(index: int, heading: str, known: Meaning) -> Column:
    stated = bool(known.unit) or known.quantity.text
    return Column(
        index,
        known.quantity,
        heading,
        known.unit.strip("[](){} ") or known.quantity.default_unit,
        stated,
        problem=known.problem,
    )


def _mapped_column(index: int, key: str, heading: str, below: str) -> Column:
    """Return a column of the user's choice, with the unit in its heading if that fits."""
    quantity = BY_KEY[key]
    match = _UNIT_AT_END.search(_plain(heading))
    written = match[1].strip("[]() ") if match else below.strip().strip("[]() ")
    if not match and not written:
        known = meaning(heading, below)
        if known is not None and known.quantity is quantity:
            written = known.unit
    if not written or (written in {"-", "–"} and written not in quantity.unit_words):
        return Column(index, quantity, heading, quantity.default_unit, quantity.text, mapped=True)
    problem = "" if quantity.text else unit_problem(quantity, written)
    return Column(index, quantity, heading, written, True, mapped=True, problem=problem)


def _with_user_unit(column: Column, unit: str | None) -> Column:
    if unit is None:
        return column
    return Column(column.index, column.quantity, column.heading, unit, True, mapped=column.mapped)


def needed_keys(present: Iterable[str], has_geometry: bool) -> tuple[str, ...]:
    """Return the quantities that make the readings, as far as they are there; none if they do not.

    Parameters
    ----------
    present : iterable of str
        Quantities that the table holds.
    has_geometry : bool
        Whether a geometry is known, so that what was measured is preferred.
    """
    there = set(present)
    order = (
        (MEASURED_PAIRS, CONVERTED_PAIRS, MIXED_PAIRS)
        if has_geometry
        else (CONVERTED_PAIRS, MEASURED_PAIRS, MIXED_PAIRS)
    )
    for pairs in order:
        for pair in pairs:
            if there.issuperset(pair):
                return pair
    return ()
