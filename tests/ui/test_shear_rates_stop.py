"""The shear rates stop: where the rates fall, and the converter both ways."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

import numpy as np
import pytest

import rheo
from rheo.case import case_from_document, load_case, run_case
from ui import opening

if TYPE_CHECKING:
    from conftest import Page


@pytest.fixture
def stop(page: Page) -> Page:
    return page.go("shear_rates")


def test_it_says_whether_the_viscometer_saw_the_rates(stop: Page) -> None:
    assert "Yes: the viscometer saw" in stop.html
    document = stop.kept("case").document()
    document["duty"]["flow"] = "40 m3/h"
    stop.app.session_state["rheo.case"] = case_from_document(document)
    stop.run()
    assert "Not all of it" in stop.html
    assert "! outside" in stop.html
    assert "! outside the measured range" in stop.html


def test_the_pipes_are_given_as_viscometer_speeds(stop: Page) -> None:
    result = run_case(load_case(opening.SAMPLES / "sauce.toml"))
    pipe = next(part for part in result.line.parts if part.kind == "pipe")
    speed = result.fitted.geometry.setting_for_rate(result.model, pipe.wall_rate)
    rpm = float(speed) * 30.0 / np.pi
    cells = re.findall(r"<tr.*?>(.*?)</tr>", stop.html)
    row = next(cell for cell in cells if pipe.name in cell)
    shown = float(re.findall(r'class="n">([\d.]+)<', row)[-1])
    assert shown == pytest.approx(rpm, rel=5e-3)


def test_from_the_pipe_to_the_viscometer_and_back(stop: Page) -> None:
    said = re.search(
        r"The round tube at 4 m³/h works at ([\d.]+) 1/s; on .*? that is ([\d.]+) rpm", stop.html
    )
    assert said is not None
    stop.choose("In", "concentric-cylinders")
    stop.type("Speed", f"{said[2]} rpm")
    stop.choose("Wanted in", "tube")
    back = re.search(r"works at ([\d.]+) 1/s; on round tube that is ([\d.]+) m³/h", stop.html)
    assert back is not None
    # Both numbers went through the page with four digits.
    assert float(back[1]) == pytest.approx(float(said[1]), rel=2e-3)
    assert float(back[2]) == pytest.approx(4.0, rel=3e-3)


def test_the_converter_asks_for_what_is_missing(stop: Page) -> None:
    stop.choose("Wanted in", "slot")
    assert 'role="alert"' in stop.html
    assert f"of the {rheo.geometry_records()['slot'].name}." in stop.html
    labels = [one.label for one in stop.app.text_input]
    record = rheo.geometry_records()["slot"]
    for dimension in record.dimensions:
        if dimension.default != 0:
            assert any(label.lower().startswith(dimension.description[:8]) for label in labels)


def test_a_bad_entry_is_answered_in_place(stop: Page) -> None:
    stop.type("Flow", "fast")
    assert 'role="alert"' in stop.html
    assert "fast" in stop.html
    assert stop.errors == []


def test_from_a_shear_rate(stop: Page) -> None:
    stop.app.get("button_group")[0].set_value("From a shear rate")
    stop.run()
    stop.type("Shear rate", "100")
    result = run_case(load_case(opening.SAMPLES / "sauce.toml"))
    speed = result.fitted.geometry.setting_for_rate(result.model, 100.0)
    rpm = float(speed) * 30.0 / np.pi
    assert f"{rpm:.3g} rpm" in stop.html
