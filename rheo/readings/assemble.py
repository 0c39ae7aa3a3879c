"""The tables of a file joined to one set of readings."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution, ReadingsError, merge_cautions
from rheo.geometry import Geometry
from rheo.readings import solids
from rheo.readings.blocks import Table
from rheo.readings.branches import branches_by_order
from rheo.readings.columns import Column
from rheo.readings.grid import Grid
from rheo.readings.numerals import Cell, DecimalMark, find_decimal_mark
from rheo.readings.quantities import BY_KEY, NUMBER_KEYS
from rheo.readings.readings import ColumnRecord, RawBlock, Readings
from rheo.readings.stated import (
    Stated,
    geometry_from_text,
    make_stated_geometry,
    read_stated,
    stated_lines,
)
from rheo.readings.table_values import TableValues, number_cells, table_values

FEWEST_READINGS = 3
# Quantities whose numbers, where none is above so many percent, look like shares of 1.
SHARE_LIMIT = 1.5
_SHARES = (("torque_fraction", "torque", SHARE_LIMIT), ("solids_fraction", "solids fraction", 1.0))
# What a file may state once for all readings of a block.
_ONE_A_READING = ("temperature", "solids_fraction")
_UNIT_GOES_WITHOUT_SAYING = frozenset({"rate", "dial", "torque_fraction"})


@dataclass(frozen=True)
class FoundTable:
    """A table and what was understood of it.

    Parameters
    ----------
    table : Table
        The table.
    columns : tuple of Column
        Its columns that hold quantities.
    needed : tuple of str
        The quantities that make its readings; empty when they do not suffice.
    cautions : tuple of Caution
        What was doubtful.
    """

    table: Table
    columns: tuple[Column, ...]
    needed: tuple[str, ...]
    cautions: tuple[Caution, ...]


def assembled(
    grid: Grid,
    found: Sequence[FoundTable],
    cautions: tuple[Caution, ...],
    geometry: Geometry | str | None,
    decimal: str | None,
    full_scale_torque: float | None,
) -> Readings:
    """Return the readings that the tables of one file hold together.

    Parameters
    ----------
    grid : Grid
        The file.
    found : sequence of FoundTable
        Its tables, all with the same needed quantities.
    cautions : tuple of Caution
        What is known already.
    geometry : Geometry, str or None
        The user's word; as text in the form that files use.
    decimal : str or None
        The user's word on the decimal mark.
    full_scale_torque : float or None
        The user's word [N m].

    Raises
    ------
    InputError
        For a cell, or a line above the table, that cannot be read; for too few readings.
    """
    mark = DecimalMark(decimal) if decimal else _decimal_mark(grid, found)
    values = [table_values(one.table, one.columns, one.needed, grid, mark.mark) for one in found]
    counts = [len(one.lines) for one in values]
    total = sum(counts)
    if total < FEWEST_READINGS:
        raise ReadingsError(
            f"it holds {total} reading{'' if total == 1 else 's'}; a flow curve needs at least "
            f"{FEWEST_READINGS}",
            grid.place,
        )
    stated: list[Stated] = []
    for one in found:
        own, doubts = read_stated(stated_lines(one.table.above, grid), mark.mark)
        stated.append(own.over(stated[-1]) if stated else own)
        cautions = merge_cautions(cautions, doubts)
    numbers, dropped = _joined(values, grid)
    amounts = _amounts(stated, counts, numbers, grid)
    for key in _ONE_A_READING:
        if key in amounts:
            numbers[key] = amounts.pop(key)
    if "solids_fraction" in numbers:
        amounts["solids_basis"] = _solids_basis(values, stated, grid)
    if full_scale_torque is not None:
        amounts["full_scale_torque"] = full_scale_torque
    if isinstance(geometry, str):
        text = geometry_from_text(geometry)
        geometry = make_stated_geometry([text] * len(found), counts, numbers)
    elif geometry is None:
        geometry = make_stated_geometry(stated, counts, numbers)
    labels = np.repeat([one.table.label for one in found], counts)
    return Readings(
        geometry=geometry,
        **numbers,
        **amounts,
        branch=_branch(values, numbers, counts),
        block=labels if len(found) > 1 else None,
        nominal_form=next((one.nominal_form for one in stated if one.nominal_form), None),
        source=grid.place,
        lines=np.array([line for one in values for line in one.lines]),
        columns=_column_records(found, values),
        table=tuple(_raw(one.table) for one in found),
        cautions=merge_cautions(
            cautions,
            *(one.cautions for one in found),
            *(one.cautions for one in values),
            dropped,
            _assumptions(values, mark, grid),
        ),
    )


def _decimal_mark(grid: Grid, found: Sequence[FoundTable]) -> DecimalMark:
    def cells(needed: bool) -> list[tuple[Cell, str]]:
        return [
            pair
            for one in found
            for pair in number_cells(
                one.table,
                [
                    column
                    for column in one.columns
                    if (column.mapped or column.quantity.key in one.needed) == needed
                    and not column.quantity.text
                ],
                grid,
            )
        ]

    return find_decimal_mark(cells(True), grid.place, cells(False))


def _joined(
    values: Sequence[TableValues], grid: Grid
) -> tuple[dict[str, Any], tuple[Caution, ...]]:
    """Join the tables; a column that some of them lack is left out, with a Caution."""
    everywhere = [key for key in NUMBER_KEYS if all(key in one.numbers for one in values)]
    somewhere = {key for one in values for key in one.numbers} - set(everywhere)
    cautions = tuple(
        Caution(
            code="column-not-used",
            sentence=f"The {BY_KEY[key].name} is not used: some blocks do not have it.",
            advice="Read the blocks one at a time if it matters.",
            place=grid.place,
        )
        for key in NUMBER_KEYS
        if key in somewhere
    )
    joined = {key: np.concatenate([one.numbers[key] for one in values]) for key in everywhere}
    return joined, cautions


def _amounts(
    stated: Sequence[Stated], counts: Sequence[int], columns: Mapping[str, Any], grid: Grid
) -> dict[str, Any]:
    """Return what is stated besides the geometry: one value each, or one for each reading."""
    result: dict[str, Any] = {}
    for key in dict.fromkeys(key for one in stated for key in one.amounts):
        values = [one.amounts.get(key) for one in stated]
        if key in _ONE_A_READING:
            if key not in columns and None not in values:
                result[key] = np.repeat(np.array(values, dtype=float), counts)
            continue
        given = {value for value in values if value is not None}
        if len(given) > 1:
            raise ReadingsError(
                f"{key} is stated differently for different blocks; read one block at a time",
                grid.place,
            )
        result[key] = given.pop()
    return result


def _solids_basis(values: Sequence[TableValues], stated: Sequence[Stated], grid: Grid) -> str:
    """Return by what the shares of solids are, of the columns, else as stated above them."""
    found = {
        solids.basis(column.unit, column.heading)
        for one in values
        for column in one.used
        if column.quantity.key == "solids_fraction"
    }
    said = sorted((found or {one.solids_basis for one in stated}) - {""})
    if len(said) > 1:
        raise ReadingsError(
            "solids fractions are by mass in one block and by volume in another; give them by one",
            grid.place,
        )
    return said[0] if said else ""


def _branch(
    values: Sequence[TableValues], numbers: Mapping[str, NDArray[np.float64]], counts: Sequence[int]
) -> NDArray[np.str_] | None:
    given = [one.branch for one in values]
    if all(branch is not None for branch in given):
        return np.array([word for branch in given for word in branch or ()], dtype=np.str_)
    order = next(
        (
            numbers[key]
            for key in ("angular_speed", "flow", "velocity", "rate", "stress")
            if key in numbers
        ),
        None,
    )
    if order is None:
        return None
    group = np.repeat(np.arange(len(counts)), counts).astype(float)
    for key in ("tube_diameter", "tube_length", "gap"):
        if key in numbers:
            changes = np.r_[0.0, np.cumsum(np.abs(np.diff(numbers[key])) > 0)]
            group = group * (order.size + 1) + changes
    branches = branches_by_order(order, group)
    return branches if np.any(branches != "") else None


def _column_records(
    found: Sequence[FoundTable], values: Sequence[TableValues]
) -> tuple[ColumnRecord, ...]:
    records: dict[tuple[str, str, int, str], ColumnRecord] = {}
    for one, read in zip(found, values, strict=True):
        by_index = {column.index: column for column in read.used}
        for index in one.table.columns:
            heading = one.table.headings[index] if index < len(one.table.headings) else ""
            column = by_index.get(index)
            if column is None and not heading:
                continue
            record = ColumnRecord(
                column.quantity.key if column else "",
                heading,
                index + 1,
                column.unit if column else "",
                column.stated if column else True,
                column.mapped if column else False,
                one.table.label,
            )
            records.setdefault((record.quantity, heading, index, record.unit), record)
    return tuple(records.values())


def _raw(table: Table) -> RawBlock:
    def own(cells: Sequence[Any]) -> tuple[Any, ...]:
        return tuple(cells[index] if index < len(cells) else "" for index in table.columns)

    return RawBlock(
        table.label,
        own(table.headings),
        own(table.units) if table.units else (),
        tuple(own(row.cells) for row in table.rows),
        tuple(row.line for row in table.rows),
    )


def _may_be_shares(values: TableValues, key: str, limit: float) -> bool:
    share = values.numbers.get(key)
    unit = next((c.unit for c in values.used if c.quantity.key == key), "1")
    read_in = BY_KEY[key].unit_words.get(unit.lower(), unit).partition(" ")[0]
    return share is not None and read_in != "1" and bool(np.all(share <= limit / 100.0))


def _assumptions(
    values: Sequence[TableValues], mark: DecimalMark, grid: Grid
) -> tuple[Caution, ...]:
    cautions = []
    unsaid = {
        f"{column.quantity.name} in {column.unit}": None
        for one in values
        for column in one.used
        if not column.stated and column.quantity.key not in _UNIT_GOES_WITHOUT_SAYING
    }
    if unsaid:
        cautions.append(
            Caution(
                code="unit-not-stated",
                sentence=f"The file does not say the unit of every column; read were "
                f"{', '.join(unsaid)}.",
                advice="Say the unit if it is another.",
                place=grid.place,
            )
        )
    for key, what, limit in _SHARES:
        if any(_may_be_shares(one, key, limit) for one in values):
            cautions.append(
                Caution(
                    code="share-or-percent",
                    sentence=f"No {what} is above {limit:g} %, although it is read in %: a "
                    "spreadsheet shows the number 0.5 as 50 %.",
                    advice=f"Say unit 1 for {key} if the numbers are shares of 1.",
                    place=grid.place,
                )
            )
    if mark.assumed:
        cautions.append(
            Caution(
                code="decimal-mark",
                sentence="Three digits follow every point, which was read as the decimal mark.",
                advice="Say that the decimal mark is a comma if the points part thousands.",
                place=grid.place,
            )
        )
    return tuple(cautions)
