"""A long line worked out by hand, term by term, with nothing of the program's in the sums.

A power-law product goes from a tank through a suction line, a pump, three diameters in series at
two temperatures, eight fittings, a rise and a heat exchanger whose loss goes with Q^n.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

import rheo
from rheo.line import Entrance, Equipment, Exit, Fitting, Line, Pipe, Product, Vessel

G = 9.80665
RHO = 1080.0
Q = 2.0e-3
N = 0.5
COLD, WARM = 293.15, 333.15
K = {COLD: 6.0, WARM: 2.5}
HEAT_CAPACITY = 3600.0
VAPOUR = 2339.0


def _model(temperature: object) -> rheo.Model:
    """A flow index that both temperatures share and a consistency between the two (Arrhenius)."""
    slope = math.log(K[COLD] / K[WARM]) / (1.0 / COLD - 1.0 / WARM)
    consistency = K[COLD] * np.exp(slope * (1.0 / np.asarray(temperature) - 1.0 / COLD))
    return rheo.model("power-law", consistency=consistency, flow_index=N)


PRODUCT = Product(
    model=_model,
    density=RHO,
    temperature=COLD,
    heat_capacity=HEAT_CAPACITY,
    vapour_pressure=VAPOUR,
    measured_rates=(0.5, 500.0),
    temperature_range=(288.15, 343.15),
)

LINE = Line(
    suction=(
        Vessel(level=2.5, gauge_pressure=0.0, name="day tank"),
        Entrance(loss_coefficient=0.5),
        Pipe(length=4.0, inside_diameter=0.0729, rise=-0.5, name="suction pipe"),
        Fitting("bend", count=2, loss_coefficient=0.9),
    ),
    discharge=(
        Fitting("check valve", loss_coefficient=10.0),
        Pipe(length=25.0, inside_diameter=0.0603, rise=6.0, name="riser"),
        Fitting("bend", count=3, loss_coefficient=0.8),
        Equipment(
            loss=8.0e4,
            at_flow=1.5e-3,
            exponent=0.5,
            volume=0.02,
            outlet_temperature=WARM,
            name="heat exchanger",
        ),
        Pipe(length=18.0, inside_diameter=0.0486, name="hot run"),
        Fitting("tee", loss_coefficient=1.4),
        Fitting("butterfly valve", loss_coefficient=2.0),
        Pipe(length=12.0, inside_diameter=0.0356, rise=-1.0, name="filler branch"),
        Exit(name="filler bowl inlet"),
        Vessel(level=0.3, gauge_pressure=4.0e4, name="filler bowl"),
    ),
)


def _velocity(diameter: float) -> float:
    return 4.0 * Q / (math.pi * diameter**2)


def _wall_stress(diameter: float, temperature: float) -> float:
    """Rabinowitsch-Mooney for a power law: τw = K((3n + 1)/(4n) 8V/D)^n."""
    return K[temperature] * ((3 * N + 1) / (4 * N) * 8 * _velocity(diameter) / diameter) ** N


def _pipe(length: float, diameter: float, temperature: float) -> float:
    return 4.0 * _wall_stress(diameter, temperature) * length / diameter


def _head(diameter: float) -> float:
    """Velocity pressure ρV²/2."""
    return 0.5 * RHO * _velocity(diameter) ** 2


# Kinetic-energy factor of laminar power-law flow, α = 3(3n + 1)²/((2n + 1)(5n + 3)).
ALPHA = 3 * (3 * N + 1) ** 2 / ((2 * N + 1) * (5 * N + 3))

SUCTION_LOSSES = {
    "entrance": 0.5 * _head(0.0729),
    "suction pipe": _pipe(4.0, 0.0729, COLD),
    "bend": 2 * 0.9 * _head(0.0729),
}
DISCHARGE_LOSSES = {
    # The check valve stands before the first discharge pipe and takes its velocity.
    "check valve": 10.0 * _head(0.0603),
    "riser": _pipe(25.0, 0.0603, COLD),
    "bends": 3 * 0.8 * _head(0.0603),
    "heat exchanger": 8.0e4 * (Q / 1.5e-3) ** 0.5,
    "hot run": _pipe(18.0, 0.0486, WARM),
    "tee": 1.4 * _head(0.0486),
    "butterfly valve": 2.0 * _head(0.0486),
    "filler branch": _pipe(12.0, 0.0356, WARM),
    "filler bowl inlet": ALPHA * _head(0.0356),
}
# From surface to surface: the rises of the pipes, and the levels of the two vessels.
HEIGHT = (-0.5 + 6.0 - 1.0) + 0.3 - 2.5
STATIC = RHO * G * HEIGHT + 4.0e4 - 0.0
FRICTION = sum(SUCTION_LOSSES.values()) + sum(DISCHARGE_LOSSES.values())
PUMP = FRICTION + STATIC

RESULT = rheo.solve_line(LINE, PRODUCT, Q, efficiency=0.55, rating=8e5)


def close(value: float) -> object:
    return pytest.approx(value, rel=1e-9)


def test_the_flow_is_laminar_everywhere() -> None:
    """Otherwise the hand calculation would not hold."""
    assert {part.regime for part in RESULT.parts} == {"laminar", ""}


def test_each_part_agrees() -> None:
    by_hand = [*SUCTION_LOSSES.values(), *DISCHARGE_LOSSES.values()]
    assert [float(part.pressure_loss) for part in RESULT.parts] == [close(v) for v in by_hand]


def test_pressure_that_the_pump_adds() -> None:
    assert float(RESULT.friction_pressure) == close(FRICTION)
    assert float(RESULT.static_pressure) == close(STATIC)
    assert float(RESULT.kinetic_pressure) == 0.0
    assert float(RESULT.differential_pressure) == close(PUMP)


def test_pressures_beside_the_pump() -> None:
    total = RHO * G * (2.5 + 0.5) - sum(SUCTION_LOSSES.values())
    assert float(RESULT.suction_pressure) == close(total - ALPHA * _head(0.0729))
    assert float(RESULT.discharge_pressure) == close(total + PUMP - ALPHA * _head(0.0603))


def test_net_positive_suction_head() -> None:
    static = RHO * G * 3.0 - sum(SUCTION_LOSSES.values()) - ALPHA * _head(0.0729)
    by_hand = (static + 101325.0 - VAPOUR) / (RHO * G) + _velocity(0.0729) ** 2 / (2 * G)
    assert RESULT.npsh_available is not None
    assert float(RESULT.npsh_available) == close(by_hand)


def test_power_heating_and_time() -> None:
    assert float(RESULT.hydraulic_power) == close(PUMP * Q)
    assert RESULT.shaft_power is not None
    assert float(RESULT.shaft_power) == close(PUMP * Q / 0.55)
    assert RESULT.temperature_rise is not None
    assert float(RESULT.temperature_rise) == close(FRICTION / (RHO * HEAT_CAPACITY))
    area_times_length = 4.0 * 0.0729**2 + 25.0 * 0.0603**2 + 18.0 * 0.0486**2 + 12.0 * 0.0356**2
    volume = math.pi / 4.0 * area_times_length + 0.02
    assert float(RESULT.volume) == close(volume)
    assert float(RESULT.residence_time) == close(volume / Q)


def test_the_profile_ends_at_the_last_vessel() -> None:
    profile = RESULT.profile
    assert profile is not None
    assert profile.name[0] == "day tank"
    assert profile.distance[-1] == close(4.0 + 25.0 + 18.0 + 12.0)
    assert profile.elevation[-1] == close(4.5)
    assert profile.pressure[0] == close(RHO * G * 2.5)
    assert profile.pressure[-1] == close(4.0e4 + RHO * G * 0.3)
    pump = profile.name.index("pump")
    assert profile.total_pressure[pump] - profile.total_pressure[pump - 1] == close(PUMP)


def test_wall_rates_stand_against_the_measured_range() -> None:
    rate = (3 * N + 1) / (4 * N) * 8 * _velocity(0.0356) / 0.0356
    branch = next(part for part in RESULT.parts if part.name == "filler branch")
    assert float(branch.wall_rate) == close(rate)
    assert branch.inside_measured_range is False
    found = [c for c in RESULT.cautions if c.code == "outside-measured-range"]
    assert [c.place for c in found] == ["filler branch"]
    assert f"{rate:.3g} 1/s" in found[0].sentence
    assert "0.5 to 500 1/s" in found[0].sentence
