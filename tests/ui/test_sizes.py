"""The sizes stop: every size with its reason, neighbours, limits, one click to take a size."""

from __future__ import annotations

import threading
from typing import TYPE_CHECKING, Any

import pytest

from rheo.case import load_case, run_case
from rheo.errors import InputError
from ui import opening, work
from ui.sizes.choice import more_rows

if TYPE_CHECKING:
    from conftest import Page

    from rheo.case import CaseResult


@pytest.fixture(scope="module")
def sauce() -> CaseResult:
    return run_case(load_case(opening.SAMPLES / "sauce.toml"))


def sizes_page(page: Page) -> Page:
    """Go to the stop and wait for the comparison."""
    page.go("sizes")
    for _ in range(40):
        if "Verdict" in page.html:
            return page
        page.run()
    raise AssertionError("the comparison has not come to its end")


def test_every_size_stands_with_its_reason(page: Page, sauce: CaseResult) -> None:
    sizes_page(page)
    best = sauce.sizing.recommended
    assert best is not None
    assert f"Take {best.size.name}" in page.html
    assert "recommended" in page.html
    failing = next(one for one in sauce.sizing.candidates if one.reasons)
    assert "<td>fails</td>" in page.html
    assert failing.reasons[0].split(" (")[0].split(" ")[0] in page.html
    assert page.errors == []


def test_one_click_takes_a_size_into_the_route(page: Page, sauce: CaseResult) -> None:
    sizes_page(page)
    best = sauce.sizing.recommended
    assert best is not None
    before = page.strip()
    page.press(f"Take {best.size.name}")
    sizes_page(page)
    sizes = [one.size for one in page.kept("case").line.discharge if one.part == "pipe"]
    assert set(sizes) == {best.size.name}
    assert page.kept("case").line.suction[2].size == "ISO 2037 63.5"
    assert page.strip() != before
    assert page.widget("button", f"{best.size.name} is in the route").disabled


def test_another_size_can_be_taken(page: Page) -> None:
    sizes_page(page)
    names = page.widget("selectbox", "Another size").options
    page.widget("selectbox", "Another size").set_value(names.index("ISO 2037 76.1"))
    page.run()
    page.press("Take this one")
    assert page.kept("case").line.discharge[0].size == "ISO 2037 76.1"


def test_neighbours_say_what_they_cost(page: Page) -> None:
    sizes_page(page)
    for words in ("One size down", "In the route", "One size up", "Capital [EUR]", "Cost [EUR/"):
        assert words in page.html


def test_limits_are_fields_and_move_the_verdict(page: Page, sauce: CaseResult) -> None:
    sizes_page(page)
    assert page.widget("text_input", "Pressure ≤").placeholder == "10.0 bar, the pump's"
    page.type("Velocity ≤", "0.3")
    sizes_page(page)
    assert float(page.kept("case").limits.max_velocity) == 0.3
    best = sauce.sizing.recommended
    assert best is not None
    assert f"Take {best.size.name}" not in page.html
    page.type("Velocity ≤", "fast")
    assert "is not a number with a unit" in page.html
    page.type("Velocity ≤", "")
    assert page.kept("case").limits.max_velocity is None
    page.widget("toggle", "Measured range only").set_value(False)
    page.run()
    assert page.kept("case").limits.keep_to_measured_rates is False
    page.choose("Regime", "turbulent")
    sizes_page(page)
    assert "(turbulent wanted)" in page.html


def test_costs_and_sizes_are_fields(page: Page) -> None:
    sizes_page(page)
    page.type("Energy price", "0.3")
    sizes_page(page)
    assert float(page.kept("case").cost.energy_price) == 0.3
    page.choose("Sizes of", "ASME BPE")
    sizes_page(page)
    assert page.kept("case").sizes.standard == "ASME BPE"
    assert "ASME BPE" in page.html
    page.choose("Sizes of", "ASME B36.10M")
    sizes_page(page)
    assert page.kept("case").sizes.schedule == "40"
    page.choose("Schedule", "80")
    assert page.kept("case").sizes.schedule == "80"
    page.widget("selectbox", "Sizes of").select_index(0)
    page.run()
    assert page.kept("case").sizes is None


def test_the_choice_by_doubt_and_flow_is_told(page: Page) -> None:
    sizes_page(page)
    assert "By so many of the likely flow curves" in page.html
    for flow in ("3.20", "4.00", "4.80"):
        assert flow in page.html


def test_more_is_known_of_each_size(sauce: CaseResult) -> None:
    headings, rows = more_rows(sauce.sizing, "metric")
    assert len(rows) == len(sauce.sizing.candidates)
    assert all(len(row.cells) == len(headings) for row in rows)
    first = sauce.sizing.candidates[0]
    assert rows[0].cells[0] == first.size.name.removeprefix("ISO 2037 ")
    assert float(rows[0].cells[-2]) == pytest.approx(3600 * first.cleaning_flow, rel=5e-3)


def test_a_line_of_fixed_sizes_is_said_in_words(page: Page) -> None:
    page.go("route")
    for number in (1, 4):
        page.choose("Part", number)
        page.widget("toggle", "Keep its size").set_value(True)
        page.run()
    page.go("sizes")
    for _ in range(20):
        page.run()
    assert "every pipe has a fixed size" in page.html.lower()


def test_work_tells_its_share_and_ends_when_it_is_cancelled() -> None:
    job = work.Job(subject=object())
    reached, go_on = threading.Event(), threading.Event()

    def calculate(tell: work.Progress) -> str:
        tell(0.25)
        reached.set()
        assert go_on.wait(10)
        tell(0.5)
        return "done"

    thread = threading.Thread(target=job.run, args=(calculate,))
    thread.start()
    assert reached.wait(10)
    assert job.share == 0.25
    job.cancelled = True
    go_on.set()
    thread.join(10)
    assert job.done.is_set()
    assert job.outcome is None


def test_work_keeps_what_came_of_it(capsys: Any) -> None:
    good: work.Job = work.Job(subject=1)
    good.run(lambda tell: tell(1.0) or "found")
    assert good.outcome is not None
    assert good.outcome.value == "found"
    wrong: work.Job = work.Job(subject=2)

    def refuse(_: work.Progress) -> None:
        raise InputError("no size is given")

    wrong.run(refuse)
    assert str(wrong.outcome.problem) == "no size is given"
    broken: work.Job = work.Job(subject=3)
    broken.run(lambda _: 1 / 0)
    assert "Something went wrong" in str(broken.outcome.problem)
    assert "ZeroDivisionError" in capsys.readouterr().err


def test_long_work_shows_its_progress_and_can_be_cancelled(
    page: Page, monkeypatch: pytest.MonkeyPatch
) -> None:
    hold = threading.Event()

    def slow(_: Any, tell: work.Progress) -> None:
        tell(0.4)
        hold.wait(20)
        tell(0.8)

    monkeypatch.setattr("rheo.case.result.CaseResult.compare_sizes", slow)
    page.go("sizes")
    assert "Comparing sizes: 40 % done" in str(page.app.get("progress")[0].proto.text)
    page.widget("button", "Cancel").click()
    hold.set()
    page.run().run()
    assert "You ended it: comparing sizes." in page.words
    page.press("Start again")
