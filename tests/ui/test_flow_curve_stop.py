"""The flow curve stop: ranking in words and numbers, another model, pictures, next readings."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

from rheo.case import case_from_document, load_case, run_case
from rheo.case.fit_choices import fit_choices
from ui import opening
from ui.flow_curve.choices import weighting_rows
from ui.flow_curve.compare import change, comparison
from ui.flow_curve.ranking import verdict

if TYPE_CHECKING:
    from conftest import Page


def test_the_ranking_names_every_model_with_its_verdict(page: Page) -> None:
    page.go("flow_curve")
    result = run_case(load_case(opening.SAMPLES / "sauce.toml"))
    for fit in result.fits:
        name = fit.record.name
        assert name[:1].upper() + name[1:] in page.html
    assert "in use: first of the ranking" in page.html
    assert result.fits.reason in page.html
    assert "The product yields at" in page.html
    assert "thins with shear" in page.html


def test_verdicts_are_of_the_fits() -> None:
    fits = run_case(load_case(opening.SAMPLES / "sauce.toml")).fits
    said = {fit.key: verdict(fit, fits, fits.best) for fit in fits}
    assert said[fits.best.key] == "in use: first of the ranking"
    assert said["newtonian"] == "misses the shape"
    assert said["robertson-stiff"] == "fits worse"
    other = fits["newtonian"]
    assert verdict(other, fits, other) == "in use by your choice: misses the shape"
    assert verdict(fits.best, fits, other) == "first of the ranking"


def test_another_model_is_shown_beside_and_taken_only_on_request(page: Page) -> None:
    page.go("flow_curve")
    before = page.strip()
    page.choose("Look at the model", "bingham")
    assert page.strip() == before
    assert "Herschel-Bulkley (in use)" in page.html
    assert "Change" in page.html
    assert "Its interval is that of 250 flow curves" in page.html
    page.press("Use Bingham")
    assert page.kept("case").doubt.draws == 1000
    assert "250 flow curves" not in page.html
    assert page.kept("case").fit.model == "bingham"
    assert page.strip()[0] != before[0]
    assert "in use by your choice" in page.html
    assert "Bingham is your choice" in page.html
    page.press("Let the ranking choose")
    assert page.kept("case").fit.model == "auto"
    assert page.strip() == before


@pytest.mark.parametrize("log", [True, False])
@pytest.mark.parametrize("viscosity", [True, False])
def test_stress_and_viscosity_on_both_kinds_of_axes(page: Page, viscosity: bool, log: bool) -> None:
    page.go("flow_curve")
    page.app.get("button_group")[0].set_value(viscosity)
    page.app.get("button_group")[1].set_value(log)
    page.run()
    figure = page.figure()
    assert (figure["layout"]["xaxis"].get("type") == "log") is log
    title = figure["layout"]["yaxis"]["title"]["text"]
    assert title == ("Apparent viscosity η [Pa·s]" if viscosity else "Shear stress τ [Pa]")
    fills = [trace for trace in figure["data"] if trace.get("fill") == "toself"]
    assert len(fills) == 3  # a band at each temperature


def test_parameters_residuals_and_next_readings(page: Page) -> None:
    page.go("flow_curve")
    assert "yield stress" in page.html
    assert "activation energy" in page.html
    assert page.figure(1)["layout"]["yaxis"]["title"]["text"] == "Residual [%]"
    assert "95 % interval of the pressure drop" in page.html
    assert "Interval would become" in page.html


def test_the_comparison_is_of_the_results() -> None:
    case = load_case(opening.SAMPLES / "sauce.toml")
    result = run_case(case)
    rows = comparison(result, result, "metric")
    assert [row[0] for row in rows] == [
        "Pressure that the pump adds",
        "Friction in it",
        "Wall shear rate",
        "Start-up pressure",
    ]
    assert all(row[1] == row[2] and row[3] == "0 %" for row in rows)


@pytest.mark.parametrize(
    ("before", "after", "words"),
    [(2.0, 3.0, "+50 %"), (2.0, 1.0, "−50 %"), (2.0, 2.0004, "0 %"), (0.0, 1.0, "")],
)
def test_changes_in_percent(before: float, after: float, words: str) -> None:
    assert change(before, after) == words


def test_a_line_that_cannot_be_worked_out_leaves_the_ranking(page: Page) -> None:
    document = page.kept("case").document()
    document["line"]["discharge"][2]["outlet_temperature"] = "900 °C"
    page.app.session_state["rheo.case"] = case_from_document(document)
    page.go("flow_curve")
    assert "Herschel-Bulkley" in page.html


def test_weights_can_be_chosen(page: Page) -> None:
    page.go("flow_curve")
    page.choose("A reading is taken", "instrument")
    fit = page.kept("case").fit
    assert (fit.weighting, fit.percent_of_reading, fit.percent_of_full_scale) == (
        "instrument",
        1.0,
        1.0,
    )
    assert page.errors == []
    page.choose("A reading is taken", "absolute")
    assert page.kept("case").fit.percent_of_reading is None
    page.choose("A reading is taken", "relative")
    assert page.errors == []


def test_the_fits_of_tubes_can_take_in_slip(page: Page) -> None:
    page.press("Thickener")
    page.go("flow_curve")
    toggles = {one.label: one for one in page.app.toggle}
    now = page.kept("case").fit.slip
    toggles["Fit slip at the wall"].set_value(not now)
    page.run()
    assert page.kept("case").fit.slip is (not now)
    assert page.errors == []


def test_weights_and_branches_are_compared_when_asked(page: Page) -> None:
    page.go("flow_curve")
    assert "Every weighting leads to" not in page.html
    compare_them(page)
    assert "Every weighting leads to the Herschel-Bulkley model" in page.html
    assert "the same percentage of every reading (in use)" in page.html
    assert "the same amount at every reading" in page.html
    assert "way up</td>" in page.html
    assert "static yield stress of at least" in page.html
    assert "24.0 Pa is given" in page.html


def test_readings_without_branches_say_so(page: Page) -> None:
    page.press("Gum")
    page.go("flow_curve")
    compare_them(page)
    assert "there are no branches to compare" in page.words


def test_the_comparison_of_weights_is_of_whole_results() -> None:
    result = run_case(load_case(opening.SAMPLES / "gum.toml"))
    told: list[float] = []
    found = fit_choices(result, told.append)
    assert list(found.weightings) == ["relative", "absolute"]
    assert found.weightings["relative"] is result
    other = case_from_document(
        {**result.case.document(), "fit": {"weighting": "absolute"}}
    ).in_folder(opening.SAMPLES)
    by_hand = run_case(other)
    assert found.weightings["absolute"].doubt.pressure == by_hand.doubt.pressure
    assert found.sweeps is None
    assert told == [0.5]
    first, second = weighting_rows(found, "metric")
    assert (first.mark, first.cells[-1]) == ("chosen", "")
    assert second.cells[-1] == change(result.doubt.pressure, by_hand.doubt.pressure)


def compare_them(page: Page) -> None:
    """Turn the comparison on and wait for it."""
    page.widget("toggle", "Compare them").set_value(True)
    page.run()
    page.kept("work.choices").done.wait(60)
    page.run()
