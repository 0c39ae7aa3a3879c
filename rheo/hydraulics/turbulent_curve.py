"""The turbulent curve of one method: velocity from wall stress and back, smooth and rough."""

from __future__ import annotations

import numpy as np

from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.fold import Bridge, find_bridge
from rheo.hydraulics.record import TurbulentMethod
from rheo.hydraulics.roots import IndexArray, solve_rising


def with_roughness(smooth: FloatArray, relative_roughness: FloatArray) -> FloatArray:
    """Return 1/√f of a rough pipe from that of a smooth one at the same wall stress.

    1/√f = -4 log10(10^(-s/4) + ε/3.7D) with s the smooth value. With Colebrook and White's smooth
    value it is their formula. For any other method it is our engineering choice: it tends to the
    smooth value for a small roughness, and is never easier than the Newtonian fully rough value.

    Parameters
    ----------
    smooth : array
        1/√f [-] in a smooth pipe.
    relative_roughness : array
        ε/D [-].
    """
    rough = relative_roughness > 0
    if not np.any(rough):
        return smooth
    with np.errstate(over="ignore"):
        added = 10.0 ** (0.25 * np.minimum(smooth, 1200.0)) * relative_roughness / 3.7
    return np.where(rough, smooth - 4.0 / np.log(10.0) * np.log1p(added), smooth)


def curve_at(
    pipe: Pipe, method: TurbulentMethod, bridge: Bridge, log_rate: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return wall stress [Pa], friction speed √(2τw/ρ) [m/s] and velocity [m/s] at ln(rate).

    The velocity is 0 or less where the method has no solution.
    """
    stress, smooth = method.curve(pipe, np.exp(log_rate))
    speed = np.sqrt(2.0 * stress / pipe.density)
    smooth = np.minimum(smooth, bridge.limit(log_rate) / speed)
    return stress, speed, speed * with_roughness(smooth, pipe.roughness / pipe.diameter)


def stress_at_velocity(
    pipe: Pipe, method: TurbulentMethod, velocity: FloatArray, laminar_rate: FloatArray
) -> FloatArray:
    """Return the turbulent wall stress [Pa] at a velocity [m/s].

    Parameters
    ----------
    pipe : Pipe
        Product and pipe, flat.
    method : TurbulentMethod
        Friction method.
    velocity : array
        Mean velocity [m/s], above 0.
    laminar_rate : array
        Wall shear rate [1/s] of laminar flow at that velocity.

    Returns
    -------
    array
        NaN where the method has no solution: a fluid of flow index 2 at a low Reynolds number.
    """
    if method.along_laminar and not np.any(pipe.roughness):
        return method.curve(pipe, laminar_rate)[0]
    bridge = find_bridge(pipe, method)

    def gap(log_rate: FloatArray, index: IndexArray) -> FloatArray:
        part = pipe.take(index)
        _, speed, found = curve_at(part, method, bridge.take(index), log_rate)
        return (found - velocity[index]) / speed

    start = np.log(laminar_rate)
    if not method.along_laminar:
        start = start + _rise_above_laminar(pipe, velocity, laminar_rate)
    root = solve_rising(gap, start)
    solved = np.isfinite(root)
    stress = np.full(pipe.size, np.nan)
    if np.any(solved):
        stress[solved] = method.curve(pipe.take(solved), np.exp(root[solved]))[0]
    return stress


def velocity_at_stress(
    pipe: Pipe, method: TurbulentMethod, stress: FloatArray, rate: FloatArray
) -> FloatArray:
    """Return the turbulent velocity [m/s] at a wall stress [Pa] and its shear rate [1/s]."""
    log_rate = np.log(rate)
    if method.along_laminar:
        target = np.log(stress)

        def gap(at: FloatArray, index: IndexArray) -> FloatArray:
            return np.log(method.curve(pipe.take(index), np.exp(at))[0]) - target[index]

        log_rate = solve_rising(gap, log_rate)
    return curve_at(pipe, method, find_bridge(pipe, method), log_rate)[2]


def _rise_above_laminar(pipe: Pipe, velocity: FloatArray, rate: FloatArray) -> FloatArray:
    """Return a guess of ln(turbulent over laminar wall rate) from a friction factor of 0.005."""
    stress = pipe.model.record.stress(rate, *pipe.model)
    slope = pipe.model.record.log_slope(rate, *pipe.model)
    rise = np.log(0.0025 * pipe.density * velocity**2 / stress)
    return np.clip(rise, -3.0, 3.0) / np.maximum(slope, 0.1)
