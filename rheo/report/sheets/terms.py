"""Spreadsheet formulas that carry their own result.

A term is the text of a formula and its value, made in one stroke: ``4 * density * flow`` of two
cells writes ``4*B2*B3`` and works it out. So a stored result can never differ from its formula.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

_SUM, _PRODUCT, _POWER, _ATOM = 1, 2, 3, 4


@dataclass(frozen=True)
class Term:
    """Part of a formula.

    Parameters
    ----------
    text : str
        As a spreadsheet reads it, without the leading ``=``.
    value : float
        What it comes to; NaN where a spreadsheet would show an error.
    rank : int
        How tightly its outermost operation binds.
    """

    text: str
    value: float
    rank: int = _ATOM

    def __add__(self, other: Term | float) -> Term:
        return _join(self, "+", as_term(other), _SUM, self.value + as_term(other).value)

    def __radd__(self, other: float) -> Term:
        return as_term(other) + self

    def __sub__(self, other: Term | float) -> Term:
        return _join(self, "-", as_term(other), _SUM, self.value - as_term(other).value)

    def __rsub__(self, other: float) -> Term:
        return as_term(other) - self

    def __mul__(self, other: Term | float) -> Term:
        return _join(self, "*", as_term(other), _PRODUCT, self.value * as_term(other).value)

    def __rmul__(self, other: float) -> Term:
        return as_term(other) * self

    def __truediv__(self, other: Term | float) -> Term:
        below = as_term(other)
        value = self.value / below.value if below.value else math.nan
        return _join(self, "/", below, _PRODUCT, value)

    def __rtruediv__(self, other: float) -> Term:
        return as_term(other) / self

    def __pow__(self, other: Term | float) -> Term:
        exponent = as_term(other)
        return _join(self, "^", exponent, _POWER, _power(self.value, exponent.value))


def _power(base: float, exponent: float) -> float:
    try:
        value = base**exponent
    except (OverflowError, ZeroDivisionError):
        return math.nan
    return value if isinstance(value, float | int) else math.nan


def _join(left: Term, sign: str, right: Term, rank: int, value: float) -> Term:
    # Spreadsheets read powers from the left and a sign before them first: both get brackets.
    a = (
        f"({left.text})"
        if left.rank < rank or (rank == _POWER and left.rank < _ATOM)
        else left.text
    )
    b = f"({right.text})" if right.rank <= rank else right.text
    return Term(f"{a}{sign}{b}", value, rank)


def as_term(value: Term | float) -> Term:
    """Return a number as a term; negative numbers bind like a sum."""
    if isinstance(value, Term):
        return value
    return Term(repr(float(value)).removesuffix(".0"), float(value), _SUM if value < 0 else _ATOM)


PI = Term("PI()", math.pi)


def _function(name: str, value: float, *arguments: Term) -> Term:
    return Term(f"{name}({','.join(one.text for one in arguments)})", value)


def sqrt(term: Term) -> Term:
    """Return the square root."""
    return _function("SQRT", math.sqrt(term.value) if term.value >= 0 else math.nan, term)


def exp(term: Term) -> Term:
    """Return e to a power."""
    return _function("EXP", math.exp(term.value) if term.value < 700 else math.nan, term)


def ln(term: Term) -> Term:
    """Return the natural logarithm."""
    return _function("LN", math.log(term.value) if term.value > 0 else math.nan, term)


def not_negative(term: Term) -> Term:
    """Return a value, or 0 where it is negative."""
    return _function("MAX", max(term.value, 0.0), term, as_term(0.0))


def root_mean_square(cells: Sequence[Term]) -> Term:
    """Return the root mean square of cells that lie one below the other."""
    value = math.sqrt(math.fsum(cell.value**2 for cell in cells) / len(cells))
    place = f"{cells[0].text}:{cells[-1].text}"
    return Term(f"SQRT(SUMSQ({place})/COUNT({place}))", value)


def total(cells: Sequence[Term]) -> Term:
    """Return the sum of cells that lie one below the other: ``SUM(first:last)``."""
    if not cells:
        return as_term(0.0)
    value = math.fsum(cell.value for cell in cells)
    return Term(f"SUM({cells[0].text}:{cells[-1].text})", value)
