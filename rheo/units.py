"""Units at the border: text and numbers in, SI floats and arrays out.

Users write units as they speak: ``50 mm``, ``2.5 bar``, ``5 m3/h``, ``1.2 cP``, ``40 °C``,
``dyn/cm2``, ``lb/100ft2``. Pint parses them once; inside the program everything is SI.
"""

from __future__ import annotations

import math
import numbers
import pickle
import re
import threading
import tokenize
from functools import cache
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import UnitError

# Trade spellings that Pint would not read, or would read as something else: first those in which
# capital letters count, then those in which they do not.
_EXACT_SPELLINGS = {
    "Pas": "Pa*s",
    "mPas": "mPa*s",
    "kPas": "kPa*s",
    "Nm": "N*m",
    "mNm": "mN*m",
    "uNm": "uN*m",
    "nNm": "nN*m",
    "kNm": "kN*m",
    "J/kgK": "J/(kg*K)",
    "kJ/kgK": "kJ/(kg*K)",
    "'": "foot",
    "′": "foot",
    "″": "inch",
}
_SPELLINGS = {
    "lb/100ft2": "pound_per_100_square_feet",
    "lbf/100ft2": "pound_per_100_square_feet",
    "gpm": "gallon/minute",
    "usgpm": "gallon/minute",
    "lpm": "liter/minute",
    "dyn-cm": "dyn*cm",
    "dyne-cm": "dyn*cm",
    "dyne/cm2": "dyn/cm**2",
    "degc": "degC",
    "°c": "degC",
    "℃": "degC",
    "deg c": "degC",
    "celsius": "degC",
    "c": "degC",
    "degf": "degF",
    "°f": "degF",
    "℉": "degF",
    "deg f": "degF",
    "f": "degF",
    "k": "kelvin",
    "%": "percent",
    "rpm": "revolution/minute",
    "r/min": "revolution/minute",
    "rev/min": "revolution/minute",
    "1/min": "revolution/minute",
    "min-1": "revolution/minute",
    "min^-1": "revolution/minute",
    "min⁻¹": "revolution/minute",
    "rps": "revolution/second",
    "rev/s": "revolution/second",
    "°": "degree",
    "deg": "degree",
    "in": "inch",
    '"': "inch",
    "poise": "poise",
    "p": "poise",
    "s-1": "1/s",
    "s^-1": "1/s",
    "s⁻¹": "1/s",
    "sec-1": "1/s",
    "1/sec": "1/s",
    "/s": "1/s",
    "barg": "bar",
    "psig": "psi",
    "psid": "psi",
    "ppg": "pound/gallon",
    "m wc": "meter_H2O",
    "mwc": "meter_H2O",
    "": "dimensionless",
    "-": "dimensionless",
}
_SUPERSCRIPTS = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")
# Thousands may be set apart by a space or an apostrophe, in threes only: "38 1/s" is 38.
_NUMBER = re.compile(
    r"^\s*([-+]?(?:\d{1,3}(?:[ ']\d{3})+(?!\d)(?:\.\d*)?|\d+(?:\.\d*)?|\.\d+)(?:[eE][-+]?\d+)?)"
    r"\s*(.*?)\s*$"
)
# A speed has the dimension of a shear rate, and is none.
_TURNS = re.compile(r"rpm|rps|rev|turn|\bu/|tr/|upm|hz|hertz|rad|deg|°|cycle|cps", re.IGNORECASE)
# Of a speed these are turns a minute; of a shear rate they are not.
_PER_MINUTE = {"1/min", "/min", "min-1", "min^-1", "min⁻¹", "1/minute"}
_SAME_SIGNS = str.maketrans({"−": "-", "’": "'", "\u00a0": " ", "\u2009": " ", "\u202f": " "})
# A unit that is longer than this, or holds other signs, is no unit; Pint is not asked.
# A power of a number could take for ever to work out and is never part of a unit.
_POWER_OF_A_NUMBER = re.compile(r"\d\s*\)*\s*\*\*|\d{4}")
_PLAUSIBLE_UNIT = re.compile(r"^[\w\s*/^().·⋅%°µμΩ℃℉\"+-]{1,60}$")
# A slip such as "m3/hh" would be cubic metres in a hundred hours.
_MULTIPLE_OF_TIME = re.compile(r"(?<![a-z_])[a-z]+(hour|minute|day|week|month|year)(?![a-z_])")


# Pint's cache on disk is not written in one go: another process, or one that was killed, can leave
# half a file. Then the units are parsed anew, which takes half a second.
_HALF_A_CACHE = (
    *(OSError, ImportError, EOFError, ValueError, TypeError, AttributeError, LookupError),
    pickle.UnpicklingError,
)
_one_at_a_time = threading.Lock()


def _registry() -> Any:
    # Sessions of the page begin at the same moment in threads of one process.
    with _one_at_a_time:
        return _made_registry()


@cache
def _made_registry() -> Any:
    import pint

    try:
        registry: Any = pint.UnitRegistry(cache_folder=":auto:")
    except _HALF_A_CACHE:
        registry = pint.UnitRegistry()
    registry.define("meter_H2O = 9806.65 * pascal")
    registry.define("pound_per_100_square_feet = lbf / (100 * ft**2)")
    return registry


def _spelling(unit: str) -> str:
    text = unit.strip().translate(_SUPERSCRIPTS).replace("µ", "u").replace("μ", "u")
    while text and text[0] + text[-1] in {"[]", "()"}:
        text = text[1:-1].strip()
    if text in _EXACT_SPELLINGS:
        return _EXACT_SPELLINGS[text]
    # Degrees, not coulombs: capital letters that Pint would read otherwise stand in the table.
    known = _SPELLINGS.get(re.sub(r"\s*/\s*|100\s+ft", _tight, text.lower()).replace("^", ""))
    if known is None:
        known = _SPELLINGS.get(text.lower())
    if known is not None:
        return known
    text = text.replace("·", "*").replace("⋅", "*")
    text = re.sub(r"(?<=[A-Za-z])[.\s]+(?=[A-Za-z])", "*", text)
    text = re.sub(r"(?<![A-Za-z0-9])(mm|cm|dm|m|ft|in|inch)([23])(?![0-9])", r"\1**\2", text)
    text = re.sub(r"(?<=[0-9])[.\s]+(?=[A-Za-z])", "*", text)
    text = re.sub(r"(?<=[A-Za-z])-([1-9])", r"**-\1", text)
    return text.replace("^", "**")


def _shown(value: object) -> str:
    """Return what a user wrote, short and on one line, for an error sentence."""
    return " ".join(str(value).split())[:60]


def _tight(match: re.Match[str]) -> str:
    return re.sub(r"\s+", "", match[0])


@cache
def _factor_and_offset(unit: str, target: str, place: str) -> tuple[float, float]:
    """Return factor and offset with ``SI = factor * value + offset``."""
    import pint

    registry = _registry()
    wanted = registry.parse_units(_spelling(target))
    parsed = None
    text = _spelling(unit)
    if _PLAUSIBLE_UNIT.match(text) and not _POWER_OF_A_NUMBER.search(text):
        try:
            parsed = registry.parse_units(text)
        except (
            pint.errors.PintError,
            tokenize.TokenError,
            ArithmeticError,
            AssertionError,
            AttributeError,
            LookupError,
            SyntaxError,
            TypeError,
            ValueError,
        ):
            parsed = None
    if parsed is None or _MULTIPLE_OF_TIME.search(str(parsed)):
        raise UnitError(
            f"unknown unit '{_shown(unit)}'; use one such as {_examples(target)}", place
        )
    if parsed.dimensionality != wanted.dimensionality:
        raise UnitError(
            f"unit '{_shown(unit)}' does not measure what is wanted here; "
            f"use one such as {_examples(target)}",
            place,
        )
    zero = registry.Quantity(0.0, parsed).to(wanted).magnitude
    hundred = registry.Quantity(100.0, parsed).to(wanted).magnitude
    return (hundred - zero) / 100.0, zero


_EXAMPLES = {
    "m": "mm, m, in",
    "m/s": "m/s, ft/s",
    "m^3/s": "m3/h, L/min, gpm",
    "Pa": "Pa, kPa, bar, psi, dyn/cm2, lb/100ft2",
    "Pa.s": "Pa.s, mPa.s, cP",
    "1/s": "1/s",
    "rad/s": "rpm, rad/s",
    "N*m": "N.m, mN.m, dyn.cm",
    "kg/m^3": "kg/m3, g/cm3, lb/ft3",
    "K": "°C, K, °F",
    "s": "s, min, h",
    "W": "kW, W, hp",
}


def _examples(target: str) -> str:
    return _EXAMPLES.get(target, target)


def to_si(values: ArrayLike, unit: str, target: str, place: str = "") -> NDArray[np.float64]:
    """Convert numbers in a unit to SI.

    Parameters
    ----------
    values : array_like
        Numbers in `unit`.
    unit : str
        As a user writes it.
    target : str
        The SI unit wanted, such as ``Pa`` or ``m^3/s``.
    place : str
        What an error refers to.

    Returns
    -------
    array
        The values in `target`.

    Raises
    ------
    UnitError
        If the unit is unknown or measures something else; the sentence gives units that do.
    """
    factor, offset = _factor_and_offset(str(unit), target, place)
    return np.asarray(values, dtype=float) * factor + offset


def from_si(values: ArrayLike, unit: str, target: str, place: str = "") -> NDArray[np.float64]:
    """Convert SI numbers, whose unit is `unit`, to the unit `target` for display."""
    factor, offset = _factor_and_offset(str(target), unit, place)
    return (np.asarray(values, dtype=float) - offset) / factor


def is_unit(unit: str, target: str) -> bool:
    """Return whether a text is a unit of the same kind as the SI unit `target`."""
    try:
        _factor_and_offset(str(unit), target, "")
    except UnitError:
        return False
    return True


def parse_quantity(
    value: str | float, target: str, place: str = "", default_unit: str | None = None
) -> float:
    """Read a number with a unit, such as ``50 mm`` or ``2.5 bar``, into SI.

    Parameters
    ----------
    value : str or number
        A number alone is read in `default_unit`, or in `target` when that is not given.
    target : str
        The SI unit wanted.
    place : str
        What an error refers to: a key, an option.
    default_unit : str, optional
        The unit that the field documents for a number without one.

    Returns
    -------
    float
        The value in `target`.

    Raises
    ------
    UnitError
        If it is not a finite number, or its unit is unknown or of another kind.
    """
    text_unit = default_unit or target
    if isinstance(value, numbers.Real) and not isinstance(value, bool):
        number, unit = float(value), text_unit
    else:
        written = value.translate(_SAME_SIGNS) if isinstance(value, str) else ""
        match = _NUMBER.match(written)
        if match is None:
            raise UnitError(
                f"'{_shown(value)}' is not a number with a unit; "
                f"write it like '1.5 {_examples(target).split(',')[0]}'",
                place,
            )
        if match[2].startswith(","):
            raise UnitError(
                f"'{_shown(value)}' has a comma; write decimals with a point and thousands "
                "without a separator",
                place,
            )
        number = float(match[1].replace(" ", "").replace("'", ""))
        unit = match[2] or text_unit
    if target == "1/s" and _TURNS.search(unit):
        raise UnitError(
            f"unit '{_shown(unit)}' counts turns, which are no shear rate; use 1/s or 1/min", place
        )
    if target == "1/s" and unit.replace(" ", "").lower() in _PER_MINUTE:
        unit = "1/minute"
    result = float(to_si(number, unit, target, place))
    if not math.isfinite(result):
        raise UnitError(f"'{_shown(value)}' is not a finite number", place)
    return result
