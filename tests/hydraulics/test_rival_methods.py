"""Where a method counts beside another, and Darby and Melson's equation written out once more."""

import numpy as np
import pytest
from scipy.optimize import brentq

import rheo
from rheo.hydraulics.conditions import lay_out
from rheo.hydraulics.yield_power_law import hedstrom


def bingham(yield_stress, viscosity):
    return rheo.model("bingham", yield_stress=yield_stress, plastic_viscosity=viscosity)


@pytest.mark.parametrize("yield_stress", [0.0, 2.0, 30.0])
@pytest.mark.parametrize("diameter", [0.05, 0.4])
@pytest.mark.parametrize("velocity", [0.5, 3.0])
def test_darby_and_melson_by_hand(yield_stress, diameter, velocity):
    """f = (f_L^m + f_T^m)^(1/m) with Buckingham and Reiner's f_L, solved from its own equation."""
    viscosity, density = 0.02, 1100.0
    reynolds = density * velocity * diameter / viscosity
    number = density * diameter**2 * yield_stress / viscosity**2

    def buckingham_reiner(f):
        return (
            f
            - 16 / reynolds * (1 + number / (6 * reynolds))
            + (number**4 / (3 * f**3 * reynolds**8) * 16)
        )

    # The largest root is the one whose wall stress lies above the yield stress.
    least = 2 * yield_stress / (density * velocity**2)
    laminar = brentq(buckingham_reiner, max(least, 1e-9), 1e3, xtol=1e-15, rtol=1e-14)
    turbulent = 10 ** (-1.47 * (1 + 0.146 * np.exp(-2.9e-5 * number))) * reynolds**-0.193
    m = 1.7 + 40000 / reynolds
    expected = (laminar**m + turbulent**m) ** (1 / m)
    found = rheo.friction_factor(
        bingham(yield_stress, viscosity), diameter, velocity, density, method="darby-melson"
    )
    assert found == pytest.approx(expected, rel=1e-9)


def test_hedstrom_number():
    """He = ρD²τ_y/η_p²."""
    _, pipe, _ = lay_out(bingham([5.0, 20.0], 0.01), 0.2, 1200.0)
    np.testing.assert_allclose(hedstrom(pipe), [2.4e6, 9.6e6], rtol=1e-14)
    _, pipe, _ = lay_out(bingham(5.0, 0.01), [0.1, 0.4], 1200.0)
    np.testing.assert_allclose(hedstrom(pipe), [6e5, 9.6e6], rtol=1e-14)


@pytest.mark.parametrize(("off", "counts"), [(-1e-5, False), (-1e-7, True), (0.5, True)])
def test_darby_melson_counts_from_its_hedstrom_number_on(off, counts):
    yield_stress = 1e5 * (1 + off) * 0.01**2 / (1200.0 * 0.04)
    flow = rheo.pipe_flow(bingham(yield_stress, 0.01), 0.2, 3.0, 1200.0)
    assert flow.regime == "turbulent"
    assert flow.method_counts["darby-melson"] == counts


@pytest.mark.parametrize(
    ("limit", "end", "off", "counts"),
    [
        ("index", 0.36, -1e-5, False),
        ("index", 0.36, -1e-7, True),
        ("index", 0.36, 1e-5, True),
        ("index", 1.0, -1e-5, True),
        ("index", 1.0, 1e-7, True),
        ("index", 1.0, 1e-5, False),
        ("reynolds", 36000.0, -1e-5, True),
        ("reynolds", 36000.0, 1e-7, True),
        ("reynolds", 36000.0, 1e-5, False),
        ("reynolds", 60000.0, 0.0, False),
    ],
)
def test_the_ends_of_a_tested_range_count_within_rounding(limit, end, off, counts):
    """Dodge and Metzner's: n' 0.36 to 1 and Reynolds number 2900 to 36000."""
    index = end * (1 + off) if limit == "index" else 0.7
    reynolds = end * (1 + off) if limit == "reynolds" else 20000.0
    wall = 0.05 * ((3 * index + 1) / (4 * index) * 8 / 0.1) ** index
    speed = (reynolds * wall / 8000.0) ** (1 / (2 - index))
    model = rheo.model("power-law", consistency=0.05, flow_index=index)
    flow = rheo.pipe_flow(model, 0.1, speed, 1000.0, method="wilson-thomas")
    assert flow.regime == "turbulent"
    assert flow.reynolds == pytest.approx(reynolds, rel=1e-9)
    assert flow.method_counts["dodge-metzner"] == counts
    assert flow.method_counts["wilson-thomas"]
    for values in flow.method_counts.values():
        assert np.asarray(values).dtype == bool


@pytest.mark.parametrize("regime", [None, "turbulent"])
def test_every_rival_is_what_it_gives_alone(regime):
    """In laminar flow, in the transition, in turbulent flow; and where turbulence is forced."""
    model = rheo.model("herschel-bulkley", yield_stress=5.0, consistency=0.1, flow_index=0.8)
    velocity = np.array([0.5, 1.65, 1.8, 2.2, 4.0])
    flow = rheo.pipe_flow(model, 0.15, velocity, 1200.0, 1e-4, regime=regime)
    if regime is None:
        assert set(flow.regime) == {"laminar", "transition", "turbulent"}
    for key, gradient in flow.gradient_by_method.items():
        alone = rheo.pipe_flow(model, 0.15, velocity, 1200.0, 1e-4, regime=regime, method=key)
        np.testing.assert_allclose(gradient, alone.pressure_gradient, rtol=1e-11)
    counting = np.array(
        [
            np.where(flow.method_counts[key], gradient, np.nan)
            for key, gradient in flow.gradient_by_method.items()
        ]
    )
    spread = (np.nanmax(counting, axis=0) - np.nanmin(counting, axis=0)) / flow.pressure_gradient
    np.testing.assert_allclose(flow.method_spread, spread, atol=1e-13)
