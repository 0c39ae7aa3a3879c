"""The route stop: parts by table and one by one, ends, pump, a new route."""

from __future__ import annotations

import json
from typing import TYPE_CHECKING, Any

import pytest

from rheo.case import case_from_document
from rheo.errors import CaseError, InputError
from rheo.hydraulics.fittings import fitting_tables
from ui import opening
from ui.fields import Field, tidy
from ui.route import parts
from ui.route.pump import points_of

if TYPE_CHECKING:
    from conftest import Page

SAUCE = opening.sample("sauce")


def inner(side: str = "discharge") -> tuple[dict[str, Any], ...]:
    return parts.side_of(SAUCE.document(), side).inner


def edits(**given: Any) -> dict[str, Any]:
    return {"edited_rows": {}, "added_rows": [], "deleted_rows": [], **given}


def edit(page: Page, side: str, **given: Any) -> Page:
    """Edit the table of one side, as the browser would send it."""
    words = f"Parts {parts.SIDES[side]}"
    table = next(one for one in page.app.get("dataframe") if one.proto.alt == words)
    tree = page.app._tree
    states = tree.get_widget_states

    def with_edits() -> Any:
        found = states()
        sent = found.widgets.add()
        sent.id = table.proto.id
        sent.string_value = json.dumps(edits(**given))
        return found

    tree.get_widget_states = with_edits
    return page.run()


def test_ends_are_kept_apart_from_the_parts_between() -> None:
    cut = parts.side_of(SAUCE.document(), "suction")
    assert [one["part"] for one in cut.head] == ["vessel", "entrance"]
    assert [one["part"] for one in cut.inner] == ["pipe"]
    cut = parts.side_of(SAUCE.document(), "discharge")
    assert [one["part"] for one in cut.tail] == ["exit", "vessel"]
    assert len(cut.inner) == 6


def test_every_published_fitting_can_be_chosen_by_its_name() -> None:
    kinds = parts.kinds()
    published = {key for table in fitting_tables().values() for key in table.fittings}
    assert {one["kind"] for one in kinds.values() if one["part"] == "fitting"} == {
        *published,
        "fitting",
    }
    for name, given in kinds.items():
        if given["part"] == "fitting" and name != parts.OWN_K:
            assert parts.kind_of(given) == name


def test_a_row_is_edited_and_the_others_stay_as_they_were_written() -> None:
    before = inner()
    found = parts.edited(before, edits(edited_rows={0: {"Length": "20", "Rise": "2 ft"}}))
    assert found[0]["length"] == "20 m"
    assert found[0]["rise"] == "2 ft"
    assert found[1:] == [dict(one) for one in before[1:]]


def test_rows_are_added_and_taken_out() -> None:
    new = {"Part": "pipe", "Length": "3", "Size": "ISO 2037 38", "Name": None}
    bend = {"Part": "ball valve, full line size", "Pieces": "2"}
    cooler = {"Part": "equipment", "Loss": "0.2 bar"}
    found = parts.edited(
        inner(), edits(deleted_rows=[1, 4], added_rows=[new, bend, {}, cooler]), "4 m3/h"
    )
    assert len(found) == 4 + 3
    assert found[4] == {"part": "pipe", "length": "3 m", "size": "ISO 2037 38"}
    assert found[5] == {"part": "fitting", "kind": "valve-ball", "count": 2}
    assert found[6] == {"part": "equipment", "loss": "0.2 bar", "at_flow": "4 m3/h"}


def test_of_size_and_inside_diameter_the_last_one_counts() -> None:
    own = parts.edited(inner(), edits(edited_rows={0: {"Inside": "40"}}))[0]
    assert own["inside_diameter"] == "40 mm"
    assert "size" not in own
    listed = parts.edited([own], edits(edited_rows={0: {"Size": "ISO 2037 51"}}))[0]
    assert listed["size"] == "ISO 2037 51"
    assert "inside_diameter" not in listed


def test_another_kind_of_part_keeps_what_it_can() -> None:
    bends = parts.edited(inner(), edits(edited_rows={1: {"Part": "ball valve, full line size"}}))[1]
    assert bends == {"part": "fitting", "kind": "valve-ball", "name": "90° bends", "count": 5}
    with pytest.raises(CaseError, match="row 2: pipe needs its length"):
        parts.edited(inner(), edits(edited_rows={1: {"Part": "pipe"}}))


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        ({"added_rows": [{"Length": "3"}]}, "row 7: choose what it is under Part"),
        ({"added_rows": [{"Part": "pipe", "Length": "3"}]}, "row 7: pipe needs its size or inside"),
        ({"added_rows": [{"Part": parts.OWN_K}]}, "row 7: a fitting of your own needs its K"),
        ({"added_rows": [{"Part": "equipment"}]}, "row 7: equipment needs its loss"),
        ({"edited_rows": {2: {"Length": "3"}}}, "row 3: equipment has no length"),
        ({"edited_rows": {0: {"Length": "abc"}}}, "row 1, Length: 'abc' is not a number"),
        ({"edited_rows": {0: {"Length": "3 bar"}}}, "row 1, Length"),
    ],
)
def test_what_does_not_fit_is_said_with_its_row(given: dict[str, Any], sentence: str) -> None:
    with pytest.raises(InputError) as caught:
        parts.edited(inner(), edits(**given))
    assert str(caught.value).startswith(sentence)


@pytest.mark.parametrize(
    ("side", "index", "act", "names"),
    [
        ("discharge", 0, 1, ["90° bends", "pump to cooler"]),
        ("discharge", 1, -1, ["90° bends", "pump to cooler"]),
        ("discharge", 0, 0, ["pump to cooler", "pump to cooler", "90° bends"]),
        ("discharge", 0, None, ["90° bends", "tubular cooler"]),
    ],
)
def test_parts_change_places(side: str, index: int, act: int | None, names: list[str]) -> None:
    document = SAUCE.document()
    assert not parts.change_place(document, side, index, act)
    found = [one["name"] for one in parts.side_of(document, side).inner]
    assert found[: len(names)] == names


def test_parts_cross_the_pump() -> None:
    document = SAUCE.document()
    assert parts.change_place(document, "suction", 2, 1)
    assert parts.side_of(document, "suction").inner == ()
    assert parts.side_of(document, "discharge").inner[0]["name"] == "suction pipe"
    assert parts.change_place(document, "discharge", 0, -1)
    assert document == SAUCE.document()


def test_numbers_typed_stay_and_converted_ones_have_four_digits() -> None:
    document = SAUCE.document()
    document["line"]["discharge"][0]["length"] = "45.9318 ft"
    case = case_from_document(document)
    length = case.line.discharge[0].length
    assert tidy(length, 45.9318) == "45.9318"
    assert tidy(length, float(length)) == "14"
    assert tidy(0.3048, 1.0000001) == "1"
    assert Field("efficiency", "Efficiency", "share").shown(0.55) == "55 %"
    assert Field("angle", "Angle", "angle").written("30") == "30 °"


def test_points_of_a_pump_curve() -> None:
    rows = [{"flow": "10 m3/h", "head": "20 m", "efficiency": "40"}, {"flow": "", "head": ""}]
    assert points_of(rows) == [{"flow": "10 m3/h", "head": "20 m", "efficiency": "40 %"}]


def test_the_stop_shows_the_line_as_it_is(page: Page) -> None:
    page.go("route")
    assert page.errors == []
    drawn = page.figure()
    words = str(drawn)
    for name in ("tubular cooler", "filler bowl", "pump to cooler"):
        assert name in words
    assert "What each part takes" in page.words or "all parts" in page.html
    assert "Safety." in page.html


def test_an_edit_in_the_table_moves_the_answer(page: Page) -> None:
    page.go("route")
    before = page.strip()[0]
    edit(page, "discharge", edited_rows={0: {"Length": "34"}})
    assert float(page.kept("case").line.discharge[0].length) == 34
    assert page.strip()[0] != before
    edit(page, "discharge", edited_rows={0: {"Length": "14"}})
    assert page.strip()[0] == before


def test_a_wrong_edit_leaves_the_case_and_says_why(page: Page) -> None:
    page.go("route")
    before = page.strip()
    edit(page, "discharge", edited_rows={0: {"Length": "-3"}})
    assert page.strip() == before
    assert "must be above 0" in page.html
    edit(page, "discharge", edited_rows={0: {"Length": "3 <b>"}})
    assert "<b>" not in page.html.replace("<b>Safety.</b>", "")
    assert page.strip() == before


def test_a_side_may_be_empty_and_filled_again(page: Page) -> None:
    page.go("route")
    edit(page, "suction", deleted_rows=[0])
    assert len(page.kept("case").line.suction) == 2
    assert page.errors == []
    page.go("pressure").go("route")
    edit(page, "suction", added_rows=[{"Part": "pipe", "Length": "2", "Size": "ISO 2037 51"}])
    assert [one.part for one in page.kept("case").line.suction] == ["vessel", "entrance", "pipe"]


def test_order_buttons(page: Page) -> None:
    page.go("route")
    names = lambda: [one.name for one in page.kept("case").line.discharge]  # noqa: E731
    before = names()
    page.choose("Part", 2)
    page.press("Up")
    assert names()[:2] == ["90° bends", "pump to cooler"]
    page.press("Down")
    assert names() == before
    page.press("Copy")
    assert len(names()) == len(before) + 1
    page.press("Remove")
    assert names() == before


def test_duty_and_ends_are_fields(page: Page) -> None:
    page.go("route")
    page.type("Flow", "20 gpm")
    assert page.kept("case").document()["duty"]["flow"] == "20 gpm"
    assert page.widget("text_input", "Flow").value == "4.542 m³/h"
    page.type("Flow", "nothing")
    assert "is not a number with a unit" in page.html
    page.type("Liquid level", "2")
    assert float(page.kept("case").line.suction[0].level) == 2.0
    page.widget("toggle", "Ends in a vessel").set_value(False)
    page.run()
    assert "vessel" not in [one.part for one in page.kept("case").line.discharge]
    page.widget("toggle", "Ends in a vessel").set_value(True)
    page.run()
    assert [one.part for one in page.kept("case").line.discharge][-2:] == ["exit", "vessel"]


def test_two_values_that_belong_together_may_come_one_after_the_other(page: Page) -> None:
    page.go("route")
    page.choose("Part", 1)
    page.type("Surroundings", "10")
    assert "together" in page.html
    page.type("Heat transfer coefficient", "12")
    pipe = page.kept("case").line.discharge[0]
    assert float(pipe.ambient_temperature) == pytest.approx(283.15)
    assert float(pipe.heat_transfer_coefficient) == 12
    assert "give ambient_temperature" not in page.html


def test_a_new_route_and_the_old_one_back(page: Page) -> None:
    page.go("route")
    old = page.kept("case").line
    page.type("Length of pipe", "60")
    page.type("90° bends", "6")
    page.type("Liquid above the pump", "1.5")
    page.press("Replace the route")
    line = page.kept("case").line
    assert [one.part for one in line.discharge] == ["pipe", "fitting", "exit", "vessel"]
    assert line.discharge[1].kind == "elbow-90-long"
    assert float(line.suction[0].level) == 1.5
    assert page.errors == []
    page.press("Put the old route back")
    assert page.kept("case").line == old


def test_a_new_route_needs_a_length(page: Page) -> None:
    page.go("route")
    old = page.kept("case").line
    page.press("Replace the route")
    assert page.kept("case").line == old
    assert "length" in page.html


def test_another_pump_takes_the_place_once_its_values_are_there(page: Page) -> None:
    page.go("route")
    kind = next(one for one in page.app.get("button_group") if "duty" in str(one.options))
    kind.set_value("duty")
    page.run()
    assert page.kept("case").pump.kind == "positive-displacement"
    page.type("Efficiency", "60")
    pump = page.kept("case").pump
    assert (pump.kind, float(pump.efficiency)) == ("duty", 0.6)
