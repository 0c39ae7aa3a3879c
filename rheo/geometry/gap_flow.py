"""Flow between a rotating cylinder and its vessel, of any width, partly at rest or not.

ω = ½∫γ̇ d(ln τ) from the stress at the cup to the stress at the bob (Krieger & Maron 1952). With
y = ln(γ̇/γ̇_i), s the logarithmic slope of the flow curve and γ̇_o the rate at the cup (0 when it
rests there) this is taken as

    ω = γ̇_o ln(R_o/R_i) + ½∫(γ̇ - γ̇_o) s dy,

which holds its digits in the narrowest gap: the width of the gap enters exactly, and an error of
the lower limit only in second order, since the integrand vanishes there.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import cache

import numpy as np
from numpy.typing import NDArray

from rheo.geometry.curve_integrals import unit_rule
from rheo.models import Model
from rheo.models.inverse import rate_from_stress
from rheo.models.monotone import solve_log

FloatArray = NDArray[np.float64]

# The range of ln(rate) across the gap decides how many panels it needs. Deeper than exp(-42)
# nothing is left in double precision.
_EDGES = (0.0, 1.6, 3.6, 6.6, 11.0, 17.5, 27.0, 42.0)
_REACHES = (1.6, 6.6, 42.0)
_FINEST_PANEL = 0.67
_POINTS = (12, 14, 16)
_TOLERANCE = 1e-12
_BLOCK = 1 << 19


@cache
def _unit_panels(reach: float, level: int) -> tuple[FloatArray, FloatArray]:
    """Return nodes and weights on [0, 1], finer towards the bob at 0."""
    edges = np.asarray([edge for edge in _EDGES if edge <= reach])
    if level == 1:
        edges = np.sort(np.concatenate([edges, 0.5 * (edges[1:] + edges[:-1])]))
    if level == 2:
        edges = np.linspace(0.0, reach, 1 + int(np.ceil(reach / _FINEST_PANEL)))
    edges = edges / reach
    nodes, weights = unit_rule(_POINTS[level])
    widths = np.diff(edges)[:, np.newaxis]
    return (edges[:-1, np.newaxis] + widths * nodes).ravel(), (widths * weights).ravel()


def _across(
    model: Model, rate: FloatArray, cup_rate: FloatArray, depth: FloatArray, level: int
) -> FloatArray:
    """Return ∫(γ̇ - γ̇_o) s dy over `depth` below the bob; all arguments flat and of one size."""
    result = np.empty(rate.shape)
    lower = 0.0
    for reach in _REACHES:
        here = np.flatnonzero((depth > lower) & (depth <= reach))
        lower = reach
        nodes, weights = _unit_panels(reach, level)
        step = max(1, _BLOCK // nodes.size)
        for start in range(0, here.size, step):
            part = here[start : start + step, np.newaxis]
            local = model.at(part)
            node_rate = rate[part] * np.exp(-depth[part] * nodes)
            values = (node_rate - cup_rate[part]) * local.record.log_slope(node_rate, *local)
            result[part[:, 0]] = (values @ weights) * depth[part[:, 0]]
    return result


def speed_and_slope(level: int | None) -> Callable[..., tuple[FloatArray, FloatArray]]:
    """Return ``relation(model, rate, log_ratio)`` -> angular speed and d ln(ω)/d ln(rate).

    On one level of panels, or with the two finer ones as a check where `level` is None.
    """

    def relation(
        model: Model, rate: FloatArray, log_ratio: FloatArray
    ) -> tuple[FloatArray, FloatArray]:
        top = model.record.stress(rate, *model)
        slope = model.record.log_slope(rate, *model)
        near = rate * np.exp(np.maximum(-2.0 * log_ratio / np.maximum(slope, 0.01), -_EDGES[-1]))
        cup_rate = rate_from_stress(model, top * np.exp(-2.0 * log_ratio), near)
        cup_rate = np.minimum(cup_rate, rate)
        flows = cup_rate > 0
        depth = np.minimum(np.log(rate / np.where(flows, cup_rate, rate * 1e-30)), _EDGES[-1])
        # Where the two rates agree to the last digit the gap has no width that could be seen.
        depth = np.maximum(depth, 1e-300)
        if level is None:
            inner = _checked(model, rate, cup_rate, depth)
        else:
            inner = _across(model, rate, cup_rate, depth, level)
        width = np.where(np.isfinite(log_ratio), log_ratio, 0.0)
        speed = cup_rate * width + 0.5 * inner
        drop = -np.expm1(-depth) * rate
        return speed, 0.5 * drop * slope / speed

    return relation


def _checked(model: Model, rate: FloatArray, cup_rate: FloatArray, depth: FloatArray) -> FloatArray:
    coarse = _across(model, rate, cup_rate, depth, 0)
    fine = _across(model, rate, cup_rate, depth, 1)
    doubtful = np.abs(fine - coarse) > _TOLERANCE * np.abs(fine)
    if np.any(doubtful):
        fine[doubtful] = _across(
            model.at(doubtful),
            rate[doubtful],
            cup_rate[doubtful],
            depth[doubtful],
            2,
        )
    return fine


def angular_speed(model: Model, bob_rate: FloatArray, log_ratio: FloatArray) -> FloatArray:
    """Return the angular speed at which the fluid is sheared at `bob_rate` at the bob.

    Parameters
    ----------
    model : Model
        Flow curve; parameters broadcast.
    bob_rate : array
        Shear rate at the inner cylinder [1/s], above 0.
    log_ratio : array
        ln(outer radius/inner radius), above 0; infinite for a vessel without end.

    Returns
    -------
    array
        Angular speed [rad/s], to 1e-12 relative.
    """
    shape = np.broadcast_shapes(np.shape(bob_rate), np.shape(log_ratio), model.shape)

    def flatten(value: FloatArray) -> FloatArray:
        return np.broadcast_to(value, shape).reshape(-1)

    speed, _ = speed_and_slope(None)(
        model.map(flatten), flatten(np.asarray(bob_rate)), flatten(np.asarray(log_ratio))
    )
    return speed.reshape(shape)


def bob_rate(model: Model, speed: FloatArray, log_ratio: FloatArray) -> FloatArray:
    """Return the shear rate at the bob [1/s] at an angular speed [rad/s] above 0.

    Parameters as for `angular_speed`.
    """
    newtonian = newtonian_bob_rate(speed, log_ratio)
    slope = model.record.log_slope(newtonian, *model)
    start = power_law_bob_rate(speed, log_ratio, np.maximum(slope, 1e-6))
    rough = solve_log(speed_and_slope(0), model, speed, start, (log_ratio,))
    return solve_log(speed_and_slope(None), model, speed, rough, (log_ratio,))


def newtonian_bob_rate(speed: FloatArray, log_ratio: FloatArray) -> FloatArray:
    """Return 2ω/(1 - (R_i/R_o)²), the rate at the bob for a Newtonian fluid [1/s]."""
    return -2.0 * speed / np.expm1(-2.0 * log_ratio)


def power_law_bob_rate(
    speed: FloatArray, log_ratio: FloatArray, flow_index: FloatArray
) -> FloatArray:
    """Return 2ω/(n(1 - (R_i/R_o)^(2/n))), the rate at the bob for a power law [1/s]."""
    return -2.0 * speed / (flow_index * np.expm1(-2.0 * log_ratio / flow_index))
