"""One rising curve of wall stress against velocity through laminar, transition and turbulent flow.

Let ζ be the criterion's number over its critical value at a velocity. Up to ζ = 1 the flow is
laminar. From ζ = S = 4000/2100, the span of the Newtonian transition (common practice), it is
turbulent. Between them the logarithm of the wall stress goes from the laminar to the turbulent
value at the same velocity with the weight 1 - (1 - ln ζ/ln S)². For shear-thickening fluids S is
raised to the power 2n - 1, because their number hardly changes with the velocity. Nowhere is the
stress less than laminar flow would need: where the turbulent curve still lies below the laminar one
the laminar stress stands and the regime is called transition.

So the curve is continuous and rises strictly, and the pressure gradient falls as the pipe widens
(unless the wall is very rough). The span, the weight and the laminar floor are our engineering
choices; no method is published for the transition of all these fluids.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rheo.geometry.tube_flow import wall_rate
from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.laminar import laminar_velocity, rate_at_stress
from rheo.hydraulics.record import Criterion, TurbulentMethod
from rheo.hydraulics.roots import IndexArray, solve_rising
from rheo.hydraulics.transition.stability import surely_stable
from rheo.hydraulics.turbulent_curve import stress_at_velocity, velocity_at_stress

LAMINAR, TRANSITION, TURBULENT = 0, 1, 2
REGIMES = np.array(["laminar", "transition", "turbulent"])
_LOG_SPAN = np.log(4000.0 / 2100.0)


@dataclass(frozen=True)
class Law:
    """The choice of a criterion and a turbulent method."""

    criterion: Criterion
    method: TurbulentMethod


@dataclass(frozen=True)
class Wall:
    """What happens at the wall: 1-D arrays.

    Parameters
    ----------
    stress, rate : array
        Wall stress [Pa] and the shear rate [1/s] of the flow curve there.
    regime : array of int
        An index into `REGIMES`.
    turbulence : array
        The weight of the turbulent value [-]: 0 laminar, 1 turbulent.
    """

    stress: FloatArray
    rate: FloatArray
    regime: NDArray[np.intp]
    turbulence: FloatArray


def progress(pipe: Pipe, laminar_rate: FloatArray, criterion: Criterion) -> FloatArray:
    """Return ln ζ/ln S [-] at the wall shear rate [1/s] of laminar flow: 0 and 1 at the ends."""
    flow_index = pipe.model.parameters.get("flow_index", np.ones(pipe.size))
    widening = np.maximum(2.0 * flow_index - 1.0, 1.0)
    return np.log(criterion.number(pipe, laminar_rate)) / (_LOG_SPAN * widening)


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
    wall = Wall(
        stress, laminar_rate.copy(), np.zeros(pipe.size, dtype=np.intp), np.zeros(pipe.size)
    )
    index = np.flatnonzero(~_laminar_at_sight(pipe, velocity, laminar_rate, law))
    if index.size:
        share = progress(pipe.take(index), laminar_rate[index], law.criterion)
        index, share = index[share > 0], share[share > 0]
    if index.size == 0:
        return wall
    part = pipe.take(index)
    raised = blend(part, velocity[index], laminar_rate[index], share, law.method)
    above = raised > stress[index]
    stress[index] = np.where(above, raised, stress[index])
    wall.regime[index] = np.where((share >= 1) & above, TURBULENT, TRANSITION)
    wall.turbulence[index] = _weight(share)
    moved = index[above]
    if moved.size:
        wall.rate[moved] = rate_at_stress(pipe.take(moved), stress[moved])
    return wall


def blend(
    pipe: Pipe,
    velocity: FloatArray,
    laminar_rate: FloatArray,
    share: FloatArray,
    method: TurbulentMethod,
    floor: bool = True,
) -> FloatArray:
    """Return the wall stress [Pa] in and beyond the transition.

    Parameters
    ----------
    pipe : Pipe
        Product and pipe, flat.
    velocity, laminar_rate : array
        Mean velocity [m/s] and wall shear rate [1/s] of laminar flow at it.
    share : array
        Progress through the transition [-], 0 or more.
    method : TurbulentMethod
        Friction method.
    floor : bool
        Whether the stress is at least the laminar one.
    """
    laminar = pipe.model.record.stress(laminar_rate, *pipe.model)
    turbulent = stress_at_velocity(pipe, method, velocity, laminar_rate)
    if not floor:
        return turbulent
    ratio = np.fmax(turbulent / laminar, 1.0)
    return np.where(share >= 1, np.fmax(turbulent, laminar), laminar * ratio ** _weight(share))


def _weight(share: FloatArray) -> FloatArray:
    return 1.0 - np.maximum(1.0 - share, 0.0) ** 2


def velocity_at_wall(
    pipe: Pipe, stress: FloatArray, law: Law
) -> tuple[FloatArray, NDArray[np.intp]]:
    """Return mean velocity [m/s] and regime at a wall stress [Pa]; 0 at or below the yield stress.

    The inverse of `wall_at_velocity`. Outside the transition no root of it is sought; inside, the
    velocity lies between those of the turbulent and the laminar curve at the same stress.
    """
    rate = rate_at_stress(pipe, stress)
    velocity = np.zeros(pipe.size)
    regime = np.zeros(pipe.size, dtype=np.intp)
    # A curve with a largest stress that is exceeded: nothing holds the flow.
    velocity[np.isposinf(rate)], regime[np.isposinf(rate)] = np.inf, TURBULENT
    index = np.flatnonzero((rate > 0) & np.isfinite(rate))
    velocity[index] = laminar_velocity(pipe.take(index), rate[index])
    index = index[~_laminar_at_sight(pipe.take(index), velocity[index], rate[index], law)]
    if index.size:
        index = index[progress(pipe.take(index), rate[index], law.criterion) > 0]
    if index.size == 0:
        return velocity, regime
    part, wanted, highest = pipe.take(index), stress[index], velocity[index]
    turbulent = velocity_at_stress(part, law.method, wanted, rate[index])
    below = turbulent < highest
    # A velocity of 0 or less means that the method has no solution at so low a stress.
    solved = turbulent > 0
    found = np.where(below & solved, turbulent, highest)
    share = progress(part, wall_rate(part.model, 8.0 * found / part.diameter), law.criterion)
    inside = np.flatnonzero(below & ((share < 1) | ~solved))
    if inside.size:
        found[inside], share[inside] = _inside_transition(
            part.take(inside), wanted[inside], turbulent[inside], highest[inside], law
        )
    velocity[index] = found
    regime[index] = np.where((share >= 1) & below, TURBULENT, TRANSITION)
    return velocity, regime


def _inside_transition(
    pipe: Pipe, stress: FloatArray, lowest: FloatArray, highest: FloatArray, law: Law
) -> tuple[FloatArray, FloatArray]:
    """Return velocity [m/s] and progress [-] in the transition at a wall stress [Pa]."""
    target = np.log(stress)

    def laminar_rate(part: Pipe, velocity: FloatArray) -> FloatArray:
        return wall_rate(part.model, 8.0 * velocity / part.diameter)

    def gap(log_velocity: FloatArray, index: IndexArray) -> FloatArray:
        part, velocity = pipe.take(index), np.exp(log_velocity)
        rate = laminar_rate(part, velocity)
        share = np.maximum(progress(part, rate, law.criterion), 0.0)
        return np.log(blend(part, velocity, rate, share, law.method)) - target[index]

    start = np.log(np.where(lowest > 0, np.sqrt(np.maximum(lowest, 0.0) * highest), highest))
    velocity = np.exp(solve_rising(gap, start, step=0.1))
    return velocity, progress(pipe, laminar_rate(pipe, velocity), law.criterion)


def _laminar_at_sight(
    pipe: Pipe, velocity: FloatArray, wall_rate: FloatArray, law: Law
) -> NDArray[np.bool_]:
    """Return where flow is laminar without a search; only the stability criterion has a bound."""
    if law.criterion.key != "stability":
        return np.zeros(pipe.size, dtype=bool)
    return surely_stable(pipe, velocity, wall_rate)
