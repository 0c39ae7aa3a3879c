"""Every Caution of a result stands on a stop of the page, beside what it speaks of."""

from __future__ import annotations

import re
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

import pytest

import rheo
from rheo.case import load_case, run_case
from rheo.errors import Caution
from rheo.report.words import capital
from ui import cautions, opening, places, state
from ui.pressure.views import VIEWS

if TYPE_CHECKING:
    from conftest import Page

    from rheo.case import CaseResult

PACKAGE = Path(rheo.__file__).parent
IN_THE_SOURCE = re.compile(r"\bCaution\(\s*\"([a-z-]+)\"")


def codes_of_lines() -> list[str]:
    """Return the codes of all Cautions that working out a line and its pump can give."""
    found: set[str] = set()
    for package in ("hydraulics", "line", "case"):
        for path in (PACKAGE / package).rglob("*.py"):
            found.update(IN_THE_SOURCE.findall(path.read_text("utf-8")))
    # Of a flow curve that is scaled, by the state that it is scaled with.
    found.update(f"outside-measured-{word}" for word in ("temperature", "fraction"))
    return sorted(found)


@pytest.fixture(scope="module")
def sauce() -> CaseResult:
    return run_case(load_case(opening.SAMPLES / "sauce.toml"))


def sentence_of(code: str) -> str:
    return f"{capital(code.replace('-', ' '))} is what this one warns of."


def test_the_sources_are_read() -> None:
    assert {"npsh-too-low", "limit-not-kept", "above-pump-rating"} <= set(codes_of_lines())


def test_every_code_that_has_a_place_is_given_by_the_program() -> None:
    placed = {code for codes in places.CODES.values() for code in codes}
    assert placed <= set(codes_of_lines())


def test_none_is_lost(page: Page, sauce: CaseResult, monkeypatch: pytest.MonkeyPatch) -> None:
    codes = [*codes_of_lines(), "not-known-to-the-page"]
    made = tuple(Caution(code, sentence_of(code), "Look at it.", "line") for code in codes)
    result = replace(sauce, cautions=made)
    monkeypatch.setattr(state, "result", lambda: result)
    seen: dict[str, set[str]] = {}
    for place, stop in [
        *((one, one) for one in ("flow_curve", "shear_rates", "route", "sizes")),
        *((f"pressure.{key}", "pressure") for key in VIEWS),
    ]:
        page.app.switch_page(f"stops/{stop}.py")
        page.run()
        if stop == "pressure":
            page.look_at(VIEWS[place.partition(".")[2]].name)
        seen[place] = {code for code in codes if sentence_of(code) in page.html}
    for place, wanted in places.CODES.items():
        shown = seen["pressure.rates"] if place == "pressure" else seen[place]
        assert set(wanted) <= shown, place
    assert set().union(*seen.values()) == set(codes)


def test_readings_and_fit_have_theirs(sauce: CaseResult) -> None:
    assert set(places.of_readings(sauce)) == set(sauce.cautions)
    assert "torque-low" in {one.code for one in places.of_readings(sauce)}
    assert places.at("pressure", sauce) == ()


def test_cautions_about_parameters_are_one_sentence_a_kind() -> None:
    rough = "Treat it as a rough value."
    of_parameters = [
        Caution("parameter-poorly-known", f"{key} is known badly.", rough, f"Cross, {key}")
        for key in ("time_constant", "rate_index")
    ]
    other = Caution("misfit", "Cross misses the readings.", "Take another.", "Cross")
    (both, single) = cautions.merged([*of_parameters, other])
    assert both.place == "Cross"
    assert both.sentence == "time constant is known badly; rate index is known badly."
    assert single == other
    assert "time_constant" not in cautions.html(both)
