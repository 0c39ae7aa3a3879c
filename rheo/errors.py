"""The one family of errors and the one kind of advice that users see."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any


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
        self.sentence = sentence
        self.place = place
        super().__init__(f"{place}: {sentence}" if place else sentence)


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
