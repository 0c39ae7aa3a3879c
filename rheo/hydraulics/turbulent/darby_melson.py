"""Darby and Melson's equation for Bingham fluids, all regimes in one."""

from __future__ import annotations

import numpy as np

from rheo.geometry.tube_flow import nominal_rate
from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.hydraulics.record import Range, TurbulentMethod
from rheo.hydraulics.yield_power_law import as_yield_power_law, hedstrom


def curve(pipe: Pipe, rate: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Wall stress [Pa] and 1/√f along the wall rate of laminar flow at the same velocity.

    f_T = 10^a Re^-0.193, a = -1.47[1 + 0.146 exp(-2.9e-5 He)]; f = (f_L^m + f_T^m)^(1/m) with
    m = 1.7 + 40000/Re, which reaches the hundreds, so the powers are added in logarithms.
    """
    _, viscosity, _ = as_yield_power_law(pipe.model)
    velocity = 0.125 * pipe.diameter * nominal_rate(pipe.model, rate)
    laminar = pipe.model.record.stress(rate, *pipe.model)
    reynolds = pipe.density * velocity * pipe.diameter / viscosity
    exponent = -1.47 * (1.0 + 0.146 * np.exp(-2.9e-5 * hedstrom(pipe)))
    dynamic = 0.5 * pipe.density * velocity**2
    log_laminar = np.log(laminar / dynamic)
    log_turbulent = exponent * np.log(10.0) - 0.193 * np.log(reynolds)
    power = 1.7 + 40000.0 / reynolds
    log_friction = np.logaddexp(power * log_laminar, power * log_turbulent) / power
    return dynamic * np.exp(log_friction), np.exp(-0.5 * log_friction)


RECORD = TurbulentMethod(
    key="darby-melson",
    name="Darby-Melson",
    curve=curve,
    models=("bingham",),
    range=Range(hedstrom=(1e5, np.inf)),
    source="R. Darby & J. Melson, Chem. Eng. 88(26) (1981) 59, with the constants of R. Darby, R. "
    "Mun & D. V. Boger, Chem. Eng. 99(9) (1992) 116",
    validity="Bingham fluids in smooth pipes. It does not tend to the Newtonian line as the "
    "Hedstrom number falls to 0 (there it is about half); it counts as a rival from He = 1e5 up, "
    "where its term in He is spent (our choice).",
    default_rank=lambda model: 0,  # noqa: ARG005
    along_laminar=True,
)
