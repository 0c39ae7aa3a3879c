"""Figures, the design note (HTML and PDF) and the workbook.

The names are handed on lazily, so that whoever wants to write a number needs no line engine.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from rheo.report.files import note_html, note_pdf, workbook, write_note

__all__ = ["note_html", "note_pdf", "workbook", "write_note"]


def __getattr__(name: str) -> Any:
    if name not in __all__:
        raise AttributeError(f"module 'rheo.report' has no attribute {name!r}")
    from rheo.report import files

    return getattr(files, name)
