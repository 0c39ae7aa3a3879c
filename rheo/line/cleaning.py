"""The flow that cleans a line, and its pressure drop with water."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from rheo.line.checks import require_positive
from rheo.line.constants import GRAVITY
from rheo.line.parts import FloatArray, Line
from rheo.line.product import water
from rheo.line.safety import FOOD_SAFETY
from rheo.line.walk import walk

# Common practice: the mean velocity that cleaning in place needs in every pipe [m/s].
CLEANING_VELOCITY = 1.5


@dataclass(frozen=True, eq=False)
class Cleaning:
    """Cleaning in place of a line with water.

    Parameters
    ----------
    velocity : float
        Wanted in the widest pipe [m/s].
    flow : array
        [m3/s].
    differential_pressure, friction_pressure : array
        With water at that flow [Pa].
    head : array
        `differential_pressure` as head of water [m].
    safety : str
        The safety wording.
    """

    velocity: float
    flow: FloatArray
    differential_pressure: FloatArray
    friction_pressure: FloatArray
    head: FloatArray
    safety: str = FOOD_SAFETY


def cleaning(
    line: Line, velocity: float = CLEANING_VELOCITY, temperature: float = 333.15
) -> Cleaning:
    """Return the flow at which the widest pipe of a line is cleaned, and its pressure drop.

    Parameters
    ----------
    line : Line
        Diameters may be arrays, such as every size of a catalogue.
    velocity : float
        Mean velocity wanted [m/s]; 1.5 is common practice.
    temperature : float
        Of the cleaning water [K].

    Returns
    -------
    Cleaning
        With equipment losses by their own curves, which were given for the product.
    """
    require_positive(velocity, "velocity [m/s]", line.name)
    widest: FloatArray = np.zeros(())
    for pipe in line.pipes():
        widest = np.maximum(widest, pipe.diameter)
    flow = 0.25 * np.pi * widest**2 * velocity
    liquid = water(temperature)
    found = walk(_at_one_temperature(line), liquid, flow)
    pressure = found.differential_pressure
    return Cleaning(
        velocity,
        flow,
        pressure,
        found.friction_pressure,
        pressure / (np.asarray(liquid.density) * GRAVITY),
    )


def _at_one_temperature(line: Line) -> Line:
    """The line with water of one temperature in it."""
    from dataclasses import replace

    from rheo.line.parts import Part, Pipe

    def cold(part: Part) -> Part:
        if not isinstance(part, Pipe):
            return part
        return replace(
            part, temperature=None, ambient_temperature=None, heat_transfer_coefficient=None
        )

    return replace(
        line,
        suction=tuple(cold(part) for part in line.suction),
        discharge=tuple(cold(part) for part in line.discharge),
    )
