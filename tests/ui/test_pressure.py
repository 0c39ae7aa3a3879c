"""The pressure stop: what-if beside the case, and a view for each question."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Any

import pytest

from rheo.case import changed, load_case, run_case
from rheo.case.comparisons import pressure_by_model
from rheo.case.what_if import SolidsChange, WhatIf, what_if
from rheo.report import display
from ui import opening
from ui.pressure.views import VIEWS, by_model
from ui.pressure.what_if import asked, compared, lead

if TYPE_CHECKING:
    from conftest import Page

    from rheo.case import CaseResult


@pytest.fixture(scope="module")
def sauce() -> CaseResult:
    return run_case(load_case(opening.SAMPLES / "sauce.toml"))


def test_nothing_asked_changes_nothing() -> None:
    found = asked({}, "metric")
    assert found.change is not None
    assert found.change.changes_nothing
    assert asked({"thicker": 0, "flow": "  ", "warmer": None}, "us").change == WhatIf()


@pytest.mark.parametrize(
    ("values", "system", "wanted"),
    [
        ({"flow": "6"}, "metric", WhatIf(flow="6 m³/h")),
        ({"flow": "20 gpm", "thicker": 20}, "si", WhatIf(flow="20 gpm", thicker=1.2)),
        ({"warmer": "-10"}, "metric", WhatIf(warmer=-10.0)),
        ({"warmer": "-18"}, "us", WhatIf(warmer=-10.0)),
        ({"warmer": "9 °F"}, "us", WhatIf(warmer=5.0)),
        ({"before": "20", "after": "25 %"}, "metric", WhatIf(solids=SolidsChange(0.2, 0.25))),
        (
            {"before": "20", "after": "25", "density": "2600"},
            "metric",
            WhatIf(solids=SolidsChange(0.2, 0.25, 2600.0)),
        ),
    ],
)
def test_controls_are_read_in_the_units_shown(
    values: dict[str, Any], system: str, wanted: WhatIf
) -> None:
    change = asked(values, system).change
    assert change is not None
    assert change.flow == wanted.flow
    assert change.thicker == pytest.approx(wanted.thicker)
    assert change.warmer == pytest.approx(wanted.warmer)
    if wanted.solids is None:
        assert change.solids is None
    else:
        assert change.solids is not None
        assert change.solids.after == pytest.approx(wanted.solids.after)
        assert change.solids.density == wanted.solids.density


@pytest.mark.parametrize(
    ("values", "sentence"),
    [
        ({"warmer": "colder"}, "Warmer or colder: 'colder' is not a number"),
        ({"before": "20"}, "Solids"),
        ({"before": "20", "after": "many"}, "Solids"),
        ({"before": "20", "after": "25", "density": "2 bar"}, "Density of the solids"),
    ],
)
def test_what_cannot_be_understood_is_said(values: dict[str, Any], sentence: str) -> None:
    found = asked(values, "metric")
    assert found.change is None
    assert found.complaint.startswith(sentence)


def test_old_and_new_stand_side_by_side(sauce: CaseResult) -> None:
    other = run_case(what_if(sauce, WhatIf(flow="8 m3/h")), sauce.readings)
    rows = {row[0]: row[1:] for row in compared(sauce, other, "metric")}
    assert rows["Flow"] == ["4.00 m³/h", "8.00 m³/h", "+100 %"]
    assert rows["Regime"][:2] == ["laminar", "laminar"]
    assert rows["Starts again after a stop"] == ["✓ yes", "✓ yes", ""]
    assert rows["Time in the line"][2] == "−50 %"
    assert rows["The pump would give"][0].endswith("m³/h")
    weak = replace(other, line=replace(other.line, npsh_available=None))
    assert "NPSH available" not in {row[0] for row in compared(sauce, weak, "metric")}


def test_the_lead_says_what_the_pump_must_add(sauce: CaseResult) -> None:
    text = lead(sauce, "metric")
    shown = display.text(sauce.doubt.pressure, "pressure", "metric", *sauce.doubt.interval)
    assert text.startswith(f"At 4.00 m³/h the pump must add {shown} (95 %, by all causes)")
    assert "heights and vessels" in text
    assert "psi" in lead(sauce, "us")


def test_models_stand_with_their_pressures(sauce: CaseResult) -> None:
    rows = by_model(sauce, "metric")
    found = pressure_by_model(sauce, least_weight=0.0)
    assert len(rows) == 5 < len(found)
    used = next(row for row in rows if row.mark == "chosen")
    assert used.cells[-1] == "in use"
    assert float(used.cells[2]) == pytest.approx(
        float(sauce.line.friction_pressure) / 1e5, rel=5e-3
    )


def test_what_if_overwrites_nothing_until_it_is_kept(page: Page) -> None:
    page.go("pressure")
    before, case = page.strip(), page.kept("case")
    page.type("Flow", "8")
    assert "8.00 m³/h" in page.html
    assert "+100 %" in page.html
    assert page.strip() == before
    assert page.kept("case") is case
    page.press("Back to the case as it is")
    assert "+100 %" not in page.html
    page.type("Flow", "8")
    page.press("Keep these values")
    page.run()
    assert page.kept("case").document()["duty"]["flow"] == "8 m³/h"
    assert page.strip() != before
    assert "What if" in page.words
    assert "+100 %" not in page.html


def test_a_thicker_batch_and_a_colder_one(page: Page) -> None:
    page.go("pressure")
    page.widget("number_input", "Thinner or thicker").set_value(20)
    page.run()
    assert "1.2 times the measured stress" in page.html
    assert "Its loss stays as given" in page.html
    page.type("Warmer or colder", "-10")
    assert page.errors == []
    page.type("Warmer or colder", "-500")
    assert "product.temperature" in page.html
    page.type("Warmer or colder", "")
    page.type("Solids in the readings", "20")
    page.type("What if there were", "80")
    assert "where a suspension packs" in page.html


@pytest.mark.parametrize(
    ("view", "said"),
    [
        ("Along the line", ("Gauge pressure after the pump", "Hydraulic power")),
        ("System and pump", ("Lobe pump moves", "NPSH required")),
        ("Regime and profile", ("The flow is laminar in every pipe", "Largest over mean")),
        ("Shear rates", ("Measured range", "suction pipe")),
        ("Start-up", ("A full line at rest needs up to", "Line without it")),
        ("Doubt", ("of its variance from", "in use")),
        ("Holding and cleaning", ("Velocity in the widest pipe", "as head of water")),
    ],
)
def test_every_view_answers_its_question(page: Page, view: str, said: tuple[str, ...]) -> None:
    page.go("pressure")
    page.look_at(view)
    assert page.errors == []
    for words in said:
        assert words in page.html
    assert "Safety." in page.html
    if view != "Holding and cleaning":
        assert len(page.app.get("plotly_chart")) == (0 if view == "Start-up" else 1)


@pytest.mark.parametrize("name", ["gum", "thickener"])
def test_the_other_samples_have_every_view(page: Page, name: str) -> None:
    page.press(name.capitalize())
    page.go("pressure")
    for view in VIEWS.values():
        page.look_at(view.name)
        assert page.errors == []
    if name == "thickener":
        page.look_at("System and pump")
        assert "Slurry pump moves" in page.html


def test_a_holding_tube_is_asked_for_on_the_page(page: Page) -> None:
    page.go("pressure")
    page.look_at("Holding and cleaning")
    page.type("Hold time", "30 s")
    assert page.kept("case").holding_tube is None
    assert "bad-edge" not in page.html.replace(".bad-edge", "")
    page.type("Inside diameter", "48.6")
    page.run()
    tube = page.kept("case").holding_tube
    assert (float(tube.hold_time), float(tube.diameter)) == (30.0, pytest.approx(0.0486))
    assert "times the mean velocity" in page.html
    page.press("Leave the holding tube out")
    assert page.kept("case").holding_tube is None


def test_units_of_the_sentences_follow_the_switch(page: Page) -> None:
    page.go("pressure")
    page.choose("Units", "us")
    page.look_at("System and pump")
    assert "psi." in page.html
    assert "gpm at" in page.html
    page.look_at("Start-up")
    assert " bar" not in page.html


def test_regime_near_the_change_is_said(page: Page) -> None:
    case = changed(opening.sample("thickener"), {"duty.flow": "60 m3/h"})
    assert case.duty.flow == pytest.approx(60 / 3600)
    page.press("Thickener")
    page.go("pressure")
    page.look_at("Regime and profile")
    assert "nearest to the change" in page.html
