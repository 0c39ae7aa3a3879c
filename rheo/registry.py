"""How records are found and named: every RECORD in the files of a folder, nowhere listed."""

from __future__ import annotations

import difflib
import importlib
import pkgutil
from collections.abc import Iterable, Mapping
from typing import TypeVar

from rheo.errors import InputError

Record = TypeVar("Record")


def records_in(package_name: str, kind: type[Record]) -> list[Record]:
    """Return the records of a kind that stand as RECORD in the files of a package."""
    package = importlib.import_module(package_name)
    found = (
        getattr(importlib.import_module(f"{package_name}.{module.name}"), "RECORD", None)
        for module in pkgutil.iter_modules(package.__path__)
    )
    return [record for record in found if isinstance(record, kind)]


def named(
    records: Mapping[str, Record],
    key: str,
    what: str,
    offered: Iterable[str] | None = None,
    scope: str = "",
    place: str = "",
) -> Record:
    """Return the record of a key.

    Parameters
    ----------
    records : mapping of str to record
        The registry.
    key : str
        As the user gave it.
    what : str
        What it names, such as ``model``.
    offered : iterable of str, optional
        Keys to offer instead; all of them when absent.
    scope : str
        Words before those that are offered, such as ``for bingham``.
    place : str
        What the error refers to.

    Raises
    ------
    InputError
        If there is no such key; the sentence gives the nearest one and those that exist.
    """
    if key in records:
        return records[key]
    near = difflib.get_close_matches(str(key), records, n=1, cutoff=0.5)
    hint = f" (did you mean '{near[0]}'?)" if near else ""
    others = ", ".join(records if offered is None else offered)
    there = f"{scope} there are" if scope else "there are"
    raise InputError(f"unknown {what} '{key}'{hint}; {there} {others}", place)
