"""Subscripts and superscripts of symbols in plain text: ``τ_y``, ``K γ̇^n``, ``Pa.s^n``.

Only what the project's own symbols look like is taken for one; other underscores and carets stay.
"""

from __future__ import annotations

import re

Piece = tuple[str, str]

_SUBSCRIPT = (
    r"(?:(?<=[α-ωΑ-Ω\u0307])_(?P<sub>[0-9A-Za-z∞½]+(?:,static)?)"
    r"|(?<=\bT)_(?P<reference>ref)\b|(?<=\bE)_(?P<energy>[yη])\b)"
)
_SUPERSCRIPT = r"(?<=[\u0307sα-ω)\]])\^(?P<super>\((?:[^()]|\([^()]*\))*\)|[0-9A-Za-z]+)"
_SCRIPTS = re.compile(f"{_SUBSCRIPT}|{_SUPERSCRIPT}")
_HAS_SYMBOLS = re.compile(r"[α-ωΑ-Ω]|^Pa\.s\^|^E_y$|T_ref")


def pieces(text: str) -> list[Piece]:
    """Split a text at its subscripts and superscripts.

    Parameters
    ----------
    text : str
        Plain text.

    Returns
    -------
    list of (str, str)
        Text and ``sub``, ``super`` or an empty word; joined they give the text without ``_`` and
        ``^`` of the symbols, and without the brackets of an exponent.
    """
    if ("_" not in text and "^" not in text) or not _HAS_SYMBOLS.search(text):
        return [(text, "")]
    found: list[Piece] = []
    at = 0
    for match in _SCRIPTS.finditer(text):
        if match.start() > at:
            found.append((text[at : match.start()], ""))
        lowered = match["sub"] or match["reference"] or match["energy"]
        if lowered:
            found.append((lowered, "sub"))
        else:
            exponent = match["super"]
            found.append((exponent[1:-1] if exponent.startswith("(") else exponent, "super"))
        at = match.end()
    if at < len(text):
        found.append((text[at:], ""))
    return found or [(text, "")]


def unit_words(unit: str) -> str:
    """Return an SI unit of a parameter as it is printed: ``Pa·s^n`` for ``Pa.s^n``."""
    return unit.replace("Pa.s^n", "Pa·sⁿ").replace(".", "·")
