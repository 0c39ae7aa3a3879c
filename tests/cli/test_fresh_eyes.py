"""What a newcomer gives by mistake: one plain sentence, status 1, nothing half-written."""

import pytest

from rheo.errors import InputError
from rheo.report import files
from rheo.units import parse_quantity

MODEL = ("-m", "power-law", "-s", "consistency=2", "-s", "flow_index=0.5")
PIPE = ("pipe", *MODEL, "-d", "50mm", "--density", "1100")
TUBE = ("convert", *MODEL, "-g", "tube", "-d", "diameter=50mm", "-d", "length=10m")
CURVE = "Shear rate [1/s],Shear stress [Pa]\n1,5\n2,7\n5,12\n10,15\n20,20\n50,29\n100,40\n"


def plain(ended):
    """Return the one sentence in which a command ended."""
    assert (ended.status, ended.out) == (1, "")
    assert ended.err.startswith("rheo: ")
    assert ended.err.count("\n") == 1
    assert "Traceback" not in ended.err
    return ended.err.removeprefix("rheo: ").strip()


@pytest.fixture
def curve(tmp_path):
    path = tmp_path / "curve.csv"
    path.write_text(CURVE, "utf-8")
    return path


@pytest.mark.parametrize(
    ("arguments", "sentence"),
    [
        ((*PIPE, "-q", "1e12 m3/h"), "--flow: found '1e12 m3/h'; it must be above 0 m3/s and at"),
        ((*PIPE, "-v", "0 m/s"), "--velocity: found '0 m/s'; it must be above 0 m/s and at most"),
        ((*PIPE, "-v", "1 m/s", "-l", "1e300"), "--length: found '1e300'; it must be above 0 m"),
        ((*PIPE, "-v", "1 m/s", "--roughness", "60mm"), "roughness: it is 0.06 m; it must be less"),
        (PIPE, "--flow: found neither of --flow and --velocity; give one of them"),
        (
            ("pipe", *MODEL, "-d", "50mm", "--density", "-1", "-v", "1 m/s"),
            "--density: found '-1'; it must be above 0 kg/m3 and at most 25000 kg/m3",
        ),
        (
            ("pipe", *MODEL, "-d", "1e-30", "--density", "1100", "-v", "1 m/s"),
            "--diameter: found '1e-30'; it must be above 10⁻⁶ m and at most 100 m",
        ),
        (TUBE, "--at: found neither of --at and --rate; give one of them"),
        ((*TUBE, "--rate", "60 rpm"), "--rate: unit 'rpm' counts turns, which are no shear rate"),
        ((*TUBE, "--rate", "1e300"), "--rate: found '1e300'; it must lie between 0 and 10⁹ 1/s"),
        ((*TUBE, "--at", "1 m3/h", "--to", "tube length"), "--to: found 'length'; write it like"),
    ],
)
def test_one_sentence_names_option_found_and_allowed(command, arguments, sentence):
    assert plain(command(*arguments)).startswith(sentence)


@pytest.mark.parametrize(
    ("arguments", "sentence"),
    [
        (
            ("-w", "instrument", "--percent-of-reading", "1"),
            "--weighting: 'instrument' needs a geo",
        ),
        (("--percent-of-reading", "1"), "--percent-of-reading: it belongs to --weighting instrum"),
        (
            ("-w", "instrument", "--percent-of-full-scale", "-1"),
            "--percent-of-full-scale: found -1; it must be 0 or more and at most 100 %",
        ),
        (("-c", "stres=Shear stress"), "--column: unknown quantity 'stres' (did you mean 'stress'"),
        (("--full-scale", "0 mN.m"), "--full-scale: found '0 mN.m'; it must be above 0 N.m and at"),
        (("--temperature", "-300 °C"), "--temperature: found '-300 °C'; it must be above absolute"),
        (("--solids-form", "cubic"), "--solids-form: found 'cubic'; it must be exponential or pow"),
    ],
)
def test_options_of_fit_are_checked_by_name(command, curve, arguments, sentence):
    assert plain(command("fit", curve, *arguments)).startswith(sentence)


@pytest.mark.parametrize("option", ["--temperature=40 °C", "--solids=25 %"])
def test_an_option_without_use_is_said_to_have_none(command, curve, option):
    ended = command("fit", curve, option)
    assert ended.status == 0
    assert "was given, and the readings are not at several; it changes" in " ".join(
        ended.out.split()
    )


def test_slip_is_refused_where_solids_differ(command, tmp_path):
    rows = [
        f"{diameter},1,{flow},{20 * flow**0.5 * share / diameter},{share}"
        for share in (20, 30)
        for diameter in (8, 14)
        for flow in (1, 2, 4, 8)
    ]
    head = "Tube diameter [mm],Tube length [m],Flow [L/h],Pressure drop [kPa],Solids [%]"
    path = tmp_path / "tubes.csv"
    path.write_text("\n".join(["# geometry: tube", head, *rows]), "utf-8")
    words = plain(command("fit", path, "--slip"))
    assert words.startswith("--slip: entrance loss and slip are fitted at one solids fraction only")


def test_names_with_spaces_and_letters_of_anywhere(command, folder):
    there = folder / "été 2 – 日本"
    there.mkdir()
    for name in ("case.toml", "readings.csv"):
        (there / f"ü {name}").write_bytes((folder / name).read_bytes())
    case = there / "ü case.toml"
    case.write_text(case.read_text("utf-8").replace('"readings.csv"', '"ü readings.csv"'), "utf-8")
    ended = command("run", case, "--out", there / "out – 1")
    assert (ended.status, ended.err) == (0, "")
    assert len(list((there / "out – 1").iterdir())) == 3


@pytest.mark.parametrize(
    ("old", "new", "sentence"),
    [
        ("[duty]", "[product]\n[duty]", "it is not valid TOML: cannot declare 'product' twice"),
        ('"5 m3/h"', '"1e25 m3/h"', "duty.flow: found '1e25 m3/h'; it must be above 0 m3/s and"),
        ('"5 m3/h"', "nan", "duty.flow: found nan; it must be a finite number"),
        ('"1100 kg/m3"', "-1", "product.density: found -1 kg/m3; it must be above 0 kg/m3 and"),
        ('"readings.csv"', '"."', "is a folder"),
    ],
)
def test_slips_in_a_case(command, folder, old, new, sentence):
    case = folder / "case.toml"
    text = case.read_text("utf-8")
    assert old in text
    case.write_text(text.replace(old, new, 1), "utf-8")
    assert sentence in plain(command("run", case))


def test_a_disk_that_fills_up_leaves_what_was_there(command, folder, monkeypatch):
    out = folder / "out"
    assert command("run", folder / "case.toml", "--out", out).status == 0
    before = {path.name: path.read_bytes() for path in out.iterdir()}
    written = files.Path.write_bytes

    def full(path, data):
        if "workbook" in path.name:
            written(path, data[:100])
            raise OSError(28, "No space left on device")
        return written(path, data)

    monkeypatch.setattr(files.Path, "write_bytes", full)
    changed = folder / "case.toml"
    changed.write_text(changed.read_text("utf-8").replace('"5 m3/h"', '"6 m3/h"'), "utf-8")
    words = plain(command("run", changed, "--out", out))
    assert "the note cannot be written there: No space left on device" in words
    assert {path.name: path.read_bytes() for path in out.iterdir()} == before


def test_a_batch_knows_before_it_works_where_its_table_goes(command, curve, tmp_path):
    folder = curve.parent
    words = plain(command("batch", folder, "--out", tmp_path / "none" / "table.csv"))
    assert words.endswith("none: there is no such folder for the table; make it first")
    words = plain(command("batch", folder, "--out", folder))
    assert words.endswith("it is a folder; give the name of a table in it")
    words = plain(command("batch", folder, "--reference", tmp_path / "gone.csv"))
    assert words.endswith("gone.csv: there is no such file")
    words = plain(command("batch", folder, "-c", "stres=x"))
    assert words.startswith("--column: unknown quantity 'stres'")
    assert plain(command("batch", curve)).endswith(
        "it is a file; give a folder with files of readings"
    )


def test_help_shows_units_in_brackets(command):
    assert "torque='M [mN.m]'" in " ".join(command("fit", "--help").out.replace("│", " ").split())


def test_turns_are_no_shear_rate():
    for unit in ("rpm", "Hz", "rev/min", "rad/s", "°/s"):
        with pytest.raises(InputError, match="counts turns, which are no shear rate"):
            parse_quantity(f"60 {unit}", "1/s", "rate")
    assert parse_quantity("60 1/min", "1/s") == pytest.approx(1.0)
    assert parse_quantity("60 rpm", "rad/s") == pytest.approx(6.283185307)


def test_what_is_no_ordinary_file(command):
    assert "it is no ordinary file" in plain(command("fit", "/dev/null"))


def test_a_file_is_no_place_for_the_note(command, folder):
    words = plain(command("run", folder / "case.toml", "--out", folder / "readings.csv"))
    assert words.endswith("it is no folder; give one, which is made where it is not there")
