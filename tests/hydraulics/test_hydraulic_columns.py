"""Columns of Python objects or whole numbers, and arrays of every shape that broadcasts."""

import numpy as np
import pytest

import rheo
from rheo.hydraulics import (
    developing_length,
    fraction_faster_than_mean,
    residence_curve,
    stress_profile,
    velocity_profile,
)
from rheo.hydraulics.fittings import PointLoss, PowerLoss, reducer_loss

SLURRY = rheo.model("herschel-bulkley", yield_stress=5.0, consistency=0.1, flow_index=0.8)
ONE = rheo.pipe_flow(SLURRY, 0.15, np.array([0.5, 1.7, 4.0]), 1200.0)
WIDE = rheo.pipe_flow(SLURRY, 0.3, np.array([0.5, 1.7, 4.0]) / 4, 1200.0)
CURVE = PointLoss([1.0, 2.0, 4.0], [1.0, 3.0, 12.0])

CALLS = {
    "pipe_flow": (
        lambda *columns: rheo.pipe_flow(SLURRY, *columns).wall_stress,
        [[1.0, 2.0], [3.0, 1.0], [1000.0, 1200.0]],
    ),
    "friction_factor": (
        lambda *columns: rheo.friction_factor(SLURRY, *columns, method="torrance"),
        [[1.0, 2.0], [3.0, 1.0], [1000.0, 1200.0], [0.0, 0.0]],
    ),
    "critical_velocity": (
        lambda *columns: rheo.critical_velocity(SLURRY, *columns),
        [[1.0, 2.0], [1000.0, 1200.0]],
    ),
    "velocity_for_gradient": (
        lambda *columns: rheo.velocity_for_gradient(SLURRY, *columns),
        [[1.0, 2.0], [30.0, 100.0], [1000.0, 1200.0]],
    ),
    "diameter_for_gradient": (
        lambda *columns: rheo.diameter_for_gradient(SLURRY, *columns),
        [[1.0, 2.0], [30.0, 100.0], [1000.0, 1200.0]],
    ),
    "slot_flow": (
        lambda *columns: rheo.slot_flow(SLURRY, *columns).pressure_gradient,
        [[1.0, 2.0], [3.0, 1.0]],
    ),
    "slip_flow": (
        lambda *columns: rheo.slip_flow(SLURRY, *columns).pressure_gradient,
        [[1.0, 2.0], [3.0, 1.0], [0.0, 0.0]],
    ),
    "velocity_profile": (lambda place: velocity_profile(ONE, place), [[0.0, 1.0]]),
    "stress_profile": (lambda place: stress_profile(ONE, place), [[0.0, 1.0]]),
    "reducer_loss": (lambda angle: reducer_loss(ONE, WIDE, angle), [[1.0, 2.0, 3.0]]),
    "points": (CURVE.pressure_drop, [[0.0, 1.0, 3.0]]),
    "covers": (lambda flow: CURVE.covers(flow).astype(float), [[0.0, 1.0, 3.0]]),
    "of points": (
        lambda flow, loss: PointLoss(flow, loss).pressure_drop(1.5),
        [[1.0, 2.0, 4.0], [1.0, 3.0, 12.0]],
    ),
    "power": (PowerLoss(2e4, 2.0, 1.5).pressure_drop, [[0.0, 1.0, 3.0]]),
}


@pytest.mark.parametrize("name", CALLS)
@pytest.mark.parametrize("kind", [int, object])
def test_any_column_of_numbers_will_do(name, kind):
    function, columns = CALLS[name]
    expected = function(*(np.array(column) for column in columns))
    found = function(*(np.array(column).astype(kind) for column in columns))
    assert np.asarray(found).dtype == float
    np.testing.assert_array_equal(found, expected)
    np.testing.assert_array_equal(function(*columns), expected)


YIELD_STRESSES = (5.0, 20.0)


def slurry(yield_stress):
    return rheo.model(
        "herschel-bulkley", yield_stress=yield_stress, consistency=0.1, flow_index=0.8
    )


RESULTS = [
    *("diameter", "velocity", "density", "roughness", "regime", "turbulence", "wall_stress"),
    *("wall_rate", "laminar_wall_rate", "nominal_rate", "friction_factor", "pressure_gradient"),
    *("laminar_wall_stress", "local_flow_index", "local_consistency", "reynolds"),
    *("plug_fraction", "plug_radius", "critical_velocity", "critical_reynolds"),
    *("velocity_ratio", "kinetic_energy_factor", "method_spread"),
]
SHAPES = {
    "diameter": {"diameter": [0.1, 0.15, 0.2]},
    "velocity": {"velocity": [0.5, 1.7, 4.0]},
    "density": {"density": [900.0, 1000.0, 1200.0]},
    "roughness": {"roughness": [0.0, 1e-5, 1e-3]},
}


@pytest.mark.parametrize("regime", [None, "laminar", "turbulent"])
@pytest.mark.parametrize("name", SHAPES)
def test_every_result_of_a_pipe_has_the_shape_of_all_arguments(name, regime):
    given = {"diameter": 0.15, "velocity": 1.7, "density": 1200.0, "roughness": 0.0}
    given.update(SHAPES[name])
    flow = rheo.pipe_flow(slurry([[5.0], [20.0]]), **given, regime=regime)
    values = {key: getattr(flow, key) for key in RESULTS}
    values["faster"] = fraction_faster_than_mean(flow)
    values["developing"] = developing_length(flow).length
    assert {key: np.shape(value) for key, value in values.items()} == dict.fromkeys(values, (2, 3))
    assert np.shape(residence_curve(flow, 7).time_ratio) == (2, 3, 7)
    # Each element is that of the single case.
    for row, column in ((0, 0), (1, 2)):
        one = {
            key: np.broadcast_to(value, (2, 3))[row, column].item() for key, value in given.items()
        }
        alone = rheo.pipe_flow(slurry(YIELD_STRESSES[row]), **one, regime=regime)
        for key in ("wall_stress", "wall_rate", "critical_velocity", "velocity_ratio"):
            single = getattr(alone, key)
            assert np.shape(single) == ()
            assert values[key][row, column] == pytest.approx(single, rel=1e-12)
        assert alone.regime == flow.regime[row, column]
