"""How long the parts of the stream stay in a pipe, and how far in the profile is formed."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from rheo.errors import Caution
from rheo.geometry.curve_integrals import moment_ratio
from rheo.hydraulics.conditions import FloatArray
from rheo.hydraulics.profile import log_slope
from rheo.hydraulics.record import Range
from rheo.hydraulics.rivals import in_range
from rheo.hydraulics.roots import IndexArray, solve_rising
from rheo.models import Model

if TYPE_CHECKING:
    from rheo.hydraulics.pipe_result import PipeFlow

# Where the logarithmic profile has its mean: ln(1 - r/R) = -3/2.
_MEAN_DISTANCE = np.exp(-1.5)
_POINTS = 121
# In which the laminar length to develop was worked out.
_DEVELOPING = Range(flow_index=(0.4, 1.5), reynolds=(0.0, 1000.0))


@dataclass(frozen=True, eq=False)
class ResidenceCurve:
    """The residence-time distribution without mixing across the stream.

    Parameters
    ----------
    time_ratio : array
        Time in the pipe over the mean time [-], rising along the last axis.
    fraction_left : array
        Share of the flow that has left by then [-].
    """

    time_ratio: FloatArray
    fraction_left: FloatArray


@dataclass(frozen=True, eq=False)
class DevelopingLength:
    """Length from the entrance in which the velocity profile forms.

    Parameters
    ----------
    length : array
        [m].
    cautions : tuple of Caution
        Where the equation was not tested.
    """

    length: FloatArray
    cautions: tuple[Caution, ...]


def fastest_time_ratio(flow: PipeFlow) -> FloatArray:
    """Return the time of the fastest particle over the mean time [-], V/u_max."""
    return 1.0 / flow.velocity_ratio


def fraction_faster_than_mean(flow: PipeFlow) -> FloatArray:
    """Return the share of the flow that moves faster than V [-]: 3/4 for laminar Newtonian flow.

    Turbulent by the logarithmic profile; in transition the two are weighted as the wall stress is.
    """
    share = np.ravel(flow.turbulence)
    result = np.zeros(share.size)
    calm, rough = np.flatnonzero(share < 1), np.flatnonzero(share > 0)
    if calm.size:
        model = flow.pipe.model.map(lambda value: value[calm])
        result[calm] += (1.0 - share[calm]) * _laminar_faster(
            model, np.ravel(flow.laminar_wall_rate)[calm]
        )
    if rough.size:
        slope = log_slope(np.ravel(flow.friction_factor)[rough])
        inside = _turbulent_flow_inside(np.array(_MEAN_DISTANCE), slope)
        result[rough] += share[rough] * inside
    return result.reshape(np.shape(flow.wall_stress))[()]


def _laminar_faster(model: Model, wall_rate: FloatArray) -> FloatArray:
    """Return the share of laminar flow faster than V, found at the rate where u = V."""
    stress = model.record.stress(wall_rate, *model)
    whole, flow = moment_ratio(model, wall_rate, 0), moment_ratio(model, wall_rate, 2)

    def place(
        log_rate: FloatArray, index: IndexArray
    ) -> tuple[Model, FloatArray, FloatArray, FloatArray]:
        local = model.map(lambda value: value[index])
        rate = np.exp(log_rate)
        radius = local.record.stress(rate, *local) / stress[index]
        inner = moment_ratio(local, rate, 0) * radius * rate / wall_rate[index]
        return local, rate, radius, (whole[index] - inner) / flow[index]

    top = np.log(wall_rate)
    root = solve_rising(lambda at, index: 1.0 - place(at, index)[3], top - 0.3, step=0.3)
    local, rate, radius, speed = place(root, np.arange(top.size))
    below = moment_ratio(local, rate, 2) * rate / (flow * wall_rate)
    return radius**2 * speed + radius**3 * below


def residence_curve(flow: PipeFlow, points: int = _POINTS) -> ResidenceCurve:
    """Return the share of the flow that has left after a time.

    Every particle stays at its radius, so that the fastest leaves first. Turbulent by the
    logarithmic profile; in transition the two profiles are weighted as the wall stress is.

    Parameters
    ----------
    flow : PipeFlow
        Result of `pipe_flow`.
    points : int
        Number of places along the radius.

    Returns
    -------
    ResidenceCurve
        The shape of the flow and a last axis for the points.
    """
    # Dense near the wall, where the time goes to infinity.
    distance = np.linspace(1.0, 0.0, points + 1)[:-1] ** 2
    radius = 1.0 - distance
    share = np.asarray(flow.turbulence)[..., np.newaxis]
    wall_rate = np.asarray(flow.laminar_wall_rate)[..., np.newaxis]
    model = flow.model.with_new_axis()
    speed, inside = _laminar_flow_inside(model, wall_rate, radius)
    if np.any(share > 0):
        slope = log_slope(np.asarray(flow.friction_factor)[..., np.newaxis])
        # Next to the wall the logarithm turns negative; there the liquid stands.
        turbulent = np.maximum(1.0 + slope * (1.5 + np.log(distance)), 0.0)
        through = np.minimum(_turbulent_flow_inside(distance, slope), 1.0)
        speed = (1.0 - share) * speed + share * turbulent
        inside = (1.0 - share) * inside + share * np.maximum.accumulate(through, axis=-1)
    with np.errstate(divide="ignore"):
        return ResidenceCurve(1.0 / speed, inside)


def _laminar_flow_inside(
    model: Model, wall_rate: FloatArray, radius: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Return u/V and the share of the flow inside a radius, r²u/V + ∫r²(-du)/V."""
    stress = model.record.stress(wall_rate, *model) * radius
    rate = model.rate(stress)
    flowing = rate > 0
    safe = np.where(flowing, rate, 1.0)
    relative = np.where(flowing, rate, 0.0) / wall_rate
    whole, flow = moment_ratio(model, wall_rate, 0), moment_ratio(model, wall_rate, 2)
    speed = np.maximum(whole - moment_ratio(model, safe, 0) * radius * relative, 0.0) / flow
    return speed, radius**2 * speed + radius**3 * relative * moment_ratio(model, safe, 2) / flow


def _turbulent_flow_inside(distance: FloatArray, slope: FloatArray) -> FloatArray:
    """Return the share of the flow farther from the wall than a distance over R [-]."""
    y = distance
    area = (1.0 - y) ** 2
    # ∫ 2(1-y) ln y dy from y to 1.
    logarithm = -1.5 - (2.0 * (y * np.log(y) - y) - y**2 * (np.log(y) - 0.5))
    return area * (1.0 + 1.5 * slope) + slope * logarithm


def developing_length(flow: PipeFlow) -> DevelopingLength:
    """Return the length from a sharp entrance to 99 % of the developed centre-line velocity.

    Laminar, R. J. Poole & B. S. Ridley, J. Fluids Eng. 129 (2007) 1281: L/D = [(0.246n² - 0.675n +
    1.03)^1.6 + (0.0567Re)^1.6]^(1/1.6), flow index 0.4 to 1.5, Metzner-Reed number up to 1000.
    Turbulent, F. M. White, Fluid Mechanics: L/D = 4.4 Re^(1/6). Both from memory. In transition the
    longer of the two.

    Parameters
    ----------
    flow : PipeFlow
        Result of `pipe_flow`.

    Returns
    -------
    DevelopingLength
        In the shape of the flow.
    """
    index, reynolds = np.asarray(flow.local_flow_index), np.asarray(flow.reynolds)
    share = np.asarray(flow.turbulence)
    slow = (0.246 * index**2 - 0.675 * index + 1.03) ** 1.6
    laminar = (slow + (0.0567 * reynolds) ** 1.6) ** (1.0 / 1.6)
    turbulent = 4.4 * reynolds ** (1.0 / 6.0)
    diameters = np.where(
        share == 0, laminar, np.where(share == 1, turbulent, np.maximum(laminar, turbulent))
    )
    cautions: tuple[Caution, ...] = ()
    outside = (np.ravel(share) < 1) & ~in_range(flow, _DEVELOPING)
    if np.any(outside):
        cautions = (
            Caution(
                "developing-length-range",
                "The developing length is taken beyond the range in which its equation was tested "
                "(flow index 0.4 to 1.5, Reynolds number up to 1000).",
                "Take it as an order of magnitude.",
                "pipe",
            ),
        )
    return DevelopingLength((diameters * flow.diameter)[()], cautions)
