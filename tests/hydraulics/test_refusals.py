"""Every number that every function of this part takes: refused by its name, with its unit."""

import re

import numpy as np
import pytest
from plain_words import odd_words

import rheo
from rheo.errors import without_exponents
from rheo.hydraulics.fittings import PointLoss, PowerLoss, reducer_loss

SLURRY = rheo.model("herschel-bulkley", yield_stress=5.0, consistency=0.1, flow_index=0.8)
ABOVE, FROM = "it must be a finite number above 0", "it must be a finite number, 0 or more"

# Function, arguments that work, and unit and rule of each.
PIPE = {
    "diameter": (0.1, "m", ABOVE),
    "velocity": (1.0, "m/s", ABOVE),
    "density": (1200.0, "kg/m3", ABOVE),
    "roughness": (1e-5, "m", FROM),
}
FUNCTIONS = {
    "pipe_flow": (lambda **given: rheo.pipe_flow(SLURRY, **given), PIPE),
    "friction_factor": (lambda **given: rheo.friction_factor(SLURRY, **given), PIPE),
    "friction_factor by method": (
        lambda **given: rheo.friction_factor(SLURRY, **given, method="torrance"),
        PIPE,
    ),
    "critical_velocity": (
        lambda **given: rheo.critical_velocity(SLURRY, **given),
        {key: PIPE[key] for key in ("diameter", "density")},
    ),
    "velocity_for_gradient": (
        lambda **given: rheo.velocity_for_gradient(SLURRY, **given),
        {
            **{key: PIPE[key] for key in ("diameter", "density", "roughness")},
            "gradient": (1000.0, "Pa/m", FROM),
        },
    ),
    "diameter_for_gradient": (
        lambda **given: rheo.diameter_for_gradient(SLURRY, **given),
        {
            **{key: PIPE[key] for key in ("density", "roughness")},
            "gradient": (1000.0, "Pa/m", ABOVE),
            "flow": (1e-3, "m3/s", ABOVE),
        },
    ),
    "slot_flow": (
        lambda **given: rheo.slot_flow(SLURRY, **given),
        {
            "half_gap": (0.01, "m", ABOVE),
            "velocity": (1.0, "m/s", ABOVE),
            "density": (1200.0, "kg/m3", ABOVE),
        },
    ),
    "annulus_flow": (
        lambda **given: rheo.annulus_flow(SLURRY, **given),
        {
            "inner_radius": (0.01, "m", ABOVE),
            "outer_radius": (0.03, "m", ABOVE),
            "velocity": (1.0, "m/s", ABOVE),
            "density": (1200.0, "kg/m3", ABOVE),
        },
    ),
    "slip_flow": (
        lambda **given: rheo.slip_flow(SLURRY, **given),
        {
            "diameter": (0.1, "m", ABOVE),
            "velocity": (1.0, "m/s", ABOVE),
            "slip_coefficient": (1e-5, "m/(s Pa)", FROM),
        },
    ),
    "regime_map": (
        lambda **given: rheo.regime_map(SLURRY, **given),
        {
            **PIPE,
            "velocity": ([1.0, 2.0], "m/s", ABOVE),
            "measured_rate": ((1.0, 10.0), "1/s", ABOVE),
        },
    ),
    "points": (
        lambda flow: PointLoss([1.0, 2.0], [1.0, 3.0]).pressure_drop(flow),
        {"flow": (1.0, "m3/s", FROM)},
    ),
    "power": (
        lambda flow: PowerLoss(1.0, 2.0).pressure_drop(flow),
        {"flow": (1.0, "m3/s", FROM)},
    ),
}
EACH = [(name, key) for name, (_, takes) in FUNCTIONS.items() for key in takes]


def refusal(name, key, value):
    function, takes = FUNCTIONS[name]
    given = {other: one for other, (one, _, _) in takes.items()}
    with pytest.raises(rheo.InputError) as caught:
        function(**{**given, key: value})
    assert caught.value.place == key
    assert odd_words(caught.value.sentence) == []
    return caught.value.sentence


@pytest.mark.parametrize(("name", "key"), EACH)
def test_what_works_works(name, key):
    function, takes = FUNCTIONS[name]
    function(**{other: one for other, (one, _, _) in takes.items()})
    if takes[key][2] == FROM:
        function(**{**{other: one for other, (one, _, _) in takes.items()}, key: 0.0})


@pytest.mark.parametrize(("name", "key"), EACH)
def test_numbers_that_cannot_be(name, key):
    _, unit, rule = FUNCTIONS[name][1][key]
    for wrong, shown in ((-2.0, "-2"), (np.nan, "nan"), (np.inf, "inf"), (-np.inf, "-inf")):
        assert refusal(name, key, wrong) == f"it is {shown} {unit}; {rule}"
        # Among others that are right it is the wrong one that is named.
        assert refusal(name, key, [1e-3, wrong]) == f"it is {shown} {unit}; {rule}"
    if rule == ABOVE:
        assert refusal(name, key, 0.0) == f"it is 0 {unit}; {rule}"


@pytest.mark.parametrize(("name", "key"), EACH)
def test_words_are_no_numbers(name, key):
    assert refusal(name, key, "much") == "it is 'much'; it must be a number"
    assert refusal(name, key, ["much"]) == "it is ['much']; it must be a number"


@pytest.mark.parametrize(
    ("name", "key"), [one for one in EACH if FUNCTIONS[one[0]][1][one[1]][2] == ABOVE]
)
def test_sizes_beyond_all_reason(name, key):
    """Their squares would leave the range of numbers."""
    unit = FUNCTIONS[name][1][key][1]
    for wrong in (2e-31, 3e31):
        sentence = refusal(name, key, [1e-3, wrong])
        assert sentence == without_exponents(
            f"it is {wrong:g} {unit}; it must lie between 1e-30 and 1e+30"
        )


def test_the_farthest_sizes_are_taken():
    assert 0 < rheo.pipe_flow(SLURRY, 1e30, 1.0, 1.0).wall_stress < np.inf
    assert 0 < rheo.pipe_flow(SLURRY, 1.0, 1.0, 1e-30).wall_stress < np.inf


@pytest.mark.parametrize("roughness", [0.05, 0.06])
def test_a_wall_as_rough_as_the_pipe_is_wide(roughness):
    with pytest.raises(
        rheo.InputError, match=r"^roughness: it is 0\.0\d m; .* half the diameter, 0"
    ):
        rheo.pipe_flow(SLURRY, [0.1, 1.0], 1.0, 1000.0, roughness)


def test_arrays_that_do_not_fit_are_told_with_their_shapes():
    with pytest.raises(rheo.InputError) as caught:
        rheo.pipe_flow(SLURRY, np.ones(2), np.ones(3), np.ones((4, 1)), 0.0)
    assert caught.value.place == "model, diameter, density, roughness and the rest"
    assert caught.value.sentence == "their shapes (), (2,), (4, 1), (), (3,) do not broadcast"
    with pytest.raises(rheo.InputError) as caught:
        rheo.velocity_for_gradient(SLURRY, np.ones(2), np.ones(3), 1000.0)
    assert caught.value.sentence == "their shapes (), (2,), (), (), (3,) do not broadcast"


@pytest.mark.parametrize("wrong", ["herschel-bulkley", {"yield_stress": 5.0}, "x" * 200])
def test_what_is_no_model(wrong):
    with pytest.raises(rheo.InputError) as caught:
        rheo.critical_velocity(wrong, 0.1, 1000.0)
    assert caught.value.place == "model"
    shown = repr(wrong)[:60]
    assert caught.value.sentence == f"it is {shown}; make one with rheo.model(key, ...)"


@pytest.mark.parametrize("angle", [0.0, -1.0, 3.2, np.nan, [1.0, 4.0]])
def test_angles_of_a_cone(angle):
    before, after = (rheo.pipe_flow(SLURRY, size, 1.0, 1000.0) for size in (0.1, 0.05))
    with pytest.raises(rheo.InputError) as caught:
        reducer_loss(before, after, angle)
    assert str(caught.value) == "angle: it must be above 0 and at most π rad"


@pytest.mark.parametrize("regime", ["transition", "Laminar", ""])
def test_regimes_that_cannot_be_forced(regime):
    with pytest.raises(rheo.InputError) as caught:
        rheo.pipe_flow(SLURRY, 0.1, 1.0, 1000.0, regime=regime)
    assert str(caught.value) == f"regime: it is '{regime}'; it takes laminar or turbulent"


def test_methods_made_for_other_fluids():
    with pytest.raises(rheo.InputError) as caught:
        rheo.pipe_flow(SLURRY, 0.1, 1.0, 1000.0, method="darby-melson")
    assert str(caught.value) == (
        "method: turbulent method 'darby-melson' is made for bingham, not for herschel-bulkley; "
        "for herschel-bulkley there are dodge-metzner, torrance, wilson-thomas"
    )
    with pytest.raises(rheo.InputError) as caught:
        rheo.pipe_flow(SLURRY, 0.1, 1.0, 1000.0, transition="hanks")
    assert str(caught.value) == (
        "method: transition criterion 'hanks' is made for bingham, not for herschel-bulkley; "
        "for herschel-bulkley there are metzner-reed, slatter, stability"
    )
    pattern = r"^method: unknown turbulent method 'x'; for bingham there are darby-melson, dodge"
    with pytest.raises(rheo.InputError, match=pattern):
        rheo.pipe_flow(
            rheo.model("bingham", yield_stress=1.0, plastic_viscosity=0.1),
            0.1,
            1.0,
            1000.0,
            method="x",
        )


def test_the_level_of_a_band():
    for level in (0.0, 1.0, -0.5, 1.5):
        with pytest.raises(rheo.InputError) as caught:
            rheo.regime_map(SLURRY, 0.1, 1000.0, level=level)
        assert str(caught.value) == f"level: it is {level:g}; it must lie between 0 and 1"
    many = rheo.model("newtonian", viscosity=[1.0, 2.0])
    with pytest.raises(rheo.InputError) as caught:
        rheo.regime_map(many, 0.1, 1000.0)
    assert str(caught.value) == (
        "model: its parameters must be single numbers; give arrays as draws"
    )


def test_an_inner_tube_that_fills_the_outer():
    for inner in (0.03, 0.04, [0.01, 0.03]):
        with pytest.raises(rheo.InputError) as caught:
            rheo.annulus_flow(SLURRY, inner, 0.03, 1.0)
        assert str(caught.value) == "inner_radius: it must be less than outer_radius"


def test_sentences_are_plain():
    pattern = re.compile(r"[A-Z]{3}")
    for name, key in EACH:
        assert not pattern.search(refusal(name, key, -1.0))
