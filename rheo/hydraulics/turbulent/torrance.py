"""Torrance's equation for Herschel-Bulkley fluids."""

from __future__ import annotations

import numpy as np

from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.record import Range, TurbulentMethod
from rheo.hydraulics.yield_power_law import YIELD_POWER_LAWS, as_yield_power_law


def curve(pipe: Pipe, rate: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Wall stress [Pa] and 1/√f.

    1/√f = 2.69/n - 2.95 + (1.97/n) ln(1-x) + (1.97/n) ln(Re f^(1-n/2)) + (0.68/n)(5n-8) with
    x = τ_y/τw and Re = ρV^(2-n)D^n/(8^(n-1)K), so that Re f^(1-n/2) does not hold the velocity.
    """
    _, consistency, index = as_yield_power_law(pipe.model)
    flowing = consistency * rate**index
    stress = pipe.model.record.stress(rate, *pipe.model)
    log_friction_speed = 0.5 * np.log(2.0 * stress / pipe.density)
    log_reynolds_f = (
        np.log(8.0 * pipe.density / consistency)
        + (2.0 - index) * log_friction_speed
        + index * np.log(pipe.diameter / 8.0)
    )
    # 1 - x is taken from the flowing part, which does not cancel near yield.
    return stress, (
        2.69 / index
        - 2.95
        + 1.97 / index * (np.log(flowing / stress) + log_reynolds_f)
        + 0.68 / index * (5.0 * index - 8.0)
    )


RECORD = TurbulentMethod(
    key="torrance",
    name="Torrance",
    curve=curve,
    models=YIELD_POWER_LAWS,
    range=Range(),
    source="B. McK. Torrance, South African Mech. Eng. 13 (1963) 89, in the form of G. W. Govier "
    "& K. Aziz, The Flow of Complex Mixtures in Pipes (1972)",
    validity="Herschel-Bulkley fluids in smooth pipes. With flow index 1 and no yield stress it "
    "lies 9 % above the Newtonian line at a Reynolds number of 4000 and 6 % below at 1e6, and at "
    "flow index 0.5 about 20 % below Dodge-Metzner, so it does not count as a rival "
    "for Newtonian fluids.",
    default_rank=lambda model: 0,  # noqa: ARG005
    in_spread=("power-law", "bingham", "herschel-bulkley"),
)
