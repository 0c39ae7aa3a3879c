"""The one family of errors and the one kind of advice that users see."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from decimal import Decimal
from typing import Any

# A number as Python's format g writes it; not in a word, and not in quotes, where it is the user's.
_EXPONENT = re.compile(r"(?<![\w.'])(\d(?:\.\d+)?)e([-+]?\d{1,3})(?!\w|\.\d|')")
_RAISED = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")
# A comma is a decimal mark to half of the readers.
GROUP = "\u202f"
# Beyond these powers of ten digits alone are hard to count.
_LEAST_POWER, _LARGEST_POWER = -4, 6


def without_exponents(sentence: str) -> str:
    """Return a sentence with numbers such as 1.33e+03 written as one reads them, 1330.

    Parameters
    ----------
    sentence : str
        Very large and very small numbers become such as 1.7 × 10⁻⁵; what stands in quotes stays.
    """
    return _EXPONENT.sub(_written_out, sentence)


def in_groups(digits: str) -> str:
    """Return a number with its digits in threes from 10 000 on, by a space that does not break.

    Parameters
    ----------
    digits : str
        As Python writes it without an exponent.
    """
    whole = digits.partition(".")[0].lstrip("-")
    return f"{Decimal(digits):,f}".replace(",", GROUP) if len(whole) > 4 else digits


def in_percent(share: float, decimals: int = 0) -> str:
    """Return a share [-] in percent, with so many decimals."""
    return f"{100.0 * share:.{decimals}f} %"


def _written_out(match: re.Match[str]) -> str:
    power = int(match[2])
    if not _LEAST_POWER <= power <= _LARGEST_POWER:
        ten = f"10{str(power).translate(_RAISED)}"
        return ten if match[1] == "1" else f"{match[1]} × {ten}"
    digits = f"{Decimal(match[0]):f}"
    return in_groups(digits)


class InputError(ValueError):
    """Something that the user gave and can put right.

    Parameters
    ----------
    sentence : str
        One plain sentence: what was found and what is allowed.
    place : str, optional
        Where it was found: a file and line, a key, an argument. It is put before the sentence.
    """

    def __init__(self, sentence: str, place: str = "") -> None:
        self.sentence = without_exponents(sentence)
        self.place = place
        super().__init__(f"{place}: {self.sentence}" if place else self.sentence)


class UnitError(InputError):
    """A unit that is not known, or that measures something else."""


class ReadingsError(InputError):
    """A readings file that cannot be understood."""


class CaseError(InputError):
    """A case file that cannot be understood."""


class FitError(InputError):
    """Data from which no model can be fitted."""


@dataclass(frozen=True)
class Caution:
    """Advice that travels with a result: data, not a print.

    Parameters
    ----------
    code : str
        A short stable word, such as ``outside-measured-range``.
    sentence : str
        What was found, with its numbers.
    advice : str
        What to do about it.
    place : str
        What it refers to: a part of the line, a parameter, a column.
    points : tuple of int
        Indices of the readings concerned, counted from 0; empty when it concerns no reading.
    """

    code: str
    sentence: str
    advice: str
    place: str = ""
    points: tuple[int, ...] = ()

    def __post_init__(self) -> None:
        for name in ("sentence", "advice"):
            object.__setattr__(self, name, without_exponents(getattr(self, name)))

    def as_dict(self) -> dict[str, Any]:
        """Return the Caution as plain data for JSON."""
        return {
            "code": self.code,
            "sentence": self.sentence,
            "advice": self.advice,
            "place": self.place,
            "points": list(self.points),
        }

    def __str__(self) -> str:
        where = f"{self.place}: " if self.place else ""
        return f"{where}{self.sentence} {self.advice}"


def merge_cautions(*groups: Iterable[Caution]) -> tuple[Caution, ...]:
    """Join groups of Cautions, keeping the order and dropping exact repeats."""
    return tuple(dict.fromkeys(caution for group in groups for caution in group))
