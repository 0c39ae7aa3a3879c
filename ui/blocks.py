"""The blocks of the design note on the page, so that page and note show the same tables.

``blocks.show(block, key="fit")`` draws any block of `rheo.report.document`: Paragraph, Facts,
Table, Figure, Cautions.
"""

from __future__ import annotations

import streamlit as st

from rheo.report.document import Block, Cautions, Facts, Figure, Paragraph, Table
from ui import cautions, pictures, style, table

# Texts of a table longer than this need their room on a narrow page too.
_LONG = 40


def show(block: Block, key: str) -> None:
    """Draw a block; `key` is the widget key of a figure."""
    if isinstance(block, Paragraph):
        st.html(f'<p class="rheo-text {block.kind}">{style.scripted(block.text)}</p>')
    elif isinstance(block, Facts):
        st.html(facts_html(block))
    elif isinstance(block, Table):
        st.html(table_html(block))
    elif isinstance(block, Figure):
        pictures.show(block.picture, key)
        if block.caption:
            st.caption(style.plain(block.caption))
    elif isinstance(block, Cautions):
        cautions.show(block.cautions)


def table_html(block: Table) -> str:
    """Return a table of the note as HTML of the page."""
    headings = [_heading(block, place) for place in range(len(block.head))]
    states = block.states or ("",) * len(block.rows)
    rows = [table.Row(row, state) for row, state in zip(block.rows, states, strict=True)]
    return table.html(headings, rows, block.caption)


def _heading(block: Table, place: int) -> table.Heading:
    name = block.head[place]
    if place in block.numeric:
        return table.Number(name)
    return table.Words(name) if any(len(row[place]) > _LONG for row in block.rows) else name


def facts_html(block: Facts) -> str:
    """Return names with values as HTML of the page."""
    pairs = "".join(
        f"<dt>{style.scripted(name)}</dt><dd>{style.scripted(value)}</dd>"
        for name, value in block.rows
    )
    return f'<dl class="rheo-facts">{pairs}</dl>'
