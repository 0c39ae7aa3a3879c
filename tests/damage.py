"""Text and bytes that are nearly right, as files and arguments are that people give."""

from __future__ import annotations

import math
import re
from pathlib import Path

import numpy as np

SAMPLES = Path(__file__).parents[1] / "sample_data"

VALUES = (
    *("", "0", "-1", "1", "nan", "inf", "-inf", "1e999", "1e-320", "1e308", "true", "[]", "{}"),
    *("x", "50mm", "0 m", "-3 m", "1e300 km", "1e-300 mm", "5 m3/h", "5 kg", "40 °C", "-300 °C"),
    *("1 1/s", "1e9 1/s", "0.5", "2", "1e6", "1e-9", "0x10", "1_000", "1,5", "1;5", "½", "٣"),
    *("a=b", "=", "=5", "x=", "yield_stress=", "\0", "\n", "\u202e", "'", '"', "--", "-", "-h"),
    *("9" * 400, "(" * 200, "2**9**9", "%", "1 %", "{", "[red]", "../../x", "/", ".", "C:\\x"),
)

_NUMBER = re.compile(r"-?\d+(?:\.\d+)?(?:[eE][-+]?\d+)?")
_FACTORS = (0.0, -1.0, 1e-6, 1e-3, 0.5, 2.0, 1e3, 1e6, 1e12, 1e300, 1e-300)


def number_changed(text: str, random: np.random.Generator, count: int = 1) -> str:
    """Return text in which a few of its numbers are other numbers."""
    for _ in range(count):
        found = list(_NUMBER.finditer(text))
        if not found:
            return text
        at = found[int(random.integers(len(found)))]
        factor = _FACTORS[int(random.integers(len(_FACTORS)))]
        value = float(at.group()) * factor
        new = f"{value:.6g}" if math.isfinite(value) else "1e308"
        text = text[: at.start()] + new + text[at.end() :]
    return text


def bytes_changed(data: bytes, random: np.random.Generator) -> bytes:
    """Return data with a few bytes turned, left out, doubled or cut off."""
    result = bytearray(data)
    for _ in range(int(random.integers(1, 5))):
        at, span = int(random.integers(len(result) + 1)), int(random.integers(13))
        kind = int(random.integers(4))
        if kind == 0 and at < len(result):
            result[at] ^= 1 << int(random.integers(8))
        elif kind == 1:
            del result[at : at + span]
        elif kind == 2:
            result[at:at] = result[at : at + span]
        elif random.random() < 0.2:
            del result[at:]
    return bytes(result)


def picked(random: np.random.Generator, choices: tuple[str, ...]) -> str:
    """Return one of some texts."""
    return choices[int(random.integers(len(choices)))]
