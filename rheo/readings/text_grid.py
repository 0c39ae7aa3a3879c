"""Text files as grids: encodings, separators, quotes."""

from __future__ import annotations

import codecs
import csv
import re
from collections import Counter
from collections.abc import Callable, Sequence

from rheo.errors import ReadingsError
from rheo.readings.grid import Grid, Row, is_comment, is_rule
from rheo.readings.numerals import Cell, looks_numeric

MOST_LINES = 100_000
LONGEST_LINE = 20_000
MOST_COLUMNS = 1_000
_SAMPLE = 400
_SEPARATORS = ("\t", ";", "|", ",")
_BLANKS = " "
_BOMS = (
    (codecs.BOM_UTF8, "utf-8-sig"),
    (codecs.BOM_UTF32_LE, "utf-32"),
    (codecs.BOM_UTF32_BE, "utf-32"),
    (codecs.BOM_UTF16_LE, "utf-16"),
    (codecs.BOM_UTF16_BE, "utf-16"),
)
_CONTROL = re.compile(r"[\x00-\x08\x0e-\x1f\x7f]")
_NOT_TEXT = "its content is no text and no workbook; give a CSV, TXT, TSV, XLSX, XLS or ODS file"


def text_grid(data: bytes, place: str) -> Grid:
    """Return the lines of a text file as a grid.

    Parameters
    ----------
    data : bytes
        The content of the file.
    place : str
        Name of the file, for errors.

    Raises
    ------
    ReadingsError
        If it is no text, or too long.
    """
    text = decode(data, place)
    lines = re.split(r"\r\n|\n|\r", text)
    if len(lines) > MOST_LINES:
        raise ReadingsError(f"it has {len(lines)} lines; at most {MOST_LINES} are allowed", place)
    longest = max(range(len(lines)), key=lambda index: len(lines[index]))
    if len(lines[longest]) > LONGEST_LINE:
        raise ReadingsError(
            f"the line has {len(lines[longest])} signs; at most {LONGEST_LINE} are allowed",
            f"{place}, line {longest + 1}",
        )
    joined = _join_quoted(lines)
    split, by_blanks = _splitter([line for _, line in joined])
    rows = []
    for number, line in joined:
        comment = is_comment(line)
        content = line.lstrip().lstrip('"').lstrip("#/%!") if comment else line
        cells = () if is_rule(line) else split(content)
        if len(cells) > MOST_COLUMNS:
            raise ReadingsError(
                f"the line has {len(cells)} columns; at most {MOST_COLUMNS} are allowed",
                f"{place}, line {number}",
            )
        rows.append(Row(number, cells, line, comment))
    return Grid(tuple(rows), place, by_blanks=by_blanks)


def decode(data: bytes, place: str) -> str:
    """Return bytes as text: UTF-8, UTF-16 or UTF-32 by their marks, else UTF-8 or Latin-1.

    Raises
    ------
    ReadingsError
        If it is no text.
    """
    encoding = next((name for mark, name in _BOMS if data.startswith(mark)), None)
    if encoding is None:
        encoding = _unmarked_utf16(data) or "utf-8"
    try:
        text = data.decode(encoding)
    except UnicodeDecodeError:
        if encoding != "utf-8":
            raise ReadingsError(_NOT_TEXT, place) from None
        # Windows-1252 is Latin-1 with typographic signs; five bytes have no sign in it.
        text = data.decode("cp1252", errors="replace")
        if text.count("\ufffd") + len(_CONTROL.findall(text)) > 0:
            raise ReadingsError(_NOT_TEXT, place) from None
    if _CONTROL.search(text):
        raise ReadingsError(_NOT_TEXT, place)
    return text.removeprefix("\ufeff")


def _unmarked_utf16(data: bytes) -> str | None:
    head = data[:4000]
    if len(head) < 4 or b"\0" not in head:
        return None
    even, odd = head[0::2].count(0), head[1::2].count(0)
    if odd > 0.4 * len(head) / 2 and even < 0.05 * len(head):
        return "utf-16-le"
    if even > 0.4 * len(head) / 2 and odd < 0.05 * len(head):
        return "utf-16-be"
    return None


def _join_quoted(lines: Sequence[str]) -> list[tuple[int, str]]:
    """Join lines that a quoted heading was broken over; a lone quote joins nothing."""
    joined: list[tuple[int, str]] = []
    index = 0
    while index < len(lines):
        text, taken = lines[index], 1
        if _left_open(text) and not is_comment(text):
            for more in range(2, 5):
                longer = "\n".join(lines[index : index + more])
                if index + more <= len(lines) and not _left_open(longer):
                    text, taken = longer, more
                    break
        joined.append((index + 1, text))
        index += taken
    return joined


def _left_open(text: str) -> bool:
    """Return whether a quote opens a cell and is not closed."""
    parts = text.split('"')
    inside = False
    index = 0
    while index < len(parts) - 1:
        if not inside:
            before = parts[index].rstrip(" ")
            inside = before[-1:] in {*_SEPARATORS, "\n"} or (index == 0 and not before)
            index += 1
        elif parts[index + 1] == "" and index + 1 < len(parts) - 1:
            index += 2
        else:
            inside = False
            index += 1
    return inside


def _splitter(lines: Sequence[str]) -> tuple[Callable[[str], tuple[Cell, ...]], bool]:
    """Return the way of splitting that makes most of the file into rows of numbers.

    The second value says whether it splits at blanks.
    """
    kept = [line for line in lines if not is_comment(line) and re.search(r"[0-9]", line)]
    step = max(1, len(kept) // _SAMPLE)
    sample = kept[::step] or [line for line in lines if not is_rule(line)][:_SAMPLE]
    # Without the sign every row is one cell, which scores nothing.
    scores = {
        sign: _score([_split(line, sign) for line in sample])
        if any(sign in line for line in sample)
        else 0.0
        for sign in _SEPARATORS
    }
    scores[_BLANKS] = _score([tuple(line.split()) for line in sample])
    best = max(scores.values())
    if best == 0:
        found = Counter(sign for line in lines for sign in line if sign in _SEPARATORS)
        chosen = found.most_common(1)[0][0] if found else _BLANKS
    else:
        chosen = next(sign for sign, score in scores.items() if score == best)
    if chosen != _BLANKS:
        return (lambda line: _split(line, chosen)), False
    widths = Counter(len(line.split()) for line in sample if _is_numbers(line.split()))
    width = widths.most_common(1)[0][0] if widths else 0
    return (lambda line: _split_blanks(line, width)), True


def _is_numbers(cells: Sequence[Cell]) -> bool:
    return sum(looks_numeric(cell) for cell in cells) >= 2


def _score(rows: Sequence[Sequence[Cell]]) -> float:
    """Return how much of the rows is numbers side by side, in rows of one width."""
    total = 0.0
    widths: Counter[int] = Counter()
    for cells in rows:
        filled = [cell for cell in cells if not isinstance(cell, str) or cell.strip()]
        count = sum(looks_numeric(cell) for cell in filled)
        if count >= 2:
            total += count * (count / len(filled)) ** 2
            widths[len(cells)] += 1
    if not widths:
        return 0.0
    return total * widths.most_common(1)[0][1] / sum(widths.values())


def _split(line: str, sign: str) -> tuple[Cell, ...]:
    if '"' not in line:
        return tuple(part.strip() for part in line.split(sign))
    try:
        reader = csv.reader([line], delimiter=sign, skipinitialspace=True, strict=True)
        return tuple(part.strip() for row in reader for part in row)
    except csv.Error:
        # A quote that closes nowhere, such as the sign for inches, is a sign like others.
        return tuple(part.strip() for part in line.split(sign))


def _split_blanks(line: str, width: int) -> tuple[Cell, ...]:
    """Split at blanks; headings of several words are kept together where that can be told."""
    text = line.strip()
    for pattern in (r"\s{2,}|\t+", r"(?<=[\])}])\s+", r"\s+"):
        parts = [part for part in re.split(pattern, text) if part]
        if len(parts) == width:
            return tuple(parts)
    return tuple(re.split(r"\s+", text)) if text else ()
