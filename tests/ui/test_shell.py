"""What all stops share: the walk, the answer strip, units, opening and saving, safety, guard."""

from __future__ import annotations

import re
import tomllib
from typing import TYPE_CHECKING

import pytest

from rheo.case import case_from_text, load_case
from rheo.line.safety import GENERAL, PRESSURE, START_UP
from rheo.report.display import SYSTEMS
from rheo.report.palette import DARK, LIGHT
from ui import opening, results, walk
from ui.catch import UNEXPECTED
from ui.results import safe_name

if TYPE_CHECKING:
    from conftest import Page

STOPS = [stop.key for stop in walk.STOPS]


def test_a_first_visit_shows_the_sample_worked_through(page: Page) -> None:
    names = [name for name, _, _ in page.strip()]
    assert names == [
        "Pressure that the pump adds",
        "Wall shear rate",
        "Regime",
        "Size",
        "Start-up pressure",
    ]
    values = {name: (value, note) for name, value, note in page.strip()}
    assert re.fullmatch(r"[\d.]+ ± [\d.]+ bar", values["Pressure that the pump adds"][0])
    assert values["Wall shear rate"][1] == "✓ inside the measured range"
    assert values["Regime"][0] == "laminar"
    assert values["Size"][0] == "51 mm"


@pytest.mark.parametrize("stop", STOPS)
def test_every_stop_draws_with_strip_and_safety(page: Page, stop: str) -> None:
    page.go(stop)
    assert page.errors == []
    assert len(page.strip()) == 5
    for sentence in (GENERAL, PRESSURE, START_UP):
        assert sentence in page.html.replace("&#x27;", "'")


def test_the_walk_says_the_state_of_each_stop(page: Page) -> None:
    states = re.findall(r'<div class="rheo-state">(.*?)</div>', page.html)
    assert len(states) == len(STOPS)
    assert re.fullmatch(r"\d+ readings, \d+ flagged", states[0])
    assert states[1] == "Herschel-Bulkley"
    assert states[2] == "inside the measured range"
    assert "parts" in states[3]
    assert "bar" in states[4]
    assert states[5] == "51 mm"


def test_units_change_what_is_shown_and_nothing_stored(page: Page) -> None:
    before = page.kept("case").document()
    seen = {}
    for system in SYSTEMS:
        page.choose("Units", system)
        seen[system] = page.strip()[0][1]
        assert page.kept("case").document() == before
    assert seen["metric"].endswith(" bar")
    assert seen["si"].endswith(" kPa")
    assert seen["us"].endswith(" psi")


@pytest.mark.parametrize("name", opening.sample_names())
def test_samples_open(page: Page, name: str) -> None:
    page.press(name.capitalize())
    assert page.errors == []
    assert page.kept("case").document() == load_case(opening.SAMPLES / f"{name}.toml").document()


def test_a_saved_case_opens_again_and_gives_the_same(page: Page) -> None:
    before = page.strip()
    saved = results.saved_text(page.kept("case"), page.kept("files"))
    assert "text = " in saved
    page.press("Gum")
    assert page.strip() != before
    page.upload("sauce.toml", saved.encode(), label="Open a case")
    assert page.strip() == before


def test_a_case_that_names_files_opens_together_with_them(page: Page) -> None:
    page.press("Gum")
    folder = opening.SAMPLES
    files = [
        (name, (folder / name).read_bytes(), "application/octet-stream")
        for name in ("sauce.toml", "sauce_readings.csv")
    ]
    page.widget("file_uploader", "Open a case").set_value(files)
    page.run()
    assert page.kept("case") == load_case(folder / "sauce.toml")


@pytest.mark.parametrize(
    ("name", "data", "words"),
    [
        ("case.toml", b"schema = 1\n[product\n", "not valid TOML"),
        ("case.toml", b"\xff\xfe\x00", "not UTF-8"),
        ("case.toml", (opening.SAMPLES / "sauce.toml").read_bytes(), "choose that file together"),
        ("case.csv", b"1,2", "ends with .toml"),
    ],
)
def test_a_case_that_cannot_be_opened_leaves_the_one_at_hand(
    page: Page, name: str, data: bytes, words: str
) -> None:
    before = page.kept("case")
    page.upload(name, data, label="Open a case")
    assert words in page.html
    assert page.kept("case") is before


def test_a_bad_value_is_refused_beside_its_field_and_the_case_stays(page: Page) -> None:
    before = page.kept("case")
    page.type("Density", "heavy")
    assert page.kept("case") is before
    assert 'role="alert"' in page.html
    assert "heavy" in page.html
    page.type("Density", "1.2 g/cm3")
    assert float(page.kept("case").product.density) == pytest.approx(1200.0, rel=1e-12)
    assert 'role="alert"' not in page.html


def test_a_number_alone_is_read_in_the_unit_shown(page: Page) -> None:
    page.choose("Units", "us")
    page.type("Density", "62.4")
    # 1 lb/ft3 = 0.45359237 kg / (0.3048 m)^3, both exact by definition
    assert float(page.kept("case").product.density) == pytest.approx(62.4 * 0.45359237 / 0.3048**3)


def test_what_breaks_becomes_one_sentence(
    page: Page, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    def broken(*_: object) -> None:
        raise ZeroDivisionError("a secret of the inside")

    monkeypatch.setattr("ui.answer_strip.cells", broken)
    page.run()
    assert [one.replace("\\", "") for one in page.errors] == [UNEXPECTED]
    assert "secret" not in page.words
    assert "ZeroDivisionError: a secret of the inside" in capsys.readouterr().err


def test_a_calculation_that_breaks_leaves_the_page(
    page: Page, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    def broken(*_: object, **__: object) -> None:
        raise ZeroDivisionError("a secret of the inside")

    monkeypatch.setattr("ui.results.run_case", broken)
    page.type("Density", "1099 kg/m3")
    assert len(page.errors) == 1
    assert page.errors[0].startswith("There is no pressure drop yet. Something went wrong")
    assert "secret" not in page.words
    assert "ZeroDivisionError: a secret of the inside" in capsys.readouterr().err
    # All of the stop is there to put it right.
    monkeypatch.undo()
    page.type("Density", "1125 kg/m3")
    assert page.errors == []


def test_no_result_is_said_with_its_reason(page: Page) -> None:
    document = page.kept("case").document()
    document["pump"] = None
    for pipe in document["line"]["discharge"]:
        pipe.pop("outlet_temperature", None)
    document["readings"] = [{"text": "Shear rate [1/s],Shear stress [Pa]\n1,2\n"}]
    del document["pump"], document["cost"]
    case = case_from_text(_toml(document))
    page.app.session_state["rheo.case"] = case
    page.run()
    assert len(page.errors) == 1
    assert page.errors[0].startswith("There is no pressure drop yet.")
    for stop in STOPS:
        page.go(stop)
        assert len(page.errors) == 1


def _toml(document: dict[str, object]) -> str:
    import tomli_w

    return tomli_w.dumps(document)


def test_the_theme_has_the_colours_of_the_palette() -> None:
    config = tomllib.loads((opening.SAMPLES.parent / "ui/.streamlit/config.toml").read_text())
    for name, palette in (("light", LIGHT), ("dark", DARK)):
        theme = config["theme"][name]
        assert theme["primaryColor"] == palette.accent
        assert theme["backgroundColor"] == palette.background
        assert theme["textColor"] == palette.ink
        assert theme["borderColor"] == palette.rule
        assert theme["redColor"] == palette.bad
        assert theme["greenColor"] == palette.good
        assert theme["orangeColor"] == palette.warning


def test_the_server_stays_on_this_machine_and_sends_nothing() -> None:
    config = tomllib.loads((opening.SAMPLES.parent / "ui/.streamlit/config.toml").read_text())
    assert config["server"]["address"] == "127.0.0.1"
    assert config["browser"]["gatherUsageStats"] is False
    assert config["server"]["maxUploadSize"] == 20


@pytest.mark.parametrize(
    ("given", "safe"),
    [
        ("readings.csv", "readings.csv"),
        ("../../etc/passwd", "passwd"),
        ("..\\..\\boot.ini", "boot.ini"),
        ("<script>alert(1)</script>.csv", "script.csv"),
        ("a" * 500 + ".xlsx", "a" * 60 + ".xlsx"),
        ("\u202egpj.csv", "gpj.csv"),
        ("", "readings"),
        (".csv", "readings.csv"),
        ("Meßwerte 3 (neu).CSV", "Me_werte_3_neu.CSV"),
    ],
)
def test_names_of_uploads_become_plain(given: str, safe: str) -> None:
    assert safe_name(given) == safe
