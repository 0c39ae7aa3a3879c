"""Fittings, reducers, ends and equipment; tables and equations against the `fluids` library."""

import csv
from importlib import resources

import fluids.fittings
import numpy as np
import pytest

import rheo
from rheo.hydraulics.fittings import (
    ENDS,
    PointLoss,
    PowerLoss,
    UserK,
    end,
    fitting,
    fitting_tables,
    reducer_loss,
)

FOLDER = resources.files("rheo.hydraulics.fittings")


def table_rows(file):
    return list(csv.DictReader(FOLDER.joinpath(file).read_text(encoding="utf-8").splitlines()))


@pytest.mark.parametrize("row", table_rows("darby_3k.csv"), ids=lambda row: row["key"])
def test_three_k(row):
    constants = tuple(float(row[name]) for name in ("k1", "ki", "kd"))
    assert fluids.fittings.Darby[row["source_name"]] == constants
    for nps, reynolds in ((2.0, 30.0), (6.0, 1e5)):
        expected = fluids.fittings.Darby3K(NPS=nps, Re=reynolds, name=row["source_name"])
        found = fitting(row["key"]).coefficient(np.array(reynolds), np.array(nps * 0.0254))
        # The library writes a run-through tee without its diameter term as 0.
        assert found == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize("row", table_rows("hooper_2k.csv"), ids=lambda row: row["key"])
def test_two_k(row):
    constants = tuple(float(row[name]) for name in ("k1", "k_infinity"))
    assert fluids.fittings.Hooper[row["source_name"]] == constants
    for inches, reynolds in ((2.0, 30.0), (6.0, 1e5)):
        expected = fluids.fittings.Hooper2K(Di=inches, Re=reynolds, name=row["source_name"])
        found = fitting(row["key"], "hooper-2k").coefficient(
            np.array(reynolds), np.array(inches * 0.0254)
        )
        assert found == pytest.approx(expected, rel=1e-12)


def test_every_row_of_the_library_is_there_but_the_misplaced_one():
    used = {row["source_name"] for row in table_rows("darby_3k.csv")}
    assert used == set(fluids.fittings.Darby)
    used = {row["source_name"] for row in table_rows("hooper_2k.csv")}
    # K₁ = 1000 belongs to a 180° bend, as the rows beside it in the source (from memory).
    assert set(fluids.fittings.Hooper) - used == {"Elbow, 45°, Standard (R/D = 1), Screwed"}


def test_keys_are_unique_and_tables_complete():
    for table in fitting_tables().values():
        keys = [row["key"] for row in table_rows(table.file)]
        assert len(keys) == len(set(keys)) == len(table.fittings)
        assert len(table.source) > 20
        assert all(one.name for one in table.fittings.values())


def test_fittings_broadcast_over_draws_and_know_the_slow_flow():
    model = rheo.model(
        "herschel-bulkley", yield_stress=[5.0, 20.0], consistency=2.0, flow_index=0.5
    )
    flow = rheo.pipe_flow(model, 0.05, np.array([[1e-3], [1.0]]), 1100.0)
    k = fitting("elbow-90-long").coefficient(flow.reynolds, flow.diameter)
    assert k.shape == (2, 2)
    loss = k * 0.5 * 1100.0 * flow.velocity**2
    # K₁/Re times ρV²/2 is K₁τw/16: a yield-stress product costs pressure however slowly it goes.
    np.testing.assert_allclose(loss[0], 800.0 * flow.wall_stress[0] / 16.0, rtol=1e-3)
    assert np.all(loss[1] > loss[0])


def test_the_users_own_k():
    loss = UserK(2.5, 300.0)
    assert loss.coefficient(np.array(100.0), np.array(0.05)) == pytest.approx(5.5)
    assert UserK(2.5).coefficient(np.ones(3), np.array(0.05)).shape == (3,)
    assert UserK(2.5).coefficient(np.array(100.0), np.full((2, 1), 0.05)).shape == (2, 1)
    with pytest.raises(
        rheo.InputError, match="own: k is -1; it must be a finite number, 0 or more"
    ):
        UserK(-1.0)
    for wrong in (-1.0, np.nan, np.inf):
        with pytest.raises(rheo.InputError, match=f"own: k1 is {wrong:g}; it must be a finite"):
            UserK(1.0, wrong)


def test_ends():
    assert end("entrance").coefficient(np.array(1e9), np.array(0.1)) == pytest.approx(0.5, rel=1e-6)
    assert end("exit").coefficient(np.array(10.0), np.array(0.1)) == 1.0
    assert set(ENDS) == {"entrance", "entrance-projecting", "entrance-rounded", "exit"}
    with pytest.raises(
        rheo.InputError, match=r"^fittings: unknown end 'door'; there are entrance, entrance-pro"
    ):
        end("door")
    # A long slip of the paste buffer is cut.
    with pytest.raises(rheo.InputError, match=f"unknown end '{'x' * 60}'; there are"):
        end("x" * 500)


def test_an_unknown_fitting_names_the_nearest():
    with pytest.raises(
        rheo.InputError, match=r"'elbow90' \(did you mean 'elbow-90'\?\); darby-3k has"
    ):
        fitting("elbow90")
    with pytest.raises(
        rheo.InputError, match=r"^fittings: unknown table 'crane'; there are darby-3k, hooper-2k"
    ):
        fitting("elbow-90", "crane")
    with pytest.raises(rheo.InputError, match=f"^fittings: unknown fitting '{'9' * 60}'; hooper"):
        fitting("9" * 500, "hooper-2k")
    # What is not like any key gets no advice.
    with pytest.raises(rheo.InputError) as caught:
        fitting("elbow-19", "hooper-2k")
    assert "(did you mean 'elbow-" in str(caught.value)
    every = ", ".join(fitting_tables()["hooper-2k"].fittings)
    with pytest.raises(rheo.InputError) as caught:
        fitting("zzz", "hooper-2k")
    assert str(caught.value) == f"fittings: unknown fitting 'zzz'; hooper-2k has {every}"


WATER = rheo.model("newtonian", viscosity=0.001)


def both_pipes(first, second, upstream_velocity, model=WATER):
    before = rheo.pipe_flow(model, first, upstream_velocity, 1000.0)
    after = rheo.pipe_flow(model, second, upstream_velocity * (first / second) ** 2, 1000.0)
    return before, after


@pytest.mark.parametrize("angle", [20.0, 44.0, 60.0, 180.0])
@pytest.mark.parametrize("reynolds", [50.0, 2000.0, 2e5])
@pytest.mark.parametrize(("first", "second"), [(0.1, 0.06), (0.06, 0.1)])
def test_reducers_against_the_library(first, second, angle, reynolds):
    velocity = reynolds * 0.001 / (1000.0 * first)
    before, after = both_pipes(first, second, velocity)
    found = reducer_loss(before, after, np.radians(angle))
    call = (
        fluids.fittings.contraction_conical if first > second else fluids.fittings.diffuser_conical
    )
    # The library's coefficient counts the velocity in the narrower pipe.
    narrow = after if first > second else before
    darcy = 4 * before.friction_factor
    expected = call(first, second, angle=angle, Re=reynolds, fd=darcy, method="Hooper")
    head = 0.5 * 1000.0 * narrow.velocity**2
    assert found == pytest.approx(expected * head, rel=1e-9)


@pytest.mark.parametrize(("first", "second"), [(0.1, 0.06), (0.06, 0.1), (0.05, 0.048)])
def test_the_loss_of_a_reducer_rises_with_the_flow(first, second):
    model = rheo.model("herschel-bulkley", yield_stress=2.0, consistency=0.05, flow_index=0.7)
    before, after = both_pipes(first, second, np.geomspace(1e-3, 10.0, 400), model)
    loss = reducer_loss(before, after)
    assert np.all(np.diff(loss) > 0)
    assert np.diff(np.log(loss)).max() < 3 * np.log(1e4) / 399


def test_equal_pipes_lose_nothing_and_angles_are_checked():
    before, after = both_pipes(0.05, 0.05, 1.0)
    assert reducer_loss(before, after) == 0.0
    with pytest.raises(rheo.InputError, match="angle: it must be above 0 and at most π rad"):
        reducer_loss(before, after, 0.0)


def test_a_loss_curve_goes_through_its_points():
    curve = PointLoss([1e-3, 2e-3, 4e-3], [1e4, 3e4, 12e4], "plate cooler")
    np.testing.assert_allclose(curve.pressure_drop([1e-3, 2e-3, 4e-3]), [1e4, 3e4, 12e4])
    assert curve.pressure_drop(0.0) == 0.0
    # Beyond the ends the last slope goes on: a square law here.
    assert curve.pressure_drop(8e-3) == pytest.approx(48e4)
    assert np.all(np.diff(curve.pressure_drop(np.geomspace(1e-4, 1e-1, 99))) > 0)
    assert curve.covers([5e-4, 1e-3, 1.5e-3, 2e-3]).tolist() == [False, True, True, True]
    assert curve.covers([3e-3, 4e-3, 5e-3]).tolist() == [True, True, False]
    # Between the points a power law, the same from every place on it.
    middle = 1e4 * 3.0 ** (np.log(1.5) / np.log(2.0))
    assert curve.pressure_drop(1.5e-3) == pytest.approx(middle)
    assert curve.pressure_drop(0.5e-3) == pytest.approx(1e4 / 3.0)


def test_small_losses_are_losses():
    """A loss curve of a thin product: 0.1 and 0.4 Pa."""
    curve = PointLoss([1e-6, 2e-6], [0.1, 0.4])
    assert curve.flow.tolist() == [1e-6, 2e-6]
    assert curve.loss.tolist() == [0.1, 0.4]
    assert curve.pressure_drop(4e-6) == pytest.approx(1.6)


def test_a_power_loss():
    assert PowerLoss(2e4, 1e-3, 1.5).pressure_drop([0.0, 4e-3]) == pytest.approx([0.0, 16e4])


@pytest.mark.parametrize(
    ("build", "sentence"),
    [
        (lambda: PointLoss([1.0], [1.0]), "equipment: give two or more flows and as many losses"),
        (lambda: PointLoss([1.0, 2.0], [2.0, 1.0], "sieve"), "sieve: flows and losses must rise"),
        (lambda: PointLoss([0.0, 2.0], [1.0, 2.0]), "equipment: flow: it is 0 m3/s; it must be"),
        (lambda: PowerLoss(-1.0, 1.0), "equipment: loss: it is -1 Pa; it must be a finite"),
        (lambda: PowerLoss(1.0, 1.0, 0.0), "equipment: exponent: it is 0 -; it must be a finite"),
        (lambda: PowerLoss(1.0, 0.0), "equipment: at_flow: it is 0 m3/s; it must be a finite"),
        (lambda: PointLoss([1.0, 2.0], [0.0, 2.0]), "equipment: loss: it is 0 Pa; it must be a"),
        (lambda: PointLoss([1.0, 1.0], [1.0, 2.0]), "equipment: flows and losses must rise from"),
        (lambda: PointLoss([1.0, 2.0], [2.0, 2.0]), "equipment: flows and losses must rise from"),
        (lambda: PointLoss([1.0, 2.0, 3.0], [1.0, 2.0]), "equipment: give two or more flows and"),
        (lambda: PointLoss([[1.0, 2.0]], [[1.0, 2.0]]), "equipment: give two or more flows and"),
        (lambda: PowerLoss(1.0, 1.0).pressure_drop(-1.0), "^flow: it is -1 m3/s; it must be a"),
        (
            lambda: PointLoss([1.0, 2.0], [1.0, 2.0]).pressure_drop(-1.0),
            "^flow: it is -1 m3/s; it must be a finite number, 0 or more",
        ),
    ],
)
def test_impossible_loss_curves_are_refused(build, sentence):
    with pytest.raises(rheo.InputError, match=sentence):
        build()
