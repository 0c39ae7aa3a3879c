"""What a design note consists of, as data: one content, written as HTML and as PDF.

Texts are plain text; each writer escapes them. Everything but the date takes part in the content
hash, so that two notes of one case can be compared by it.
"""

from __future__ import annotations

import datetime
import hashlib
import json
from dataclasses import dataclass
from typing import Any

from rheo.errors import Caution
from rheo.report.picture import Picture
from rheo.report.text import clean, one_line

# The name of a place longer than this stands in full among the inputs.
LONGEST_PLACE = 120


@dataclass(frozen=True)
class Paragraph:
    """A paragraph; `kind` is empty, ``lead``, ``small`` or ``safety``."""

    text: str
    kind: str = ""


@dataclass(frozen=True)
class Facts:
    """Names with values, in two columns."""

    rows: tuple[tuple[str, str], ...]


@dataclass(frozen=True)
class Answer:
    """The results in sight: a name, a value and a remark each."""

    cells: tuple[tuple[str, str, str], ...]


@dataclass(frozen=True)
class Table:
    """A table.

    Parameters
    ----------
    head : tuple of str
        Column headings, with units.
    rows : tuple of tuple of str
        Cells as text.
    numeric : tuple of int
        Columns set to the right and no wider than needed.
    caption : str
        Above it.
    states : tuple of str
        One a row: empty, ``chosen``, ``muted`` or ``flagged``; none when there is no state.
    widths : tuple of float
        Share of the page for each column, 0 for no more than needed; when absent, text columns
        share evenly what the numeric ones leave.
    """

    head: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    numeric: tuple[int, ...] = ()
    caption: str = ""
    states: tuple[str, ...] = ()
    widths: tuple[float, ...] = ()


@dataclass(frozen=True)
class Figure:
    """A picture with the caption under it."""

    picture: Picture
    caption: str = ""


@dataclass(frozen=True)
class Cautions:
    """Advice, each with its place."""

    cautions: tuple[Caution, ...]


@dataclass(frozen=True)
class SignOff:
    """Lines to be signed: name, signature, date; the names are those that are known."""

    roles: tuple[str, ...] = ("Prepared", "Checked")
    names: tuple[str, ...] = ("", "")


Block = Paragraph | Facts | Answer | Table | Figure | Cautions | SignOff


@dataclass(frozen=True)
class Section:
    """A numbered section."""

    title: str
    blocks: tuple[Block, ...]


@dataclass(frozen=True)
class Note:
    """A whole design note.

    Parameters
    ----------
    title, subtitle : str
        What it is about.
    sections : tuple of Section
        In order.
    date : datetime.date
        Printed on it; no part of the content hash.
    version : str
        Of the program.
    """

    title: str
    subtitle: str
    sections: tuple[Section, ...]
    date: datetime.date
    version: str

    def content(self) -> dict[str, Any]:
        """Return everything but the date as plain data, texts cleaned."""
        return {
            "title": clean(self.title),
            "subtitle": clean(self.subtitle),
            "version": self.version,
            "sections": [
                {"title": clean(s.title), "blocks": [block_data(block) for block in s.blocks]}
                for s in self.sections
            ],
        }

    @property
    def content_hash(self) -> str:
        """SHA-256 of the content, hexadecimal."""
        return content_hash(self.content())


def content_hash(content: dict[str, Any]) -> str:
    """Return the SHA-256 of a note's content."""
    text = json.dumps(content, ensure_ascii=True, sort_keys=True, separators=(",", ":"))
    return hashlib.sha256(text.encode("ascii")).hexdigest()


def block_data(block: Block) -> dict[str, Any]:
    """Return a block as plain data; a figure as its SVG."""
    return _DATA[type(block)](block)


def _paragraph(block: Paragraph) -> dict[str, Any]:
    return {"type": "paragraph", "text": clean(block.text), "kind": block.kind}


def _facts(block: Facts) -> dict[str, Any]:
    return {"type": "facts", "rows": [[clean(cell) for cell in row] for row in block.rows]}


def _answer(block: Answer) -> dict[str, Any]:
    return {"type": "answer", "cells": [[clean(cell) for cell in row] for row in block.cells]}


def _table(block: Table) -> dict[str, Any]:
    return {
        "type": "table",
        "head": [clean(cell) for cell in block.head],
        "rows": [[clean(cell) for cell in row] for row in block.rows],
        "numeric": list(block.numeric),
        "caption": clean(block.caption),
        "states": list(block.states) or [""] * len(block.rows),
        "widths": list(block.widths)
        or [0 if i in block.numeric else 1 for i in range(len(block.head))],
    }


def _figure(block: Figure) -> dict[str, Any]:
    return {
        "type": "figure",
        "key": block.picture.key,
        "title": clean(block.picture.title),
        "caption": clean(block.caption or block.picture.description),
        "svg": block.picture.svg(),
    }


def _cautions(block: Cautions) -> dict[str, Any]:
    rows = [[one_line(c.place, LONGEST_PLACE), c.sentence, c.advice] for c in block.cautions]
    return {"type": "cautions", "rows": [[clean(cell) for cell in row] for row in rows]}


def _sign_off(block: SignOff) -> dict[str, Any]:
    return {
        "type": "signoff",
        "roles": [clean(role) for role in block.roles],
        "names": [one_line(name, LONGEST_PLACE) for name in block.names],
    }


_DATA: dict[type[Block], Any] = {
    Paragraph: _paragraph,
    Facts: _facts,
    Answer: _answer,
    Table: _table,
    Figure: _figure,
    Cautions: _cautions,
    SignOff: _sign_off,
}
