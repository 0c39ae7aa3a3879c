"""Entrance loss and wall slip from tube readings, without a model."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from flow_curves import KEYS, example
from plain_words import odd_words
from scipy.optimize import least_squares

import rheo
from rheo import Geometry, InputError
from rheo.geometry import make_geometry
from rheo.geometry.tube_corrections import find_tube_corrections

ROWS = {
    row["id"]: row
    for row in json.loads(
        (Path(__file__).parents[1] / "data" / "check_values.json").read_text("utf-8")
    )["cases"]
    if row["section"] == "tube viscometer"
}


def _tubes(row: dict[str, Any], **corrections: float) -> Geometry:
    diameter = np.atleast_1d(row["inputs"]["diameter"])[:, None]
    length = np.atleast_1d(row["inputs"]["length"])[:, None]
    return make_geometry("tube", diameter=diameter, length=length, **corrections)


def test_bagley_row() -> None:
    row = ROWS["E-3"]
    found = find_tube_corrections(_tubes(row), row["inputs"]["Q"], row["inputs"]["dP"], slip=False)
    assert found.entrance_diameters.value == pytest.approx(
        row["expected"]["e_diameters"], rel=row["rel_tol"]
    )
    assert found.slip_coefficient.value == 0.0
    assert not found.slip_coefficient.found
    points = found.geometry.flow_points(row["inputs"]["Q"], row["inputs"]["dP"])
    for line in range(4):
        np.testing.assert_allclose(points.rate[line], row["expected"]["wall_rate"], rtol=1e-8)
        np.testing.assert_allclose(points.stress[line], row["expected"]["wall_stress"], rtol=1e-8)


def test_mooney_row() -> None:
    row = ROWS["E-1"]
    tubes = _tubes(row, entrance_diameters=row["inputs"]["e_diameters"])
    found = find_tube_corrections(tubes, row["inputs"]["Q"], row["inputs"]["dP"], entrance=False)
    assert found.slip_coefficient.value == pytest.approx(row["expected"]["beta"], rel=1e-8)
    assert found.entrance_diameters.value == 1.8
    points = found.geometry.flow_points(row["inputs"]["Q"], row["inputs"]["dP"])
    np.testing.assert_allclose(points.rate, row["expected"]["wall_rate"], rtol=1e-7)
    np.testing.assert_allclose(points.local_index, 0.45, rtol=1e-7)


def test_both_at_once() -> None:
    row = ROWS["E-1-infer"]
    found = find_tube_corrections(_tubes(row), row["inputs"]["Q"], row["inputs"]["dP"])
    expected = row["expected"]
    assert found.entrance_diameters.value == pytest.approx(expected["e_diameters"], rel=1e-6)
    assert found.slip_coefficient.value == pytest.approx(expected["beta"], rel=1e-6)
    assert found.scatter < 1e-10


def _noisy(seed: int) -> tuple[Geometry, np.ndarray, np.ndarray]:
    model = rheo.model("power-law", consistency=8.0, flow_index=0.45)
    diameter = np.repeat([0.001, 0.002, 0.004, 0.004], 8)
    length = np.repeat([0.05, 0.05, 0.05, 0.20], 8)
    tubes = make_geometry("tube", diameter=diameter, length=length)
    true = tubes.replaced(entrance_diameters=1.8, slip_coefficient=5e-5)
    flow = true.setting_for_rate(model, np.tile(np.geomspace(50.0, 3000.0, 8), 4))
    noise = np.random.default_rng(seed).normal(0.0, 0.01, flow.shape)
    return tubes, flow, true.predict(model, flow) * np.exp(noise)


def test_intervals_hold_the_truth_as_often_as_they_say() -> None:
    held = np.zeros(2)
    for seed in range(60):
        found = find_tube_corrections(*_noisy(seed))
        entrance, slip = found.entrance_diameters, found.slip_coefficient
        held += [entrance.low <= 1.8 <= entrance.high, slip.low <= 5e-5 <= slip.high]
        assert found.scatter == pytest.approx(0.01, rel=0.5)
        assert -1.0 < found.correlation < 0.0
    assert np.all(held >= 52)


@pytest.mark.parametrize("key", KEYS)
def test_round_trip_returns_the_true_curve(key: str) -> None:
    """Curved flow curves too come back within 0.1 % of stress once both losses are found."""
    model = example(key)
    diameter = np.repeat([0.002, 0.004, 0.008, 0.008], 15)
    length = np.repeat([0.1, 0.1, 0.1, 0.5], 15)
    tubes = make_geometry("tube", diameter=diameter, length=length)
    true = tubes.replaced(entrance_diameters=2.5, slip_coefficient=2e-5)
    flow = true.setting_for_rate(model, np.tile(np.geomspace(30.0, 1000.0, 15), 4))
    pressure_drop = true.predict(model, flow)
    found = find_tube_corrections(tubes, flow, pressure_drop)
    points = found.geometry.flow_points(flow, pressure_drop)
    assert np.max(np.abs(model.stress(points.rate) / points.stress - 1.0)) < 1e-3
    assert found.entrance_diameters.value == pytest.approx(2.5, rel=0.01)
    # A fluid that hardly slips beside its own shear says little of its slip.
    slid = 8.0 * 2e-5 * points.stress / diameter
    share = float(np.max(slid / points.rate))
    assert found.slip_coefficient.value == pytest.approx(2e-5, rel=1e-3 + 5e-5 / share)


def test_no_slip_is_found_where_there_is_none() -> None:
    model = example("herschel-bulkley")
    tubes = make_geometry("tube", diameter=np.repeat([0.002, 0.004, 0.008], 10), length=0.3)
    flow = tubes.setting_for_rate(model, np.tile(np.geomspace(3.0, 300.0, 10), 3))
    noise = np.random.default_rng(5).normal(0.0, 0.01, flow.shape)
    found = find_tube_corrections(
        tubes, flow, tubes.predict(model, flow) * np.exp(noise), entrance=False
    )
    assert found.slip_coefficient.low < 0.0 or found.slip_coefficient.value == 0.0


def _plan(sizes: int) -> tuple[Geometry, np.ndarray]:
    """Return tubes of three diameters and one more length, each at `sizes` flows."""
    model = rheo.model("power-law", consistency=8.0, flow_index=0.45)
    diameter = np.repeat([0.001, 0.002, 0.004, 0.004], sizes)
    length = np.repeat([0.05, 0.05, 0.05, 0.20], sizes)
    tubes = make_geometry(
        "tube", diameter=diameter, length=length, entrance_diameters=1.8, slip_coefficient=5e-5
    )
    return tubes, tubes.setting_for_rate(model, np.tile(np.geomspace(50.0, 3000.0, sizes), 4))


def _whole(tubes: Geometry, flow: np.ndarray, drop: np.ndarray, degree: int, which: str) -> Any:
    """Fit curve and corrections together, all as plain parameters of one least-squares search.

    ln τ_w = Σ c_j x^j, x = ln(8V/D less slip): the textbook way, where the code removes the curve
    by projection first. Returns the solution and the values found, in the order of `which`.
    """
    diameter, length = tubes.dimensions["diameter"], tubes.dimensions["length"]
    apparent = 32.0 * flow / (np.pi * diameter**3)
    middle = float(np.mean(np.log(apparent)))

    def residual(free: np.ndarray) -> np.ndarray:
        entrance = free[which.index("e")] if "e" in which else 1.8
        slip = 1e-4 * free[which.index("s")] if "s" in which else 5e-5
        stress = drop / (4.0 * (length / diameter + entrance))
        x = np.log(apparent - 8.0 * slip * stress / diameter) - middle
        return np.log(stress) - np.polynomial.polynomial.polyval(x, free[len(which) :])

    start = [{"e": 1.8, "s": 0.5}[name] for name in which]
    start += np.polynomial.polynomial.polyfit(
        np.log(apparent) - middle, np.log(drop / (4.0 * length / diameter)), degree
    ).tolist()
    tight = {"xtol": 1e-15, "ftol": 1e-15, "gtol": 1e-15}
    return least_squares(residual, start, x_scale="jac", jac="3-point", **tight)


@pytest.mark.parametrize("which", ["es", "e", "s"])
@pytest.mark.parametrize("sizes", [2, 4])
def test_errors_are_those_of_the_whole_fit(which: str, sizes: int) -> None:
    """s²(J'J)⁻¹ of curve and corrections together, s² over n - p, and Student's t for 95 %."""
    tubes, flow = _plan(sizes)
    model = rheo.model("power-law", consistency=8.0, flow_index=0.45)
    noise = np.random.default_rng(4).normal(0.0, 3e-4, flow.shape)
    drop = tubes.predict(model, flow) * np.exp(noise)
    found = find_tube_corrections(tubes, flow, drop, "e" in which, "s" in which)
    whole = _whole(tubes, flow, drop, 1, which)
    freedom = flow.size - 2 - len(which)
    scatter = np.sqrt(2.0 * whole.cost / freedom)
    covariance = scatter**2 * np.linalg.inv(whole.jac.T @ whole.jac)
    assert found.scatter == pytest.approx(scatter, rel=1e-6)
    unit = {"e": 1.0, "s": 1e-4}
    for index, name in enumerate(which):
        one = {"e": found.entrance_diameters, "s": found.slip_coefficient}[name]
        assert one.found is True
        assert one.value == pytest.approx(unit[name] * whole.x[index], rel=1e-6)
        error = unit[name] * np.sqrt(covariance[index, index])
        assert one.standard_error == pytest.approx(error, rel=3e-3)
        # t(0.975) at 4, 5, 12 and 13 degrees of freedom, from the usual table.
        reach = {4: 2.776, 5: 2.571, 12: 2.179, 13: 2.160}[freedom] * one.standard_error
        assert one.high - one.value == pytest.approx(reach, rel=3e-4)
        assert one.value - one.low == pytest.approx(reach, rel=3e-4)
    if which == "es":
        together = covariance[0, 1] / np.sqrt(covariance[0, 0] * covariance[1, 1])
        assert found.correlation == pytest.approx(together, rel=3e-3)
    else:
        assert found.correlation == 0.0
        kept = found.slip_coefficient if which == "e" else found.entrance_diameters
        assert (kept.found, kept.standard_error) == (False, 0.0)
        assert kept.low == kept.value == kept.high == (5e-5 if which == "e" else 1.8)


@pytest.mark.parametrize("sizes", [2, 3, 5])
def test_the_degree_is_the_one_of_the_corrected_criterion(sizes: int) -> None:
    """n ln(RSS/n) + 2k + 2k(k + 1)/(n - k - 1), k with both corrections and the variance."""
    tubes, flow = _plan(sizes)
    bent = rheo.model("sisko", infinite_shear_viscosity=0.02, consistency=8.0, flow_index=0.45)
    shown = set()
    for seed in range(12):
        noise = np.random.default_rng(seed).normal(0.0, (0.002, 0.02)[seed % 2], flow.shape)
        drop = tubes.predict(bent, flow) * np.exp(noise)
        degree, score, taken = 0, np.inf, None
        for tried in range(1, min(5, flow.size - 6) + 1):
            whole = _whole(tubes, flow, drop, tried, "es")
            k = tried + 4
            here = flow.size * np.log(2.0 * whole.cost / flow.size) + 2 * k
            here += 2 * k * (k + 1) / (flow.size - k - 1)
            if here < score - 2.0:
                degree, score, taken = tried, here, whole
        assert taken is not None
        found = find_tube_corrections(tubes, flow, drop)
        scatter = np.sqrt(2.0 * taken.cost / (flow.size - degree - 3))
        # The scatter tells which degree was taken.
        assert found.scatter == pytest.approx(scatter, rel=1e-5), (seed, degree)
        shown.add(degree)
    assert len(shown) > 1 or sizes == 2


def test_five_readings_are_enough_for_both() -> None:
    model = rheo.model("power-law", consistency=8.0, flow_index=0.45)
    tubes = make_geometry(
        "tube",
        diameter=[0.001, 0.002, 0.004, 0.004, 0.002],
        length=[0.05, 0.05, 0.05, 0.2, 0.1],
        entrance_diameters=1.8,
        slip_coefficient=5e-5,
    )
    flow = tubes.setting_for_rate(model, [100.0, 300.0, 900.0, 200.0, 50.0])
    found = find_tube_corrections(tubes, flow, tubes.predict(model, flow))
    assert found.entrance_diameters.value == pytest.approx(1.8, rel=1e-6)
    assert found.slip_coefficient.value == pytest.approx(5e-5, rel=1e-6)


def test_nothing_to_find_leaves_the_corrections_given() -> None:
    tubes, flow = _plan(3)
    model = rheo.model("power-law", consistency=8.0, flow_index=0.45)
    found = find_tube_corrections(tubes, flow, tubes.predict(model, flow), False, False)
    for estimate, value in ((found.entrance_diameters, 1.8), (found.slip_coefficient, 5e-5)):
        assert (estimate.value, estimate.found, estimate.standard_error) == (value, False, 0.0)
    assert found.correlation == 0.0
    assert found.scatter < 1e-12


def test_thin_fluids_have_small_drops() -> None:
    """The entrance loss does not change with the unit of pressure."""
    tubes, flow, pressure_drop = _noisy(2)
    thick = find_tube_corrections(tubes, flow, pressure_drop, slip=False)
    thin = find_tube_corrections(tubes, flow, 1e-7 * pressure_drop, slip=False)
    assert np.min(1e-7 * pressure_drop) < 0.1
    assert thin.entrance_diameters.value == pytest.approx(thick.entrance_diameters.value, rel=1e-6)


def test_what_is_refused() -> None:
    tubes, flow, pressure_drop = _noisy(1)
    one = make_geometry("tube", diameter=0.002, length=0.1)
    with pytest.raises(InputError, match="all tubes have the same length over diameter"):
        find_tube_corrections(one, flow, pressure_drop, slip=False)
    with pytest.raises(InputError, match="all tubes have the same diameter; slip needs two"):
        find_tube_corrections(one, flow, pressure_drop, entrance=False)
    cone = make_geometry("cone-plate", radius=0.02, angle=0.02)
    with pytest.raises(InputError, match="not from 'cone-plate'"):
        find_tube_corrections(cone, flow, pressure_drop)
    with pytest.raises(InputError, match="a flow or pressure drop is not above 0"):
        find_tube_corrections(tubes, -flow, pressure_drop)
    few = make_geometry("tube", diameter=[0.001, 0.002, 0.004, 0.008], length=0.1)
    with pytest.raises(InputError, match="there are 4 readings; this needs 5 or more"):
        find_tube_corrections(few, flow[:4], pressure_drop[:4])
    mixed = tubes.replaced(entrance_diameters=np.linspace(0.0, 1.0, 32))
    with pytest.raises(InputError, match="must be one number for all tubes"):
        find_tube_corrections(mixed, flow, pressure_drop, entrance=False)
    mixed = tubes.replaced(slip_coefficient=np.linspace(0.0, 1e-5, 32))
    with pytest.raises(InputError, match=r"^entrance_diameters and slip_coefficient must be one"):
        find_tube_corrections(mixed, flow, pressure_drop, slip=False)


@pytest.mark.parametrize("wrong", [0.0, -1e-6, np.nan, np.inf])
def test_readings_without_a_logarithm_are_refused(wrong: float) -> None:
    tubes, flow, pressure_drop = _noisy(1)
    flow = flow.copy()
    flow[3] = wrong
    with pytest.raises(
        InputError, match=r"^a flow or pressure drop is not above 0; leave"
    ) as caught:
        find_tube_corrections(tubes, flow, pressure_drop)
    assert odd_words(str(caught.value)) == []
    tubes, flow, pressure_drop = _noisy(1)
    pressure_drop[3] = wrong
    with pytest.raises(InputError, match="a flow or pressure drop is not above 0"):
        find_tube_corrections(tubes, flow, pressure_drop)


@pytest.mark.parametrize("size", [1e-4, 1.0])
def test_tubes_that_differ_by_a_hundredth_do_not_differ(size: float) -> None:
    flow, drop = np.linspace(1e-9, 6e-9, 6), np.linspace(1e4, 4e4, 6)
    near = np.array([1.0, 1.01, 1.0, 1.01, 1.0, 1.01])
    long = make_geometry("tube", diameter=size, length=30.0 * size * near)
    with pytest.raises(InputError, match=r"^all tubes have the same length over dia") as caught:
        find_tube_corrections(long, flow, drop, slip=False)
    assert odd_words(str(caught.value)) == []
    assert "; the entrance loss needs two different ones" in str(caught.value)
    wide = make_geometry("tube", diameter=size * near, length=30.0 * size)
    with pytest.raises(
        InputError, match=r"^all tubes have the same diameter; slip needs"
    ) as caught:
        find_tube_corrections(wide, flow, drop, entrance=False)
    assert odd_words(str(caught.value)) == []
