"""Colebrook and White's formula for Newtonian flow, smooth and rough."""

from __future__ import annotations

import numpy as np

from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.record import Range, TurbulentMethod


def curve(pipe: Pipe, rate: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Wall stress [Pa] and 1/√f of a smooth pipe: 1/√f = 4 log10(Re √f/1.255)."""
    stress = pipe.model.record.stress(rate, *pipe.model)
    # Re √f does not hold the velocity.
    viscosity = stress / rate
    reynolds_root_f = pipe.diameter * np.sqrt(2.0 * stress * pipe.density) / viscosity
    return stress, 4.0 * np.log10(reynolds_root_f / 1.255)


RECORD = TurbulentMethod(
    key="colebrook-white",
    name="Colebrook-White",
    curve=curve,
    models=("newtonian",),
    range=Range(reynolds=(4000.0, 1e8)),
    source="C. F. Colebrook, J. Inst. Civ. Eng. 11 (1939) 133, with the constants 3.7 and 2.51",
    validity="Newtonian fluids, Reynolds number 4000 to 1e8, roughness up to 0.05 diameters.",
    default_rank=lambda model: 3,  # noqa: ARG005
)
