"""Older case files are brought up to the current schema, one function a version."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

from rheo.case.quantity import describe
from rheo.errors import CaseError

Document = dict[str, Any]
Step = Callable[[Document], Document]

SCHEMA_VERSION = 1

# From version to the function that brings a document of that version to the next one.
UPGRADES: Mapping[int, Step] = {}


def upgraded(
    document: Document,
    current: int = SCHEMA_VERSION,
    upgrades: Mapping[int, Step] = UPGRADES,
) -> Document:
    """Return a case document in the current schema.

    Parameters
    ----------
    document : dict
        A parsed case file with its ``schema`` key.
    current : int
        Version to reach.
    upgrades : mapping of int to callable
        From version to the step that leads to the next one.

    Returns
    -------
    dict
        The document itself when it is current; the given one is never changed.

    Raises
    ------
    CaseError
        If the version is missing, is no whole number, or is not known here.
    """
    if "schema" not in document:
        raise CaseError(f"key 'schema' is missing; write 'schema = {current}' at the top")
    version = document["schema"]
    readable = sorted({*upgrades, current})
    if not isinstance(version, int) or isinstance(version, bool) or version not in readable:
        allowed = ", ".join(str(number) for number in readable)
        newer = isinstance(version, int) and not isinstance(version, bool) and version > current
        hint = "; the file was made by a newer version of this program" if newer else ""
        raise CaseError(f"schema is {describe(version)}; this program reads {allowed}{hint}")
    while version < current:
        version += 1
        document = {**upgrades[version - 1](dict(document)), "schema": version}
    return document
