"""Which column is which: what was understood, editable."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import streamlit as st

from rheo.errors import UnitError
from rheo.readings import ColumnRecord, Readings
from rheo.readings.headings import meaning
from rheo.readings.quantities import BY_KEY, QUANTITIES
from ui import cautions, results, state, style
from ui.readings import sets
from ui.readings.look import Sheet, look

NOT_USED = "not used"
# More columns than this scroll in a box of their own, so many px high.
_MANY, _TALL = 16, 620
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
    """Draw the choice of the sheet, what each column holds, and what is wrong with it."""
    sheets = _sheets()
    _show_sheets(sheets)
    _show_tables(sheets)
    found = file_columns(sets.readings(), sheets)
    if not found:
        st.caption("No heading was found in this file.")
        return
    with st.container(height=_TALL if len(found) > _MANY else "content", border=False):
        for start in range(0, len(found), 2):
            places = st.columns([3, 1.3, 3, 1.3], vertical_alignment="bottom")
            for index, column in enumerate(found[start : start + 2]):
                with places[2 * index]:
                    _choose_meaning(start + index, column)
                with places[2 * index + 1]:
                    _enter_unit(start + index, column)
    cautions.complaint(state.complaint("mapping"))


def _choose_meaning(row: int, column: FileColumn) -> None:
    current = _NAMES.get(column.quantity, NOT_USED)
    widget = state.key(f"column.{sets.number()}.{row}.{column.heading}.{current}")
    names = [NOT_USED, *_KEYS]

    def take() -> None:
        state.attempt("mapping", say_meaning, column, _KEYS.get(st.session_state[widget], ""))
        state.touch()

    st.selectbox(
        f"{style.plain(column.heading, 40) or 'without heading'}, first value {_first(column)}",
        names,
        index=names.index(current),
        key=widget,
        on_change=take,
        disabled=not column.heading,
    )


def _enter_unit(row: int, column: FileColumn) -> None:
    widget = state.key(f"unit.{sets.number()}.{row}.{column.heading}.{column.unit}")

    def take() -> None:
        typed = str(st.session_state[widget]).strip()
        if typed and typed != column.unit:
            state.attempt("mapping", say_unit, column, typed)
            state.touch()

    st.text_input(
        "Unit",
        value=column.unit,
        key=widget,
        on_change=take,
        disabled=not column.quantity or BY_KEY[column.quantity].text,
    )


def _first(column: FileColumn) -> str:
    return style.plain(column.first, 16) or "empty"


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
    of_heading = {heading: key for key, heading in block.columns.items() if heading}
    keys = [of_heading.get(one) or _understood(one, block.columns) for one in sheet.headings]
    return tuple(
        FileColumn(
            heading,
            sheet.first[i] if i < len(sheet.first) else "",
            keys[i],
            block.units.get(keys[i], ""),
            heading in of_heading,
        )
        for i, heading in enumerate(sheet.headings)
    )


def _understood(heading: str, said: Mapping[str, str]) -> str:
    """Return what a heading says by itself; nothing where the user has said what holds that."""
    found = meaning(heading)
    return "" if found is None or found.quantity.key in said else found.quantity.key


def _read_column(column: ColumnRecord, first: Sequence[str | float]) -> FileColumn:
    at = column.position - 1
    value = str(first[at]) if at < len(first) else ""
    return FileColumn(column.heading, value, column.quantity, column.unit, column.mapped)


def say_meaning(column: FileColumn, quantity: str) -> None:
    """Put the user's word on what a column holds into the case; an empty text for nothing.

    Raises
    ------
    InputError
        If readings that could be read could be read no longer.
    """
    block = sets.block()
    columns = {key: name for key, name in block.columns.items() if name != column.heading}
    units = dict(block.units)
    if column.quantity and not quantity:
        columns[column.quantity] = ""
    if quantity:
        columns[quantity] = column.heading
        units.pop(quantity, None)
    _put(columns, units)


def say_unit(column: FileColumn, unit: str) -> None:
    """Put the user's word on the unit of a column into the case.

    Raises
    ------
    InputError
        If it is no unit of what the column holds.
    """
    block = sets.block()
    _put(dict(block.columns), {**block.units, column.quantity: unit})


def _put(columns: dict[str, str], units: dict[str, str]) -> None:
    number = sets.number()
    new = state.changed(state.case(), ("readings", number, "columns"), columns or None)
    new = state.changed(new, ("readings", number, "units"), units or None)
    problem = results.readings_of(new, state.files()).problem
    if problem is not None and (state.readings() is not None or isinstance(problem, UnitError)):
        raise problem
    state.put(new)


def _show_tables(sheets: Sequence[Sheet]) -> None:
    """Draw the choice between several tables of one sheet."""
    number, block = sets.number(), sets.block()
    sheet = next((one for one in sheets if one.name == block.sheet), None)
    sheet = sheet or next((one for one in sheets if one.first), None)
    if sheet is None or len(sheet.labels) < 2:
        return
    chosen = (block.block,) if isinstance(block.block, str) else block.block
    widget = state.key(f"tables.{number}.{sheet.name}.{chosen}")

    def take() -> None:
        picked = list(st.session_state[widget])
        wanted = picked if 0 < len(picked) < len(sheet.labels) else None

        def act() -> None:
            new = state.changed(state.case(), ("readings", number, "block"), wanted)
            state.put(state.changed(new, ("readings", number, "exclude"), None))

        state.attempt("mapping", act)
        state.touch()

    st.multiselect(
        "Tables of the file",
        sheet.labels,
        default=[label for label in chosen or sheet.labels if label in sheet.labels],
        key=widget,
        on_change=take,
        help="All are read together. Readings left out by hand are taken in again.",
    )


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
