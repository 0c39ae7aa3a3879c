"""Sums whose terms cancel: what is left of rounding is 0."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from rheo.line.parts import FloatArray

# Terms of a line's balance are themselves sums of a few parts.
_ROUNDING = 64.0 * np.finfo(float).eps


def balance(*terms: ArrayLike, size: ArrayLike = 0.0) -> FloatArray:
    """Return the sum of terms, and 0 where it is no more than their rounding.

    A height of 1.3 m that is climbed as 0.7 and 0.6 m and lost again is none; 1e-16 bar would read
    as if something were known of it.

    Parameters
    ----------
    *terms : array_like
        Which broadcast.
    size : array_like
        Size of what cancelled already within the terms, in their unit.

    Returns
    -------
    array
        The shape to which they broadcast.
    """
    values = [np.asarray(term, dtype=float) for term in terms]
    total: FloatArray = np.asarray(sum(values, np.zeros(())))
    largest = sum((np.abs(value) for value in values), np.abs(np.asarray(size, dtype=float)))
    return np.where(np.abs(total) < _ROUNDING * largest, 0.0, total)
