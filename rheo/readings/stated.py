"""What a readings file says of itself above its table, in lines of the form ``key: value``.

The keys, each with an example::

    # geometry: concentric-cylinders, inner_radius 12.5 mm, outer_radius 13.56 mm, length 37.5 mm
    # full_scale_torque: 50 mN.m
    # stress_per_degree: 0.511 Pa
    # nominal_form: bob
    # temperature: 40 °C
    # solids_fraction: 46 wt%
    # density: 1100 kg/m3
    # particle_diameter: 0.3 mm

The ``#`` may be left out, and ``=`` may stand for ``:``. A geometry is its key and its dimensions,
each with its unit; a dimension that changes from reading to reading may stand in a column instead
(tube diameter, tube length, gap).
"""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution, InputError, ReadingsError
from rheo.geometry import Geometry, geometry_record, make_geometry
from rheo.readings.grid import Grid, Row, shown
from rheo.readings.headings import convert
from rheo.readings.quantities import BY_KEY
from rheo.readings.solids import read_share
from rheo.units import parse_quantity

FloatArray = NDArray[np.float64]

# Which column fills which dimension of which geometry.
COLUMN_DIMENSIONS: dict[str, tuple[tuple[str, str], ...]] = {
    "tube": (("tube_diameter", "diameter"), ("tube_length", "length")),
    "parallel-plate": (("gap", "gap"),),
}
_AMOUNTS = {
    "full_scale_torque": "N*m",
    "stress_per_degree": "Pa",
    "temperature": "K",
    "solids_fraction": "",
    "density": "kg/m^3",
    "particle_diameter": "m",
}
_WORDS = ("geometry", "nominal_form")
_LINE = re.compile(r"[\s\"#/%!]*([A-Za-z][A-Za-z _-]{2,30}?)\s*[:=]\s*(.*?)[\s\";,]*", re.DOTALL)
_PART = re.compile(r"([A-Za-z][A-Za-z_ ]*?)\s*[:=]?\s*([-+]?[0-9.,][0-9.,eE+-]*)\s*(.*)")


@dataclass(frozen=True)
class Stated:
    """What a file says of itself.

    Parameters
    ----------
    geometry_key : str
        Registry key; empty when no geometry is stated.
    dimensions : mapping of str to float
        Its dimensions in SI, as far as they are stated.
    nominal_form : str
        Which conversion the instrument uses; empty when not stated.
    amounts : mapping of str to float
        The other values in SI by key.
    solids_basis : str
        ``volume`` or ``mass``; empty when not stated.
    place : str
        Line that states the geometry.
    """

    geometry_key: str = ""
    dimensions: Mapping[str, float] = field(default_factory=dict)
    nominal_form: str = ""
    amounts: Mapping[str, float] = field(default_factory=dict)
    solids_basis: str = ""
    place: str = ""

    def over(self, earlier: Stated) -> Stated:
        """Return what is stated here, and earlier what is not stated here."""
        own = bool(self.geometry_key)
        return Stated(
            self.geometry_key or earlier.geometry_key,
            self.dimensions if own else earlier.dimensions,
            self.nominal_form or earlier.nominal_form,
            {**earlier.amounts, **self.amounts},
            self.solids_basis or earlier.solids_basis,
            self.place if own else earlier.place,
        )


def stated_key(text: str) -> str | None:
    """Return the key of a line of the documented form, None for any other line."""
    return _key_and_value(text)[0]


@dataclass(frozen=True)
class Line:
    """A line above a table.

    Parameters
    ----------
    text : str
        Its text.
    place : str
        File and line.
    marked : bool
        Whether it is marked with ``#``, so that it is meant for this program.
    """

    text: str
    place: str
    marked: bool


def stated_lines(rows: Sequence[Row], grid: Grid) -> list[Line]:
    """Return rows as lines of text, a key in a cell of its own joined to its value."""
    lines = []
    for row in rows:
        cells = [str(cell).strip() for cell in row.cells if str(cell).strip()]
        text = row.text
        key = cells[0].rstrip(":= ") if cells else ""
        if len(cells) > 1 and not re.search("[:=]", key) and stated_key(f"{key}: x"):
            joint = ", " if key.strip('#"/%! ').lower() == "geometry" else " "
            text = f"{key}: {joint.join(cells[1:])}"
        lines.append(Line(text, grid.at(row.line), row.comment))
    return lines


def _key_and_value(text: str) -> tuple[str | None, str]:
    match = _LINE.fullmatch(text)
    if match is None:
        return None, ""
    key = re.sub(r"[\s-]+", "_", match[1].strip().lower())
    return (key if key in _AMOUNTS or key in _WORDS else None), match[2].strip()


def read_stated(lines: Sequence[Line], decimal: str) -> tuple[Stated, tuple[Caution, ...]]:
    """Read the lines above a table.

    Parameters
    ----------
    lines : sequence of Line
        Lines of another form are passed over.
    decimal : str
        Decimal mark of the file.

    Returns
    -------
    tuple
        What is stated, and a Caution for each line without ``#`` that looks like a statement and
        is none: it may be another program's.

    Raises
    ------
    InputError
        For a marked line with a value that cannot be read, an unknown geometry or dimension.
    """
    result = Stated()
    cautions: list[Caution] = []
    for line in lines:
        key, value = _key_and_value(line.text)
        if key is None:
            continue
        try:
            if key == "geometry":
                new = geometry_from_text(value, line.place, decimal)
            elif key == "nominal_form":
                new = Stated(nominal_form=value.lower())
            elif key == "solids_fraction":
                new = _solids(value, f"{line.place}, {key}", decimal)
            else:
                new = Stated(amounts={key: _amount(key, value, line.place, decimal)})
        except InputError as error:
            if line.marked:
                raise
            cautions.append(
                Caution(
                    code="line-not-understood",
                    sentence=f"The {key} stated there is not used: {error.sentence}.",
                    advice=f"State the {key} if it matters.",
                    place=line.place,
                )
            )
            continue
        result = new.over(result)
    return result, tuple(cautions)


def _solids(value: str, where: str, decimal: str) -> Stated:
    share, by = read_share(_with_point(value, decimal), where)
    if not 0.0 < share < 1.0:
        raise ReadingsError(
            f"it is {shown(value)}; it must be above 0 and below 1, such as 25 %", where
        )
    return Stated(amounts={"solids_fraction": share}, solids_basis=by)


def _amount(key: str, value: str, place: str, decimal: str) -> float:
    text = _with_point(value, decimal)
    where = f"{place}, {key}"
    if key == "temperature":
        # Spelled as in headings: a bare C or F is a temperature here.
        match = re.fullmatch(r"([-+]?[0-9.]+)\s*(.*)", text)
        if match is None:
            raise ReadingsError(f"'{shown(value)}' is not a temperature; write 40 °C", where)
        try:
            number = float(match[1])
        except ValueError:
            raise ReadingsError(
                f"'{shown(value)}' is not a temperature; write 40 °C", where
            ) from None
        amount = float(convert(number, BY_KEY[key], match[2] or "°C", where))
    else:
        amount = parse_quantity(text, _AMOUNTS[key], where)
    if not amount > 0:
        raise ReadingsError(f"it is {shown(value)}; it must be above 0", where)
    return amount


def _with_point(text: str, decimal: str) -> str:
    return text.replace(",", ".") if decimal == "," else text


def geometry_from_text(text: str, place: str = "geometry", decimal: str = ".") -> Stated:
    """Read a geometry such as ``tube, diameter 10 mm, length 1.2 m``; dimensions may be missing.

    Parameters
    ----------
    text : str
        Key and dimensions, separated by commas or semicolons.
    place : str
        What an error refers to.
    decimal : str
        Decimal mark.

    Raises
    ------
    InputError
        For an unknown geometry or dimension, or a value that cannot be read.
    """
    key, *parts = (part.strip() for part in re.split(r"[,;]\s*(?=[A-Za-z])", text.strip(" ,;")))
    try:
        record = geometry_record(re.sub(r"[\s_]+", "-", key.lower()))
    except InputError as error:
        raise ReadingsError(error.sentence, place) from None
    known = {dimension.key: dimension for dimension in record.dimensions}
    found: dict[str, float] = {}
    for part in parts:
        match = _PART.fullmatch(part.rstrip(" ,;"))
        name = re.sub(r"\s+", "_", match[1].strip().lower()) if match else ""
        if match is None:
            raise ReadingsError(
                f"'{shown(part)}' is no dimension with its value; write it like 'length 37.5 mm'",
                place,
            )
        if name not in known:
            raise ReadingsError(
                f"unknown dimension '{shown(name)}' of {record.key}; it takes {', '.join(known)}",
                place,
            )
        unit = known[name].unit
        value = f"{_with_point(match[2], decimal)} {match[3]}".strip()
        found[name] = parse_quantity(value, "" if unit == "-" else unit, f"{place}, {name}")
    return Stated(geometry_key=record.key, dimensions=found, place=place)


def make_stated_geometry(
    stated: list[Stated], counts: list[int], columns: Mapping[str, FloatArray | None]
) -> Geometry | None:
    """Return the geometry of all blocks together, a dimension for every reading if they differ.

    Parameters
    ----------
    stated : list of Stated
        One a block.
    counts : list of int
        Number of readings of each block.
    columns : mapping of str to array or None
        Columns of the table by quantity; those that are dimensions complete the geometry.

    Raises
    ------
    InputError
        If the blocks have different kinds of geometry, or a dimension is missing.
    """
    keys = {one.geometry_key for one in stated}
    if keys == {""}:
        return None
    place = next(one.place for one in stated if one.geometry_key)
    if len(keys) > 1:
        listed = ", ".join(sorted(key or "none" for key in keys))
        raise ReadingsError(
            f"the blocks have different geometries ({listed}); read one block at a time", place
        )
    key = keys.pop()
    names = dict.fromkeys(name for one in stated for name in one.dimensions)
    dimensions: dict[str, FloatArray | float] = {}
    for name in names:
        values = [one.dimensions.get(name) for one in stated]
        given = [value for value in values if value is not None]
        if len(given) < len(values):
            raise ReadingsError(f"{name} is stated for some blocks only", place)
        same = len(set(given)) == 1
        dimensions[name] = given[0] if same else np.repeat(np.array(given), counts)
    for quantity, name in COLUMN_DIMENSIONS.get(key, ()):
        column = columns.get(quantity)
        if column is not None:
            dimensions[name] = column
    try:
        return make_geometry(key, **dimensions)
    except InputError as error:
        raise ReadingsError(error.sentence, place) from None
