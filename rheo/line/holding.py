"""Holding tube: how long it must be so that the fastest particle stays long enough."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import Caution
from rheo.geometry import tube_flow
from rheo.hydraulics import PipeFlow, pipe_flow
from rheo.line.checks import require_positive
from rheo.line.parts import FloatArray
from rheo.line.product import FlowCurveSource, Product, interval
from rheo.line.safety import FOOD_SAFETY

# Common practice: in turbulent flow the fastest particle is taken to run at 1.25 V.
TURBULENT_VELOCITY_RATIO = 1.25


@dataclass(frozen=True, eq=False)
class HoldingTube:
    """A holding tube.

    Parameters
    ----------
    length : array
        For the hold time by the fastest particle [m].
    length_by_mean_velocity : array
        What the mean velocity would give [m]; too short, shown for comparison.
    velocity_ratio : array
        u_max/V [-].
    fastest_velocity : array
        [m/s].
    pressure_drop : array
        Over `length` [Pa].
    length_interval : tuple of array or None
        Middle 95 % over the product's draws [m].
    sentence : str
        The result in words.
    cautions : tuple of Caution
        What to know about it.
    safety : str
        The safety wording.
    """

    length: FloatArray
    length_by_mean_velocity: FloatArray
    velocity_ratio: FloatArray
    fastest_velocity: FloatArray
    pressure_drop: FloatArray
    length_interval: tuple[FloatArray, FloatArray] | None
    sentence: str
    cautions: tuple[Caution, ...]
    safety: str = FOOD_SAFETY


def fastest_velocity_ratio(flow: PipeFlow) -> FloatArray:
    """Return the velocity of the fastest particle over the mean [-], on the safe side.

    Laminar: that of the product's profile. Turbulent: that of the logarithmic profile, at least
    1.25. In transition: the largest of the laminar value and of these.
    """
    regime = np.asarray(flow.regime)
    if np.all(regime == "laminar"):
        return np.asarray(flow.velocity_ratio)
    laminar = tube_flow.velocity_ratio(flow.model, np.asarray(flow.laminar_wall_rate))
    turbulent = np.maximum(flow.velocity_ratio, TURBULENT_VELOCITY_RATIO)
    return np.where(
        regime == "laminar",
        laminar,
        np.where(regime == "transition", np.maximum(laminar, turbulent), turbulent),
    )


def holding_tube(
    product: Product,
    diameter: ArrayLike,
    flow: ArrayLike,
    hold_time: float,
    temperature: float | None = None,
) -> HoldingTube:
    """Return the length of tube that holds the fastest particle long enough.

    In laminar flow the fastest particle moves on the axis at V (u_max/V) of the product's own
    velocity profile; in turbulent flow that of the logarithmic profile is taken, at least 1.25 V
    (common practice), in transition the laminar value where that is larger.

    Parameters
    ----------
    product : Product
        At the holding temperature.
    diameter, flow : array_like
        Inside diameter [m] and flow [m3/s].
    hold_time : float
        [s].
    temperature : float, optional
        Holding temperature [K]; the product's own when absent.

    Returns
    -------
    HoldingTube
        Straight, evenly heated tube without slip or swirl.
    """
    require_positive(hold_time, "hold_time [s]", "holding tube")
    require_positive(diameter, "diameter [m]", "holding tube")
    require_positive(flow, "flow [m3/s]", "holding tube")
    at = product.temperature if temperature is None else temperature
    size, rate = np.asarray(diameter, dtype=float), np.asarray(flow, dtype=float)
    velocity = 4.0 * rate / (np.pi * size**2)

    def found(source: FlowCurveSource | None, extra: bool) -> tuple[FloatArray, FloatArray, object]:
        wide = (lambda value: value[..., np.newaxis]) if extra else (lambda value: value)
        flow_there = pipe_flow(
            product.model_at(at, source),
            diameter=wide(size),
            velocity=wide(velocity),
            density=product.density,
        )
        ratio, regime = fastest_velocity_ratio(flow_there), np.asarray(flow_there.regime)
        return ratio, np.asarray(flow_there.pressure_gradient), regime

    ratio, gradient, regime = found(None, False)
    fastest = ratio * velocity
    length = fastest * hold_time
    limits = None
    if product.draws:
        ratios = product.over_draws(lambda source: found(source, True)[0])
        limits = interval(ratios * (velocity * hold_time)[..., np.newaxis])
    cautions = []
    if np.any(regime != "laminar"):
        cautions.append(
            Caution(
                "holding-tube-not-laminar",
                "The flow in the holding tube is not laminar everywhere; at least 1.25 times the "
                "mean velocity is taken there (common practice).",
                "Food law in many places asks for the laminar ratio of 2 unless the flow is shown "
                "to be turbulent: ask the process authority.",
                "holding tube",
            )
        )
    sentence = "Holding tubes for several cases at once."
    if np.ndim(length) == 0:
        sentence = (
            f"The fastest particle runs at {float(ratio):.2f} times the mean velocity, so "
            f"{hold_time:g} s need {float(length):.3g} m of tube; the mean velocity would give "
            f"{float(velocity * hold_time):.3g} m, which is too short."
        )
    return HoldingTube(
        length,
        velocity * hold_time,
        ratio,
        fastest,
        gradient * length,
        limits,
        sentence,
        tuple(cautions),
    )
