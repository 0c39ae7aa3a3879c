"""The velocity across the pipe: a plug in the middle, the shearing in a thin layer at the wall."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from rheo.report.display import shown, text, unit_label
from rheo.report.picture import Axis, Limit, Line, Mark, Panel, Picture, Strip, array

# The layer at the wall is where this share of the fall in velocity happens.
LAYER_SHARE = 0.9


def shear_layer(radius_ratio: ArrayLike, velocity: ArrayLike) -> float:
    """Return the thickness of the layer at the wall over the radius [-].

    It is the layer in which 90 % of the fall from the largest velocity to 0 happens.

    Parameters
    ----------
    radius_ratio : array_like, shape (n,)
        r/R, rising from 0 to 1 [-].
    velocity : array_like, shape (n,)
        Velocity there [m/s].

    Returns
    -------
    float
        Between 0 and 1; 0.68 for a Newtonian fluid in laminar flow.
    """
    ratio, speed = array(radius_ratio), array(velocity)
    return 1.0 - float(np.interp(-LAYER_SHARE * speed.max(), -speed, ratio))


def velocity_profile(
    radius_ratio: ArrayLike,
    velocity: ArrayLike,
    diameter: float,
    mean_velocity: float,
    plug: float = 0.0,
    *,
    system: str = "metric",
) -> Picture:
    """Draw the velocity across the pipe.

    Parameters
    ----------
    radius_ratio : array_like, shape (n,)
        r/R, rising from 0 to 1 [-].
    velocity : array_like, shape (n,)
        Velocity there [m/s].
    diameter, mean_velocity : float
        [m] and [m/s].
    plug : float
        Radius of the unsheared plug over R [-].
    system : str
        Unit system.

    Returns
    -------
    Picture
        With one panel; the pipe lies across it.
    """
    ratio, speed = array(radius_ratio), array(velocity)
    layer = shear_layer(ratio, speed)
    radius = 0.5 * float(shown(diameter, "diameter", system))
    across = shown(np.concatenate([speed[::-1], speed]), "velocity", system)
    position = radius * np.concatenate([-ratio[::-1], ratio])
    marks: list[Mark] = [
        Strip(radius * (1.0 - layer), radius, "90 % of the fall in velocity", axis="y"),
        Strip(-radius, -radius * (1.0 - layer), axis="y"),
        Limit(float(shown(mean_velocity, "velocity", system)), "mean", axis="x", colour="muted"),
    ]
    if plug > 0:
        ends = np.array([-plug, plug]) * radius
        top = float(across.max())
        marks.append(Line(np.full(2, top), ends, "plug, not sheared", style=1, width=5.0, dash=0))
    marks.append(Line(across, position, "velocity", dash=0))
    unit = unit_label("diameter", system)
    return Picture(
        key="velocity-profile",
        title="Velocity across the pipe",
        description=(
            f"Velocity against the distance from the axis. 90 % of the fall in velocity happens "
            f"within {text(layer * diameter / 2, 'diameter', system, digits=2)} of the wall."
        ),
        x=Axis("Velocity", unit_label("velocity", system), low=0.0),
        panels=(
            Panel(Axis("Distance from the axis", unit, low=-radius, high=radius), tuple(marks)),
        ),
        height=340.0,
    )
