"""A file of readings to ``Readings``: text or workbook, headings found by what they mean."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

from rheo.errors import Caution, ReadingsError
from rheo.geometry import Geometry
from rheo.readings.assemble import FoundTable, assembled
from rheo.readings.blocks import Table, find_tables, found_headings
from rheo.readings.columns import (
    Choice,
    UserChoice,
    check_choices_found,
    find_columns,
    needed_keys,
    user_choice,
)
from rheo.readings.file_bytes import Source, file_bytes
from rheo.readings.grid import Grid, shown
from rheo.readings.headings import meaning
from rheo.readings.readings import Readings
from rheo.readings.stated import stated_key, stated_lines
from rheo.readings.text_grid import text_grid
from rheo.readings.workbook_grid import is_workbook, workbook_grids

_NEEDED = (
    "there must be shear rate and shear stress (or viscosity), speed and torque, or flow and "
    "pressure drop"
)


def read_readings(
    path: Source,
    columns: Mapping[str, Choice] | None = None,
    geometry: Geometry | str | None = None,
    sheet: str | int | None = None,
    *,
    units: Mapping[str, str] | None = None,
    block: str | int | Sequence[str | int] | None = None,
    decimal: str | None = None,
    full_scale_torque: float | None = None,
    name: str | None = None,
) -> Readings:
    """Read a file of readings.

    Parameters
    ----------
    path : path, bytes or binary file
        CSV, TXT, TSV, XLSX, XLS or ODS, of up to 20 MB; told by its content, not by its name.
    columns : mapping of str to str, int or None, optional
        The user's word on which column is which: by quantity (``rate``, ``stress``,
        ``viscosity``, ``angular_speed``, ``torque``, ``torque_fraction``, ``dial``, ``flow``,
        ``velocity``, ``pressure_drop``, ``tube_diameter``, ``tube_length``, ``gap``,
        ``temperature``, ``solids_fraction``, ``time``, ``branch``) its heading, or its number
        counted from 1; None for a quantity that is not to be used. Quantities not named are found
        by what headings mean.
    geometry : Geometry or str, optional
        Where the fluid was sheared; wins over what the file says. As text it is written as in a
        file: ``concentric-cylinders, inner_radius 12.5 mm, outer_radius 13.56 mm, ...``.
    sheet : str or int, optional
        Sheet of a workbook, by name or by number from 1; the first that holds readings when
        absent.
    units : mapping of str to str, optional
        Unit by quantity; wins over the heading.
    block : str, int or sequence of these, optional
        Which tables of a file that has several, by title or by number from 1; all when absent.
    decimal : str, optional
        Decimal mark, ``.`` or ``,``; found from the numbers when absent.
    full_scale_torque : float, optional
        Torque at 100 % of full scale [N m]; wins over what the file says.
    name : str, optional
        What to call the file in messages.

    Returns
    -------
    Readings
        Columns in SI beside the table as read, with the geometry if there is one; what was
        understood is in ``columns``, what the user should know in ``cautions``.

    Raises
    ------
    InputError
        For a file that cannot be read or understood: one sentence that names the file, the line
        and the column, what was found and what is allowed.

    Notes
    -----
    Numbers without a unit are read in: shear rate 1/s, stress Pa, viscosity Pa.s, speed rpm
    (angular speed rad/s), torque N.m, dial degrees, flow m3/h, velocity m/s, pressure drop Pa,
    diameter and gap mm, length m, temperature °C, solids fraction %, time s; a Caution names these
    columns. A solids fraction is by mass or by volume as its unit or heading says (``wt%``,
    ``vol%``, ``w/w``, ``v/v``, ``mass fraction``); a bare ``%`` leaves that open.
    The lines that a file may state its geometry in are described in `rheo.readings.stated`.
    """
    data, place = file_bytes(path, name)
    choice = user_choice(columns, units, place)
    if decimal not in {None, ".", ","}:
        raise ReadingsError(f"decimal is {decimal!r}; it must be '.' or ','", place)
    if is_workbook(data):
        grids = workbook_grids(data, place, sheet)
    elif sheet is not None:
        raise ReadingsError(
            f"it is a text file, which has no sheet '{shown(sheet)}'; leave the sheet out", place
        )
    else:
        grids = (text_grid(data, place),)
    grid, found, others = _readable(grids, choice, geometry is not None)
    found, cautions = _chosen_blocks(found, block, grid)
    if others and sheet is None:
        cautions = (_other_sheets(grid, others), *cautions)
    readings = assembled(grid, found, cautions, geometry, decimal, full_scale_torque)
    return replace(readings, sheets=(grid.sheet, *others) if grid.sheet else ())


def _readable(
    grids: Sequence[Grid], choice: UserChoice, has_geometry: bool
) -> tuple[Grid, list[FoundTable], list[str]]:
    """Return the first grid that holds readings, its tables, and the names of other such grids."""
    first: tuple[Grid, list[FoundTable]] | None = None
    others: list[str] = []
    tables: list[Table] = []
    for grid in grids:
        here = find_tables(grid, choice)
        tables += here
        stated = has_geometry or any(
            stated_key(line.text) == "geometry"
            for table in here
            for line in stated_lines(table.above, grid)
        )
        found = [_found(table, choice, stated, grid) for table in here]
        if any(one.needed for one in found):
            if first is None:
                first = grid, found
            else:
                others.append(grid.sheet)
    check_choices_found(choice, [(t.headings, t.columns) for t in tables], grids[0].place)
    if first is None:
        raise _no_columns(grids, choice, tables)
    return *first, others


def _other_sheets(grid: Grid, others: Sequence[str]) -> Caution:
    listed = ", ".join(f"'{shown(other)}'" for other in others[:12])
    return Caution(
        code="other-sheets",
        sentence=f"The readings are those of sheet '{shown(grid.sheet)}'; there are readings in "
        f"{listed} too.",
        advice="Choose the sheet if it should be another.",
        place=grid.place,
    )


def _found(table: Table, choice: UserChoice, has_geometry: bool, grid: Grid) -> FoundTable:
    columns, cautions = find_columns(table.headings, table.units, table.columns, choice, grid.place)
    needed = needed_keys((column.quantity.key for column in columns), has_geometry)
    return FoundTable(table, columns, needed, cautions)


def _no_columns(
    grids: Sequence[Grid], choice: UserChoice, tables: Sequence[Table]
) -> ReadingsError:
    grid = grids[0]
    for table in tables:
        columns, _ = find_columns(table.headings, table.units, table.columns, choice, grid.place)
        if columns:
            names = ", ".join(
                f"{column.quantity.name} ('{shown(column.heading)}')" for column in columns
            )
            return ReadingsError(
                f"the columns found are {names}; {_NEEDED}, so say which column is which",
                grid.place,
            )
    headings = next((found for found in map(found_headings, grids) if found), ())
    if not headings and not any(row.numbers for grid in grids for row in grid.rows):
        return ReadingsError(f"no table of numbers was found; {_NEEDED}", grid.place)
    listed = ", ".join(f"'{shown(heading)}'" for heading in headings[:12]) or "none"
    known = [one for one in map(meaning, headings) if one is not None]
    understood = f"only {known[0].quantity.name} was" if known else "no heading was"
    return ReadingsError(
        f"{understood} understood of the headings found ({listed}); {_NEEDED}, so say which "
        "column is which",
        grid.place,
    )


def _chosen_blocks(
    found: list[FoundTable], block: str | int | Sequence[str | int] | None, grid: Grid
) -> tuple[list[FoundTable], tuple[Caution, ...]]:
    """Return the tables asked for, or all that hold the same kind of readings."""
    usable = [one for one in found if one.needed]
    if block is not None:
        wanted = [block] if isinstance(block, str | int) else list(block)
        labels = [one.table.label or "1" for one in usable]
        picked = []
        for each in wanted:
            if isinstance(each, int) and 1 <= each <= len(usable):
                picked.append(usable[each - 1])
            elif each in labels:
                picked.append(usable[labels.index(str(each))])
            else:
                listed = ", ".join(f"'{label}'" for label in labels[:12])
                raise ReadingsError(
                    f"there is no block '{shown(each)}'; there are {listed}", grid.place
                )
        usable = list({id(one): one for one in picked}.values())
    if not usable:
        raise ReadingsError("no block is chosen; choose at least one", grid.place)
    kind = usable[0].needed
    same = [
        replace(one, needed=kind)
        for one in usable
        if {column.quantity.key for column in one.columns}.issuperset(kind)
    ]
    if len(same) == len(usable):
        return same, ()
    left = [shown(one.table.label) for one in usable if one.needed != kind]
    caution = Caution(
        code="blocks-left-out",
        sentence=f"Blocks {', '.join(left)} hold other quantities than block "
        f"{shown(same[0].table.label)} and are not read with it.",
        advice="Read them one at a time if they are wanted.",
        place=grid.place,
    )
    return same, (caution,)
