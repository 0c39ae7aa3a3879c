"""A bridge where a turbulent method gives several stresses for one velocity.

Dodge and Metzner's equation takes the local flow index at the wall stress. Where the index rises
quickly from below about 0.3, outside its experiments, the velocity of the equation falls for a
while as the stress rises. There the higher stress is taken: the curve is bridged by a line that
still rises, so that velocity and stress belong to each other one to one.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.record import TurbulentMethod

# Slope d ln(velocity)/d ln(rate) of the bridge: small, but enough to rise strictly.
_BRIDGE_SLOPE = 0.02
_RATES = np.linspace(-25.0, 50.0, 151)
# No fold has been met where the flow curve's own slope stays above the first value, and none
# reaches beyond the rate at which it has risen to the second.
_LOWEST_SLOPE = 0.3
_RISEN_SLOPE = 0.8
_POINTS = 33
_ZOOMS = 5


@dataclass(frozen=True)
class Bridge:
    """Where the bridge ends: ln(rate), ln(velocity), 1-D; ``-inf`` and 0 where none is needed."""

    log_rate: FloatArray
    log_velocity: FloatArray

    def take(self, index: np.ndarray) -> Bridge:
        """Return the elements `index`."""
        return Bridge(self.log_rate[index], self.log_velocity[index])

    def limit(self, log_rate: FloatArray) -> FloatArray:
        """Return the largest velocity [m/s] that the bridge allows at ln(rate); infinite beyond."""
        before = log_rate < self.log_rate
        with np.errstate(invalid="ignore"):
            height = self.log_velocity + _BRIDGE_SLOPE * (log_rate - self.log_rate)
        return np.exp(np.where(before, height, np.inf))


def find_bridge(pipe: Pipe, method: TurbulentMethod) -> Bridge:
    """Return the bridge of a method for each element.

    Parameters
    ----------
    pipe : Pipe
        Product and pipe, flat.
    method : TurbulentMethod
        Friction method; one that does not fold needs no bridge.
    """
    end = np.full(pipe.size, -np.inf)
    height = np.zeros(pipe.size)
    if method.may_fold:
        suspect, low, high = _where_index_rises(pipe)
        if suspect.size:
            part = pipe.take(suspect)
            at, velocity = _last_dip(part, method, low, high)
            folded = np.isfinite(at)
            end[suspect[folded]] = at[folded]
            height[suspect[folded]] = np.log(velocity[folded])
    return Bridge(end, height)


def _where_index_rises(pipe: Pipe) -> tuple[np.ndarray, FloatArray, FloatArray]:
    """Return the elements whose slope rises from a low value, and ln(rate) of rise and end."""
    wide = pipe.model.with_new_axis()
    slope = np.broadcast_to(wide.record.log_slope(np.exp(_RATES), *wide), (pipe.size, _RATES.size))
    rising = (np.diff(slope, axis=1) > 1e-9) & (slope[:, :-1] < _LOWEST_SLOPE)
    suspect = np.flatnonzero(np.any(rising, axis=1))
    first = np.argmax(rising[suspect], axis=1)
    after = np.arange(_RATES.size) > first[:, np.newaxis]
    risen = after & (slope[suspect] >= _RISEN_SLOPE)
    last = np.where(np.any(risen, axis=1), np.argmax(risen, axis=1), _RATES.size - 1)
    return suspect, _RATES[first], np.minimum(_RATES[last] + 3.0, _RATES[-1])


def _last_dip(
    pipe: Pipe, method: TurbulentMethod, low: FloatArray, high: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Return ln(rate) and velocity [m/s] at the last local minimum; NaN where there is none."""
    grid = np.linspace(0.0, 1.0, _POINTS)
    place, best = np.full(pipe.size, np.nan), np.full(pipe.size, np.nan)
    index = np.arange(pipe.size)
    for _ in range(_ZOOMS):
        at = low[:, np.newaxis] + (high - low)[:, np.newaxis] * grid
        velocity = _smooth_velocity(pipe.take(index), method, at)
        middle = velocity[:, 1:-1]
        dip = (middle < velocity[:, :-2]) & (middle <= velocity[:, 2:]) & (middle > 0)
        rows = np.flatnonzero(np.any(dip, axis=1))
        if rows.size == 0:
            break
        last = _POINTS - 2 - np.argmax(dip[rows, ::-1], axis=1)
        index = index[rows]
        place[index], best[index] = at[rows, last], velocity[rows, last]
        low, high = at[rows, last - 1], at[rows, last + 1]
    return place, best


def _smooth_velocity(pipe: Pipe, method: TurbulentMethod, log_rate: FloatArray) -> FloatArray:
    """Return the velocity [m/s] in a smooth pipe at a table of ln(rate), one row an element."""
    index = np.repeat(np.arange(pipe.size), log_rate.shape[1])
    part = pipe.take(index)
    stress, smooth = method.curve(part, np.exp(log_rate.ravel()))
    return (np.sqrt(2.0 * stress / part.density) * smooth).reshape(log_rate.shape)
