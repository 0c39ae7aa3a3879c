"""One rising curve of wall stress against velocity through laminar, transition and turbulent flow.

Up to the critical velocity V_c of the criterion the flow is laminar. From V_c to 4000/2100 of it
(the span of the Newtonian transition, common practice) the wall stress follows the straight line
in logarithms from the laminar value at V_c to the value at the end of the span. Beyond that it is
the turbulent value. Nowhere is it less than laminar flow would need: where the turbulent curve
still lies below the laminar one the laminar stress stands and the regime is called transition. The
curve is continuous and rises strictly. The span, the straight line and the laminar floor are our
engineering choices; no method is published for the transition of all these fluids.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rheo.geometry.tube_flow import wall_rate
from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.record import Criterion, TurbulentMethod
from rheo.hydraulics.transition.stability import surely_stable
from rheo.hydraulics.turbulent_curve import (
    laminar_velocity,
    stress_at_velocity,
    velocity_at_stress,
)

LAMINAR, TRANSITION, TURBULENT = 0, 1, 2
REGIMES = np.array(["laminar", "transition", "turbulent"])
TRANSITION_SPAN = 4000.0 / 2100.0


@dataclass(frozen=True)
class Law:
    """The choice of a criterion and a turbulent method."""

    criterion: Criterion
    method: TurbulentMethod


@dataclass(frozen=True)
class Wall:
    """What happens at the wall: stress [Pa], its shear rate [1/s] and the regime, 1-D arrays."""

    stress: FloatArray
    rate: FloatArray
    regime: NDArray[np.intp]


@dataclass(frozen=True)
class Span:
    """The transition: velocities [m/s] and wall stresses [Pa] at its two ends, 1-D arrays."""

    start_velocity: FloatArray
    start_stress: FloatArray
    end_velocity: FloatArray
    end_stress: FloatArray

    def exponent(self) -> FloatArray:
        """Return d ln(stress)/d ln(velocity) of the straight line between the ends."""
        return np.log(self.end_stress / self.start_stress) / np.log(TRANSITION_SPAN)


def critical_point(pipe: Pipe, criterion: Criterion) -> tuple[FloatArray, FloatArray]:
    """Return critical velocity [m/s] and laminar wall stress [Pa] there.

    0 or infinite where stability does not depend on the velocity.
    """
    rate = criterion.critical_wall_rate(pipe)
    velocity, stress = rate.copy(), rate.copy()
    found = np.isfinite(rate) & (rate > 0)
    if np.any(found):
        part = pipe.take(found)
        velocity[found] = laminar_velocity(part, rate[found])
        stress[found] = part.model.record.stress(rate[found], *part.model)
    return velocity, stress


def span_of(pipe: Pipe, law: Law, start: tuple[FloatArray, FloatArray]) -> Span:
    """Return the transition that starts at a critical point found before."""
    velocity, stress = start
    end_velocity = TRANSITION_SPAN * velocity
    end_stress = stress.copy()
    found = np.isfinite(velocity) & (velocity > 0)
    if np.any(found):
        part = pipe.take(found)
        rate = wall_rate(part.model, 8.0 * end_velocity[found] / part.diameter)
        laminar = part.model.record.stress(rate, *part.model)
        turbulent = stress_at_velocity(part, law.method, end_velocity[found], rate)
        end_stress[found] = np.fmax(laminar, turbulent)
    return Span(velocity, stress, end_velocity, end_stress)


def wall_at_velocity(pipe: Pipe, velocity: FloatArray, laminar_rate: FloatArray, law: Law) -> Wall:
    """Return stress, rate and regime at a velocity [m/s] above 0, whatever the regime.

    Parameters
    ----------
    pipe : Pipe
        Product and pipe, flat.
    velocity : array
        Mean velocity [m/s].
    laminar_rate : array
        Wall shear rate [1/s] of laminar flow at that velocity.
    law : Law
        Criterion and turbulent method.
    """
    stress = pipe.model.record.stress(laminar_rate, *pipe.model)
    wall = Wall(stress, laminar_rate.copy(), np.zeros(pipe.size, dtype=np.intp))
    open_ = np.flatnonzero(~_laminar_at_sight(pipe, laminar_rate, law))
    if open_.size == 0:
        return wall
    start = critical_point(pipe.take(open_), law.criterion)
    beyond = velocity[open_] > start[0]
    index = open_[beyond]
    if index.size == 0:
        return wall
    part, speed = pipe.take(index), velocity[index]
    span = span_of(part, law, (start[0][beyond], start[1][beyond]))
    inside = speed < span.end_velocity
    raised = np.empty(index.size)
    if np.any(inside):
        ratio = speed[inside] / span.start_velocity[inside]
        raised[inside] = span.start_stress[inside] * ratio ** span.exponent()[inside]
    full = ~inside
    if np.any(full):
        raised[full] = stress_at_velocity(
            part.take(full), law.method, speed[full], laminar_rate[index[full]]
        )
    above = raised > stress[index]
    wall.stress[index] = np.fmax(raised, stress[index])
    wall.regime[index] = np.where(full & above, TURBULENT, TRANSITION)
    moved = index[above]
    if moved.size:
        wall.rate[moved] = pipe.take(moved).model.rate(wall.stress[moved])
    return wall


def velocity_at_wall(
    pipe: Pipe, stress: FloatArray, law: Law
) -> tuple[FloatArray, NDArray[np.intp]]:
    """Return mean velocity [m/s] and regime at a wall stress [Pa]; 0 at or below the yield stress.

    The exact inverse of `wall_at_velocity`: no root is sought beyond the critical velocity's own.
    """
    rate = pipe.model.rate(stress)
    velocity = np.zeros(pipe.size)
    regime = np.zeros(pipe.size, dtype=np.intp)
    flowing = np.flatnonzero(rate > 0)
    if flowing.size == 0:
        return velocity, regime
    moving = pipe.take(flowing)
    velocity[flowing] = laminar_velocity(moving, rate[flowing])
    open_ = flowing[~_laminar_at_sight(moving, rate[flowing], law)]
    if open_.size == 0:
        return velocity, regime
    start = critical_point(pipe.take(open_), law.criterion)
    beyond = velocity[open_] > start[0]
    index = open_[beyond]
    if index.size == 0:
        return velocity, regime
    part = pipe.take(index)
    span = span_of(part, law, (start[0][beyond], start[1][beyond]))
    inside = stress[index] < span.end_stress
    slowed = np.empty(index.size)
    if np.any(inside):
        ratio = stress[index][inside] / span.start_stress[inside]
        slowed[inside] = span.start_velocity[inside] * ratio ** (1.0 / span.exponent()[inside])
    full = ~inside
    if np.any(full):
        slowed[full] = velocity_at_stress(
            part.take(full), law.method, stress[index[full]], rate[index[full]]
        )
    below = slowed < velocity[index]
    velocity[index] = np.fmin(slowed, velocity[index])
    regime[index] = np.where(full & below, TURBULENT, TRANSITION)
    return velocity, regime


def _laminar_at_sight(pipe: Pipe, wall_rate: FloatArray, law: Law) -> NDArray[np.bool_]:
    """Return where flow is laminar without a search; only the stability criterion has a bound."""
    if law.criterion.key != "stability":
        return np.zeros(pipe.size, dtype=bool)
    return surely_stable(pipe, wall_rate)
