"""A Metzner-Reed Reynolds number of 2100."""

from __future__ import annotations

from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.laminar import laminar_velocity
from rheo.hydraulics.record import Criterion

CRITICAL_REYNOLDS = 2100.0


def number(pipe: Pipe, rate: FloatArray) -> FloatArray:
    """Return 8ρV²/τw over 2100 [-] at the wall shear rate [1/s] of laminar flow."""
    stress = pipe.model.record.stress(rate, *pipe.model)
    return 8.0 * pipe.density * laminar_velocity(pipe, rate) ** 2 / (CRITICAL_REYNOLDS * stress)


RECORD = Criterion(
    key="metzner-reed",
    name="Metzner-Reed Reynolds number 2100",
    number=number,
    models=None,
    source="A. B. Metzner & J. C. Reed, AIChE J. 1 (1955) 434",
    validity="Any flow curve, as a first estimate: at flow indices near 0.4 laminar flow lasts to "
    "about 2400, at high yield stresses the number says little.",
)
