"""Searches of several kinds one under another, so that one step serves all."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Generic, TypeVar

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
Kind = TypeVar("Kind")


@dataclass(frozen=True)
class Stack(Generic[Kind]):
    """Which rows belong to what.

    Parameters
    ----------
    kinds : sequence
        Models, or problems.
    counts : sequence of int
        Number of rows of each, in the same order.
    """

    kinds: Sequence[Kind]
    counts: Sequence[int]

    @cached_property
    def edges(self) -> IntArray:
        """Row at which each kind begins, and the number of all rows."""
        return np.concatenate([[0], np.cumsum(self.counts)]).astype(np.intp)

    def split(self, rows: IntArray) -> Iterator[tuple[Kind, slice]]:
        """Yield each kind that has some of the rows (in rising order), and where these stand."""
        places = np.searchsorted(rows, self.edges)
        for kind, first, last in zip(self.kinds, places[:-1], places[1:], strict=True):
            if last > first:
                yield kind, slice(int(first), int(last))


def padded(parts: Sequence[FloatArray]) -> FloatArray:
    """Return arrays (c, q) one under another, filled up with 0 to the widest."""
    width = max(1, *(part.shape[-1] for part in parts), 0)
    whole = np.zeros((sum(len(part) for part in parts), width))
    first = 0
    for part in parts:
        whole[first : first + len(part), : part.shape[-1]] = part
        first += len(part)
    return whole


def lowest(values: FloatArray, count: int, apart: float = 1e-7) -> IntArray:
    """Return indices of the lowest values, none alike to a relative difference of `apart`."""
    order = np.argsort(values, kind="stable")
    ranked = values[order]
    with np.errstate(invalid="ignore"):
        rise = np.diff(ranked)
    new = np.concatenate([[True], rise > apart * np.abs(ranked[1:])])
    return order[new][:count]
