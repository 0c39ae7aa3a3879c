"""Wall stress in a tube with its derivatives, quick enough for a search.

8V/D = G + 8βτ_w/D with G = (4/τ_w³)∫τ²γ̇dτ, by parts (4/3)(γ̇_w - ∫τ³dγ̇/τ_w³), and
G' = (4γ̇_w - 3G)/τ_w. At a wall stress a change of the flow curve changes G by
-(4/τ_w³)∫τ² dτ dγ̇, a mean of the change over the rates in the tube. One rule of Gauss and Legendre
serves both integrals. The rate at the wall is found by Newton's method from one known beforehand,
and the last step is taken in the result.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.nodes import crowded_rule
from rheo.models import Model

FloatArray = NDArray[np.float64]

# Nodes that keep 1e-8 for most flow curves, and those that keep 1e-6.
_NODES = (40, 20)
_PASSES = 12
# The last step is exact to the square of this.
_NEAR, _ROUGH = 1e-4, 1e-3
_LARGEST_STEP = 3.0


@dataclass(frozen=True, eq=False)
class TubeWall:
    """The wall of a tube at given flows.

    Parameters
    ----------
    rate, stress : array, shape (b, n)
        Shear rate [1/s] before the last step, and stress [Pa]; NaN where Newton's method did not
        settle.
    slopes : array, shape (b, p, n)
        Derivatives of the stress by the model's parameters.
    rise : array, shape (b, n)
        Derivative of 8V/D by the stress [1/(Pa s)].
    """

    rate: FloatArray
    stress: FloatArray
    slopes: FloatArray
    rise: FloatArray


def tube_wall(
    model: Model,
    apparent: FloatArray,
    sliding: FloatArray,
    start: FloatArray,
    rough: bool = False,
) -> TubeWall:
    """Return stress and rate at the wall, with the derivatives of the stress.

    Parameters
    ----------
    model : Model
        Parameters of shape (b, 1) or (b, n).
    apparent : array, shape (n,) or (b, n)
        8V/D [1/s].
    sliding : array
        8β/D [1/(Pa s)].
    start : array, shape (n,) or (b, n)
        Shear rates to start from [1/s].
    rough : bool
        Whether stresses need to be right to 1e-6 only, instead of 1e-8.
    """
    shape = np.broadcast_shapes(model.shape, apparent.shape, sliding.shape, start.shape)
    near = _ROUGH if rough else _NEAR
    wanted, slip, at = (
        np.broadcast_to(one, shape) for one in (np.log(apparent), sliding, np.log(start))
    )
    with np.errstate(all="ignore"):
        found = _Pass.at(model, at, wanted, slip, rough)
        for _ in range(_PASSES):
            rows = np.flatnonzero(np.any(np.abs(found.gap) > near, axis=-1))
            if not rows.size:
                break
            whole = rows.size == shape[0]
            some = model if whole else model.map(lambda value: _rows(value, rows))  # noqa: B023
            step = np.clip(found.gap / found.rise, -_LARGEST_STEP, _LARGEST_STEP)
            at = np.log(found.rate[rows]) + step[rows]
            again = _Pass.at(some, at, wanted[rows], slip[rows], rough)
            found = again if whole else found.with_rows(rows, again)
        # From the rate where Newton's method stands to the flow asked for, along the flow curve.
        move = np.exp(found.gap * found.slope / found.rise)
        onward = np.where(np.abs(found.gap) <= near, move, np.nan)
        by_stress = found.total * found.rise / (found.stress * found.slope)
        position, weight = crowded_rule(_NODES[rough])
        weights = found.square * weight
        slopes = np.empty((*shape[:-1], len(model.record.parameters), shape[-1]))
        mean = 4.0 * found.rate / (found.stress * by_stress) * onward
        inside = found.rate[..., np.newaxis] * position
        for index, column in enumerate(model.record.jacobian(inside, *model.with_new_axis())):
            slopes[..., index, :] = np.einsum("...k,...k->...", weights, column) * mean
    return TubeWall(found.rate, found.stress * onward, slopes, by_stress)


@dataclass(frozen=True, eq=False)
class _Pass:
    """Where Newton's method stands; arrays of shape (b, n), `square` of (b, n, nodes)."""

    rate: FloatArray
    stress: FloatArray
    slope: FloatArray
    total: FloatArray
    rise: FloatArray
    gap: FloatArray
    square: FloatArray

    @classmethod
    def at(
        cls, model: Model, at: FloatArray, wanted: FloatArray, sliding: FloatArray, rough: bool
    ) -> _Pass:
        position, weight = crowded_rule(_NODES[rough])
        rate = np.exp(at)
        stress = model.record.stress(rate, *model)
        inside = rate[..., np.newaxis] * position
        share = model.record.stress(inside, *model.with_new_axis()) / stress[..., np.newaxis]
        square = share * share
        sheared = 4.0 / 3.0 * rate * (1.0 - (square * share) @ weight)
        total = sheared + sliding * stress
        slope = model.record.log_slope(rate, *model)
        rise = slope * (4.0 * rate - 3.0 * sheared + sliding * stress) / total
        return cls(rate, stress, slope, total, rise, wanted - np.log(total), square)

    def with_rows(self, rows: NDArray[np.intp], again: _Pass) -> _Pass:
        """Return this with some of its rows from another."""
        parts = []
        for old, new in zip(vars(self).values(), vars(again).values(), strict=True):
            changed = np.broadcast_to(old, (self.rate.shape[0], *old.shape[1:])).copy()
            changed[rows] = new
            parts.append(changed)
        return _Pass(*parts)


def _rows(value: FloatArray, rows: NDArray[np.intp]) -> FloatArray:
    return value[rows] if value.ndim > 1 and value.shape[0] > 1 else value
