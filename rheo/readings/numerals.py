"""Numbers as files write them: decimal point or comma, thousands separators, clock times."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from functools import lru_cache

from rheo.errors import ReadingsError

Cell = str | float

_MARKS = str.maketrans(
    {"−": "-", "–": "-", "’": "'", "\u00a0": " ", "\u202f": " ", "\u2009": " ", "\ufeff": ""}
)
_EXPONENT = r"(?:[eE][+-]?[0-9]{1,4})?"
_PATTERNS = {
    decimal: re.compile(
        rf"[+-]?(?:[0-9]+|[1-9][0-9]{{0,2}}(?P<mark>[{thousands}' ])[0-9]{{3}}"
        rf"(?:(?P=mark)[0-9]{{3}})*)(?:{re.escape(decimal)}[0-9]*)?{_EXPONENT}"
        rf"|[+-]?{re.escape(decimal)}[0-9]+{_EXPONENT}"
    )
    for decimal, thousands in ((".", ","), (",", "."))
}
_NOT_FINITE = re.compile(
    r"[+-]?(?:nan|inf|infinity|infinit|1\.#\w+|#n/?a|#num!|#div/0!|#value!|#ref!|#name\?|#null!)",
    re.IGNORECASE,
)
_ONE_MARK = re.compile(rf"[+-]?([0-9]*)([.,])([0-9]*)({_EXPONENT})")
_CLOCK = re.compile(r"(?:(?:[0-9]{4}-[0-9]{2}-[0-9]{2})[T ])?([0-9]+):([0-9]{2})(?::([0-9.,]+))?")
_DATE = re.compile(r"([0-9]{4})-([0-9]{2})-([0-9]{2})[T ]")


def plain(text: str) -> str:
    """Return the text with typographic signs and spaces replaced by plain ones."""
    return text.strip() if text.isascii() else text.translate(_MARKS).strip()


def looks_numeric(cell: Cell) -> bool:
    """Return whether a cell is a number with either decimal mark, or a number gone wrong."""
    return not isinstance(cell, str) or _numeric_text(cell)


@lru_cache(maxsize=4096)
def _numeric_text(cell: str) -> bool:
    text = plain(cell)
    return bool(
        text
        and (
            _PATTERNS["."].fullmatch(text)
            or _PATTERNS[","].fullmatch(text)
            or _NOT_FINITE.fullmatch(text)
        )
    )


def parse_number(cell: Cell, decimal: str) -> float | None:
    """Return the number in a cell, NaN or infinity if it says so, None if it is no number."""
    if not isinstance(cell, str):
        return float(cell)
    text = plain(cell)
    if _PATTERNS[decimal].fullmatch(text):
        thousands = "," if decimal == "." else "."
        for sign in (thousands, "'", " "):
            text = text.replace(sign, "")
        return float(text.replace(",", "."))
    if _NOT_FINITE.fullmatch(text):
        return float("inf") if "inf" in text.lower() else float("nan")
    return None


def parse_clock(cell: Cell) -> float | None:
    """Return the seconds in a clock time such as ``1:02:03`` or ``02:03``, else None.

    A date before it is counted in days, so that readings that run past midnight stay in order.
    """
    if not isinstance(cell, str):
        return None
    text = plain(cell)
    match = _CLOCK.fullmatch(text)
    if match is None:
        return None
    first, second, third = int(match[1][:9]), int(match[2]), match[3]
    if third is None:
        seconds = 60.0 * first + second
    else:
        try:
            seconds = 3600.0 * first + 60.0 * second + float(third.replace(",", "."))
        except ValueError:
            return None
    date = _DATE.match(text)
    if date is None:
        return seconds
    import datetime

    try:
        day = datetime.date(int(date[1]), int(date[2]), int(date[3])).toordinal()
    except ValueError:
        return None
    if third is None:
        seconds *= 60.0
    return 86400.0 * day + seconds


@dataclass(frozen=True)
class DecimalMark:
    """Which sign is the decimal mark in a file.

    Parameters
    ----------
    mark : str
        ``.`` or ``,``.
    assumed : bool
        Whether the numbers could be read otherwise: three digits follow every point.
    """

    mark: str
    assumed: bool = False


def find_decimal_mark(
    cells: Iterable[tuple[Cell, str]], place: str, others: Iterable[tuple[Cell, str]] = ()
) -> DecimalMark:
    """Find the decimal mark from the number cells of a file.

    Parameters
    ----------
    cells : iterable of (cell, str)
        Cells with the place of each.
    place : str
        The file, for the sentence of an error.
    others : iterable of (cell, str)
        Cells that are looked at if those do not tell.

    Raises
    ------
    ReadingsError
        If both marks are used, or if commas could be either decimal marks or thousands
        separators.
    """
    proof, unsure = _evidence(cells)
    if not proof:
        more = _evidence(others)[0]
        proof = more if len(more) == 1 else proof
    if len(proof) == 2:
        (point, first), (comma, second) = proof["."], proof[","]
        raise ReadingsError(
            f"'{point}' has a decimal point ({first}) and '{comma}' a decimal comma ({second}); "
            "use one or the other",
            place,
        )
    if proof:
        return DecimalMark(next(iter(proof)))
    if "," in unsure:
        raise ReadingsError(
            f"'{unsure[',']}' could have a decimal comma or a thousands separator, and no other "
            "number tells which; say decimal=',' or decimal='.'",
            place,
        )
    return DecimalMark(".", assumed="." in unsure)


def _evidence(
    cells: Iterable[tuple[Cell, str]],
) -> tuple[dict[str, tuple[str, str]], dict[str, str]]:
    """Return the first number that proves each mark, and the first that could have it."""
    proof: dict[str, tuple[str, str]] = {}
    unsure: dict[str, str] = {}
    for cell, where in cells:
        if not isinstance(cell, str):
            continue
        mark, sure = _mark_of(plain(cell))
        if sure:
            proof.setdefault(mark, (cell.strip(), where))
        elif mark:
            unsure.setdefault(mark, cell.strip())
    return proof, unsure


def _mark_of(text: str) -> tuple[str, bool]:
    """Return the decimal mark that a number has, and whether it could be no other."""
    if "," not in text and "." not in text:
        return "", False
    as_point = bool(_PATTERNS["."].fullmatch(text))
    as_comma = bool(_PATTERNS[","].fullmatch(text))
    if as_point and as_comma:
        match = _ONE_MARK.fullmatch(text)
        return (match[2] if match else ""), False
    if as_point:
        return ".", True
    if as_comma:
        return ",", True
    return "", False
