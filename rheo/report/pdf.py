"""A design note as PDF: A4, embedded fonts, no browser, the same bytes for the same note."""

from __future__ import annotations

import json
from datetime import UTC, datetime
from importlib import resources
from typing import Any

from rheo.report.document import Note, content_hash
from rheo.report.palette import LIGHT
from rheo.report.scripts import pieces
from rheo.report.text import breakable, for_pdf, one_line

# Nothing in a note is longer than this on paper; the rest is counted.
LONGEST_TEXT = 12_000
_AS_THEY_ARE = frozenset(
    {"svg", "type", "kind", "key", "states", "numeric", "widths", "version", "hash"}
)


def note_as_pdf(note: Note) -> bytes:
    """Return a note as the bytes of a PDF file.

    Parameters
    ----------
    note : Note
        What to write.

    Returns
    -------
    bytes
        The same for the same note. Letters that the embedded fonts lack stand by their code.
    """
    import typst

    content = note.content()
    data = {
        **_printable(content),
        "hash": content_hash(content),
        "short_title": for_pdf(one_line(note.title, 70)),
        "date_text": note.date.isoformat(),
        "year": note.date.year,
        "month": note.date.month,
        "day": note.date.day,
        "colours": {
            name: getattr(LIGHT, name)
            for name in ("ink", "muted", "rule", "accent", "warning", "strip")
        },
    }
    template = resources.files("rheo.report").joinpath("note.typ").read_bytes()
    made = datetime(note.date.year, note.date.month, note.date.day, tzinfo=UTC)
    pdf = typst.compile(
        template,
        format="pdf",
        ignore_system_fonts=True,
        sys_inputs={"note": json.dumps(data, ensure_ascii=True)},
        timestamp=made,
    )
    return bytes(pdf)


def _printable(value: Any, key: str = "") -> Any:
    """Return content whose texts the PDF can show and break; drawings and marks as they are."""
    if isinstance(value, dict):
        return {name: _printable(item, name) for name, item in value.items()}
    if isinstance(value, list):
        return value if key in _AS_THEY_ARE else [_printable(item, key) for item in value]
    if not isinstance(value, str) or key in _AS_THEY_ARE:
        return value
    text = value
    if len(text) > LONGEST_TEXT:
        left = len(text) - LONGEST_TEXT
        text = f"{text[:LONGEST_TEXT]}… ({left} characters more in the case file)"
    parts = pieces(breakable(for_pdf(text)))
    return parts[0][0] if len(parts) == 1 else {"pieces": parts}
