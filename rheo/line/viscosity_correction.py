"""What a viscous product does to a centrifugal pump's water curve (ANSI/HI 9.6.7)."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from rheo.errors import Caution, InputError
from rheo.line.checks import require_positive
from rheo.line.pumps import CentrifugalPump

# ANSI/HI 9.6.7-2010, limits from memory: kinematic viscosity [m2/s], flow at best efficiency
# [m3/s], head a stage [m], parameter B [-].
VISCOSITY_LIMIT = 3000e-6
FLOW_LIMITS = (3.0 / 3600.0, 410.0 / 3600.0)
HEAD_LIMITS = (6.0, 130.0)
LARGEST_B = 40.0


@dataclass(frozen=True)
class ViscosityCorrection:
    """Factors from a water curve to a viscous one.

    Parameters
    ----------
    parameter : float
        B of the method [-]; 1 or less means no correction.
    flow_factor, head_factors, efficiency_factor : float, tuple of float, float
        On flow, on head at each point, on efficiency [-].
    pump : CentrifugalPump
        The corrected pump.
    cautions : tuple of Caution
        What lies outside the method's range.
    """

    parameter: float
    flow_factor: float
    head_factors: tuple[float, ...]
    efficiency_factor: float
    pump: CentrifugalPump
    cautions: tuple[Caution, ...]


def correct_for_viscosity(
    pump: CentrifugalPump, viscosity: float, density: float
) -> ViscosityCorrection:
    """Correct a pump curve taken with water for a viscous product.

    Parameters
    ----------
    pump : CentrifugalPump
        With its speed.
    viscosity : float
        Of the product in the pump [Pa.s]; for a shear-thinning product the apparent viscosity at
        a shear rate that the caller names.
    density : float
        [kg/m3].

    Returns
    -------
    ViscosityCorrection
        With Cautions outside its range: Newtonian liquids, 1 to 3000 mm2/s, 3 to 410 m3/h and 6 to
        130 m a stage at best efficiency, B up to 40.

    Raises
    ------
    InputError
        If the pump's speed is not given.

    Notes
    -----
    From memory of ANSI/HI 9.6.7-2010, with Q in m3/h, H in m a stage, N in rpm, ν in mm2/s:
    B = 16.5 ν^0.5 H^0.0625/(Q^0.375 N^0.25); C_Q = e^(-0.165 (log₁₀ B)^3.15);
    C_H = 1 - (1 - C_Q)(Q/Q_best)^0.75; C_η = B^(-0.0547 B^0.69).
    """
    require_positive(viscosity, "viscosity [Pa.s]", pump.name)
    require_positive(density, "density [kg/m3]", pump.name)
    if pump.speed is None:
        raise InputError("speed [rad/s] is missing; the viscosity correction needs it", pump.name)
    best_flow, best_head = pump.best_point
    stage_head = best_head / pump.stages
    kinematic = viscosity / density
    b = (
        16.5
        * (1e6 * kinematic) ** 0.5
        * stage_head**0.0625
        / ((3600.0 * best_flow) ** 0.375 * (30.0 * pump.speed / np.pi) ** 0.25)
    )
    flow_factor = float(np.exp(-0.165 * np.log10(b) ** 3.15)) if b > 1 else 1.0
    efficiency_factor = float(b ** (-0.0547 * b**0.69)) if b > 1 else 1.0
    head_factors = 1.0 - (1.0 - flow_factor) * (np.asarray(pump.flows) / best_flow) ** 0.75
    corrected = CentrifugalPump(
        flows=tuple(flow_factor * flow for flow in pump.flows),
        heads=tuple(float(head) for head in np.maximum(head_factors, 0.0) * np.asarray(pump.heads)),
        efficiencies=None
        if pump.efficiencies is None
        else tuple(efficiency_factor * value for value in pump.efficiencies),
        npsh_required=pump.npsh_required,
        for_water=False,
        speed=pump.speed,
        stages=pump.stages,
        rated_pressure=pump.rated_pressure,
        name=pump.name,
    )
    return ViscosityCorrection(
        b,
        flow_factor,
        tuple(float(factor) for factor in head_factors),
        efficiency_factor,
        corrected,
        _cautions(pump, b, kinematic, best_flow, stage_head),
    )


def _cautions(
    pump: CentrifugalPump, b: float, kinematic: float, best_flow: float, stage_head: float
) -> tuple[Caution, ...]:
    outside = []
    if kinematic > VISCOSITY_LIMIT:
        outside.append(f"kinematic viscosity {1e6 * kinematic:.0f} mm2/s (up to 3000)")
    if not FLOW_LIMITS[0] <= best_flow <= FLOW_LIMITS[1]:
        outside.append(f"best-efficiency flow {3600 * best_flow:.3g} m3/h (3 to 410)")
    if not HEAD_LIMITS[0] <= stage_head <= HEAD_LIMITS[1]:
        outside.append(f"head a stage {stage_head:.3g} m (6 to 130)")
    if b > LARGEST_B:
        outside.append(f"B = {b:.3g} (up to 40)")
    found = [
        Caution(
            "water-pump-curve",
            f"The pump curve was taken with water and is corrected by ANSI/HI 9.6.7 (B = {b:.3g}), "
            "a method for Newtonian liquids.",
            "Ask the pump's supplier for a curve with a product of this viscosity.",
            pump.name,
        )
    ]
    if outside:
        found.append(
            Caution(
                "pump-correction-range",
                f"The viscosity correction is outside its range: {'; '.join(outside)}.",
                "Do not rely on the operating point; a positive-displacement pump may suit better.",
                pump.name,
            )
        )
    if pump.efficiencies is None:
        found.append(
            Caution(
                "pump-best-point",
                "No efficiencies were given, so the point of largest hydraulic power stands in for "
                "the best-efficiency point.",
                "Give the efficiency at each point of the curve.",
                pump.name,
            )
        )
    return tuple(found)
