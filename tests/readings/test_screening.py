"""Screening says which readings to doubt, and is silent about good ones."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from rheo import Caution, Readings, loop_area, model, read_readings, screen
from rheo.geometry import make_geometry
from rheo.geometry.taylor import critical_speed

CUP = make_geometry(
    "concentric-cylinders", inner_radius=0.0125, outer_radius=0.01356, length=0.0375, end_factor=1.1
)
PRODUCT = model("herschel-bulkley", yield_stress=12.0, consistency=4.2, flow_index=0.45)
WATERY = model("newtonian", viscosity=0.001)
RATE = np.geomspace(1.0, 100.0, 8)
UP_DOWN = np.r_[RATE, RATE[::-1]]


def curve(rate: np.ndarray, factor: object = 1.0, **columns: object) -> Readings:
    return Readings(rate=rate, stress=PRODUCT.stress(rate) * factor, **columns)


def only(cautions: tuple[Caution, ...], code: str) -> Caution:
    assert [caution.code for caution in cautions] == [code]
    assert cautions[0].sentence.endswith(".")
    assert cautions[0].advice.endswith(".")
    return cautions[0]


@settings(deadline=None, max_examples=40, derandomize=True)
@given(
    st.sampled_from(["up", "up and down"]),
    st.floats(1e-3, 1e3),
    st.floats(0.0, 50.0),
    st.floats(0.2, 1.0),
    st.integers(0, 2**31),
)
def test_good_readings_pass(
    sweep: str, consistency: float, yield_stress: float, index: float, seed: int
) -> None:
    """Noise of 0.2 %, as of a good instrument, sets off nothing."""
    fluid = model(
        "herschel-bulkley", yield_stress=yield_stress, consistency=consistency, flow_index=index
    )
    rate = RATE if sweep == "up" else UP_DOWN
    noise = 1.0 + 0.002 * np.random.default_rng(seed).normal(size=rate.size).clip(-3, 3)
    assert screen(Readings(rate=rate, stress=fluid.stress(rate) * noise)) == ()


def test_torque_outside_its_range() -> None:
    speed = np.array([1.0, 2.0, 3.0, 4.0])
    share = np.array([0.05, 0.0999, 0.5, 1.2])
    readings = Readings(geometry=CUP, angular_speed=speed, torque_fraction=share)
    low, high = screen(readings)
    assert (low.code, low.points) == ("torque-low", (0, 1))
    assert "2 of 4 readings have a torque under 10 % of full scale, down to 0.05" in low.sentence
    assert (high.code, high.points) == ("torque-high", (3,))
    assert "over 100 % of full scale, up to 1.2 times" in high.sentence
    in_newton_metres = Readings(geometry=CUP, angular_speed=speed, torque=share * 0.05)
    assert screen(in_newton_metres) == ()
    assert screen(in_newton_metres, full_scale_torque=0.05) == (low, high)
    assert screen(in_newton_metres.with_geometry(CUP, full_scale_torque=0.05)) == (low, high)


def test_what_the_user_has_taken_out_is_passed_over() -> None:
    readings = Readings(
        geometry=CUP, angular_speed=[1, 2, 3, 4], torque_fraction=[0.05, 0.06, 0.5, 0.9]
    )
    assert only(screen(readings), "torque-low").points == (0, 1)
    assert only(screen(readings.with_excluded([0])), "torque-low").points == (1,)
    assert screen(readings.with_excluded([0, 1])) == ()
    assert screen(readings.with_excluded([0, 1, 2, 3])) == ()


def test_taylor_vortices() -> None:
    critical = float(critical_speed(CUP, WATERY, 1000.0))
    speed = critical * np.array([0.5, 0.9, 1.1, 2.0])
    readings = Readings(geometry=CUP, angular_speed=speed, torque=CUP.predict(WATERY, speed))
    found = only(screen(readings, density=1000.0), "taylor-vortices")
    assert found.points == (2, 3)
    assert screen(readings) == ()
    six_speed = make_geometry("six-speed")
    turning_cup = Readings(
        geometry=six_speed, angular_speed=speed, torque=six_speed.predict(WATERY, speed)
    )
    assert screen(turning_cup, density=1000.0) == ()


@pytest.mark.parametrize(
    ("key", "dimensions", "gap"),
    [
        ("concentric-cylinders", dict(CUP.dimensions), 0.00106),
        ("six-speed", {}, 0.00117),
        ("parallel-plate", {"radius": 0.02, "gap": 0.001}, 0.001),
        ("cone-plate", {"radius": 0.025, "angle": 0.035}, 0.025 * np.tan(0.035)),
        ("tube", {"diameter": 0.004, "length": 1.0}, 0.004),
        ("slot", {"half_gap": 0.001, "width": 0.05, "length": 0.5}, 0.002),
    ],
)
def test_gap_and_particles(key: str, dimensions: dict[str, float], gap: float) -> None:
    geometry = make_geometry(key, **dimensions)
    setting = geometry.setting_for_rate(PRODUCT, RATE)
    columns = {
        geometry.record.setting: setting,
        geometry.record.reading: geometry.predict(PRODUCT, setting),
    }
    readings = Readings(geometry=geometry, **columns)
    assert screen(readings, particle_diameter=gap / 10.01) == ()
    found = only(screen(readings, particle_diameter=gap / 9.99), "gap-narrow")
    assert found.points == tuple(range(RATE.size))
    assert f"{gap * 1e3:.3g} mm, 10 times the largest particle" in found.sentence


def test_particles_between_two_gaps() -> None:
    gap = np.repeat([0.0005, 0.002], 4)
    plates = make_geometry("parallel-plate", radius=0.02, gap=gap)
    speed = plates.setting_for_rate(PRODUCT, np.tile(RATE[:4], 2))
    readings = Readings(geometry=plates, angular_speed=speed, torque=plates.predict(PRODUCT, speed))
    assert only(screen(readings, particle_diameter=1e-4), "gap-narrow").points == (0, 1, 2, 3)


def test_stress_that_does_not_rise() -> None:
    factor = np.ones(RATE.size)
    factor[5] = 0.6
    found = only(screen(curve(RATE, factor)), "stress-not-rising")
    assert found.points == (5,)
    assert screen(curve(RATE, np.where(factor < 1, 0.999, 1.0))) == ()


def test_rate_that_goes_back_within_a_sweep() -> None:
    rate = np.array([1.0, 2.0, 4.0, 3.0, 8.0, 16.0])
    named = curve(rate, branch=["up"] * 6)
    assert only(screen(named), "rate-not-rising").points == (3,)
    assert screen(curve(np.sort(rate), branch=["up"] * 6)) == ()


@pytest.mark.parametrize(
    ("factor", "words"), [(1.2, "below the way up"), (0.8, "above the way up")]
)
def test_branches_apart(factor: float, words: str) -> None:
    found = only(screen(curve(UP_DOWN, np.r_[np.full(8, factor), np.ones(8)])), "branches-apart")
    assert found.points == tuple(range(16))
    assert words in found.sentence
    assert f"lies {100 * abs(1 - 1 / factor):.0f} %" in found.sentence


def test_branches_of_different_sweeps_are_not_compared() -> None:
    factor = np.r_[np.ones(8), np.full(8, 0.5)]
    warm = np.repeat([293.0, 313.0], 8)
    assert screen(curve(UP_DOWN, factor, temperature=warm)) == ()
    assert only(screen(curve(UP_DOWN, factor)), "branches-apart")


def test_branches_in_two_blocks_are_compared() -> None:
    readings = curve(
        UP_DOWN,
        np.r_[np.ones(8), np.full(8, 0.7)],
        block=np.repeat(["up", "down"], 8),
        branch=np.repeat(["up", "down"], 8),
    )
    assert only(screen(readings), "branches-apart")


def test_loop_area_of_triangles() -> None:
    # By hand: a triangle of base 10 and height 4, under a branch of area 1/2 * 10 * 24.
    assert loop_area([0, 5, 10], [0, 16, 24], [0, 10], [0, 24]) == pytest.approx(
        (20.0, 20.0 / 140.0), rel=1e-14
    )
    area, share = loop_area([1, 10], [1, 10], [10, 1], [10, 1])
    assert (area, share) == (0.0, 0.0)
    # Only the rates that both branches have.
    assert loop_area([0, 10], [2, 2], [5, 20], [1, 1]) == pytest.approx((5.0, 0.5), rel=1e-14)
    assert np.isnan(loop_area([1, 2], [1, 1], [3, 4], [1, 1])).all()


def test_drift_at_constant_speed() -> None:
    rising = Readings(rate=np.full(6, 10.0), stress=20.0 + np.arange(6.0), time=10.0 * np.arange(6))
    found = only(screen(rising), "drift")
    assert found.points == tuple(range(6))
    # From 20 to 25 about a mean of 22.5.
    assert "goes on rising, by up to 22 %" in found.sentence
    noisy = Readings(rate=np.full(6, 10.0), stress=[20, 21, 19.5, 20.5, 20, 20.6])
    assert screen(noisy) == ()
    steps = np.repeat(RATE, 4)
    stress = PRODUCT.stress(steps)
    stress[8:12] *= [1.0, 0.97, 0.95, 0.94]
    found = only(screen(Readings(rate=steps, stress=stress)), "drift")
    assert found.points == (8, 9, 10, 11)
    assert "At 1 constant speed the reading goes on falling, by up to 6 %" in found.sentence


def tubes(slip: float = 0.0, entrance: float = 0.0, length: object = 1.0) -> Readings:
    diameter = np.repeat([0.005, 0.01], 6)
    tube = make_geometry(
        "tube", diameter=diameter, length=length, slip_coefficient=slip, entrance_diameters=entrance
    )
    flow = np.tile(np.geomspace(1.0, 50.0, 6), 2) * np.pi * diameter**3 / 32.0
    return Readings(
        flow=flow,
        pressure_drop=tube.predict(PRODUCT, flow),
        tube_diameter=diameter,
        tube_length=np.broadcast_to(length, diameter.shape),
    )


def test_slip_in_two_tubes() -> None:
    assert screen(tubes()) == ()
    found = only(screen(tubes(slip=2e-4)), "slip")
    assert found.points == tuple(range(12))
    assert "the narrowest tube shows" in found.sentence
    assert "less stress than the widest one: the product slips at the wall" in found.sentence


def test_curves_apart_that_slip_cannot_explain() -> None:
    found = only(screen(tubes(entrance=5.0, length=np.repeat([0.1, 1.0], 6))), "curves-apart")
    assert "more stress than the widest one, which slip cannot explain" in found.sentence


def test_slip_between_plates() -> None:
    gap = np.repeat([0.0005, 0.001], 6)
    plates = make_geometry("parallel-plate", radius=0.02, gap=gap)
    rate = np.tile(np.geomspace(1.0, 50.0, 6), 2)
    speed = plates.setting_for_rate(PRODUCT, rate)
    torque = plates.predict(PRODUCT, speed)
    good = Readings(geometry=plates, angular_speed=speed, torque=torque)
    assert screen(good) == ()
    slipping = Readings(
        geometry=plates, angular_speed=speed, torque=torque * np.repeat([0.8, 1.0], 6)
    )
    assert "narrowest gap shows 20 % less" in only(screen(slipping), "slip").sentence


def test_entrance_loss_in_tubes_of_two_lengths() -> None:
    length = np.repeat([0.1, 1.0], 6)
    tube = make_geometry("tube", diameter=0.01, length=length, entrance_diameters=3.0)
    flow = np.tile(np.geomspace(1.0, 50.0, 6), 2) * np.pi * 0.01**3 / 32.0
    readings = Readings(
        flow=flow,
        pressure_drop=tube.predict(PRODUCT, flow),
        tube_diameter=np.full(12, 0.01),
        tube_length=length,
    )
    found = only(screen(readings), "entrance-loss")
    # (10 + 3)/10 over (100 + 3)/100 is 1.262.
    assert "the shortest tube shows 26 % more wall stress" in found.sentence


@pytest.mark.parametrize(
    ("key", "dimensions", "across"),
    [
        ("tube", {"diameter": 0.01, "length": 20.0}, 0.01),
        ("slot", {"half_gap": 0.0025, "width": 0.2, "length": 20.0}, 0.01),
    ],
)
def test_turbulent_flow(key: str, dimensions: dict[str, float], across: float) -> None:
    geometry = make_geometry(key, **dimensions)
    reynolds = np.array([100.0, 2000.0, 2200.0, 4000.0])
    area = np.pi * 0.01**2 / 4.0 if key == "tube" else 0.005 * 0.2
    flow = reynolds * 0.001 / 1000.0 / across * area
    readings = Readings(geometry=geometry, flow=flow, pressure_drop=geometry.predict(WATERY, flow))
    assert screen(readings) == ()
    found = only(screen(readings, density=1000.0), "turbulent-flow")
    assert found.points == (2, 3)
    assert "up to 4000" in found.sentence


def test_developing_flow() -> None:
    tube = make_geometry("tube", diameter=0.01, length=1.0)
    # 0.06 Re D is a tenth of the length at Re = 167.
    reynolds = np.array([100.0, 160.0, 175.0, 500.0])
    flow = reynolds * 0.001 / 1000.0 / 0.01 * np.pi * 0.01**2 / 4.0
    readings = Readings(geometry=tube, flow=flow, pressure_drop=tube.predict(WATERY, flow))
    found = only(screen(readings, density=1000.0), "developing-flow")
    assert found.points == (2, 3)
    assert "up to 30 % of the tube's length" in found.sentence


def test_readings_worked_back_from_the_instruments_conversion() -> None:
    readings = curve(RATE, geometry=CUP)
    found = only(screen(readings), "worked-back")
    assert "by the 'representative' conversion" in found.sentence
    cone = make_geometry("cone-plate", radius=0.025, angle=0.03)
    assert screen(curve(RATE, geometry=cone)) == ()


def test_without_a_geometry_what_was_read_is_screened() -> None:
    torque = np.r_[RATE, 0.7 * RATE[::-1]]
    assert only(screen(Readings(angular_speed=UP_DOWN, torque=torque)), "branches-apart")
    assert screen(Readings(angular_speed=UP_DOWN, torque=UP_DOWN)) == ()


def test_what_the_file_states_is_used() -> None:
    text = (
        "# geometry: tube, diameter 10 mm, length 20 m\n# density: 1000 kg/m3\n"
        "# particle_diameter: 2 mm\nflow [L/h];pressure drop [Pa]\n20;100\n50;250\n100;500\n"
    )
    codes = [caution.code for caution in screen(read_readings(text.encode()))]
    assert codes == ["gap-narrow", "turbulent-flow"]


def test_a_sweep_at_another_temperature_is_another_sweep() -> None:
    """Readings at rising temperatures, one below the other, say nothing of slip or disorder."""
    temperature = np.repeat([293.15, 313.15, 333.15], RATE.size)
    thinner = np.repeat([1.0, 0.6, 0.4], RATE.size)
    readings = curve(
        np.tile(RATE, 3), thinner, temperature=temperature, branch=np.repeat("up", 3 * RATE.size)
    )
    assert screen(readings) == ()
    drifting = curve(RATE, np.r_[np.ones(4), 0.5 * np.ones(4)], temperature=293.15 + 0.01 * RATE)
    assert only(screen(drifting), "stress-not-rising").points == (4, 5, 6)


def test_one_stress_too_high_is_named_and_not_all_after_it() -> None:
    factor = np.ones(RATE.size)
    factor[1] = 5.0
    found = only(screen(curve(RATE, factor)), "stress-not-rising")
    assert found.points == (1,)
    assert "At 1 of 8 readings the stress is higher than at a higher shear rate" in found.sentence
