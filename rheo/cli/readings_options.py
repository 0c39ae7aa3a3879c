"""Readings given on the command line: a file, its columns and the geometry of the instrument."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from rheo.cli.options import in_range, named_values, one_of, quantity, si_unit
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


def geometry_of(
    kind: str | None, dimensions: list[str] | None, option: str = "--dim"
) -> Geometry | None:
    """Return the geometry of the options, or None when none was given; `option` is the place.

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
    return make_geometry(kind, **_dimensions(kind, dimensions, option))


def _units(kind: str) -> dict[str, str]:
    from rheo.geometry import geometry_record

    return {one.key: si_unit(one.unit) for one in geometry_record(kind).dimensions}


def _dimensions(kind: str, dimensions: list[str] | None, option: str = "--dim") -> dict[str, float]:
    units = _units(kind)
    given = named_values(dimensions or [], option)
    for name in given:
        if name not in units:
            raise InputError(
                f"unknown dimension '{name[:60]}'; {kind} takes {', '.join(units)}", option
            )
    return {name: quantity(value, units[name], f"{option} {name}") for name, value in given.items()}


def full_scale_of(text: str | None) -> float | None:
    """Return the torque at full scale [N m] of the option, or None when it was not given.

    Raises
    ------
    InputError
        If it is no torque above 0.
    """
    return None if text is None else in_range(text, "N*m", "--full-scale", 1e3, "such as '10 mN.m'")


def sweep_of(word: str) -> str:
    """Return the branch of the option, or refuse it."""
    from rheo.case.load_readings import SWEEPS

    if word not in SWEEPS:
        raise InputError(f"found '{word[:60]}'; it must be {one_of(SWEEPS)}", "--sweep")
    return word


def columns_of(pairs: list[str] | None) -> dict[str, str] | None:
    """Return the headings of the options by quantity, or None when none was given.

    Raises
    ------
    InputError
        For a text without an equals sign, or an unknown quantity.
    """
    from rheo.readings.columns import user_choice

    found = named_values(pairs or [], "--column")
    try:
        user_choice(found, None, "")
    except InputError as error:
        raise InputError(error.sentence, "--column") from None
    return found or None


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
