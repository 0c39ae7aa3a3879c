"""What is said of a pump that does not suit its line."""

import numpy as np
import pytest

import rheo
from rheo.case import case_from_text
from rheo.line.viscosity_correction import correct_for_viscosity

RATES = np.geomspace(5.0, 1000.0, 8)
CENTRIFUGAL = """
kind = "centrifugal"
speed = "2900 rpm"
points = [
    { flow = "0 m3/h", head = "40 m", efficiency = "0 %", npsh_required = "2 m" },
    { flow = "20 m3/h", head = "38 m", efficiency = "50 %", npsh_required = "2 m" },
    { flow = "40 m3/h", head = "34 m", efficiency = "68 %", npsh_required = "2.5 m" },
    { flow = "60 m3/h", head = "25 m", efficiency = "60 %", npsh_required = "4 m" },
]
"""
LOBE = """
kind = "positive-displacement"
displacement = "0.5 L"
speed = "{speed} rpm"
rated_pressure = "{rated} bar"
npsh_required = "{npsh} m"
"""


def oil_case(pump: str, flow: float = 10.0, length: float = 60.0) -> rheo.Case:
    rows = "\n".join(f"{rate!r},{0.12 * rate!r}" for rate in RATES.tolist())
    return case_from_text(
        f"""
schema = 1
product = {{ density = "1000 kg/m3", temperature = "20 °C", vapour_pressure = "2 kPa" }}
duty = {{ flow = "{flow} m3/h" }}
fit = {{ models = ["newtonian"] }}
doubt = {{ draws = 100 }}
[[readings]]
temperature = "20 °C"
text = '''
Shear rate [1/s],Shear stress [Pa]
{rows}
'''
[line]
suction = [{{ part = "vessel", level = "1 m" }}, {{ part = "entrance" }}]
discharge = [
    {{ part = "pipe", length = "{length} m", inside_diameter = "60 mm" }},
    {{ part = "exit" }},
    {{ part = "vessel", level = "1 m" }},
]
[pump]
{pump}
"""
    )


def codes(case: rheo.Case) -> list[str]:
    return [one.code for one in rheo.run_case(case).cautions]


def test_a_pump_that_suits_is_passed_over() -> None:
    # Poiseuille: 128 μ L Q/(π D⁴) is 0.63 bar.
    assert codes(oil_case('rated_pressure = "6 bar"')) == []
    assert codes(oil_case(LOBE.format(speed=340, rated=6, npsh=2))) == []


def test_a_duty_above_the_rating() -> None:
    found = rheo.run_case(oil_case('rated_pressure = "6 bar"', length=800.0)).cautions
    (one,) = [one for one in found if one.code == "above-pump-rating"]
    # Poiseuille 8.383 bar; the exit takes ρV² = 0.010 bar, the entrance half as much.
    assert "The line needs 8.4 bar, more than the 6 bar" in one.sentence


def test_a_pump_that_moves_less_than_the_duty() -> None:
    found = rheo.run_case(oil_case(LOBE.format(speed=300, rated=6, npsh=2))).cautions
    (one,) = [one for one in found if one.code == "pump-below-duty"]
    assert "moves 9 m3/h on this line, less than the 10 m3/h of the duty" in one.sentence


def test_a_pump_without_an_operating_point() -> None:
    # That no likely flow curve has one either adds nothing.
    assert codes(oil_case(LOBE.format(speed=340, rated=0.5, npsh=2))) == ["no-operating-point"]


def test_what_is_said_of_the_operating_point_is_said_of_the_case() -> None:
    assert codes(oil_case(LOBE.format(speed=340, rated=6, npsh=20))) == ["npsh-too-low"]
    assert "water-pump-curve" in codes(oil_case(CENTRIFUGAL, flow=30.0))


def test_the_shaft_power_takes_the_efficiency_with_the_product() -> None:
    """Not that with water, which viscous products never reach."""
    result = rheo.run_case(oil_case(CENTRIFUGAL, flow=40.0))
    assert result.pump is not None
    corrected = correct_for_viscosity(result.pump, 0.12, 1000.0)
    assert corrected.efficiency_factor < 0.8
    by_hand = float(corrected.pump.efficiency(40.0 / 3600.0))
    assert result.efficiency == pytest.approx(by_hand, rel=1e-6)
    assert float(result.line.shaft_power) == pytest.approx(
        float(result.line.differential_pressure) * 40.0 / 3600.0 / by_hand, rel=1e-6
    )
