"""Slatter's Reynolds number of 2100, with the unsheared core left out."""

from __future__ import annotations

from rheo.geometry.tube_flow import velocity_ratio
from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.laminar import laminar_velocity
from rheo.hydraulics.record import Criterion

CRITICAL_REYNOLDS = 2100.0


def sheared_reynolds(pipe: Pipe, rate: FloatArray) -> FloatArray:
    """Return Re₃ = 8ρV_a²/τ(8V_a/D_s) [-] at the wall shear rate [1/s] of laminar flow.

    V_a is the mean velocity in the sheared ring, D_s = D - D_plug; with τ the flow curve this is
    Slatter's τ_y + K(8V_a/D_s)^n for a Herschel-Bulkley fluid.
    """
    model = pipe.model
    stress = model.record.stress(rate, *model)
    plug = model.yield_stress / stress
    sheared = (stress - model.yield_stress) / stress
    # The ring's share of the flow over its share of the area.
    share = (1.0 - velocity_ratio(model, rate) * plug**2) / (sheared * (1.0 + plug))
    ring = share * laminar_velocity(pipe, rate)
    ring_rate = 8.0 * ring / (pipe.diameter * sheared)
    return 8.0 * pipe.density * ring**2 / model.record.stress(ring_rate, *model)


RECORD = Criterion(
    key="slatter",
    name="Slatter Reynolds number 2100",
    number=lambda pipe, rate: sheared_reynolds(pipe, rate) / CRITICAL_REYNOLDS,
    models=None,
    source="P. T. Slatter, PhD thesis, University of Cape Town (1995)",
    validity="Made for Herschel-Bulkley slurries; for other curves with a yield stress the same "
    "definition is used with the flow curve itself (our extension).",
)
