"""Dodge and Metzner's equation with the local flow index, for any flow curve."""

from __future__ import annotations

import numpy as np

from rheo.geometry.tube_flow import local_flow_index, nominal_rate
from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.record import Range, TurbulentMethod

# Below this index the equation loses its sense: 1/√f rises without bound, then turns negative.
LOWEST_INDEX = 0.1


def inverse_root_friction(flow_index: FloatArray, log_reynolds_f: FloatArray) -> FloatArray:
    """Return 1/√f = (4/n'^0.75) log10(Re f^(1-n'/2)) - 0.4/n'^1.2.

    Parameters
    ----------
    flow_index : array
        n' [-].
    log_reynolds_f : array
        ln(Re f^(1-n'/2)) with the Metzner-Reed Reynolds number.
    """
    return 4.0 / flow_index**0.75 * log_reynolds_f / np.log(10.0) - 0.4 / flow_index**1.2


def curve(pipe: Pipe, rate: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Wall stress [Pa] and 1/√f, with n' and K' of laminar flow at the same wall stress.

    With G(τw) the 8V/D of laminar flow at τw and u = √(2τw/ρ), Re f^(1-n'/2) is 16 (GD/8u)^n', in
    which the velocity does not appear. An index below 0.1 is taken as 0.1.
    """
    stress = pipe.model.record.stress(rate, *pipe.model)
    nominal = nominal_rate(pipe.model, rate)
    index = np.maximum(local_flow_index(nominal, rate), LOWEST_INDEX)
    friction_speed = np.sqrt(2.0 * stress / pipe.density)
    reduced = np.log(nominal * pipe.diameter / (8.0 * friction_speed))
    return stress, inverse_root_friction(index, np.log(16.0) + index * reduced)


RECORD = TurbulentMethod(
    key="dodge-metzner",
    name="Dodge-Metzner",
    curve=curve,
    models=None,
    range=Range(flow_index=(0.36, 1.0), reynolds=(2900.0, 36000.0)),
    source="D. W. Dodge & A. B. Metzner, AIChE J. 5 (1959) 189, n' and K' at the wall stress",
    validity="Fluids without drag reduction; their experiments cover n' 0.36 to 1 and Reynolds "
    "numbers 2900 to 36000 in smooth pipes, the equation is used from 0.2 to 2 (common practice). "
    "A local index below 0.1 is taken as 0.1 (our choice).",
    default_rank=lambda model: 1 if model.record.has_yield_stress else 2,
    may_fold=True,
)
