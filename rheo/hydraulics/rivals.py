"""What the other turbulent methods say of the same flow."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.record import Range
from rheo.hydraulics.regimes import blend
from rheo.hydraulics.registry import turbulent_methods
from rheo.hydraulics.yield_power_law import hedstrom

if TYPE_CHECKING:
    from rheo.hydraulics.pipe_result import PipeFlow

# A part in a million outside a range is rounding.
_SLACK = 1e-6


@dataclass(frozen=True)
class Rivals:
    """Wall stresses [Pa] by method key, where each counts, and their relative spread [-]; 1-D."""

    stress: Mapping[str, FloatArray]
    counts: Mapping[str, NDArray[np.bool_]]
    spread: FloatArray


def rival_stresses(flow: PipeFlow) -> Rivals:
    """Return the wall stress by every method that can be computed for the flow curve.

    A method counts where its range holds at the local flow index and the Metzner-Reed Reynolds
    number of the flow; the method of the flow itself always does.
    """
    pipe = flow.pipe
    own = np.ravel(flow.wall_stress)
    share = np.ravel(flow.turbulence)
    stress: dict[str, FloatArray] = {}
    counts: dict[str, NDArray[np.bool_]] = {}
    for key, record in turbulent_methods().items():
        if not record.applies(flow.model):
            continue
        stress[key] = own.copy()
        counts[key] = np.ones(pipe.size, dtype=bool)
        moving = np.flatnonzero(share > 0)
        if key == flow.method or moving.size == 0:
            continue
        stress[key][moving] = blend(
            pipe.take(moving),
            np.ravel(flow.velocity)[moving],
            np.ravel(flow.laminar_wall_rate)[moving],
            1.0 - np.sqrt(1.0 - share[moving]),
            record,
            floor=flow.forced is None,
        )
        inside = record.counts(flow.model) & in_range(flow, record.range)
        counts[key] = (inside | (share == 0)) & np.isfinite(stress[key])
    return Rivals(stress, counts, _spread(stress, counts, own))


def in_range(flow: PipeFlow, limits: Range) -> NDArray[np.bool_]:
    """Return where a flow lies inside the tested range of a method, 1-D."""
    pipe: Pipe = flow.pipe
    inside = np.ones(pipe.size, dtype=bool)
    values = [
        (np.ravel(flow.local_flow_index), limits.flow_index),
        (np.ravel(flow.reynolds), limits.reynolds),
    ]
    if flow.model.key == "bingham":
        values.append((hedstrom(pipe), limits.hedstrom))
    for value, (low, high) in values:
        inside &= (value >= low * (1.0 - _SLACK)) & (value <= high * (1.0 + _SLACK))
    return inside


def _spread(
    stress: Mapping[str, FloatArray], counts: Mapping[str, NDArray[np.bool_]], own: FloatArray
) -> FloatArray:
    highest, lowest = own, own
    for key, value in stress.items():
        highest = np.where(counts[key], np.fmax(highest, value), highest)
        lowest = np.where(counts[key], np.fmin(lowest, value), lowest)
    return (highest - lowest) / own
