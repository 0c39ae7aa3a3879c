"""The page with readings at several solids contents: found, mapped, chosen, tried otherwise."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
import pytest

from rheo.case.quantity import Quantity
from ui.pressure.what_if import asked
from ui.readings.solids import text_of, with_percent

if TYPE_CHECKING:
    from conftest import Page


def file(heading: str) -> bytes:
    rows = [
        f"{rate:.6g},{6.0 * np.exp(10.0 * (share - 0.30)) * rate**0.4:.6g},{100 * share:g}"
        for share in (0.25, 0.30, 0.35)
        for rate in np.geomspace(1.0, 300.0, 8)
    ]
    return "\n".join([f"Shear rate [1/s],Shear stress [Pa],{heading}", *rows]).encode()


def test_solids_go_from_the_file_to_the_pressure_and_the_what_if(page: Page) -> None:
    page.go("readings").upload("slurry.csv", file("Solids [vol%]"))
    kinds = [one.value for one in page.app.get("selectbox")]
    assert "solids fraction" in kinds
    page.go("flow_curve")
    assert "the case does not say how much is pumped" in page.words
    page.go("readings").type("Solids of the product", "28")
    assert page.kept("case").product.solids_fraction.written == "28 %"
    page.go("flow_curve")
    assert "the case does not say how much is pumped" not in page.words
    page.go("pressure").type("Solids [% by volume]", "33")
    assert page.errors == []
    assert "stress at every shear rate" not in page.html
    page.type("Solids [% by volume]", "40")
    assert "The solids fraction is 40 %; the readings were taken between 25 %" in page.html
    page.type("Solids [% by volume]", "40 wt%")
    assert "is by mass; give it by volume" in page.html
    page.type("Solids [% by volume]", "33 %")
    page.press("Keep these values")
    page.run()
    assert page.kept("case").product.solids_fraction.written == "33 % by volume"
    assert page.kept("case").product.stress_factor is None


def test_another_column_is_made_the_solids(page: Page) -> None:
    page.go("readings").upload("slurry.csv", file("Lot"))
    page.choose("Lot", "solids fraction")
    assert page.kept("case").readings[0].columns == {"solids_fraction": "Lot"}
    page.go("flow_curve")
    assert "most, 35 %, is taken" in page.words


def test_solids_of_a_set_without_a_column(page: Page) -> None:
    page.go("readings").type("Solids of these readings", "46 wt%")
    assert page.kept("case").readings[0].solids_fraction.written == "46 wt%"
    page.type("Solids of these readings", "much")
    assert "is no share of solids; write it like" in page.html
    page.type("Solids of these readings", "")
    assert page.kept("case").readings[0].solids_fraction is None


def test_what_is_typed_is_read_in_percent() -> None:
    found = asked({"after": "33"}, "metric", "mass")
    assert found.change is not None
    assert found.change.solids is not None
    assert found.change.solids.before is None
    assert found.change.solids.after == pytest.approx(0.33)
    assert asked({"after": "33 vol%"}, "metric", "mass").complaint.startswith("Solids: '33 vol%'")
    assert asked({"after": "many"}, "metric", "").complaint.startswith("Solids: 'many' is no share")
    assert with_percent("25") == "25 %"
    assert with_percent("25 wt%") == "25 wt%"
    assert text_of(None) == ""
    assert text_of(Quantity(0.25, "25 wt%")) == "25 wt%"
    assert text_of(Quantity(0.25, 0.25)) == "25 %"
