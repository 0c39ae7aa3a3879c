"""Up and down branches, static yield stress, and the choice of weighting."""

from __future__ import annotations

import numpy as np
import pytest

import rheo
from rheo.errors import InputError
from rheo.fitting import Instrument

RATE = np.geomspace(0.5, 300.0, 14)
UP = rheo.model("herschel-bulkley", yield_stress=14.0, consistency=4.4, flow_index=0.45)
DOWN = rheo.model("herschel-bulkley", yield_stress=11.0, consistency=4.2, flow_index=0.46)


def loop():
    return rheo.FlowCurve(
        np.concatenate([RATE, RATE[::-1]]),
        np.concatenate([UP.stress(RATE), DOWN.stress(RATE[::-1])]),
        branch=["up"] * RATE.size + ["down"] * RATE.size,
    )


def test_each_branch_gives_its_own_curve():
    found = rheo.compare_sweeps(loop())
    assert found.up.best.model.yield_stress == pytest.approx(14.0, rel=1e-6)
    assert found.down.best.model.yield_stress == pytest.approx(11.0, rel=1e-6)
    assert 11.0 < float(found.both.best.model.yield_stress) < 14.0


def test_the_loop_is_the_area_between_the_curves():
    found = rheo.compare_sweeps(loop())
    fine = np.linspace(RATE[0], RATE[-1], 200_001)
    over, under = UP.stress(fine), DOWN.stress(fine)
    expected = np.trapezoid(over - under, fine) / np.trapezoid(over, fine)
    # 41 rates in steps of 17 %: the trapezium rule is within half a percent of the area.
    assert found.loop_share == pytest.approx(expected, rel=0.02)
    assert found.difference[0] == pytest.approx(
        float(DOWN.stress(0.5) / UP.stress(0.5)) - 1.0, rel=1e-6
    )
    assert "below the way up on the whole" in found.sentence


def test_the_static_yield_stress_is_that_of_the_way_up():
    static = rheo.compare_sweeps(loop()).static_yield_stress
    assert static.value == pytest.approx(14.0, rel=1e-6)
    assert "way up" in static.origin


def test_a_fluid_without_yield_stress_has_none_at_rest():
    curve = rheo.FlowCurve(
        np.concatenate([RATE, RATE]),
        np.tile(3.0 * RATE**0.6, 2),
        branch=["up"] * RATE.size + ["down"] * RATE.size,
    )
    found = rheo.compare_sweeps(curve, ["power-law", "newtonian"])
    assert found.static_yield_stress is None


def test_a_missing_branch_is_named():
    with pytest.raises(InputError, match="there is no way down among the readings"):
        rheo.compare_sweeps(rheo.FlowCurve(RATE, UP.stress(RATE), branch=["up"] * RATE.size))
    with pytest.raises(InputError, match="there is no way up among the readings"):
        rheo.compare_sweeps(rheo.FlowCurve(RATE, UP.stress(RATE)))


def test_a_vane_gives_the_static_yield_stress_with_its_interval():
    """M = (πD³/2)(H/D + 1/3)τ_y, Nguyen & Boger, J. Rheol. 27 (1983) 321.

    The interval is Student's t for three starts: t(2, 0.975) = 4.303 (any table).
    """
    vane = rheo.geometry("vane", diameter=0.02, height=0.04)
    factor = 0.5 * np.pi * 0.02**3 * (2.0 + 1.0 / 3.0)
    stresses = np.array([19.0, 20.0, 21.0])
    found = rheo.static_from_vane(stresses * factor, vane)
    assert found.value == pytest.approx(20.0)
    assert found.high - found.value == pytest.approx(4.303 / np.sqrt(3.0), rel=1e-3)
    alone = rheo.static_from_vane(20.0 * factor, vane)
    assert np.isnan(alone.high)
    assert alone.origin == "vane, peak torque of 1 start"


def test_other_geometries_and_torques_are_refused():
    cone = rheo.geometry("cone-plate", radius=0.02, angle=0.035)
    with pytest.raises(InputError, match="'cone-plate'; a peak torque needs a vane"):
        rheo.static_from_vane(1e-3, cone)
    vane = rheo.geometry("vane", diameter=0.02, height=0.04)
    with pytest.raises(InputError, match="each above 0 N"):
        rheo.static_from_vane([1e-3, 0.0], vane)


def test_exact_readings_do_not_depend_on_the_weighting():
    found = rheo.compare_weightings(rheo.FlowCurve(RATE, DOWN.stress(RATE)))
    assert set(found.best_keys.values()) == {"herschel-bulkley"}
    assert max(found.changes.values()) < 1e-6
    assert found.sentence.startswith("Every weighting leads to the Herschel-Bulkley model")


def test_the_effect_of_the_weighting_is_seen_where_readings_scatter():
    noise = 1.0 + 0.05 * np.random.default_rng(5).standard_normal(RATE.size)
    curve = rheo.FlowCurve(RATE, DOWN.stress(RATE) * noise)
    found = rheo.compare_weightings(curve, "herschel-bulkley", Instrument(1.0, 0.5, 100.0))
    assert list(found.fits) == ["relative", "absolute", "instrument"]
    assert found.changes["absolute"] > found.changes["instrument"] > 0.0
    for name, fits in found.fits.items():
        assert fits.weighting.name == name
