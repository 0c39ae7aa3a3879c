"""From a geometry at a setting to others at the same shear rate."""

from __future__ import annotations

import json

import numpy as np
import pytest
from flow_curves import any_model, example, powers_of_ten
from hypothesis import given, settings

import rheo
from rheo import InputError, Model
from rheo.geometry import make_geometry
from rheo.geometry.convert import convert, sentence, shear_point, shear_point_at_rate

PIPE = make_geometry("tube", diameter=0.0703, length=20.0)
TARGETS = {
    "your cup and bob": make_geometry(
        "concentric-cylinders", inner_radius=0.0125, outer_radius=0.01356, length=0.0375
    ),
    "the cone": make_geometry("cone-plate", radius=0.025, angle=0.035),
    "the slot": make_geometry("slot", half_gap=0.002, width=0.1, length=1.0),
    "the mud instrument": make_geometry("six-speed"),
}


@settings(deadline=None, max_examples=60, derandomize=True)
@given(model=any_model(), rate=powers_of_ten(-2, 3))
def test_all_targets_shear_at_the_same_rate_and_back(model: Model, rate: float) -> None:
    flow = PIPE.setting_for_rate(model, rate)
    there = convert(model, PIPE, flow, TARGETS)
    for name, point in there.targets.items():
        assert float(point.rate) == pytest.approx(float(there.source.rate), rel=1e-10)
        assert float(point.stress) == pytest.approx(float(there.source.stress), rel=1e-10)
        assert float(point.viscosity) == pytest.approx(float(there.source.viscosity), rel=1e-9)
        back = convert(model, TARGETS[name], point.setting, [PIPE])
        assert float(back.targets["tube"].setting) == pytest.approx(float(flow), rel=1e-8)


def test_newtonian_by_hand() -> None:
    """8V/D in the pipe; the cone turns at that rate times its angle."""
    oil = rheo.model("newtonian", viscosity=0.4)
    flow = 4.0 / 3600.0
    found = convert(oil, PIPE, flow, TARGETS)
    rate = 32.0 * flow / (np.pi * 0.0703**3)
    assert float(found.source.rate) == pytest.approx(rate, rel=1e-12)
    assert float(found.source.stress) == pytest.approx(0.4 * rate, rel=1e-12)
    assert float(found.source.viscosity) == pytest.approx(0.4, rel=1e-12)
    assert float(found.source.reading) == pytest.approx(4 * 0.4 * rate * 20 / 0.0703, rel=1e-12)
    assert float(found.targets["the cone"].setting) == pytest.approx(rate * 0.035, rel=1e-12)
    rpm = float(found.targets["the mud instrument"].setting) * 30.0 / np.pi
    assert rpm == pytest.approx(rate / 1.70230, rel=1e-5)  # 1.7023 1/s per rpm, API RP 13B-1


def test_the_sentence() -> None:
    oil = rheo.model("newtonian", viscosity=0.4)
    found = convert(oil, PIPE, 4.0 / 3600.0, {"your cup and bob": TARGETS["your cup and bob"]})
    rate = 8.0 * (4.0 / 3600.0) / (np.pi * 0.0703**2 / 4.0) / 0.0703
    rpm = 0.5 * rate * (1.0 - (12.5 / 13.56) ** 2) * 30.0 / np.pi
    assert sentence(found) == (
        f"The round tube at 4 m3/h works at {rate:.4g} 1/s; "
        f"on your cup and bob that is {rpm:.4g} rpm."
    )
    many = convert(oil, PIPE, [1e-3, 2e-3], {})
    with pytest.raises(InputError, match=r"^a sentence needs a single setting and a single flow"):
        sentence(many)


def test_arrays_and_draws_broadcast() -> None:
    draws = rheo.model("power-law", consistency=[[4.0], [5.0]], flow_index=[[0.4], [0.6]])
    found = convert(draws, PIPE, [1e-4, 1e-3, 1e-2], TARGETS)
    for point in (found.source, *found.targets.values()):
        assert {point.setting.shape, point.rate.shape, np.shape(point.reading)} == {(2, 3)}
    json.dumps(found.as_dict())


def test_plain_data_has_si_names() -> None:
    data = convert(example("bingham"), PIPE, 1e-3, [TARGETS["the cone"]]).as_dict()
    assert data["source"]["geometry"] == "tube"
    assert data["source"]["flow"] == 1e-3
    everywhere = {"geometry", "name", "place", "rate", "stress", "viscosity", "cautions"}
    everywhere |= {"nominal_rate", "nominal_stress"}
    assert set(data["source"]) == {"flow", "pressure_drop"} | everywhere
    assert set(data["targets"]["cone-plate"]) == {"angular_speed", "torque"} | everywhere
    assert (data["source"]["name"], data["source"]["place"]) == ("round tube", "wall")
    # A Newtonian conversion of a tube: 32Q/(πD³), and the stress that the drop stands for.
    nominal_rate = 32.0 * 1e-3 / (np.pi * 0.0703**3)
    assert data["source"]["nominal_rate"] == pytest.approx(nominal_rate, rel=1e-12)
    assert data["source"]["nominal_stress"] == pytest.approx(data["source"]["stress"], rel=1e-12)
    assert data["source"]["cautions"] == []


def test_geometries_of_one_kind_are_numbered() -> None:
    cones = [make_geometry("cone-plate", radius=radius, angle=0.03) for radius in (0.02, 0.03)]
    found = convert(example("casson"), PIPE, 1e-3, [*cones, PIPE])
    assert list(found.targets) == ["cone-plate", "cone-plate 2", "tube"]


def test_at_rest() -> None:
    paste = example("herschel-bulkley")
    still = shear_point(paste, PIPE, 0.0)
    assert float(still.rate) == 0.0
    assert np.isposinf(still.viscosity)
    assert still.as_dict()["viscosity"] is None
    assert float(still.stress) == pytest.approx(float(paste.yield_stress), rel=1e-14)
    half = shear_point(paste, PIPE, [0.0, np.nan, 1e-3])
    np.testing.assert_array_equal(np.isnan(half.viscosity), [False, True, False])
    assert np.isposinf(half.viscosity[0])
    assert half.viscosity[2] == pytest.approx(half.stress[2] / half.rate[2], rel=1e-14)
    assert half.as_dict()["viscosity"][:2] == [None, None]
    with pytest.raises(InputError, match="geometry tube: the fluid is not sheared at this flow Q"):
        convert(paste, PIPE, 0.0, TARGETS)


def test_from_a_rate() -> None:
    point = shear_point_at_rate(example("casson"), TARGETS["the cone"], 40.0)
    assert float(point.setting) == pytest.approx(1.4, rel=1e-14)
    assert float(point.rate) == pytest.approx(40.0, rel=1e-14)


def test_cautions_come_along() -> None:
    vane = make_geometry("vane", diameter=0.02, height=0.04)
    found = convert(rheo.model("newtonian", viscosity=1.0), PIPE, 1e-3, [vane])
    assert [caution.code for caution in found.targets["vane"].cautions] == [
        "vane-not-shear-thinning"
    ]
