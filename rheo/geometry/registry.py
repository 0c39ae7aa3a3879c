"""The one registry of geometries: every RECORD in the files of this folder."""

from __future__ import annotations

import difflib
import importlib
import pkgutil
from collections.abc import Mapping
from functools import cache
from typing import cast

from numpy.typing import ArrayLike

from rheo.errors import InputError
from rheo.geometry.dimensioned import Geometry
from rheo.geometry.record import FloatArray, GeometryRecord


@cache
def geometry_records() -> dict[str, GeometryRecord]:
    """Return the records of all geometries by key, in alphabetical order."""
    import rheo.geometry as package

    found: list[GeometryRecord] = []
    for module in pkgutil.iter_modules(package.__path__):
        record = getattr(importlib.import_module(f"rheo.geometry.{module.name}"), "RECORD", None)
        if record is not None:
            found.append(record)
    found.sort(key=lambda record: record.key)
    return {record.key: record for record in found}


def geometry_record(key: str) -> GeometryRecord:
    """Return the record of a geometry.

    Raises
    ------
    InputError
        If no geometry has this key; the sentence names those that exist.
    """
    records = geometry_records()
    if key not in records:
        near = difflib.get_close_matches(str(key), records, n=1)
        hint = f" (did you mean '{near[0]}'?)" if near else ""
        raise InputError(f"unknown geometry '{key}'{hint}; there are {', '.join(records)}")
    return records[key]


def make_geometry(key: str, **dimensions: ArrayLike) -> Geometry:
    """Make a geometry from its key and dimensions; also ``rheo.geometry(key, ...)``.

    Parameters
    ----------
    key : str
        A registry key such as ``concentric-cylinders``.
    **dimensions : array_like
        SI values by dimension key; arrays broadcast.

    Returns
    -------
    Geometry
        With ``predict``, ``sheared``, ``nominal`` and ``setting_for_rate``.

    Raises
    ------
    InputError
        For an unknown geometry, or an unknown, missing or impossible dimension.
    """
    # The geometry itself turns the values into arrays as it checks them.
    return Geometry(geometry_record(key), cast(Mapping[str, FloatArray], dimensions))
