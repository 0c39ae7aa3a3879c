"""Wilson and Thomas's thickened sublayer, for any flow curve."""

from __future__ import annotations

import numpy as np

from rheo.geometry.curve_integrals import moment_ratio
from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.record import Range, TurbulentMethod
from rheo.models import Model


def area_ratio(model: Model, rate: FloatArray) -> FloatArray:
    """Return the area under the flow curve up to a rate over that of its triangle [-].

    By parts ∫τdγ̇ = τγ̇ - ∫γ̇dτ, so that it is 2(1 - m) with m the moment ratio of order 0; for a
    Herschel-Bulkley fluid 2(1 + xn)/(1 + n).
    """
    return 2.0 * (1.0 - moment_ratio(model, rate, 0))


def plug_term(ratio: FloatArray) -> FloatArray:
    """Return Ω = -2.5 ln(1-x) - 2.5x(1 + x/2) with x the yield stress over the wall stress."""
    series = ratio**3 * (1.0 / 3.0 + ratio * (0.25 + ratio * (0.2 + ratio / 6.0)))
    closed = -np.log1p(-np.minimum(ratio, 1.0 - 1e-16)) - ratio * (1.0 + 0.5 * ratio)
    # The two parts cancel to x³/3 for small x.
    return 2.5 * np.where(ratio < 1e-3, series, closed)


def curve(pipe: Pipe, rate: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Wall stress [Pa] and 1/√f: V/V* = 2.5 ln(ρDV*/μw) + 11.6(A-1) - 2.5 ln A - Ω."""
    model = pipe.model
    stress = model.record.stress(rate, *model)
    shear_velocity = np.sqrt(stress / pipe.density)
    area = area_ratio(model, rate)
    velocity_ratio = (
        2.5 * np.log(pipe.density * pipe.diameter * shear_velocity * rate / stress)
        + 11.6 * (area - 1.0)
        - 2.5 * np.log(area)
        - plug_term(model.yield_stress / stress)
    )
    return stress, velocity_ratio / np.sqrt(2.0)


RECORD = TurbulentMethod(
    key="wilson-thomas",
    name="Wilson-Thomas",
    curve=curve,
    models=None,
    range=Range(),
    source="K. C. Wilson & A. D. Thomas, Can. J. Chem. Eng. 63 (1985) 539; A. D. Thomas & K. C. "
    "Wilson, Can. J. Chem. Eng. 65 (1987) 335; the area ratio integrated for any flow curve",
    validity="Smooth pipes and homogeneous fluids; checked by its authors on Bingham, power-law "
    "and yield power-law slurries. The flow curve is used at the turbulent wall rate.",
    default_rank=lambda model: 2 if model.record.has_yield_stress else 1,
)
