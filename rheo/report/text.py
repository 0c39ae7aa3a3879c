"""What users typed, made safe to print: text stays text in every format.

Nothing here escapes markup; each writer does that where it writes. This removes what no format
can carry, and makes visible what would act on the text around it.
"""

from __future__ import annotations

import re
import unicodedata

# Bidirectional controls reorder the text after them; shown by code they cannot.
_BIDI = "\u061c\u200e\u200f\u202a-\u202e\u2066-\u2069"
# Private use and noncharacters have no agreed meaning and are refused by XML and PDF writers.
_UNPRINTABLE = re.compile(
    f"[{_BIDI}\ud800-\udfff\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f\ufdd0-\ufdef\ufffe\uffff\ufeff]"
)
_LONG_WORD = re.compile(r"\S{25,}")
_BREAK_AFTER = 20
_ZERO_WIDTH_SPACE = "\u200b"


def _code(match: re.Match[str]) -> str:
    return f"[U+{ord(match[0]):04X}]"


def clean(value: object) -> str:
    """Return text with control characters shown by their code, such as ``[U+202E]``.

    Line ends become ``\\n`` and tabs become spaces; everything else is kept as it is.
    """
    raw = str(value).replace("\r\n", "\n").replace("\r", "\n").replace("\t", "    ")
    raw = raw.replace("\u2028", "\n").replace("\u2029", "\n")
    return _UNPRINTABLE.sub(_code, raw)


def one_line(value: object, longest: int | None = None) -> str:
    """Return clean text on one line, cut with ``…`` beyond `longest` characters."""
    line = " ".join(clean(value).split())
    if longest is not None and len(line) > longest:
        return line[: longest - 1].rstrip() + "…"
    return line


def breakable(value: str) -> str:
    """Let words of 25 characters and more break across lines, by zero-width spaces."""

    def split(match: re.Match[str]) -> str:
        word = match[0]
        pieces = [word[i : i + _BREAK_AFTER] for i in range(0, len(word), _BREAK_AFTER)]
        return _ZERO_WIDTH_SPACE.join(pieces)

    return _LONG_WORD.sub(split, value)


# Scripts and symbols that the fonts of the PDF hold; each range was compiled and looked at.
_PDF_RANGES = (
    (0x09, 0x0A),
    (0x20, 0x7E),
    (0xA0, 0x17F),
    (0x18F, 0x18F),
    (0x192, 0x192),
    (0x1A0, 0x1A1),
    (0x1AF, 0x1B0),
    (0x1E6, 0x1EB),
    (0x1FA, 0x1FF),
    (0x218, 0x21B),
    (0x2C6, 0x2C7),
    (0x2D8, 0x2DD),
    (0x300, 0x30C),
    (0x323, 0x323),
    (0x327, 0x328),
    (0x384, 0x38A),
    (0x38C, 0x38C),
    (0x38E, 0x3A1),
    (0x3A3, 0x3CE),
    (0x3D1, 0x3D1),
    (0x3D5, 0x3D6),
    (0x3F0, 0x3F1),
    (0x400, 0x45F),
    (0x490, 0x491),
    (0x5D0, 0x5EA),
    (0x621, 0x63A),
    (0x641, 0x64A),
    (0x1E80, 0x1E85),
    (0x1EA0, 0x1EF9),
    (0x200B, 0x200B),
    (0x2002, 0x200A),
    (0x2010, 0x2015),
    (0x2018, 0x201E),
    (0x2020, 0x2022),
    (0x2026, 0x2026),
    (0x202F, 0x2030),
    (0x2032, 0x2033),
    (0x2039, 0x203A),
    (0x2044, 0x2044),
    (0x2070, 0x2071),
    (0x2074, 0x208E),
    (0x20AC, 0x20AC),
    (0x2103, 0x2103),
    (0x2109, 0x2109),
    (0x2122, 0x2122),
    (0x2126, 0x2126),
    (0x2153, 0x2154),
    (0x215B, 0x215E),
    (0x2190, 0x2195),
    (0x21D0, 0x21D5),
    (0x2200, 0x2209),
    (0x2211, 0x2213),
    (0x221A, 0x221A),
    (0x221D, 0x221E),
    (0x2227, 0x222B),
    (0x2248, 0x2248),
    (0x2260, 0x2261),
    (0x2264, 0x2265),
    (0x226A, 0x226B),
    (0x25A0, 0x25A1),
    (0x25B2, 0x25B3),
    (0x25BC, 0x25BD),
    (0x25C6, 0x25C7),
    (0x25CA, 0x25CB),
    (0x25CF, 0x25CF),
    (0x2713, 0x2713),
)


def _in_pdf_fonts(character: str) -> bool:
    code = ord(character)
    return any(low <= code <= high for low, high in _PDF_RANGES)


def for_pdf(value: str) -> str:
    """Return text in which characters that the PDF's fonts lack stand by their code.

    An emoji becomes ``[U+1F600]``: still text, still searchable, never an empty box.
    """
    composed = unicodedata.normalize("NFC", value)
    if composed.isascii():
        return composed
    return "".join(
        character if _in_pdf_fonts(character) else f"[U+{ord(character):04X}]"
        for character in composed
    )
