"""A case that asks for very many flow curves tells how far it is, and can be cut short."""

from __future__ import annotations

import time
from typing import TYPE_CHECKING

import pytest

import rheo
from ui import opening
from ui.state import changed

if TYPE_CHECKING:
    from conftest import Page

WORDS = "Drawing flow curves"


@pytest.fixture
def slow(page: Page) -> Page:
    """The page as it opens a case with as many draws as may be."""
    case = changed(opening.sample("sauce"), ("doubt", "draws"), 100_000)
    page.app.session_state["rheo.case"] = case
    page.app.session_state["rheo.files"] = opening.sample_files("sauce")
    return page.run()


def test_it_is_drawn_beside_the_page(slow: Page) -> None:
    assert [one.value for one in slow.app.header] == [WORDS]
    assert "100\u202f000 flow curves" in slow.words
    job = slow.app.session_state["rheo.work.draws"]
    assert not job.done.is_set()
    slow.press("Cancel")
    assert job.done.wait(30)
    assert job.cancelled
    slow.run()
    assert "You ended it: drawing flow curves." in slow.words
    assert slow.strip() == []


def test_fewer_can_be_taken(slow: Page) -> None:
    job = slow.app.session_state["rheo.work.draws"]
    slow.press("Take 1000 instead")
    assert job.cancelled
    assert slow.kept("case").doubt.draws == 1000
    assert len(slow.strip()) == 5


def test_what_was_drawn_is_taken(page: Page) -> None:
    case = changed(opening.sample("gum"), ("doubt", "draws"), 6_000)
    page.app.session_state["rheo.case"] = case
    page.app.session_state["rheo.files"] = opening.sample_files("gum")
    page.run()
    for _ in range(100):
        if page.strip():
            break
        time.sleep(0.2)
        page.run()
    assert len(page.strip()) == 5
    assert page.errors == []


def test_progress_is_told_and_can_end_the_draws() -> None:
    rate = [0.5, 1.0, 5.0, 20.0, 80.0, 300.0]
    curve = rheo.FlowCurve(rate, [13.0, 13.9, 17.0, 23.5, 35.0, 62.0])
    fits = rheo.fit(curve, models=["herschel-bulkley", "bingham"])
    told: list[float] = []
    fits.draws(20_000, seed=1, key="bingham", progress=told.append)
    assert len(told) > 1
    assert told == sorted(told)
    assert told[-1] == pytest.approx(1.0)

    def enough(share: float) -> None:
        assert share > 0
        raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        fits.draws(20_000, seed=2, key="bingham", progress=enough)
    assert sum(one.shape[0] for one in fits.draws(500, seed=2, key="bingham")) == 500
