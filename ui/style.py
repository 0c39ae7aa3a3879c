"""Colours and the little CSS that Streamlit's theme cannot say.

Text from outside must go through `escape` before it stands in HTML.
"""

from __future__ import annotations

from functools import cache
from html import escape as _escape
from pathlib import Path

import streamlit as st

from rheo.report.palette import Palette, palette
from rheo.report.scripts import pieces
from rheo.report.text import one_line
from ui import state


def colours() -> Palette:
    """Return the palette of the page as it is shown, light or dark."""
    return palette(state.dark())


def escape(value: object, longest: int | None = None) -> str:
    """Return text that stands for itself in HTML, on one line."""
    return _escape(one_line(value, longest))


def scripted(value: object, longest: int | None = None) -> str:
    """Return text for HTML in which symbols such as ``τ_y`` have their subscripts set lower."""
    return "".join(
        f"<{place}>{_escape(piece)}</{place}>" if place in ("sub", "sup") else _escape(piece)
        for piece, place in (
            (piece, "sup" if place == "super" else place)
            for piece, place in pieces(one_line(value, longest))
        )
    )


def plain(value: object, longest: int | None = None) -> str:
    """Return text that stands for itself in Streamlit's Markdown, on one line."""
    marked = one_line(value, longest)
    for sign in "\\`*_{}[]()#+-.!|~$<>:":
        marked = marked.replace(sign, f"\\{sign}")
    return marked


def apply() -> None:
    """Put the style sheet on the page; once in every run."""
    c = colours()
    variables = "".join(
        f"--rheo-{name}:{getattr(c, name)};"
        for name in ("surface", "ink", "muted", "rule", "accent", "good", "warning", "bad", "strip")
    )
    st.html(f"<style>:root{{{variables}}}{_sheet()}</style>")


@cache
def _sheet() -> str:
    return Path(__file__).with_name("page.css").read_text(encoding="utf-8")
