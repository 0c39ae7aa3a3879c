"""The one registry of geometries: every RECORD in the files of this folder."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cache
from typing import cast

from numpy.typing import ArrayLike

from rheo.geometry.dimensioned import Geometry
from rheo.geometry.record import FloatArray, GeometryRecord
from rheo.registry import named, records_in


@cache
def geometry_records() -> dict[str, GeometryRecord]:
    """Return the records of all geometries by key, in alphabetical order."""
    found = sorted(records_in("rheo.geometry", GeometryRecord), key=lambda record: record.key)
    return {record.key: record for record in found}


def geometry_record(key: str) -> GeometryRecord:
    """Return the record of a geometry.

    Raises
    ------
    InputError
        If no geometry has this key; the sentence names those that exist.
    """
    return named(geometry_records(), key, "geometry")


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
