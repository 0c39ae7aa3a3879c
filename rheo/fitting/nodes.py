"""Nodes for integrals over the shear rates in an instrument."""

from __future__ import annotations

from functools import cache

import numpy as np
from numpy.typing import NDArray

from rheo.geometry.curve_integrals import unit_rule

FloatArray = NDArray[np.float64]

_POWER = 3


@cache
def crowded_rule(count: int) -> tuple[FloatArray, FloatArray]:
    """Return nodes and weights of ∫f(x)dx over 0 to 1 with x = t³.

    It crowds the nodes where a power of the rate would be steep.
    """
    t, weights = unit_rule(count)
    return t**_POWER, weights * _POWER * t ** (_POWER - 1)
