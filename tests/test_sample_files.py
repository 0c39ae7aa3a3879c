"""The demonstration files are what their script makes, and say that they are invented."""

from __future__ import annotations

import io
import zipfile
from pathlib import Path

import numpy as np
import pytest

import rheo
from sample_data import make_samples

FOLDER = Path(__file__).resolve().parent.parent / "sample_data"
SHIPPED = sorted(path for path in FOLDER.iterdir() if path.suffix in {".csv", ".xlsx", ".toml"})


def _content(data: bytes, name: str) -> object:
    """Return bytes, or what a workbook unpacks to: packing is the machine's library's business."""
    if not name.endswith(".xlsx"):
        return data
    with zipfile.ZipFile(io.BytesIO(data)) as packed:
        return {one: packed.read(one) for one in packed.namelist()}


@pytest.mark.parametrize("name", make_samples.FILES)
def test_the_script_makes_the_file(name: str) -> None:
    made, kept = make_samples.FILES[name](), (FOLDER / name).read_bytes()
    assert _content(made, name) == _content(kept, name)


def test_the_script_writes_every_file(tmp_path: Path) -> None:
    make_samples.main(tmp_path)
    assert {path.name for path in tmp_path.iterdir()} == set(make_samples.FILES)


@pytest.mark.parametrize("path", SHIPPED, ids=lambda path: path.name)
def test_each_file_says_that_it_is_invented(path: Path) -> None:
    content = _content(path.read_bytes(), path.name)
    pieces = content.values() if isinstance(content, dict) else [content]
    assert any(b"nvented" in piece for piece in pieces)


def _worst_error(found: rheo.Model, truth: rheo.Model, low: float, high: float) -> float:
    rate = np.geomspace(low, high, 25)
    return float(np.max(np.abs(found.stress(rate) / truth.stress(rate) - 1.0)))


@pytest.mark.parametrize("celsius", make_samples.SAUCE_TEMPERATURES)
def test_fit_finds_the_true_sauce(celsius: float) -> None:
    readings = rheo.read_readings(FOLDER / "sauce_readings.csv")
    near = np.abs(readings.temperature - celsius - make_samples.ZERO_CELSIUS) < 2.0
    fits = rheo.fit(readings.select(near & (readings.branch == "down")))
    assert fits.best.model.key == "herschel-bulkley"
    # Eight readings with 0.8 % noise and more at low torque.
    assert _worst_error(fits.best.model, make_samples.sauce(celsius), 3.0, 300.0) < 0.02


def test_fit_finds_the_true_underflow() -> None:
    readings = rheo.read_readings(FOLDER / "thickener_readings.csv")
    best = rheo.fit(readings, entrance=True, slip=True).best
    truth = rheo.model("herschel-bulkley", **make_samples.UNDERFLOW)
    assert best.model.key == "herschel-bulkley"
    assert _worst_error(best.model, truth, 30.0, 600.0) < 0.01
    for key, value in (
        ("entrance_diameters", make_samples.UNDERFLOW_ENTRANCE),
        ("slip_coefficient", make_samples.UNDERFLOW_SLIP),
    ):
        assert best.parameters[key].low < value < best.parameters[key].high


def test_slip_and_entrance_loss_show_in_the_underflow() -> None:
    """Left out of the fit they bend the curve so far that another model is taken."""
    readings = rheo.read_readings(FOLDER / "thickener_readings.csv")
    best = rheo.fit(readings).best
    truth = rheo.model("herschel-bulkley", **make_samples.UNDERFLOW)
    assert _worst_error(best.model, truth, 30.0, 600.0) > 0.03


def test_fit_finds_the_true_gum() -> None:
    fits = rheo.fit(rheo.read_readings(FOLDER / "gum_readings.xlsx"))
    assert fits.best.model.key == "carreau"
    assert (
        _worst_error(fits.best.model, rheo.model("carreau", **make_samples.GUM), 0.02, 800.0) < 0.02
    )


def test_one_fit_over_the_temperatures_finds_the_true_sauce() -> None:
    readings = rheo.read_readings(FOLDER / "sauce_readings.csv")
    best = rheo.fit_temperatures(readings.select(readings.branch == "down")).best
    for key, value in (
        ("flow_index", make_samples.SAUCE_FLOW_INDEX),
        ("activation_energy", make_samples.SAUCE_CONSISTENCY_ACTIVATION),
        ("yield_activation_energy", make_samples.SAUCE_YIELD_ACTIVATION),
    ):
        assert best.parameters[key].low < value < best.parameters[key].high
