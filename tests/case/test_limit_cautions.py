"""Limits that the line of a case does not keep."""

import numpy as np
import pytest

import rheo
from rheo.case import case_from_text

RATES = np.geomspace(5.0, 1000.0, 8)
ROWS = "\n".join(f"{rate!r},{0.12 * rate!r}" for rate in RATES.tolist())


def said(limits: str) -> list[str]:
    case = case_from_text(
        f"""
schema = 1
product = {{ density = "1000 kg/m3", temperature = "20 °C" }}
duty = {{ flow = "10 m3/h" }}
fit = {{ models = ["newtonian"] }}
doubt = {{ draws = 100 }}
[[readings]]
text = '''
Shear rate [1/s],Shear stress [Pa]
{ROWS}
'''
[line]
discharge = [
    {{ part = "pipe", length = "40 m", inside_diameter = "60 mm" }},
    {{ part = "pipe", length = "20 m", inside_diameter = "50 mm" }},
    {{ part = "pipe", length = "5 m", inside_diameter = "30 mm", fixed_size = true }},
]
[limits]
{limits}
"""
    )
    return [one.sentence for one in rheo.run_case(case).cautions if one.code == "limit-not-kept"]


# 10 m3/h in 60 mm is 0.982 m/s, in 50 mm 1.415 m/s with 8V/D of 226 1/s; the narrowest is fixed.
@pytest.mark.parametrize(
    ("limits", "words"),
    [
        ('max_velocity = "1.2 m/s"', "velocity 1.41 m/s (at most 1.2 m/s allowed)"),
        ('min_velocity = "1.2 m/s"', "velocity 0.982 m/s (at least 1.2 m/s allowed)"),
        ('max_wall_rate = "200 1/s"', "wall shear rate 226 1/s (at most 200 1/s allowed)"),
        ('regime = "turbulent"', "flow is laminar (turbulent wanted)"),
        # Poiseuille, 128 μ Q/π (40/D⁴ + 20/D⁴ + 5/D⁴), and the kinetic energy of 30 mm pipe.
        ('pressure = "1 bar"', "(at most 1 bar allowed)"),
    ],
)
def test_a_limit_that_is_not_kept_is_named(limits: str, words: str) -> None:
    (sentence,) = said(limits)
    assert words in sentence


def test_limits_that_are_kept_are_passed_over() -> None:
    assert said('max_velocity = "1.42 m/s"\nmin_velocity = "0.98 m/s"\nregime = "laminar"') == []
    assert said('min_npsh = "2 m"\nkeep_to_measured_rates = true') == []
