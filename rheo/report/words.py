"""Small changes to words that several files make."""

from __future__ import annotations

import math

from rheo.report.numbers import number


def capital(name: str) -> str:
    """Return a name with a capital letter at its beginning."""
    return name[:1].upper() + name[1:]


def percent(share: float, digits: int = 2) -> str:
    """Return a share as a percentage."""
    return f"{number(100 * share, digits)} %" if math.isfinite(share) else "not known"
