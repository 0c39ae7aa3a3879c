"""Numbers as text, with the digits that their doubt allows: ``41 ± 5``, not ``41.237``."""

from __future__ import annotations

import math
from decimal import ROUND_HALF_EVEN, Decimal

from rheo.errors import in_groups

MINUS = "\u2212"
NOT_KNOWN = "not known"
_SUPERSCRIPTS = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")
# Below and from these sizes a number is written with a power of ten.
_PLAIN_FROM = 1e-3
_PLAIN_TO = 1e7
# Nothing in this trade is known better; a smaller doubt is not that of the whole calculation.
MOST_DIGITS = 4
# An interval whose sides differ by less than this share of the wider one is written with ±.
_EVEN_ENOUGH = 0.25


def _exponent(value: float) -> int:
    """Power of ten of the leading digit."""
    return Decimal(repr(float(value))).adjusted()


def _rounded(value: float, place: int) -> Decimal:
    """Value rounded to the power of ten `place`."""
    exact = Decimal(repr(float(value)))
    if exact.adjusted() - place > 25:
        return exact
    return exact.quantize(Decimal(1).scaleb(place), rounding=ROUND_HALF_EVEN)


def _plain(value: Decimal, place: int) -> str:
    """Write a rounded number without an exponent; digits in threes from 10 000 on."""
    text = f"{abs(value):.{max(-place, 0)}f}"
    whole, _, part = text.partition(".")
    sign = MINUS if value < 0 and Decimal(text) != 0 else ""
    return sign + in_groups(whole) + (f".{part}" if part else "")


def power_of_ten(exponent: int) -> str:
    """Return ``10⁻³`` for -3."""
    return "10" + str(exponent).translate(_SUPERSCRIPTS)


def number(value: float, digits: int = 3) -> str:
    """Write a number with so many significant digits.

    Parameters
    ----------
    value : float
        Any number; one that is not finite is written as ``not known``.
    digits : int
        Significant digits, 1 or more.

    Returns
    -------
    str
        Such as ``41.2``, ``45 400``, ``3.20 × 10⁻⁵``.
    """
    if not math.isfinite(value):
        return NOT_KNOWN
    if value == 0:
        return "0"
    place = _exponent(value) - digits + 1
    rounded = _rounded(value, place)
    place = rounded.adjusted() - digits + 1
    if _PLAIN_FROM <= abs(value) < _PLAIN_TO:
        return _plain(rounded, place)
    power = rounded.adjusted()
    return f"{_plain(rounded.scaleb(-power), place - power)} × {power_of_ten(power)}"


def exact(value: float) -> str:
    """Write a number that the user gave: up to 6 digits, no zeros at the end."""
    if not math.isfinite(value):
        return NOT_KNOWN
    if value == 0:
        return "0"
    digits = f"{abs(value):.5e}".split("e")[0].replace(".", "").rstrip("0")
    return number(value, max(len(digits), 1))


def doubt_place(doubt: float) -> int:
    """Return the power of ten to which a number with this doubt is written.

    One digit of the doubt is kept; two when it begins with 1, where one digit would be coarse.
    """
    place = _exponent(doubt)
    leading = _rounded(doubt, place)
    place = leading.adjusted()
    two = _rounded(doubt, place - 1)
    return place - 1 if two.scaleb(-two.adjusted()) < 2 else place


def _capped(place: int, value: float) -> int:
    """Return a place that shows no more than `MOST_DIGITS` digits of a value."""
    return max(place, _exponent(value) - MOST_DIGITS + 1) if value else place


def with_doubt(value: float, doubt: float, unit: str = "") -> str:
    """Write a number with its doubt, both to the digits that the doubt allows.

    Parameters
    ----------
    value : float
        The number.
    doubt : float
        Half the width of its interval; 0 or not finite means that it is not known, and the number
        is then written alone with three digits.
    unit : str
        Written once, after the doubt.

    Returns
    -------
    str
        Such as ``41 ± 5 kPa``.
    """
    after = f" {unit}" if unit else ""
    if not math.isfinite(value):
        return NOT_KNOWN
    if not math.isfinite(doubt) or doubt <= 0:
        return number(value) + after
    place = _capped(doubt_place(doubt), value)
    if _rounded(doubt, place) == 0:
        return number(value, MOST_DIGITS) + after
    size = max(abs(value), doubt)
    power = 0 if _PLAIN_FROM <= size < _PLAIN_TO else _exponent(size)
    middle = _plain(_rounded(value, place).scaleb(-power), place - power)
    half = _plain(_rounded(doubt, place).scaleb(-power), place - power)
    if power:
        return f"({middle} ± {half}) × {power_of_ten(power)}{after}"
    return f"{middle} ± {half}{after}"


def with_interval(value: float, low: float, high: float, unit: str = "") -> str:
    """Write a number with its interval: ``41 ± 5 kPa``, or ``41 kPa (38 to 52 kPa)`` when uneven.

    Parameters
    ----------
    value, low, high : float
        The number and the ends of its interval.
    unit : str
        The unit of all three.

    Returns
    -------
    str
        Written to the digits that half the width of the interval allows.
    """
    half = (high - low) / 2
    if not math.isfinite(half) or half <= 0 or not math.isfinite(value):
        return with_doubt(value, math.nan, unit)
    below, above = value - low, high - value
    if min(below, above) > 0 and abs(above - below) <= _EVEN_ENOUGH * max(above, below):
        return with_doubt(value, half, unit)
    after = f" {unit}" if unit else ""
    if not _PLAIN_FROM <= max(abs(value), half) < _PLAIN_TO:
        return f"{number(value)}{after} ({number(low)} to {number(high)}{after})"
    place = _capped(doubt_place(half), value)
    if _rounded(low, place) == _rounded(high, place):
        return number(value, MOST_DIGITS) + after
    texts = [_plain(_rounded(end, place), place) for end in (value, low, high)]
    return f"{texts[0]}{after} ({texts[1]} to {texts[2]}{after})"
