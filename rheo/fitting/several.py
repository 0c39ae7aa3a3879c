"""Flow curves of several models, one under another, worked out by one call."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rheo.models import ModelRecord

FloatArray = NDArray[np.float64]
Part = tuple[ModelRecord, Sequence[FloatArray], slice]


@dataclass(frozen=True, eq=False)
class SeveralCurves:
    """Rows of flow curves.

    Parameters
    ----------
    parts : sequence of tuple
        For each model its record, its parameters, each of shape (r, 1) or (r, n), and the rows r
        that are its own.
    rows : int
        Number of all rows.
    """

    parts: Sequence[Part]
    rows: int

    @property
    def width(self) -> int:
        """Largest number of parameters of a model."""
        return max(len(record.parameters) for record, _, _ in self.parts)

    def stress(self, rate: FloatArray) -> FloatArray:
        """Return the stress [Pa] at rates [1/s] of shape (rows, n) or (rows, n, nodes)."""
        found = np.empty_like(rate)
        for record, columns, part in self.parts:
            found[part] = record.stress(rate[part], *_raised(columns, rate.ndim))
        return found

    def log_slope(self, rate: FloatArray) -> FloatArray:
        """Return d ln(stress)/d ln(rate) [-], in the shape of the rates."""
        found = np.empty_like(rate)
        for record, columns, part in self.parts:
            found[part] = record.log_slope(rate[part], *_raised(columns, rate.ndim))
        return found

    def slopes(self, rate: FloatArray) -> FloatArray:
        """Return d stress/d parameter, shape (width, *rate.shape); 0 for parameters not there."""
        found = np.zeros((self.width, *rate.shape))
        for record, columns, part in self.parts:
            every = record.jacobian(rate[part], *_raised(columns, rate.ndim))
            for index, one in enumerate(every):
                found[index, part] = one
        return found

    def rate_below(
        self, stress: FloatArray, at: FloatArray, drop: FloatArray, lowest: float, close: float
    ) -> FloatArray:
        """Return ln(rate/exp(at)) at a stress [Pa] that is lower than that at exp(at).

        Parameters
        ----------
        stress, at : array, shape (rows, n)
            Stress sought, and ln of a rate [1/s] above it.
        drop : array, shape (rows, n)
            Where to start.
        lowest : float
            The least that is returned: a fluid at rest has it.
        close : float
            Error allowed.
        """
        found = np.empty_like(stress)
        with np.errstate(divide="ignore"):
            wanted = np.log(stress)
        for record, columns, part in self.parts:
            if record.rate is not None:
                with np.errstate(divide="ignore"):
                    rate = np.log(record.rate(stress[part], *columns))
                found[part] = np.maximum(rate - at[part], lowest)
                continue
            top, here = at[part], drop[part]
            for _ in range(_STEPS):
                rate = np.exp(top + here)
                step = wanted[part] - np.log(record.stress(rate, *columns))
                step /= np.maximum(record.log_slope(rate, *columns), _FLATTEST)
                new = np.minimum(np.maximum(here + step, lowest), 0.0)
                moved = np.max(np.abs(new - here))
                here = new
                if moved <= close:
                    break
            found[part] = here
        return np.minimum(found, 0.0)


_STEPS = 12
_FLATTEST = 0.01


def _raised(columns: Sequence[FloatArray], dimensions: int) -> Sequence[FloatArray]:
    if dimensions == 2:
        return columns
    return [column[..., np.newaxis] for column in columns]
