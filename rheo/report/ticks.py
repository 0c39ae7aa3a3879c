"""Where the ticks of an axis stand and what they say, for the static figures."""

from __future__ import annotations

import math

from rheo.report.numbers import MINUS, power_of_ten

_STEPS = (1.0, 2.0, 5.0, 10.0)


def linear_ticks(low: float, high: float, count: int = 6) -> list[tuple[float, str]]:
    """Return round positions with their text, about `count` of them."""
    raw = (high - low) / max(count, 1)
    power = 10.0 ** math.floor(math.log10(raw))
    step = power * next(size for size in _STEPS if size * power >= raw * (1 - 1e-9))
    first = math.ceil(low / step - 1e-9)
    last = math.floor(high / step + 1e-9)
    decimals = max(0, -math.floor(math.log10(step) + 1e-9))
    if decimals > 5 or max(abs(low), abs(high)) >= 1e6:
        return [(i * step, f"{i * step:.3g}".replace("-", MINUS)) for i in range(first, last + 1)]
    return [
        (i * step, f"{i * step:.{decimals}f}".replace("-", MINUS) if i else "0")
        for i in range(first, last + 1)
    ]


def _decade_text(exponent: int, plain: bool) -> str:
    return f"{10.0**exponent:g}" if plain else power_of_ten(exponent)


def log_ticks(low: float, high: float) -> tuple[list[tuple[float, str]], list[float]]:
    """Return named ticks at decades, and the minor ones between them.

    Over less than two decades 2 and 5 are named too; over many decades only some are.
    """
    first, last = math.floor(math.log10(low)), math.ceil(math.log10(high))
    decades = math.log10(high / low)
    inside = [e for e in range(first, last + 1) if low <= 10.0**e <= high]
    every = max(1, math.ceil(len(inside) / 7))
    plain = all(-3 <= e <= 4 for e in inside)
    named = [(10.0**e, _decade_text(e, plain)) for e in inside if e % every == 0]
    minor = [
        digit * 10.0**e
        for e in range(first, last + 1)
        for digit in range(2, 10)
        if low <= digit * 10.0**e <= high
    ]
    if decades < 2.0 or len(inside) < 2:
        wanted = (2, 5) if len(inside) else tuple(range(2, 10))
        for value in minor:
            digit = round(value / 10.0 ** math.floor(math.log10(value) + 1e-9))
            if digit in wanted:
                named.append((value, f"{value:.4g}"))
        named.sort()
    return named, minor if decades < 5 else []
