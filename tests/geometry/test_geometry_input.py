"""What geometries accept, how they refuse, what menus are told."""

from __future__ import annotations

import json
import types

import numpy as np
import pytest
from flow_curves import example
from plain_words import check_caution, odd_words

import rheo
from rheo import InputError
from rheo.geometry import geometry_record, geometry_records, make_geometry


def test_the_package_can_be_called() -> None:
    geometry = rheo.geometry("tube", diameter=0.05, length=2.0)
    assert isinstance(rheo.geometry, types.ModuleType)
    assert isinstance(geometry, rheo.Geometry)
    assert geometry.key == "tube"
    assert repr(geometry) == (
        "geometry('tube', diameter=0.05, length=2, entrance_diameters=0, slip_coefficient=0)"
    )
    assert repr(make_geometry("cone-plate", radius=[0.02, 0.03], angle=0.02)) == (
        "geometry('cone-plate', radius=array(2,), angle=0.02)"
    )


REFUSED = [
    ("tube", {}, "geometry tube: dimension 'diameter' is missing; it takes diameter, length, entr"),
    ("tube", {"diameter": 0.05, "L": 2}, "geometry tube: unknown dimension 'L'; it takes diameter"),
    (
        "tube",
        {"diameter": 0.0, "length": 2},
        "geometry tube: diameter is 0; it must lie between 10⁻⁶ and 100 m",
    ),
    (
        "tube",
        {"diameter": [0.05, np.nan], "length": 2},
        "geometry tube: diameter is nan; it must lie between",
    ),
    (
        "tube",
        {"diameter": "wide", "length": 2},
        "geometry tube: diameter is 'wide'; it must be a number",
    ),
    (
        "tube",
        {"diameter": [0.1, 0.2], "length": [1.0, 2.0, 3.0]},
        "geometry tube: the dimensions have sizes that do not fit together: diameter (2,), length",
    ),
    (
        "tube",
        {"diameter": 0.1, "length": 0.1, "entrance_diameters": -2.0},
        "geometry tube: entrance_diameters takes away more than the length of the tube",
    ),
    (
        "tube",
        {"diameter": 0.25, "length": 0.5, "entrance_diameters": -2.0},
        "length/diameter + entrance_diameters must be above 0",
    ),
    (
        "concentric-cylinders",
        {"inner_radius": 0.02, "outer_radius": [0.03, 0.02], "length": 0.06},
        "concentric-cylinders: outer_radius is 0.02 m; it must be larger than inner_radius, 0.02 m",
    ),
    (
        "six-speed",
        {"inner_radius": 0.019},
        "six-speed: outer_radius is 0.018415 m; it must be larger than inner_radius, 0.019 m",
    ),
    (
        "parallel-plate",
        {"radius": 0.02, "gap": 0.015},
        "parallel-plate: gap is 0.015 m; it must be at most half the radius, 0.01 m",
    ),
    (
        "slot",
        {"half_gap": 0.01, "width": 0.03, "length": 1.0},
        "slot: width is 0.03 m; it must be at least 2 gaps, 0.04 m",
    ),
    ("cone-plate", {"radius": 0.02, "angle": 4.0}, "angle is 4; it must lie between 0.0001 and"),
]


@pytest.mark.parametrize(("key", "dimensions", "sentence"), REFUSED)
def test_what_is_refused(key: str, dimensions: dict[str, object], sentence: str) -> None:
    with pytest.raises(InputError) as caught:
        make_geometry(key, **dimensions)
    assert sentence in str(caught.value)
    assert odd_words(caught.value.sentence) == []


@pytest.mark.parametrize(
    ("key", "dimensions"),
    [
        ("parallel-plate", {"radius": 0.25, "gap": 0.125}),
        ("slot", {"half_gap": 0.125, "width": 0.5, "length": 1.0}),
        ("tube", {"diameter": 1e-6, "length": 1.0}),
        ("tube", {"diameter": 100.0, "length": 1.0}),
        ("tube", {"diameter": 0.25, "length": 0.5, "entrance_diameters": -1.5}),
    ],
)
def test_the_ends_of_what_is_allowed_are_allowed(key: str, dimensions: dict[str, float]) -> None:
    geometry = make_geometry(key, **dimensions)
    assert {name: float(geometry.dimensions[name]) for name in dimensions} == dimensions


def test_unknown_geometry() -> None:
    sentence = r"unknown geometry 'cone' \(did you mean 'cone-plate'\?\); there are concentric-cyl"
    with pytest.raises(InputError, match=sentence):
        make_geometry("cone")
    with pytest.raises(InputError, match=r"unknown geometry 'tubes' \(did you mean 'tube'\?\)"):
        geometry_record("tubes")


@pytest.mark.parametrize(
    ("setting", "shown"), [(-1.0, "-1"), ([1.0, -2.0], "-2"), (np.inf, "inf"), ([np.inf], "inf")]
)
def test_impossible_settings(setting: float, shown: str) -> None:
    model = example("bingham")
    cone = make_geometry("cone-plate", radius=0.02, angle=0.02)
    tube = make_geometry("tube", diameter=0.02, length=1.0)
    with pytest.raises(InputError, match=rf"angular speed ω is {shown} rad/s; it must be a finite"):
        cone.predict(model, setting)
    with pytest.raises(InputError, match=rf"flow Q is {shown} m\^3/s; it must be a finite"):
        tube.sheared(model, setting)
    with pytest.raises(InputError, match=rf"shear rate is {shown} 1/s; it must be a finite"):
        tube.setting_for_rate(model, setting)


def test_unknown_forms() -> None:
    cylinders = make_geometry("six-speed")
    with pytest.raises(InputError, match="unknown nominal form 'cup'; it has bob, repre") as caught:
        cylinders.nominal(1.0, 1.0, "cup")
    assert caught.value.place == "geometry six-speed"
    with pytest.raises(InputError, match="unknown inverse form 'x'; it has exact, power") as caught:
        cylinders.flow_points([1.0, 2.0, 3.0], [1.0, 2.0, 3.0], "x")
    assert caught.value.place == "geometry six-speed"


def test_replaced_dimensions_are_checked_again() -> None:
    tube = make_geometry("tube", diameter=0.02, length=1.0)
    assert float(tube.replaced(length=3.0).dimensions["length"]) == 3.0
    assert float(tube.dimensions["length"]) == 1.0
    with pytest.raises(InputError, match="length is -1; it must lie between"):
        tube.replaced(length=-1.0)


@pytest.mark.parametrize("key", sorted(geometry_records()))
def test_records_tell_menus_all_they_need(key: str) -> None:
    described = geometry_record(key).describe()
    json.dumps(described)
    assert described["key"] == key
    for name in ("name", "place", "validity", "source", "nominal_note"):
        assert described[name].strip()
    assert described["setting"] in (
        {"key": "angular_speed", "name": "angular speed", "symbol": "ω", "unit": "rad/s"},
        {"key": "flow", "name": "flow", "symbol": "Q", "unit": "m^3/s"},
    )
    assert described["reading"] in (
        {"key": "torque", "name": "torque", "symbol": "M", "unit": "N*m"},
        {"key": "pressure_drop", "name": "pressure drop", "symbol": "ΔP", "unit": "Pa"},
    )
    assert odd_words(" ".join(str(value) for value in described.values())) == []
    for form in described["nominal_forms"]:
        assert form in described["nominal_note"]
    assert described["inverse_forms"]
    for dimension in described["dimensions"]:
        assert all(dimension[name] for name in ("key", "symbol", "unit", "description"))
        assert dimension["lower"] < dimension["upper"]
        default = dimension["default"]
        assert default is None or dimension["lower"] <= default <= dimension["upper"]


def test_cautions() -> None:
    oil, paste = example("newtonian"), example("herschel-bulkley")
    vane = make_geometry("vane", diameter=0.02, height=0.04)
    (caution,) = vane.cautions(oil, 1.0)
    assert caution.code == "vane-not-shear-thinning"
    assert "slope of up to 1 here" in caution.sentence
    check_caution(caution, "vane")
    assert vane.cautions(paste, 1.0) == ()
    # At rest it is the yield stress that is measured, whatever the curve above it.
    assert vane.cautions(example("bingham"), 0.0) == ()
    assert vane.cautions(oil, 0.0) == ()
    # A slow vane in an oil is as wrong as a fast one.
    (slow,) = vane.cautions(oil, 1e-3)
    assert slow.sentence == caution.sentence
    (mixed,) = vane.cautions(oil, [0.0, 1.0])
    assert mixed.sentence == caution.sentence
    (caution,) = make_geometry("cone-plate", radius=0.02, angle=0.1).cautions(oil, 1.0)
    assert caution.code == "cone-angle"
    assert "5.7°" in caution.sentence
    check_caution(caution, "cone and plate")
    assert make_geometry("cone-plate", radius=0.02, angle=np.radians(4)).cautions(oil, 1.0) == ()
    (caution,) = make_geometry("slot", half_gap=0.01, width=0.1, length=1.0).cautions(oil, 1e-4)
    assert caution.code == "narrow-slot"
    assert "5 times as wide as its gap; its sides add about 13 %" in caution.sentence
    check_caution(caution, "slot")
    assert "Use a slot 10 times as wide as its gap" in caution.advice
    # 0.63 of the flow over the aspect: 11.5 % at 5.5.
    (caution,) = make_geometry("slot", half_gap=0.01, width=0.11, length=1.0).cautions(oil, 1e-4)
    assert "5.5 times as wide as its gap; its sides add about 11 %" in caution.sentence
    # At the aspect that is advised there is nothing left to advise.
    wide = make_geometry("slot", half_gap=0.0625, width=1.25, length=1.0)
    assert wide.cautions(oil, 1e-4) == ()
    assert make_geometry("slot", half_gap=0.01, width=0.3, length=1.0).cautions(oil, 1e-4) == ()
    assert make_geometry("six-speed").cautions(oil, 1.0) == ()


def test_nominal_pairs_have_one_shape() -> None:
    cone = make_geometry("cone-plate", radius=0.02, angle=0.02)
    for setting, reading in ((1.0, [1.0, 2.0, 3.0]), ([1.0, 2.0, 3.0], 1.0)):
        rate, stress = cone.nominal(setting, reading)
        assert rate.shape == stress.shape == (3,)
    many = cone.replaced(radius=[0.01, 0.02])
    rate, stress = many.nominal(1.0, 1.0)
    assert rate.shape == stress.shape == (2,)
    tubes = make_geometry("tube", diameter=0.02, length=[1.0, 2.0], entrance_diameters=0.5)
    rate, stress = tubes.nominal([[1e-4], [2e-4], [3e-4]], 100.0)
    assert rate.shape == stress.shape == (3, 2)
    slot = make_geometry("slot", half_gap=0.01, width=0.5, length=[1.0, 2.0])
    rate, stress = slot.nominal(1e-4, 100.0)
    assert rate.shape == stress.shape == (2,)
