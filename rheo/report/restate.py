"""The engine's sentences in the units that are shown.

Sentences of results and Cautions are written once, in bar, m3/h, m, m/s, mm, L and °C; where
another unit system is shown, their numbers are restated in it.
"""

from __future__ import annotations

import re

from rheo.errors import GROUP
from rheo.report.display import QUANTITIES, shown, unit_label
from rheo.report.numbers import number
from rheo.units import to_si

# Units of the sentences, and the quantity as which each is shown.
_UNITS = {
    "bar": "pressure",
    "m3/h": "flow",
    "m/s": "velocity",
    "kg/m3": "density",
    "mm": "diameter",
    "m": "length",
    "L": "volume",
    "°C": "temperature",
    "K": "temperature_rise",
    "kW": "power",
}
_WRITTEN = {"m3/h": "m³/h", "kg/m3": "kg/m³"}
_NUMBER = rf"[-−]?\d+(?:{GROUP}\d{{3}})*(?:\.\d+)?(?:e[-+]?\d+)?"
_UNIT = "|".join(sorted(map(re.escape, _UNITS), key=len, reverse=True))
# A unit is not followed by more of a word, nor by what makes another unit of it.
_VALUE = re.compile(
    rf"(?<![\w.{GROUP}])(?:(?P<low>{_NUMBER})(?P<word> to | and ))?(?P<value>{_NUMBER}) "
    rf"(?P<unit>{_UNIT})(?![\w/·³²^])"
)
_EXPONENT = re.compile(r"(?<![\w.])\d(?:\.\d+)?e[-+]?\d+(?![\w.])")


def restated(sentence: str, system: str = "metric") -> str:
    """Return a sentence of the engine with its numbers in the units of a system.

    Parameters
    ----------
    sentence : str
        Of a result or a Caution.
    system : str
        A key of `rheo.report.display.SYSTEMS`.

    Returns
    -------
    str
        With about as many digits as before; what the system shows in the same unit stays as it
        is written.
    """
    return _EXPONENT.sub(
        lambda match: number(float(match[0])), _VALUE.sub(lambda m: _restate(m, system), sentence)
    )


def _restate(match: re.Match[str], system: str) -> str:
    unit = match["unit"]
    quantity = _UNITS[unit]
    label = unit_label(quantity, system)
    same = label == _WRITTEN.get(unit, unit)

    def one(text: str) -> str:
        if same:
            return text
        # A difference of temperatures has no zero to be moved.
        value = to_si(
            float(text.replace("−", "-").replace(GROUP, "")), unit, QUANTITIES[quantity].unit
        )
        return number(float(shown(value, quantity, system)), _digits(text))

    low = f"{one(match['low'])}{match['word']}" if match["low"] else ""
    return f"{low}{one(match['value'])} {label}"


def _digits(text: str) -> int:
    digits = text.lstrip("-−").split("e")[0].replace(".", "").replace(GROUP, "").lstrip("0")
    return min(max(len(digits), 3), 4)
