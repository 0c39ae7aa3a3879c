"""Which column is which: what was understood, editable."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import streamlit as st

from rheo.errors import InputError, UnitError
from rheo.readings import ColumnRecord, Readings
from rheo.readings.quantities import QUANTITIES
from rheo.report.text import one_line
from ui import cautions, results, state
from ui.readings import sets
from ui.readings.look import Sheet, look

NOT_USED = "not used"
_NAMES = {quantity.key: quantity.name for quantity in QUANTITIES}
_KEYS = {name: key for key, name in _NAMES.items()}


@dataclass(frozen=True)
class FileColumn:
    """One column of the file: heading, first value, meaning, unit."""

    heading: str
    first: str
    quantity: str
    unit: str
    mapped: bool


def show() -> None:
    """Draw the choice of the sheet and the table of columns, and what is wrong with them."""
    sheets = _sheets()
    _show_sheets(sheets)
    found = file_columns(sets.readings(), sheets)
    if not found:
        st.caption("No heading was found in this file.")
        return
    widget = state.key(f"mapping.{sets.number()}.{results.digest(found)}")

    def take() -> None:
        edits = st.session_state[widget]["edited_rows"]
        state.attempt("mapping", take_edits, found, edits)
        state.touch()

    st.data_editor(
        {
            "Column": [one_line(column.heading, 60) for column in found],
            "First value": [one_line(column.first, 24) for column in found],
            "Is": [_NAMES.get(column.quantity, NOT_USED) for column in found],
            "Unit": [column.unit for column in found],
        },
        key=widget,
        on_change=take,
        hide_index=True,
        disabled=["Column", "First value"],
        column_config={
            "Is": st.column_config.SelectboxColumn(options=[NOT_USED, *_KEYS], required=True),
            "Unit": st.column_config.TextColumn(help="Such as rpm, mN.m, 1/s, Pa, kPa, L/min"),
        },
        height=38 + 35 * min(len(found), 9),
    )
    cautions.complaint(state.complaint("mapping"))


def file_columns(readings: Readings | None, sheets: Sequence[Sheet]) -> tuple[FileColumn, ...]:
    """Return the columns of the set that is shown, read or not."""
    if readings is not None and readings.columns:
        first = readings.table[0].rows[0] if readings.table and readings.table[0].rows else ()
        here = [column for column in readings.columns if column.block == readings.columns[0].block]
        return tuple(_read_column(column, first) for column in here)
    block = sets.block()
    sheet = next((one for one in sheets if one.name == block.sheet), None)
    sheet = sheet or next((one for one in sheets if one.headings), None)
    if sheet is None:
        return ()
    of_heading = {heading: key for key, heading in block.columns.items()}
    return tuple(
        FileColumn(
            heading,
            sheet.first[i] if i < len(sheet.first) else "",
            of_heading.get(heading, ""),
            block.units.get(of_heading.get(heading, ""), ""),
            heading in of_heading,
        )
        for i, heading in enumerate(sheet.headings)
    )


def _read_column(column: ColumnRecord, first: Sequence[str | float]) -> FileColumn:
    at = column.position - 1
    value = str(first[at]) if at < len(first) else ""
    return FileColumn(column.heading, value, column.quantity, column.unit, column.mapped)


def take_edits(found: Sequence[FileColumn], edits: dict[int, dict[str, Any]]) -> None:
    """Put the user's word on columns and units into the case.

    Raises
    ------
    InputError
        If readings that could be read could be read no longer, or a unit does not fit.
    """
    number, before = sets.number(), state.case()
    block = before.readings[number]
    columns, units = dict(block.columns), dict(block.units)
    for row, edit in edits.items():
        column = found[int(row)]
        if not column.heading:
            raise InputError("a column without a heading cannot be chosen; give it one in the file")
        quantity = column.quantity
        if "Is" in edit:
            quantity = _KEYS.get(str(edit["Is"]), "")
            columns = {
                key: heading for key, heading in columns.items() if heading != column.heading
            }
            if column.quantity and not quantity:
                columns[column.quantity] = ""
            if quantity:
                columns[quantity] = column.heading
                units.pop(quantity, None)
        if edit.get("Unit") and quantity:
            units[quantity] = str(edit["Unit"]).strip()
    new = state.changed(before, ("readings", number, "columns"), columns or None)
    new = state.changed(new, ("readings", number, "units"), units or None)
    problem = results.readings_of(new, state.files()).problem
    if problem is not None and (state.readings() is not None or isinstance(problem, UnitError)):
        raise problem
    state.put(new)


def _sheets() -> tuple[Sheet, ...]:
    file = sets.block().file
    stored = None if file is None else state.files().get(file)
    return () if stored is None else look(stored)


def _show_sheets(sheets: Sequence[Sheet]) -> None:
    names = [sheet.name for sheet in sheets if sheet.name]
    if len(names) < 2:
        return
    number, block = sets.number(), sets.block()
    widget = state.key(f"sheet.{number}.{block.sheet}")
    with_readings = [sheet.name for sheet in sheets if sheet.first]
    current = block.sheet or (with_readings or names)[0]

    def take() -> None:
        def act() -> None:
            new = state.changed(
                state.case(), ("readings", number, "sheet"), st.session_state[widget]
            )
            for key in ("columns", "units", "exclude"):
                new = state.changed(new, ("readings", number, key), None)
            state.put(new)

        state.attempt("mapping", act)
        state.touch()

    st.selectbox("Sheet", names, index=names.index(current), key=widget, on_change=take)
