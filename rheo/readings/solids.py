"""Solids of a product as a share: the words and units for it, and whether by volume or by mass."""

from __future__ import annotations

import re

from rheo.errors import ReadingsError
from rheo.units import parse_quantity

PERCENT, SHARE = "%", "1"
_BY = {"volume": " by volume", "mass": " by mass"}

_PLAIN = (
    *("solids", "solids content", "solid content", "solids concentration", "concentration"),
    *("conc", "slurry concentration"),
)
WORDS: tuple[str, ...] = (
    *_PLAIN,
    *(f"{word} by {what}" for word in _PLAIN for what in ("weight", "mass", "volume")),
    *("solid", "solids loading"),
    *("dry matter", "dry solids", "dry matter content", "dry solids content", "total solids"),
    *("feststoff", "feststoffe", "feststoffgehalt", "trockensubstanz", "trockenmasse"),
    *("konzentration", "matiere seche", "matieres seches", "extrait sec", "teneur en solides"),
    *("solidos", "contenido de solidos", "concentracion", "solidos totales", "materia seca"),
)
# Such a word says that the number is a share of 1 as long as no unit says otherwise.
SHARE_WORDS: tuple[str, ...] = (
    *("solids fraction", "solid fraction", "fraction of solids", "volume fraction"),
    *("solids volume fraction", "volume fraction of solids", "solids volumetric fraction"),
    *("mass fraction", "weight fraction", "solids mass fraction", "solids weight fraction"),
    *("mass fraction of solids", "weight fraction of solids"),
    *("feststoffanteil", "volumenanteil", "massenanteil", "fraction volumique"),
    *("fraction massique", "fraccion volumetrica", "fraccion masica"),
)
PERCENT_WORDS: dict[str, str] = {
    **dict.fromkeys(("% solids", "solids %", "percent solids", "solids percent"), PERCENT),
    **dict.fromkeys(
        ("wt% solids", "solids wt%", "weight % solids", "weight percent solids"),
        PERCENT + _BY["mass"],
    ),
    **dict.fromkeys(
        ("vol% solids", "solids vol%", "volume % solids", "volume percent solids"),
        PERCENT + _BY["volume"],
    ),
}
UNITS: dict[str, str] = {
    **dict.fromkeys(("percent", "pct", "per cent"), PERCENT),
    **dict.fromkeys(("-", "–", "--", "fraction", "share"), SHARE),
    **dict.fromkeys(
        (
            *("wt%", "wt.%", "wt-%", "wt. %", "wt.-%", "wt %", "%wt", "% wt", "% wt.", "w%"),
            *("w/w%", "w/w %", "%w/w", "% w/w", "% (w/w)", "m/m%", "%m/m", "% m/m", "m%", "m-%"),
            *("mass%", "mass-%", "mass %", "% mass", "% by mass", "% by weight", "weight %"),
            *("weight-%", "weight%", "gew%", "gew.%", "gew-%", "gew.-%", "ma%", "ma.-%", "ma-%"),
            *("massen-%", "masse-%", "% massique", "% en masse", "% en peso", "g/100g", "g/100 g"),
        ),
        PERCENT + _BY["mass"],
    ),
    **dict.fromkeys(
        (
            *("vol%", "vol.%", "vol-%", "vol. %", "vol.-%", "vol %", "%vol", "% vol", "% vol."),
            *("v/v%", "v/v %", "%v/v", "% v/v", "% (v/v)", "v%", "volume%", "volume-%"),
            *("volume %", "% volume", "% by volume", "volumen-%", "% volumique", "% en volume"),
            "% en volumen",
        ),
        PERCENT + _BY["volume"],
    ),
    **dict.fromkeys(
        ("w/w", "m/m", "kg/kg", "g/g", "by mass", "by weight", "1 by mass"), SHARE + _BY["mass"]
    ),
    **dict.fromkeys(("v/v", "m3/m3", "m³/m³", "by volume", "1 by volume"), SHARE + _BY["volume"]),
}
# A mass in a volume is no share of either.
REFUSED: dict[str, str] = dict.fromkeys(
    ("%w/v", "w/v", "w/v%", "g/l", "kg/m3", "kg/m³", "g/ml", "mg/l", "g/100ml", "g/cm3"),
    "a share such as wt% or vol%",
)
_IN_WORDS = {
    "mass": re.compile(r"\b(mass|weight|wt|w/w|gew\w*|mass\w*|peso|cw)\b", re.IGNORECASE),
    "volume": re.compile(r"\b(vol\w*|v/v|cv)\b", re.IGNORECASE),
}
_NUMBER = re.compile(r"\s*([-+−]?[0-9.,]*[0-9][0-9.,]*(?:[eE][-+]?[0-9]+)?)\s*(.*?)\s*")


def basis(unit: str, heading: str = "") -> str:
    """Return ``volume``, ``mass`` or, where neither is said, an empty text.

    Parameters
    ----------
    unit : str
        As it is written, such as ``wt%``.
    heading : str
        What stands above the column; the unit wins over it.
    """
    known = UNITS.get(unit.strip().lower(), unit)
    for name, words in _BY.items():
        if known.endswith(words):
            return name
    said = [name for name, pattern in _IN_WORDS.items() if pattern.search(heading)]
    return said[0] if len(said) == 1 else ""


def read_share(text: str, place: str = "") -> tuple[float, str]:
    """Return a share of solids [-] of a text such as ``25 %`` or ``46 wt%``, and its basis.

    Parameters
    ----------
    text : str
        A number without a unit is a share of 1.
    place : str
        What an error refers to.

    Raises
    ------
    ReadingsError
        If it is no number with such a unit.
    """
    match = _NUMBER.fullmatch(text)
    unit = match[2] if match else ""
    refused = REFUSED.get(unit.lower().replace(" ", ""))
    if refused:
        raise ReadingsError(f"'{text.strip()[:60]}' is a mass in a volume; write {refused}", place)
    known = UNITS.get(unit.lower(), unit) or SHARE
    kind = known.split(" ")[0]
    if match is None or kind not in {PERCENT, SHARE}:
        raise ReadingsError(
            f"'{text.strip()[:60]}' is no share of solids; write it like '25 %', '46 wt%', "
            "'18 vol%' or 0.25",
            place,
        )
    value = parse_quantity(f"{match[1]} {'' if kind == SHARE else kind}", "dimensionless", place)
    return value, basis(unit)


def in_words(share: float, by: str = "") -> str:
    """Return a share of solids in words, such as ``25 % by mass``."""
    return f"{100.0 * share:.4g} %{_BY.get(by, '')}"
