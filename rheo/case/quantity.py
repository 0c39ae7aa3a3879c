"""Quantities of a case: an SI number that remembers how the user wrote it."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from typing import Any

from pydantic_core import core_schema

from rheo.errors import CaseError
from rheo.readings.solids import read_share
from rheo.units import parse_quantity

_LEADING_NUMBER = re.compile(r"^\s*[-+]?[\d. ']*(?:[eE][-+]?\d+)?")

# No quantity of a plant is larger, or smaller and not 0; products of those within stay numbers.
FARTHEST = 1e30


class Quantity(float):
    """An SI number that keeps the text from which it was read, so that a file comes back as it was.

    Parameters
    ----------
    value : float
        The value in the SI unit of its field.
    written : str or float, optional
        What the user wrote, such as ``50 mm``; the SI value and unit are written when absent.
    """

    written: str | float | None

    def __new__(cls, value: float, written: str | float | None = None) -> Quantity:
        """Make the number; `written` is kept beside it and takes no part in arithmetic."""
        made = super().__new__(cls, value)
        made.written = written
        return made


@dataclass(frozen=True)
class Unit:
    """The SI unit of a field of the case and the range in which its value makes sense.

    Parameters
    ----------
    si : str
        Unit inside the program, and of a number written without a unit.
    above, at_least, at_most : float, optional
        Range in that unit; `above` leaves its end out.
    example : str
        A value that would be accepted, for the message.
    """

    si: str
    above: float | None = None
    at_least: float | None = None
    at_most: float | None = None
    example: str = ""

    def read(self, value: Any) -> Quantity:
        """Return the quantity of a text or number.

        Raises
        ------
        CaseError, UnitError
            If it is no quantity of this kind or lies outside the range.
        """
        if isinstance(value, Quantity):
            quantity = value
        elif isinstance(value, str):
            quantity = Quantity(parse_quantity(value, self.si), value)
        elif isinstance(value, int | float) and not isinstance(value, bool):
            quantity = Quantity(_as_float(value), value)
        else:
            raise CaseError(f"found {describe(value)}; write a number with its unit{self._like()}")
        if not math.isfinite(quantity):
            raise CaseError(f"found {float(quantity)}; it must be a finite number{self._like()}")
        if quantity != 0.0 and not 1.0 / FARTHEST <= abs(quantity) <= FARTHEST:
            raise CaseError(
                f"found {self.show(quantity)}; its size in SI must lie between "
                f"{1.0 / FARTHEST:g} and {FARTHEST:g}{self._like()}"
            )
        if not self._holds(quantity):
            raise CaseError(
                f"found {self.show(quantity)}; it must be {self.allowed()}{self._like()}"
            )
        return quantity

    def show(self, quantity: Quantity) -> str:
        """Return a quantity as the user wrote it, or in SI."""
        if isinstance(quantity.written, str):
            return f"'{quantity.written[:60]}'"
        unit = "" if self.si == "dimensionless" else f" {_written(self.si)}"
        return f"{float(quantity):g}{unit}"

    def allowed(self) -> str:
        """Return the range in words, in the SI unit."""
        unit = "" if self.si == "dimensionless" else f" {_written(self.si)}"
        low = (
            f"above {self.above:g}{unit}"
            if self.above is not None
            else f"{self.at_least:g}{unit} or more"
            if self.at_least is not None
            else ""
        )
        high = f"at most {self.at_most:g}{unit}" if self.at_most is not None else ""
        return " and ".join(part for part in (low, high) if part)

    def write(self, value: float) -> str | float:
        """Return what stands in the file for a value."""
        written = getattr(value, "written", None)
        if written is not None:
            return written
        return float(value) if self.si == "dimensionless" else f"{float(value)!r} {self.si}"

    def _like(self) -> str:
        return f", such as {self.example}" if self.example else ""

    def _holds(self, value: float) -> bool:
        return (
            (self.above is None or value > self.above)
            and (self.at_least is None or value >= self.at_least)
            and (self.at_most is None or value <= self.at_most)
        )

    def __get_pydantic_core_schema__(self, _source: Any, _handler: Any) -> core_schema.CoreSchema:
        """Tell pydantic how to read and write the field."""
        return core_schema.no_info_plain_validator_function(
            self.read,
            serialization=core_schema.plain_serializer_function_ser_schema(self.write),
        )


def _written(unit: str) -> str:
    """Return a unit as people write it: m3/s for m^3/s."""
    return unit.replace("^", "").replace("*", ".")


def _as_float(value: float) -> float:
    try:
        return float(value)
    except OverflowError:
        return math.inf


def describe(value: Any) -> str:
    """Return a value of a file in a few words for a message."""
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, str):
        return f"'{value[:60]}'"
    if isinstance(value, dict):
        return "a table"
    if isinstance(value, list | tuple):
        return "a list"
    return str(value)[:60]


@dataclass(frozen=True)
class StepUnit(Unit):
    """A difference of temperature [K]: the zero of the scale plays no part in it."""

    def read(self, value: Any) -> Quantity:
        """Return the quantity of a text or number, such as ``2 °C`` or ``2 K``."""
        if isinstance(value, str) and not isinstance(value, Quantity):
            step = parse_quantity(value, "K") - parse_quantity(_LEADING_NUMBER.sub("0", value), "K")
            quantity = super().read(Quantity(round(step, 9), value))
            return Quantity(quantity, value)
        return super().read(value)


@dataclass(frozen=True)
class SolidsUnit(Unit):
    """A share of solids [-], by volume or by mass as its unit says: ``25 %``, ``46 wt%``."""

    def read(self, value: Any) -> Quantity:
        """Return the quantity of a text or number."""
        if isinstance(value, str) and not isinstance(value, Quantity):
            return super().read(Quantity(read_share(value)[0], value))
        return super().read(value)
