"""Small read-only tables as HTML: aligned numbers, calm lines, scrolling sideways on a telephone.

``table.show(["Model", table.Number("RMS error")], rows)``; a row is a sequence of texts, or a
``Row`` to mark it. Numbers come as text from `rheo.report.display` or `rheo.report.numbers`.
For tables that the user edits use ``st.data_editor``.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import streamlit as st

from ui import style


@dataclass(frozen=True)
class Number:
    """Heading of a column of numbers: they stand to the right."""

    heading: str


@dataclass(frozen=True)
class Words:
    """Heading of a column of words that need their room on a narrow page too."""

    heading: str


Heading = str | Number | Words


@dataclass(frozen=True)
class Row:
    """A row with a mark.

    Parameters
    ----------
    cells : sequence of str
        One a column.
    mark : str
        ``chosen``, ``failed`` or empty.
    hover : str
        Shown when the pointer rests on the row.
    """

    cells: Sequence[str]
    mark: str = ""
    hover: str = ""


_CLASSES: dict[type, str] = {str: "", Number: ' class="n"', Words: ' class="w"'}


def html(
    headings: Sequence[Heading], rows: Iterable[Sequence[str] | Row], caption: str = ""
) -> str:
    """Return the table as HTML; every text stands for itself."""
    classes = [_CLASSES[type(one)] for one in headings]
    names = [one if isinstance(one, str) else one.heading for one in headings]
    head = "".join(
        f'<th scope="col"{cls}>{style.scripted(name)}</th>'
        for cls, name in zip(classes, names, strict=True)
    )
    body = []
    for row in rows:
        kept = row if isinstance(row, Row) else Row(row)
        cells = "".join(
            f"<td{cls}>{style.scripted(cell)}</td>"
            for cls, cell in zip(classes, kept.cells, strict=True)
        )
        hover = f' title="{style.escape(kept.hover)}"' if kept.hover else ""
        body.append(f'<tr class="{kept.mark}"{hover}>{cells}</tr>')
    # Beside the table and not in it, so that it does not scroll sideways with it.
    below = f'<div class="rheo-caption">{style.scripted(caption)}</div>' if caption else ""
    return (
        f'<div class="rheo-scroll"><table class="rheo"><thead><tr>{head}</tr></thead>'
        f"<tbody>{''.join(body)}</tbody></table></div>{below}"
    )


def show(
    headings: Sequence[Heading], rows: Iterable[Sequence[str] | Row], caption: str = ""
) -> None:
    """Draw the table."""
    st.html(html(headings, rows, caption))
