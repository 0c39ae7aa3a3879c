"""Coordinates in which a search moves: logarithms, roots, or the parameters themselves."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]
IntArray = NDArray[np.intp]

# Stands for 0 in a root coordinate, where the slope of the root itself would be infinite.
_SMALLEST = 1e-60


@dataclass(frozen=True, eq=False)
class Coordinates:
    """Map between parameters and the coordinates of a search, with the same bounds.

    Parameters
    ----------
    lower, upper : array, shape (p,) or (b, p)
        Bounds of the parameters; rows where searches differ.
    logarithmic : array of bool, same shape
        Searched as ln(parameter): values that span decades.
    root : array of bool, same shape
        Searched as the square root: parameters whose influence is singular at 0.
    """

    lower: FloatArray
    upper: FloatArray
    logarithmic: BoolArray
    root: BoolArray

    @classmethod
    def plain(cls, lower: FloatArray, upper: FloatArray) -> Coordinates:
        """Return coordinates equal to the parameters."""
        none = np.zeros(len(lower), dtype=bool)
        return cls(lower, upper, none, none)

    @classmethod
    def for_bounds(cls, lower: FloatArray, upper: FloatArray, root: BoolArray) -> Coordinates:
        """Return logarithms for what is above 0, roots where asked, else the parameters."""
        return cls(lower, upper, (lower > 0) & ~root, root)

    @classmethod
    def stacked(cls, parts: Sequence[Coordinates], counts: Sequence[int]) -> Coordinates:
        """Return coordinates with a row for each search, of several kinds one after another.

        Parameters
        ----------
        parts : sequence of Coordinates
            Each with bounds of shape (p,); shorter ones are filled up with parameters that
            cannot move.
        counts : sequence of int
            Number of rows of each.
        """
        width = max(part.lower.size for part in parts)

        bounds = np.zeros((2, len(parts), width))
        kinds = np.zeros((2, len(parts), width), dtype=bool)
        for row, part in enumerate(parts):
            bounds[:, row, : part.lower.size] = part.lower, part.upper
            kinds[:, row, : part.lower.size] = part.logarithmic, part.root
        lower, upper = np.repeat(bounds, counts, axis=1)
        logarithmic, root = np.repeat(kinds, counts, axis=1)
        return cls(lower, upper, logarithmic, root)

    def at(self, rows: IntArray) -> Coordinates:
        """Return the coordinates of some of the searches."""
        if self.lower.ndim == 1:
            return self
        return Coordinates(
            self.lower[rows], self.upper[rows], self.logarithmic[rows], self.root[rows]
        )

    @cached_property
    def inner_bounds(self) -> tuple[FloatArray, FloatArray]:
        """Bounds in the coordinates of the search."""
        return self.inner(self.lower), self.inner(self.upper)

    def inner(self, parameters: FloatArray) -> FloatArray:
        """Return coordinates of parameters of shape (..., p)."""
        values = np.clip(parameters, self.lower, self.upper)
        logs = np.log(np.where(self.logarithmic, values, 1.0))
        roots = np.sqrt(np.where(self.root, np.maximum(values, _SMALLEST), 1.0))
        return np.where(self.logarithmic, logs, np.where(self.root, roots, values))

    def outer(self, inner: FloatArray) -> FloatArray:
        """Return parameters at coordinates of shape (..., p)."""
        powers = np.exp(np.where(self.logarithmic, inner, 0.0))
        values = np.where(self.logarithmic, powers, np.where(self.root, inner * inner, inner))
        return np.minimum(np.maximum(values, self.lower), self.upper)

    def slope(self, inner: FloatArray, parameters: FloatArray) -> FloatArray:
        """Return d parameter/d coordinate, shape (..., p)."""
        return np.where(self.logarithmic, parameters, np.where(self.root, 2.0 * inner, 1.0))

    def settled(self, parameters: FloatArray) -> FloatArray:
        """Return parameters in which the stand-in for 0 is 0 again."""
        return np.where(self.root & (parameters <= _SMALLEST), self.lower, parameters)
