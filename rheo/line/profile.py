"""Pressure along the line."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from rheo.line.constants import GRAVITY
from rheo.line.kinetic_energy import kinetic_pressure
from rheo.line.parts import FloatArray
from rheo.line.rounding import balance
from rheo.line.walk import StepResult, Walk


@dataclass(frozen=True, eq=False)
class Profile:
    """Pressure along the line, at the beginning and end of every part.

    Parameters
    ----------
    name : tuple of str
        Of the part that ends there; ``pump`` where the pump stands.
    distance, elevation : array
        From the first nozzle [m], shape ``(points,)``.
    pressure, total_pressure : array
        Gauge static pressure, and with αρV²/2 [Pa], shape ``(points,)``.
    """

    name: tuple[str, ...]
    distance: FloatArray
    elevation: FloatArray
    pressure: FloatArray
    total_pressure: FloatArray


def pressure_profile(found: Walk, suction_total: FloatArray) -> Profile:
    """Return the pressures at the beginning and end of every part of a scalar walk.

    Parameters
    ----------
    found : Walk
        At one flow.
    suction_total : array
        Total gauge pressure at the pump's inlet [Pa].

    Returns
    -------
    Profile
        From the first nozzle to the last.
    """
    points: list[tuple[str, float, float, float, float]] = []
    distance = elevation = climbed = 0.0
    weight = float(found.density) * GRAVITY
    level = float(found.source_pressure + found.start_kinetic_pressure)
    pumped = False
    largest = abs(level)

    def note(name: str, step: StepResult | None) -> None:
        moving = float(kinetic_pressure(None if step is None else step.flow))
        still = float(balance(level, -moving, size=largest))
        total = float(balance(level, size=largest))
        points.append((name, distance, float(balance(elevation, size=climbed)), still, total))

    note(found.line.source_vessel.name, None if found.start_at_rest else found.steps[0])
    for step in found.steps:
        if step.side == "discharge" and not pumped:
            level = float(suction_total + found.differential_pressure)
            note("pump", step)
            pumped = True
        distance += float(step.length)
        elevation += float(step.rise)
        climbed += abs(float(step.rise))
        level -= float(step.loss) + weight * float(step.rise)
        largest += float(step.loss) + weight * abs(float(step.rise))
        note(step.name, None if step.kind == "exit" else step)
    if not pumped:
        level = float(suction_total + found.differential_pressure)
        note("pump", found.steps[-1])
    name, *columns = zip(*points, strict=True)
    return Profile(tuple(name), *(np.array(column, dtype=float) for column in columns))
