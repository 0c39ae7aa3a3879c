"""A reload of the browser begins a new session and finds the case again."""

from __future__ import annotations

from typing import TYPE_CHECKING

from streamlit.testing.v1 import AppTest

from rheo.case import load_case
from ui import opening, reload
from ui.reload import Kept, Store
from ui.results import StoredFile

if TYPE_CHECKING:
    from conftest import Page


def test_an_untouched_sample_leaves_the_address_alone(page: Page) -> None:
    assert "kept" not in page.app.query_params
    page.choose("Units", "us")
    assert "kept" not in page.app.query_params


def test_a_new_session_with_the_word_has_the_case(page: Page) -> None:
    page.choose("Units", "si")
    page.type("Density", "1234 kg/m3")
    word = str(page.app.query_params["kept"])
    assert len(word) >= 32
    again = AppTest.from_file(page.app._script_path, default_timeout=60)
    again.query_params["kept"] = word
    again.run()
    assert again.session_state["rheo.case"] == page.kept("case")
    assert again.session_state["rheo.units"] == "si"


def test_an_unknown_word_opens_the_sample(page: Page) -> None:
    again = AppTest.from_file(page.app._script_path, default_timeout=60)
    again.query_params["kept"] = "../../etc/passwd"
    again.run()
    assert not again.exception
    assert again.session_state["rheo.case"] is opening.sample(opening.FIRST_SAMPLE)


def test_another_session_does_not_see_the_case(page: Page) -> None:
    page.type("Density", "1234 kg/m3")
    other = AppTest.from_file(page.app._script_path, default_timeout=60).run()
    assert other.session_state["rheo.case"] is opening.sample(opening.FIRST_SAMPLE)


def test_the_store_drops_what_was_used_longest_ago() -> None:
    case = load_case(opening.SAMPLES / "sauce.toml")
    store = Store()
    small = Kept(case, {"a.csv": StoredFile(b"x")}, "si")
    for number in range(reload.MOST_CASES + 1):
        store.put(str(number), small)
        store.put("0", small)
    assert len(store.kept) == reload.MOST_CASES
    assert store.get("0") is small
    assert store.get("1") is None
    store.put("large", Kept(case, {"a.csv": StoredFile(bytes(reload.MOST_BYTES))}, "si"))
    assert list(store.kept) == ["large"]
