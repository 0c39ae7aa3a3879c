"""A case with some of its values changed, checked as a file would be."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from rheo.case.complaints import words_of
from rheo.case.schema import Case
from rheo.case.storage import case_from_document
from rheo.errors import CaseError


def changed(case: Case, changes: Mapping[str, Any]) -> Case:
    """Return a case with other values at some keys; the given one stays as it is.

    Parameters
    ----------
    case : Case
        The case.
    changes : mapping of str to value
        By key path with dots, list entries counted from 0: ``{"duty.flow": "6 m3/h",
        "line.discharge.0.length": "40 m"}``. A value is what the file would hold; None takes the
        key away, so that its default holds. Tables on the way are made.

    Returns
    -------
    Case
        In the same folder.

    Raises
    ------
    CaseError
        If a path leads nowhere, or the case that comes of it is not allowed.
    """
    document = case.document()
    for path, value in changes.items():
        _set(document, path, value)
    return case_from_document(document).in_folder(case.folder, case.allow_outside)


def _set(document: dict[str, Any], path: str, value: Any) -> None:
    *way, last = (_key(word) for word in path.split("."))
    here: Any = document
    for depth, key in enumerate(way):
        if isinstance(here, dict) and isinstance(key, str):
            here = here.setdefault(key, {})
        else:
            here = _entry(here, key, (*way[: depth + 1],))
    if isinstance(here, dict) and isinstance(last, str):
        if value is None:
            here.pop(last, None)
        else:
            here[last] = value
        return
    _entry(here, last, (*way, last))
    if value is None:
        del here[last]
    else:
        here[last] = value


def _key(word: str) -> str | int:
    return int(word) if word.isdecimal() and word.isascii() else word


def _entry(here: Any, key: str | int, path: tuple[str | int, ...]) -> Any:
    if not isinstance(here, list) or not isinstance(key, int):
        raise CaseError("there is no such key to change", words_of(path))
    if key >= len(here):
        raise CaseError(f"there are only {len(here)} entries", words_of(path))
    return here[key]
