"""Checks of what the user gave for a line, with sentences that name the part and the value."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import InputError


def require_number(
    value: ArrayLike, what: str, place: str, low: float = -np.inf, above: bool = False
) -> None:
    """Raise InputError unless every value is a finite number of `low` or more.

    Parameters
    ----------
    value : array_like
        Number or numbers in SI.
    what : str
        The field and its unit, such as ``length [m]``.
    place : str
        The part that the sentence names.
    low : float
        Smallest value allowed.
    above : bool
        Whether `low` itself is refused.

    Raises
    ------
    InputError
        With the value found and what is allowed.
    """
    allowed = "a finite number" if low == -np.inf else f"{low:g} or more"
    if above:
        allowed = f"above {low:g}"
    try:
        array = np.asarray(value, dtype=float)
    except (TypeError, ValueError):
        raise InputError(f"{what} is {value!r}; it must be {allowed}", place) from None
    good = np.isfinite(array) & ((array > low) if above else (array >= low))
    if not np.all(good):
        worst = float(array[~good].flat[0]) if array.ndim else float(array)
        raise InputError(f"{what} is {worst:g}; it must be {allowed}", place)


def require_positive(value: ArrayLike, what: str, place: str) -> None:
    """Raise InputError unless every value is finite and above 0."""
    require_number(value, what, place, 0.0, above=True)


def require_optional(value: ArrayLike | None, what: str, place: str) -> None:
    """Raise InputError unless the value is absent, or finite and above 0."""
    if value is not None:
        require_positive(value, what, place)


def require_share(value: ArrayLike, what: str, place: str) -> None:
    """Raise InputError unless every value lies above 0 and at most at 1."""
    array = np.asarray(value, dtype=float)
    if not np.all((array > 0) & (array <= 1)):
        found = float(array.flat[0])
        raise InputError(f"{what} is {found:g}; it must be above 0 and at most 1", place)
