"""Readings given on the command line: a file, its columns and the geometry of the instrument."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from rheo.cli.options import named_values, quantity, si_unit
from rheo.errors import InputError

if TYPE_CHECKING:
    from rheo.geometry import Geometry

ReadingsFile = Annotated[
    Path, typer.Argument(metavar="READINGS", help="CSV, TSV, TXT, XLSX, XLS or ODS file.")
]
GeometryKind = Annotated[
    str | None,
    typer.Option("--geometry", "-g", metavar="KIND", help="Such as concentric-cylinders or tube."),
]
Dimensions = Annotated[
    list[str] | None,
    typer.Option(
        "--dim",
        "-d",
        metavar="NAME=VALUE",
        help="A dimension of the geometry: inner_radius=14mm. One --dim for each.",
    ),
]
Columns = Annotated[
    list[str] | None,
    typer.Option(
        "--column",
        "-c",
        metavar="QUANTITY=HEADING",
        help="Which column holds what: torque='M [mN.m]'. Columns not named are found.",
    ),
]


def geometry_of(kind: str | None, dimensions: list[str] | None) -> Geometry | None:
    """Return the geometry of the options, or None when none was given.

    Raises
    ------
    InputError
        For an unknown geometry or dimension, or a value that is not allowed.
    """
    from rheo.geometry import make_geometry

    if kind is None:
        if dimensions:
            raise InputError("dimensions need a --geometry, such as --geometry tube", "--dim")
        return None
    return make_geometry(kind, **_dimensions(kind, dimensions))


def _units(kind: str) -> dict[str, str]:
    from rheo.geometry import geometry_record

    return {one.key: si_unit(one.unit) for one in geometry_record(kind).dimensions}


def _dimensions(kind: str, dimensions: list[str] | None) -> dict[str, float]:
    units = _units(kind)
    given = named_values(dimensions or [], "--dim")
    for name in given:
        if name not in units:
            raise InputError(
                f"unknown dimension '{name[:60]}'; {kind} takes {', '.join(units)}", "--dim"
            )
    return {name: quantity(value, units[name], f"--dim {name}") for name, value in given.items()}


def geometry_text(kind: str | None, dimensions: list[str] | None) -> str | None:
    """Return the geometry of the options as a readings file would state it.

    Dimensions that are missing may then come from columns of the file.

    Raises
    ------
    InputError
        For an unknown geometry or dimension, or a value that is not allowed.
    """
    if kind is None:
        geometry_of(kind, dimensions)
        return None
    values = _dimensions(kind, dimensions)
    units = _units(kind)
    stated = [
        f"{name} {value!r} {units[name]}".replace(" dimensionless", "")
        for name, value in values.items()
    ]
    return ", ".join((kind, *stated))
