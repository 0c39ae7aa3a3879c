"""Dimensions of a geometry as text in the units shown, and back."""

from __future__ import annotations

import re

import numpy as np

from rheo.geometry import GeometryRecord
from rheo.geometry.record import Dimension
from rheo.report import display
from rheo.report.numbers import exact
from rheo.units import parse_quantity
from ui import units_switch

_BARE = re.compile(r"\s*[\d.]+\s*")


def label(dimension: Dimension) -> str:
    """Return the name of its field in Markdown, such as ``Radius of the bob, $R_i$``."""
    words, symbol = dimension.description, dimension.symbol
    return f"{words[:1].upper()}{words[1:]}, {f'${symbol}$' if symbol.isascii() else symbol}"


def quantity(record: GeometryRecord, dimension: Dimension) -> str:
    """Return as which kind of quantity it is shown; empty for an angle and a plain number."""
    if dimension.unit != "m":
        return ""
    # Tubes are metres long and bobs millimetres.
    return "length" if record.setting == "flow" and dimension.key == "length" else "diameter"


def text(record: GeometryRecord, dimension: Dimension, value: float, system: str) -> str:
    """Return a value in SI as its field shows it."""
    kind = quantity(record, dimension)
    if kind:
        number = exact(float(display.shown(value, kind, system)))
        return f"{number} {display.unit_label(kind, system)}"
    if dimension.unit == "rad":
        return f"{exact(float(np.degrees(value)))} °"
    return exact(value) if dimension.unit == "-" else f"{exact(value)} {dimension.unit}"


def with_unit(record: GeometryRecord, dimension: Dimension, typed: str, system: str) -> str:
    """Return what was typed as text with unit; a number alone is taken in the unit shown."""
    kind = quantity(record, dimension)
    if kind:
        return units_switch.with_unit(typed, kind, system)
    if dimension.unit == "rad" and _BARE.fullmatch(typed):
        return f"{typed.strip()} degree"
    return typed.strip()


def read(record: GeometryRecord, dimension: Dimension, typed: str, system: str) -> float:
    """Return what was typed in SI; raises InputError if it is no such quantity."""
    unit = "dimensionless" if dimension.unit == "-" else dimension.unit
    return parse_quantity(with_unit(record, dimension, typed, system), unit, dimension.description)


def written(dimension: Dimension, value: float) -> str:
    """Return a value in SI as it stands in a case file."""
    unit = "" if dimension.unit == "-" else dimension.unit
    return f"{value!r} {unit}".strip()
