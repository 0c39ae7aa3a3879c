"""Tables in a grid: headings, units under them, rows of numbers, and what stands above."""

from __future__ import annotations

import itertools
from collections.abc import Sequence
from dataclasses import dataclass, replace

from rheo.errors import ReadingsError
from rheo.readings.columns import UserChoice
from rheo.readings.grid import Grid, Row, shown
from rheo.readings.headings import meaning, unit_problem
from rheo.readings.numerals import looks_numeric
from rheo.readings.quantities import BY_KEY
from rheo.readings.stated import stated_key

MOST_BLOCKS = 200
# Rows that may stand between headings and the first numbers: units, a rule, a comment.
_REACH = 6


@dataclass(frozen=True)
class Table:
    """One table of a grid.

    Parameters
    ----------
    label : str
        Title above it, or its number.
    headings, units : tuple of str
        Row of headings and row of units; empty text, or empty, where there is none.
    columns : tuple of int
        Indices of the columns that belong to it.
    rows : tuple of Row
        Rows under the headings, blank rows and comments left out.
    above : tuple of Row
        What stands above the headings, after the table before.
    blank_before : frozenset of int
        Lines of the rows that a blank row stands before.
    """

    label: str
    headings: tuple[str, ...]
    units: tuple[str, ...]
    columns: tuple[int, ...]
    rows: tuple[Row, ...]
    above: tuple[Row, ...]
    blank_before: frozenset[int] = frozenset()


def find_tables(grid: Grid, choice: UserChoice) -> tuple[Table, ...]:
    """Return the tables of a grid, none when no row of headings is found.

    Parameters
    ----------
    grid : Grid
        Rows of the file.
    choice : UserChoice
        The user's word on columns.

    Raises
    ------
    ReadingsError
        For more tables than can be meant.
    """
    starts = _heading_rows(grid.rows, choice)
    if not starts:
        start = _row_above_numbers(grid.rows)
        if start is None or not _chosen_by_number(choice, grid.rows, start):
            return ()
        starts = [start]
    if len(starts) > MOST_BLOCKS:
        raise ReadingsError(
            f"it has {len(starts)} rows of headings; at most {MOST_BLOCKS} tables are allowed",
            grid.place,
        )
    tables: list[Table] = []
    above: tuple[Row, ...] = grid.rows[: max(starts[0], 0)]
    for number, start in enumerate(starts):
        end = starts[number + 1] if number + 1 < len(starts) else len(grid.rows)
        headings = _texts(grid.rows[start]) if start >= 0 else ()
        body: Sequence[Row] = grid.rows[start + 1 : end]
        units, body = _take_units(body, headings, choice)
        body, rest = _split_off_title(body, number + 1 < len(starts))
        table = _table(headings, units, body, above)
        joined = bool(tables) and _continues(tables[-1], table)
        if joined:
            tables[-1] = _joined(tables[-1], table)
        elif table.rows:
            tables.append(table)
        above = rest if table.rows or joined else (*above, *body, *rest)
    parts = [
        part
        for table in tables
        for piece in _side_by_side(table, choice)
        for part in _parted(piece)
    ]
    return _labelled(parts)


def found_headings(grid: Grid) -> tuple[str, ...]:
    """Return the headings of the likeliest table, for a sentence that says what was found."""
    start = _row_above_numbers(grid.rows)
    if start is None or start < 0:
        return ()
    return tuple(text for text in _texts(grid.rows[start]) if text)


def _texts(row: Row) -> tuple[str, ...]:
    return tuple(cell.strip() if isinstance(cell, str) else "" for cell in row.cells)


def _may_be_headings(row: Row) -> bool:
    return not row.blank and row.numbers == 0 and stated_key(row.text) is None


def _heading_rows(rows: Sequence[Row], choice: UserChoice) -> list[int]:
    candidates = [index for index in range(len(rows)) if _is_headings(rows, index, choice)]
    starts: list[int] = []
    for place, index in enumerate(candidates):
        following = candidates[place + 1] if place + 1 < len(candidates) else len(rows)
        below = [row for row in rows[index + 1 : following] if not row.blank and not row.comment]
        if any(row.numbers for row in below[:_REACH]):
            starts.append(index)
    return starts


def _is_headings(rows: Sequence[Row], index: int, choice: UserChoice) -> bool:
    if not _may_be_headings(rows[index]):
        return False
    texts = _texts(rows[index])
    # Symbols mean something only with their units, which may stand in the row below.
    below = next((row for row in rows[index + 1 : index + _REACH] if not row.blank), None)
    units = () if below is None or below.numbers or below.comment else _texts(below)
    pairs = itertools.zip_longest(texts, units[: len(texts)], fillvalue="")
    chosen = choice.chosen(texts, range(len(texts)))
    by_heading = {key for index, key in chosen.items() if isinstance(choice.columns[key], str)}
    wanted = sum(isinstance(value, str) for value in choice.columns.values())
    if by_heading and len(by_heading) == wanted:
        return True
    found = (meaning(text, unit) or meaning(text) for text, unit in pairs if text)
    meant = {one.quantity.key for one in found if one is not None}
    return len(meant | by_heading) >= 2


def _row_above_numbers(rows: Sequence[Row]) -> int | None:
    """Return the row of text above the first row of numbers, -1 when there is none."""
    first = next((i for i, row in enumerate(rows) if row.numbers >= 2 and not row.comment), None)
    if first is None:
        return None
    texts = [i for i in range(first) if _may_be_headings(rows[i]) and len(rows[i].cells) > 1]
    plain = [i for i in texts if not rows[i].comment]
    nearest = [i for i in (plain or texts) if first - i <= _REACH]
    if not nearest:
        return -1
    # A row of units is not the row of headings above it.
    widest = max(sum(rows[i].filled) for i in nearest)
    return next(i for i in nearest if sum(rows[i].filled) == widest)


def _chosen_by_number(choice: UserChoice, rows: Sequence[Row], start: int) -> bool:
    numbers = [value for value in choice.columns.values() if isinstance(value, int)]
    texts = _texts(rows[start]) if start >= 0 else ()
    return len(numbers) >= 2 or len(choice.chosen(texts, range(len(texts)))) >= 2


def _take_units(
    body: Sequence[Row], headings: Sequence[str], choice: UserChoice
) -> tuple[tuple[str, ...], Sequence[Row]]:
    """Return the row of units, and the rows without it."""
    first = next((i for i, row in enumerate(body) if not row.blank and not row.comment), None)
    if first is None or body[first].numbers or not headings:
        return (), body
    units = _texts(body[first])
    chosen = choice.chosen(headings, range(len(headings)))
    good = marked = 0
    for index, heading in enumerate(headings):
        below = units[index] if index < len(units) else ""
        if not below:
            continue
        marked += below[0] + below[-1] in {"[]", "()"}
        if index in chosen:
            good += unit_problem(BY_KEY[chosen[index]], below) == ""
        else:
            known = meaning(heading, below)
            good += known is not None and not known.problem and known.unit != ""
    if good or marked == sum(body[first].filled):
        return units, [*body[:first], *body[first + 1 :]]
    return (), body


def _split_off_title(body: Sequence[Row], more: bool) -> tuple[Sequence[Row], tuple[Row, ...]]:
    """Split off what stands above the next headings: its title, and lines of ``key: value``."""
    last = max((i for i, row in enumerate(body) if row.numbers >= 2), default=None)
    if not more or last is None:
        return body, ()
    for index in range(last + 1, len(body)):
        row = body[index]
        if row.blank or row.comment or row.numbers == 0:
            return body[:index], tuple(body[index:])
    return body, ()


def _parted(table: Table) -> list[Table]:
    """Part a table at titles between its rows."""
    parts: list[Table] = []
    above, rows, titles = table.above, [], []  # type: tuple[Row, ...], list[Row], list[Row]
    for row in table.rows:
        if row.numbers == 0 and sum(row.filled) == 1:
            titles.append(row)
            continue
        if titles and row.numbers:
            if rows:
                parts.append(replace(table, rows=tuple(rows), above=above))
                above, rows = (), []
            above = (*above, *titles)
            titles = []
        rows += [*titles, row]
        titles = []
    return [*parts, replace(table, rows=tuple(rows + titles), above=above)]


def _table(
    headings: tuple[str, ...], units: tuple[str, ...], body: Sequence[Row], above: tuple[Row, ...]
) -> Table:
    rows: list[Row] = []
    after_blank: set[int] = set()
    blank = False
    notes = tuple(row for row in body if row.comment and stated_key(row.text))
    for row in body:
        if row.blank:
            blank = blank or not row.text.strip(" \t;,|")
        elif not row.comment:
            if blank:
                after_blank.add(row.line)
            blank = False
            rows.append(row)
    width = max([len(headings), *(len(row.cells) for row in rows)], default=0)
    return Table(
        "", headings, units, tuple(range(width)), tuple(rows), above + notes, frozenset(after_blank)
    )


def _continues(last: Table, table: Table) -> bool:
    """Return whether headings are only repeated, as at the top of a printed page."""
    return bool(last.rows) and last.headings == table.headings and not table.above


def _joined(last: Table, table: Table) -> Table:
    return replace(
        last,
        rows=last.rows + table.rows,
        columns=max(last.columns, table.columns, key=len),
        blank_before=last.blank_before | table.blank_before,
    )


def _side_by_side(table: Table, choice: UserChoice) -> list[Table]:
    """Split tables that stand beside each other under the same headings."""
    if choice.columns:
        return [table]
    names = [" ".join(text.split()).casefold() for text in table.headings]
    used = [name for index, name in enumerate(names) if name and meaning(table.headings[index])]
    if not used or used.count(used[0]) < 2:
        return [table]
    count = used.count(used[0])
    period = len(used) // count
    if period < 2 or used != used[:period] * count:
        return [table]
    starts = [index for index, name in enumerate(names) if name == used[0]]
    # Columns without a quantity before the first one belong to the first table.
    edges = [0, *starts[1:], len(table.columns)]
    parts = []
    for left, right in itertools.pairwise(edges):
        columns = tuple(range(left, right))
        rows = tuple(row for row in table.rows if any(row.filled[left:right]))
        parts.append(replace(table, columns=columns, rows=rows))
    return parts


def _labelled(tables: Sequence[Table]) -> tuple[Table, ...]:
    if len(tables) < 2:
        return tuple(tables)
    labels: list[str] = []
    for number, table in enumerate(tables, 1):
        title = _title(table)
        label = title or str(number)
        while label in labels:
            label = f"{label} ({number})"
        labels.append(label)
    return tuple(replace(table, label=label) for table, label in zip(tables, labels, strict=True))


def _title(table: Table) -> str:
    for row in reversed(table.above):
        filled = [cell for cell in row.cells if str(cell).strip()]
        words = len(filled) == 1 and isinstance(filled[0], str) and not looks_numeric(filled[0])
        if words and stated_key(row.text) is None:
            return shown(filled[0])
    return ""
