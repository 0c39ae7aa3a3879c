"""Hanks's criterion for Bingham fluids."""

from __future__ import annotations

from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.record import Criterion
from rheo.hydraulics.yield_power_law import as_yield_power_law

_CONSTANT = 16800.0


def number(pipe: Pipe, rate: FloatArray) -> FloatArray:
    """Return He(1-x)³/16800x [-] at the wall shear rate [1/s], x = τ_y/τw; 1 at Hanks's x_c.

    Written as ρD²(1-x)²γ̇w/(16800 η_p), which does not cancel near yield and holds for τ_y = 0.
    """
    _, viscosity, _ = as_yield_power_law(pipe.model)
    sheared = viscosity * rate / pipe.model.record.stress(rate, *pipe.model)
    return pipe.density * pipe.diameter**2 * sheared**2 * rate / (_CONSTANT * viscosity)


RECORD = Criterion(
    key="hanks",
    name="Hanks",
    number=number,
    models=("bingham",),
    source="R. W. Hanks, AIChE J. 9 (1963) 306",
    validity="Bingham fluids; equal to the stability parameter but for the rounded 16800.",
)
