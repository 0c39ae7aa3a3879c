"""The inputs as the case gives them, and what worked them out."""

from __future__ import annotations

import platform
from collections.abc import Iterator
from importlib import metadata
from typing import Any

from rheo.case.schema import Case
from rheo.report.document import Section, Table

_PACKAGES = ("numpy", "scipy", "lmfit", "pint", "fluids")
# A text longer than this is readings, and stands in the table of readings.
_LONGEST = 12_000


def inputs_section(case: Case) -> Section:
    """Return the section that lists every key of the case file."""
    rows = tuple(_rows(case.document(), ""))
    return Section(
        "Inputs", (Table(("Key of the case file", "As given"), rows, widths=(1.0, 1.6)),)
    )


def _rows(value: Any, key: str) -> Iterator[tuple[str, str]]:
    if isinstance(value, dict):
        for name, item in value.items():
            yield from _rows(item, f"{key}.{name}" if key else str(name))
    elif isinstance(value, list) and any(isinstance(item, dict | list) for item in value):
        for number, item in enumerate(value, 1):
            yield from _rows(item, f"{key} {number}")
    elif isinstance(value, list):
        yield key, ", ".join(str(item) for item in value)
    else:
        yield key, _words(key, value)


def _words(key: str, value: Any) -> str:
    text = str(value).strip()
    if key.startswith("readings") and key.endswith("text"):
        return f"{len(text.splitlines())} lines of readings in the case file"
    if len(text) > _LONGEST:
        return f"{text[:_LONGEST]}… ({len(text) - _LONGEST} characters more in the case file)"
    return text


def versions() -> tuple[tuple[str, str], ...]:
    """Return name and version of the program and of what it computes with."""
    from rheo import __version__

    found = [("rheo", __version__), ("Python", platform.python_version())]
    return (*found, *((name, metadata.version(name)) for name in _PACKAGES))
