"""What the heading of a column means: a quantity and a unit."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Iterator
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import UnitError
from rheo.readings.quantities import QUANTITIES, Quantity
from rheo.units import to_si

LONGEST_HEADING = 120

# Words that say how a quantity was got at, not which it is; the later, the less wanted when
# two columns hold the same quantity.
_SIDE_WORDS: tuple[frozenset[str], ...] = (
    frozenset({"value", "the"}),
    frozenset(
        (
            *("measured", "actual", "mean", "average", "avg", "real", "sample", "corrected"),
            *("raw", "applied", "gemessen", "ist", "mittlere", "mittelwert", "mesure", "mesuree"),
            *("moyenne", "medida", "medido", "media", "promedio", "data"),
        )
    ),
    frozenset(("bath", "set", "target", "nominal", "apparent", "soll", "consigne", "nominale")),
)
_ALL_SIDE_WORDS = frozenset().union(*_SIDE_WORDS)
_BRACKETED = re.compile(r"(.*?)(?:\[([^\[\]]*)\]|\(([^()]*)\)|\{([^{}]*)\}|<([^<>]*)>)\s*")
_LINKS = re.compile(r"\s+in\s+|\s*,\s*|\s*/\s*|\s*:\s*|\s+|_|\s+-\s+")
_BARE = frozenset({"", "-", "–", "--"})


@dataclass(frozen=True)
class Meaning:
    """What a heading may mean.

    Parameters
    ----------
    quantity : Quantity
        Which quantity.
    unit : str
        Unit as written or as the word says it; empty when neither does.
    rank : int
        0 for the plain name; the higher, the less it is wanted beside another such column.
    problem : str
        Why its unit cannot be used; empty when it can.
    """

    quantity: Quantity
    unit: str
    rank: int
    problem: str = ""


@lru_cache(maxsize=4096)
def meaning(heading: str, unit_below: str = "") -> Meaning | None:
    """Return what a heading means, None when it names no quantity or could name several.

    Parameters
    ----------
    heading : str
        As it stands in the file.
    unit_below : str
        Unit in a row of its own under the heading; empty for none.
    """
    if len(heading) > LONGEST_HEADING:
        return None
    text = re.sub(r"\s+", " ", heading).strip().lstrip("#").strip()
    problem = None
    for name, unit, marked in _splits(text):
        found = _named(name)
        if not found:
            continue
        good = _fitting(found, unit or unit_below)
        if good is not None:
            return good
        if marked and problem is None:
            problem = _with_problem(found, unit or unit_below)
    return problem


def _splits(text: str) -> Iterator[tuple[str, str, bool]]:
    """Yield (name, unit, whether the unit is marked as one), the likeliest first."""
    match = _BRACKETED.fullmatch(text)
    if match:
        inside = next(part for part in match.groups()[1:] if part is not None)
        side = set(_folded(inside).split())
        if side and side <= _ALL_SIDE_WORDS:
            yield f"{match[1]} {inside}", "", True
        else:
            yield match[1], inside, True
        return
    yield text, "", True
    for link in _LINKS.finditer(text):
        if link.start() and link.end() < len(text):
            yield text[: link.start()], text[link.end() :], False


@lru_cache(maxsize=4096)
def _folded(name: str) -> str:
    """Return a name in small letters, without accents and joining signs."""
    text = name.replace("γ̇", " gamma dot ").replace("ɣ̇", " gamma dot ").replace("∆", "δ")
    text = unicodedata.normalize("NFKD", text.casefold())
    text = "".join(sign for sign in text if not unicodedata.combining(sign))
    return re.sub(r"[\s_.:*=\"'()-]+", " ", text).strip()


@dataclass(frozen=True)
class _Named:
    quantity: Quantity
    unit: str
    rank: int
    is_symbol: bool


@lru_cache(maxsize=4096)
def _named(name: str) -> tuple[_Named, ...]:
    """Return the quantities that a name without its unit can stand for."""
    short = name.strip()
    symbols = [_Named(q, "", 0, True) for q in QUANTITIES if short in q.symbols]
    words = _folded(name).split()
    for rank in range(len(_SIDE_WORDS) + 1):
        dropped = frozenset().union(*_SIDE_WORDS[:rank])
        core = " ".join(word for word in words if word not in dropped)
        found = [
            _Named(q, q.word_units.get(core, ""), rank, False)
            for q in QUANTITIES
            if core in q.words or core in q.word_units
        ]
        if found:
            return tuple(found + symbols)
    return tuple(symbols)


def _fitting(found: tuple[_Named, ...], unit: str) -> Meaning | None:
    bare = unit.strip().strip("[](){}").strip()
    # A dash says of a share that it is one of 1, and of anything else nothing.
    dash = next((n for n in found if bare and bare in n.quantity.unit_words), None)
    if dash is not None and bare in _BARE:
        return Meaning(dash.quantity, dash.quantity.unit_words[bare], dash.rank)
    written = "" if bare in _BARE else unit.strip()
    if written:
        for named in found:
            if named.quantity.text:
                continue
            # An angular velocity in 1/s is in radians; only a speed could be in turns.
            radians = named.unit == "rad/s" and _spelling(named.quantity, written) in {"1/s", "s-1"}
            used = named.unit if radians else written
            if unit_problem(named.quantity, used) == "":
                return Meaning(named.quantity, used, named.rank)
        return None
    # Without its unit a symbol could be several things, and so could a torque in %.
    sure = [n for n in found if n.unit or not (n.is_symbol or n.quantity.unit_needed)]
    if len({named.quantity.key for named in sure}) != 1:
        return None
    return Meaning(sure[0].quantity, sure[0].unit, sure[0].rank)


def _with_problem(found: tuple[_Named, ...], unit: str) -> Meaning | None:
    words = [named for named in found if not named.is_symbol]
    if not words or not unit.strip() or words[0].quantity.text:
        return None
    quantity = words[0].quantity
    return Meaning(quantity, unit.strip(), words[0].rank, unit_problem(quantity, unit))


def _spelling(quantity: Quantity, unit: str) -> str:
    text = re.sub(r"\s+", " ", unit).strip()
    while text and text[0] + text[-1] in {"[]", "()", "{}", "<>"}:
        text = text[1:-1].strip()
    known = quantity.unit_words
    return known.get(text, known.get(text.lower(), text))


@lru_cache(maxsize=4096)
def _unit_problem(key: str, unit: str) -> str:
    from rheo.readings.quantities import BY_KEY

    try:
        convert([1.0], BY_KEY[key], unit)
    except UnitError as error:
        return error.sentence
    return ""


def unit_problem(quantity: Quantity, unit: str) -> str:
    """Return why a unit, as a file writes it, cannot be used; empty when it can."""
    return _unit_problem(quantity.key, unit)


def convert(
    values: ArrayLike, quantity: Quantity, unit: str, place: str = ""
) -> NDArray[np.float64]:
    """Return numbers, written in a unit as files write it, in the quantity's SI unit.

    Parameters
    ----------
    values : array_like
        Numbers as written.
    quantity : Quantity
        What they measure.
    unit : str
        As the file or the user writes it.
    place : str
        What an error refers to.

    Raises
    ------
    UnitError
        If the unit is unknown, measures something else, or could be taken two ways.
    """
    text = _spelling(quantity, unit)
    refused = quantity.refused_units.get(text.lower().replace(" ", ""))
    if refused is not None:
        raise UnitError(
            f"unit '{unit.strip()}' leaves open what is meant for a {quantity.name}; "
            f"write {refused}",
            place,
        )
    array = np.asarray(values, dtype=float)
    if quantity.percent:
        # A share of solids may say by what after it: '% by mass'.
        kind = text.partition(" ")[0]
        if kind in {"%", "percent"}:
            return array / 100.0
        if kind == "1":
            return array
        what = quantity.name.partition(" as a ")[2] or f"{quantity.name} as a share"
        raise UnitError(f"unit '{unit.strip()[:60]}' is no {what}; write %", place)
    if quantity.unit == "degree":
        if text.lower() in {"degree", "deg", "°"}:
            return array
        raise UnitError(f"unit '{unit.strip()[:60]}' is no dial degree; write deg", place)
    return to_si(array, text, quantity.unit, place)
