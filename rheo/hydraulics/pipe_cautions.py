"""Advice on a pipe result."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution
from rheo.hydraulics.registry import turbulent_method
from rheo.hydraulics.rivals import in_range

if TYPE_CHECKING:
    from rheo.hydraulics.pipe_result import PipeFlow

ROUGHEST = 0.05
_PLACE = "pipe"


def pipe_cautions(flow: PipeFlow) -> tuple[Caution, ...]:
    """Return what an engineer should know of a pipe result."""
    checks = (_unsolved, _transition, _laminar_stands, _forced, _outside_range, _rough, _very_rough)
    return tuple(caution for check in checks for caution in check(flow))


def _share(where: NDArray[np.bool_]) -> str:
    """Return 'The flow is' or 'In 35 % of the cases the flow is'."""
    if where.size == 1:
        return "The flow is"
    return f"In {100.0 * where.mean():.3g} % of the {where.size} cases the flow is"


def _unsolved(flow: PipeFlow) -> tuple[Caution, ...]:
    where = np.isnan(np.ravel(flow.wall_stress))
    if not where.any():
        return ()
    return (
        Caution(
            "no-turbulent-solution",
            f"{_share(where)} so slow that {flow.method} has no turbulent solution.",
            "Let the regime be found, or take the laminar solution.",
            _PLACE,
        ),
    )


def _transition(flow: PipeFlow) -> tuple[Caution, ...]:
    where = (np.ravel(flow.regime) == "transition") & (np.ravel(flow.turbulence) < 1)
    if not where.any():
        return ()
    return (
        Caution(
            "transition-flow",
            f"{_share(where)} in transition between laminar and turbulent; the pressure gradient "
            "is interpolated and can swing between the two.",
            "Move the flow or the size out of the transition, or design for the larger of the two.",
            _PLACE,
        ),
    )


def _laminar_stands(flow: PipeFlow) -> tuple[Caution, ...]:
    where = (np.ravel(flow.regime) == "transition") & (np.ravel(flow.turbulence) >= 1)
    if not where.any():
        return ()
    return (
        Caution(
            "turbulent-below-laminar",
            f"{_share(where)} beyond the transition by the {flow.criterion} criterion, but "
            f"{flow.method} finds no stress above the laminar one there; the laminar stress is "
            "taken.",
            "Take it as the least that the pipe can need, and compare the other methods.",
            _PLACE,
        ),
    )


def _forced(flow: PipeFlow) -> tuple[Caution, ...]:
    if flow.forced is None:
        return ()
    beyond = np.ravel(flow.velocity > flow.critical_velocity)
    where = beyond if flow.forced == "laminar" else ~beyond
    if not where.any():
        return ()
    found = "beyond the end of laminar flow" if flow.forced == "laminar" else "still laminar"
    return (
        Caution(
            "forced-regime",
            f"{_share(where)} {found} by the {flow.criterion} criterion, but the {flow.forced} "
            "solution was asked for.",
            "Leave the regime open unless a comparison is wanted.",
            _PLACE,
        ),
    )


def _turbulent(flow: PipeFlow) -> NDArray[np.bool_]:
    return np.ravel(flow.turbulence) > 0


def _outside_range(flow: PipeFlow) -> tuple[Caution, ...]:
    record = turbulent_method(flow.method, flow.model)
    turbulent = _turbulent(flow)
    if not turbulent.any():
        return ()
    where = turbulent & ~in_range(flow, record.range)
    # In the transition itself every method is used below its own range.
    where &= np.ravel(flow.regime) == "turbulent"
    if not where.any():
        return ()
    index = np.ravel(flow.local_flow_index)[where]
    reynolds = np.ravel(flow.reynolds)[where]
    return (
        Caution(
            "outside-method-range",
            f"{_share(where)} outside the range in which {record.name} was tested: flow index "
            f"{_span(index)}, Reynolds number {_span(reynolds)}.",
            f"{record.validity} Compare the other methods.",
            _PLACE,
        ),
    )


def _rough(flow: PipeFlow) -> tuple[Caution, ...]:
    where = _turbulent(flow) & (np.ravel(flow.roughness) > 0)
    if flow.model.key == "newtonian" or not where.any():
        return ()
    return (
        Caution(
            "roughness-rule",
            f"{_share(where)} turbulent in a rough pipe; no method is published for that with this "
            "product, so the roughness is added as in Colebrook and White's formula.",
            "Take it as an estimate that is never below the Newtonian fully rough value.",
            _PLACE,
        ),
    )


def _very_rough(flow: PipeFlow) -> tuple[Caution, ...]:
    ratio = np.ravel(flow.roughness / flow.diameter)
    where = _turbulent(flow) & (ratio > ROUGHEST)
    if not where.any():
        return ()
    return (
        Caution(
            "very-rough",
            f"The roughness is {ratio.max():.3g} diameters; the friction formulas hold up to "
            f"{ROUGHEST:g}.",
            "Take the free inside diameter of the fouled or lined pipe instead.",
            _PLACE,
        ),
    )


def _span(values: NDArray[np.float64]) -> str:
    low, high = float(values.min()), float(values.max())
    return f"{low:.3g}" if high - low < 0.005 * high else f"{low:.3g} to {high:.3g}"
