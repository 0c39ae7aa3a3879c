"""`rheo run`, `rheo fit` and `rheo size`: results, files, and plain complaints."""

import json
import re

import pytest

import rheo


def edited(folder, old, new, name="case.toml"):
    path = folder / name
    text = path.read_text("utf-8")
    assert old in text
    path.write_text(text.replace(old, new, 1), "utf-8")
    return path


def test_run_shows_the_walk_from_readings_to_duty(command, folder):
    ended = command("run", folder / "case.toml")
    assert (ended.status, ended.err) == (0, "")
    assert ended.out.startswith("Made-up product to a made-up tank\n")
    in_order = [
        *("The line needs", "Readings", "Models", "has the lowest AICc", "Duty", "pressure drop"),
        *("pump power", "wall shear rate", "measured range", "Parts of the line", "riser"),
        *("Start-up", "What makes the pressure uncertain", "Cautions", "licensed engineer"),
    ]
    at = 0
    for words in in_order:
        at = ended.out.find(words, at)
        assert at >= 0, words


def test_run_prints_json_and_nothing_else(command, folder):
    ended = command("run", folder / "case.toml", "--json")
    assert (ended.status, ended.err) == (0, "")
    printed = json.loads(ended.out)
    result = rheo.run_case(rheo.load_case(folder / "case.toml"))
    assert printed == json.loads(json.dumps(result.as_dict()))
    assert printed["pressure_drop"] == pytest.approx(float(result.line.friction_pressure))
    low, high = printed["pressure_drop_interval"]
    assert low < printed["pressure_drop"] < high
    for name in ("wall_stress", "wall_rate", "reynolds", "friction_factor", "pressure_gradient"):
        assert printed["pipes"][0][name] > 0
    assert {one["key"] for one in printed["fits"]["ranking"]} <= set(rheo.model_records())


def test_run_writes_the_note(command, folder):
    ended = command("run", folder / "case.toml", "--out", folder / "note")
    assert ended.status == 0
    written = sorted(path.name for path in (folder / "note").iterdir())
    assert [name.split(".")[-1] for name in written] == ["html", "pdf", "xlsx"]
    assert all(name in ended.out for name in written)


def test_a_folder_that_cannot_be_written_is_said_plainly(command, folder):
    (folder / "note").write_text("a file, no folder")
    ended = command("run", folder / "case.toml", "--out", folder / "note")
    assert ended.status == 1
    assert str(folder / "note") in ended.err
    assert ended.err.count("\n") == 1


@pytest.mark.parametrize("width", [60, 100])
@pytest.mark.parametrize("name", ["run", "size"])
def test_no_line_is_wider_than_the_terminal(command, folder, monkeypatch, name, width):
    edited(folder, 'title = "Made-up', 'title = "' + 30 * "A long title " + "Made-up")
    monkeypatch.setenv("COLUMNS", str(width))
    ended = command(name, folder / "case.toml")
    assert ended.status == 0
    assert max(map(len, ended.out.splitlines())) <= width


def test_colours_only_where_they_are_wanted(command, folder, monkeypatch):
    monkeypatch.setenv("FORCE_COLOR", "1")
    monkeypatch.setenv("TERM", "xterm-256color")
    monkeypatch.delenv("NO_COLOR", raising=False)
    colours = ("\x1b[1;33m", "\x1b[32m", "\x1b[36m", "\x1b[31m")
    assert all(code in _limited(command, folder) for code in colours[1:])
    monkeypatch.setenv("NO_COLOR", "1")
    assert not any(code in _limited(command, folder) for code in colours)


def _limited(command, folder):
    case = folder / "limited.toml"
    limits = '[limits]\nmax_velocity = "1 m/s"\n[pump]'
    case.write_text((folder / "case.toml").read_text("utf-8").replace("[pump]", limits), "utf-8")
    return command("run", case).out + command("size", case).out


HOSTILE = "[bold red]=1+1 [/] \\u001b[31m \\u202Eevil \\u0007 \\U0001F600 <script>"


def test_text_of_the_user_stays_text(command, folder):
    edited(folder, 'title = "Made-up', f'title = "{HOSTILE} Made-up')
    edited(folder, 'name = "riser"', f'name = "{HOSTILE}"')
    ended = command("run", folder / "case.toml")
    assert ended.status == 0
    assert "[bold red]=1+1 [/]" in ended.out
    assert not any(sign in ended.out for sign in ("\x1b", "\x07", "\u202e"))


CASE_COMPLAINTS = [
    (
        "readings.csv",
        "none.csv",
        "readings file: there is no file 'none.csv' in the folder",
    ),
    ("readings.csv", "../readings.csv", "'../readings.csv' lies outside the folder of the case"),
    ("[duty]", "[duty", "case.toml, line 14, column 6: it is not valid TOML: expected ']'"),
    ("[duty]", "[dutty]", "line 14, dutty: unknown key 'dutty' (did you mean 'duty'?)"),
    ('"5 m3/h"', '"5 m3/fortnite"', "line 15, duty.flow: unknown unit 'm3/fortnite'; use one such"),
    ('"5 m3/h"', '"0 m3/h"', "duty.flow: found '0 m3/h'; it must be above 0 m3/s"),
    ('"5 m3/h"', "nan", "duty.flow: found nan; it must be a finite number"),
    ('"5 m3/h"', "[5]", "duty.flow: found a list; write a number with its unit, such as '5 m3/h'"),
    (
        'size = "ISO 2037 51"',
        'inside_diameter = "0 mm"',
        "inside_diameter: found '0 mm'; it must be",
    ),
    (
        "[duty]",
        '[fit]\nmodel = "binghm"\n[duty]',
        "fit.model: unknown model 'binghm' (did you mean",
    ),
    ('"50 %"', '"150 %"', "pump.efficiency: found '150 %'; it must be above 0 and at most 1"),
    ("schema = 1", "schema = 2", "line 1, schema: schema is 2; this program reads 1"),
]


@pytest.mark.parametrize(("old", "new", "sentence"), CASE_COMPLAINTS)
def test_complaints_about_a_case(command, folder, old, new, sentence):
    ended = command("run", edited(folder, old, new))
    assert ended.status == 1
    assert ended.out == ""
    assert sentence in ended.err
    assert ended.err.count("\n") == 1


READINGS_COMPLAINTS = [
    ("10,15.5", "10,thick", "readings.csv, line 5"),
    ("10,15.5", "-10,15.5", "readings.csv, line 5"),
    ("10,15.5", "10,nan", "readings.csv, line 5"),
    ("[1/s]", "[1/fathom]", "unit '1/fathom' does not measure what is wanted here; use one"),
    ("Shear stress [Pa]", "Mood", "shear rate"),
]


@pytest.mark.parametrize("name", ["run", "fit"])
@pytest.mark.parametrize(("old", "new", "sentence"), READINGS_COMPLAINTS)
def test_complaints_about_readings(command, folder, name, old, new, sentence):
    edited(folder, old, new, "readings.csv")
    ended = command(name, folder / ("case.toml" if name == "run" else "readings.csv"))
    assert ended.status == 1
    assert ended.out == ""
    assert sentence in ended.err
    assert ended.err.count("\n") == 1


@pytest.mark.parametrize("name", ["run", "fit", "size"])
def test_missing_and_empty_files(command, folder, name):
    missing = command(name, folder / "nothing.toml")
    assert missing.status == 1
    assert "nothing.toml: there is no such file" in missing.err
    (folder / "empty.csv").write_text("")
    (folder / "two.csv").write_text("Shear rate [1/s],Shear stress [Pa]\n1,2\n2,3\n")
    if name == "fit":
        assert "empty.csv: the file is empty" in command("fit", folder / "empty.csv").err
        assert "it holds 2 readings; a flow curve needs" in command("fit", folder / "two.csv").err
    else:
        (folder / "case.toml").write_text(" ")
        assert (
            "case.toml: the file is empty; a case begins" in command(name, folder / "case.toml").err
        )


FIT_COMPLAINTS = [
    (("--model", "binghm"), "unknown model 'binghm' (did you mean 'bingham'?)"),
    (
        ("--weighting", "fair"),
        "--weighting: found 'fair'; it must be relative, absolute or",
    ),
    (
        ("--weighting", "instrument"),
        "--weighting: 'instrument' needs --percent-of-reading or",
    ),
    (("--sweep", "sideways"), "--sweep: found 'sideways'; it must be up, down or both"),
    (("--geometry", "jar"), "unknown geometry 'jar'; there are"),
    (("--dim", "radius=1mm"), "--dim: dimensions need a --geometry"),
    (("--geometry", "tube", "--dim", "girth=1mm"), "--dim: unknown dimension 'girth'; tube takes"),
    (("--geometry", "tube", "--dim", "length=1s"), "--dim length: unit 's' does not measure"),
    (("--column", "rate"), "--column: found 'rate'; write it like name=value"),
    (("--exclude", "99"), "--exclude: there is no reading 99; they are numbered 1 to 8"),
    (("--full-scale", "5 Pa"), "--full-scale: unit 'Pa' does not measure what is wanted here"),
]


@pytest.mark.parametrize(("arguments", "sentence"), FIT_COMPLAINTS)
def test_complaints_about_a_fit(command, folder, arguments, sentence):
    ended = command("fit", folder / "readings.csv", *arguments)
    assert ended.status == 1
    assert ended.out == ""
    assert sentence in ended.err
    assert ended.err.count("\n") == 1


def test_fit_prints_what_fit_returns(command, folder):
    ended = command("fit", folder / "readings.csv", "--json", "--exclude", "1", "-m", "bingham")
    assert (ended.status, ended.err) == (0, "")
    printed = json.loads(ended.out)
    readings = rheo.read_readings(folder / "readings.csv").with_excluded([0])
    fits = rheo.fit(readings, models="bingham")
    assert printed["best"] == "bingham"
    assert printed["ranking"][0]["points"] == list(range(1, 8))
    for key, one in fits.best.parameters.items():
        assert printed["ranking"][0]["parameters"][key]["value"] == pytest.approx(one.value)
    assert printed["readings"]["excluded"] == [0]


def test_fit_shows_ranking_and_reason(command, folder):
    ended = command("fit", folder / "readings.csv")
    assert ended.status == 0
    assert "herschel-bulkley" in ended.out
    assert "AICc" in ended.out
    assert "95 % interval" in ended.out


def test_fit_with_a_geometry_of_the_options(command, folder):
    (folder / "torques.csv").write_text(
        "Speed [rpm],Torque [mN.m]\n" + "".join(f"{n},{0.4 * n**0.5}\n" for n in (1, 3, 9, 27, 81))
    )
    geometry = ("--geometry", "cone-plate", "--dim", "radius=25mm", "--dim", "angle=2 deg")
    ended = command("fit", folder / "torques.csv", *geometry, "-m", "power-law", "--json")
    assert ended.status == 0
    printed = json.loads(ended.out)
    assert printed["readings"]["geometry"]["key"] == "cone-plate"
    assert printed["ranking"][0]["parameters"]["flow_index"]["value"] == pytest.approx(
        0.5, abs=1e-6
    )


def test_fit_in_what_was_measured_and_over_temperatures(command, folder):
    truth = rheo.model("herschel-bulkley", yield_stress=8, consistency=3, flow_index=0.5)
    cup = rheo.geometry("concentric-cylinders", inner_radius=0.008, outer_radius=0.016, length=0.04)
    speeds = [0.5 * 2**step for step in range(10)]
    torques = cup.predict(truth, [speed * 0.10471975511965977 for speed in speeds]).tolist()
    rows = [
        f"{speed},{factor * torque!r},{celsius}"
        for celsius, factor in ((20, 1.0), (40, 0.6))
        for speed, torque in zip(speeds, torques, strict=True)
    ]
    (folder / "cup.csv").write_text(
        "# geometry: concentric-cylinders, inner_radius 8 mm, outer_radius 16 mm, length 40 mm\n"
        "Speed [rpm],Torque [N.m],Temperature [°C]\n" + "\n".join(rows),
        "utf-8",
    )
    only = ("-m", "herschel-bulkley", "--temperature", "20 °C")
    ended = command("fit", folder / "cup.csv", *only, "--json")
    assert (ended.status, ended.err) == (0, "")
    printed = json.loads(ended.out)
    found = printed["ranking"][0]["parameters"]
    for key, value in (("yield_stress", 8), ("consistency", 3), ("flow_index", 0.5)):
        assert found[key]["value"] == pytest.approx(value, rel=1e-4), key
    assert printed["state"]["reference"] == pytest.approx(293.15)
    assert (
        "One fit over every temperature; values at 20.0 °C"
        in command("fit", folder / "cup.csv", *only).out
    )


def test_size_recommends_within_the_limits(command, folder):
    edited(folder, "[pump]", '[limits]\nmax_velocity = "1 m/s"\n[pump]')
    ended = command("size", folder / "case.toml")
    assert (ended.status, ended.err) == (0, "")
    assert "Take ISO 2037" in ended.out
    assert "Why sizes fail" in ended.out
    printed = json.loads(command("size", folder / "case.toml", "--json").out)
    passing = [one for one in printed["candidates"] if one["passes"]]
    assert passing
    assert all(one["velocity"] <= 1 for one in passing)
    assert printed["recommended"]["size"]["label"] == passing[0]["size"]["label"]


def test_size_needs_sizes(command, folder):
    edited(folder, 'size = "ISO 2037 51"', 'inside_diameter = "50 mm"')
    ended = command("size", folder / "case.toml")
    assert ended.status == 1
    assert "sizes: no sizes are given to compare" in ended.err


@pytest.mark.parametrize("name", ["run", "size"])
def test_sentences_too_are_in_the_units_asked_for(command, folder, name):
    edited(folder, 'length = "30 m"', 'length = "12000 m"')
    ended = command(name, folder / "case.toml", "--units", "us")
    assert ended.status == 0
    assert not re.search(r"\d (bar|m3/h|m)\b", ended.out)
    assert "psi" in ended.out
    # No number of a sentence is left in the notation of programs.
    assert not re.search(r"\de[+-]\d", ended.out)


def test_an_error_beyond_all_sense_is_not_given_as_a_figure(command, folder):
    ended = command("run", edited(folder, "[doubt]", '[fit]\nmodel = "carreau"\n[doubt]'))
    assert ended.status == 0
    assert not re.search(r"\d{5,} ?%", ended.out)


def test_the_answer_carries_the_whole_doubt(command, folder):
    """Not only that of readings and models, which is the smaller part of it."""
    ended = command("run", folder / "case.toml")
    budget = rheo.run_case(rheo.load_case(folder / "case.toml")).doubt
    found = re.search(r"The line needs ([\d.]+) ± ([\d.]+) bar \(95 %\)", ended.out)
    assert float(found[1]) == pytest.approx(budget.pressure / 1e5, rel=0.01)
    # Written with one digit, or two where the first is 1.
    assert float(found[2]) == pytest.approx(1.96 * budget.standard_deviation / 1e5, rel=0.2)


def test_a_line_that_runs_by_itself_is_said_to_do_so(command, folder):
    edited(folder, 'level = "1 m"', 'level = "60 m"')
    ended = command("run", folder / "case.toml")
    assert "Heights and vessels drive the line by" in ended.out
    assert "should start by itself" in ended.out


def test_a_temperature_without_readings_is_said_beside_the_answer(command, folder):
    path = folder / "readings.csv"
    path.write_text("# temperature: 20 °C\n" + path.read_text("utf-8"), "utf-8")
    words = "the temperature is outside that of the readings"
    assert words not in " ".join(command("run", folder / "case.toml").out.split())
    edited(folder, 'temperature = "20 °C"', 'temperature = "60 °C"')
    assert words in " ".join(command("run", folder / "case.toml").out.split())
