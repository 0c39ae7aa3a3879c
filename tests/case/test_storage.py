"""Case files: round trip without loss, and plain complaints that name file, line and key."""

import tomllib
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import rheo
from rheo.case import case_from_text, case_text, load_case, save_case
from rheo.case.line_blocks import PART_TAGS, LineBlock
from rheo.case.pump_blocks import PUMP_TAGS
from rheo.errors import CaseError

CASE = """\
schema = 1
title = "Sauce to the filler"
notes = '''
Two lines, "quoted",
and a tab\tin it.
'''

[product]
name = "brown sauce"
density = "1.12 g/cm3"
temperature = "40 °C"
heat_capacity = 3500

[[readings]]
file = "data/sauce.csv"
sweep = "up"
exclude = [1, 4]
geometry = { kind = "concentric-cylinders", inner_radius = "14 mm", outer_radius = "18.5 mm" }
columns = { torque = "M", angular_speed = "n" }

[[readings]]
text = '''
Shear rate [1/s],Shear stress [Pa]
1,2
"3",4
'''
temperature = "60 °C"

[fit]
models = ["bingham", "herschel-bulkley"]
model = "herschel-bulkley"

[duty]
flow = "5 m3/h"
flow_tolerance = "10 %"

[line]
name = "filler line"
suction = [{ part = "vessel", level = "2 m", name = "tank" }]

[[line.discharge]]
part = "pipe"
length = "30 m"
size = "ISO 2037 51"

[[line.discharge]]
part = "fitting"
kind = "elbow"
loss_coefficient = 0.9
count = 2

[pump]
kind = "positive-displacement"
displacement = "0.5 L"
speed = "200 rpm"
rated_pressure = "10 bar"
"""


def changed(old, new):
    text = CASE.replace(old, new, 1)
    assert text != CASE
    return text


def complaint_of(text):
    with pytest.raises(CaseError) as caught:
        case_from_text(text, "sauce.toml", folder=Path())
    return str(caught.value)


@pytest.fixture
def folder(tmp_path):
    (tmp_path / "sauce.toml").write_text(CASE, "utf-8")
    return tmp_path


def test_quantities_are_si_numbers(folder):
    case = load_case(folder / "sauce.toml")
    assert case.product.density == pytest.approx(1120)
    assert case.product.temperature == pytest.approx(313.15)
    assert case.product.heat_capacity == 3500
    assert case.duty.flow == pytest.approx(5 / 3600)
    assert case.duty.flow_tolerance == pytest.approx(0.1)
    assert case.readings[0].geometry.dimensions["inner_radius"] == pytest.approx(0.014)
    line = case.line.build()
    assert line.source_vessel.level == 2.0
    assert float(line.discharge[0].diameter) == pytest.approx(0.0486)


def test_round_trip_keeps_every_word(folder):
    case = load_case(folder / "sauce.toml")
    save_case(case, folder / "again.toml")
    again = load_case(folder / "again.toml")
    assert again == case
    assert hash(again) == hash(case)
    first, second = (tomllib.loads((folder / name).read_text()) for name in NAMES)
    assert first == second
    assert case.product.density.written == "1.12 g/cm3"


NAMES = ("sauce.toml", "again.toml")


def test_saving_twice_gives_the_same_bytes(folder):
    case = load_case(folder / "sauce.toml")
    save_case(case, folder / "one.toml")
    save_case(load_case(folder / "one.toml"), folder / "two.toml")
    assert (folder / "one.toml").read_bytes() == (folder / "two.toml").read_bytes()


TEXTS = st.text(max_size=60).filter(lambda text: not any(0xD800 <= ord(c) < 0xE000 for c in text))


@settings(deadline=None, max_examples=60, derandomize=True)
@given(
    title=TEXTS,
    notes=TEXTS,
    flow=st.floats(1e-9, 10.0),
    count=st.integers(1, 500),
    unit=st.sampled_from(["m3/h", "L/min", "gpm", "m^3/s"]),
)
def test_round_trip_of_any_text_and_number(title, notes, flow, count, unit):
    document = {
        **case_from_text(CASE).document(),
        "title": title,
        "notes": notes,
        "duty": {"flow": f"{flow!r} {unit}"},
    }
    document["line"]["discharge"][1]["count"] = count
    case = rheo.case.case_from_document(document)
    again = case_from_text(case_text(case))
    assert again == case
    assert again.duty.flow == case.duty.flow
    assert again.title == case.title


def test_a_case_made_in_python_is_written_in_si():
    case = case_from_text(CASE)
    duty = case.duty.model_copy(update={"flow": rheo.case.Quantity(0.00123)})
    text = case_text(case.model_copy(update={"duty": duty}))
    assert 'flow = "0.00123 m^3/s"' in text
    assert case_from_text(text).duty.flow == 0.00123


def test_a_case_saved_elsewhere_keeps_its_files_within_reach(folder):
    (folder / "data").mkdir()
    case = load_case(folder / "sauce.toml")
    save_case(case, folder / "data" / "sauce.toml")
    assert load_case(folder / "data" / "sauce.toml").readings[0].file == "sauce.csv"
    (folder / "other").mkdir()
    with pytest.raises(CaseError, match="outside the folder that the case is saved to"):
        save_case(case, folder / "other" / "sauce.toml")


COMPLAINTS = [
    (
        "density =",
        "densty =",
        "line 10, product.densty: unknown key 'densty' (did you mean",
    ),
    ("density =", "densty =", "allowed are name, density, temperature, heat_capacity"),
    ("[product]", "[prodct]", "line 8, prodct: unknown key 'prodct' (did you mean 'product'?)"),
    ('"1.12 g/cm3"', "true", "product.density: found true; write a number with its unit, such as"),
    ('"1.12 g/cm3"', '"heavy"', "'heavy' is not a number with a unit; write it like"),
    ('"1.12 g/cm3"', '"1.12 g/cmm"', "unknown unit 'g/cmm'; use one such as kg/m3, g/cm3"),
    ('"1.12 g/cm3"', '"1.12 m"', "unit 'm' does not measure what is wanted here; use one such as"),
    ('"1.12 g/cm3"', '"-1 g/cm3"', "found '-1 g/cm3'; it must be above 0 kg/m3"),
    ('"1.12 g/cm3"', "nan", "line 10, product.density: found nan; it must be a finite number"),
    ('"1.12 g/cm3"', "1" + 400 * "0", "product.density: found inf; it must be a finite number"),
    (
        '"1.12 g/cm3"',
        "1" + 5000 * "0",
        "nested too deep, or a number with too many digits",
    ),
    ('"40 °C"', "40", "product.temperature: found 40 K; it must be 173 K or more"),
    ('"5 m3/h"', '"0 m3/h"', "duty.flow: found '0 m3/h'; it must be above 0 m3/s"),
    ('flow = "5 m3/h"\n', "", "line 33, duty.flow: key 'flow' is missing"),
    ('[duty]\nflow = "5 m3/h"\nflow_tolerance = "10 %"', "", "sauce.toml: key 'duty' is missing"),
    (
        'part = "pipe"',
        'part = "pip"',
        "unknown part 'pip' (did you mean 'pipe'?); there are",
    ),
    (
        'part = "pipe"\n',
        "",
        "line 41, line.discharge (entry 1): key 'part' is missing",
    ),
    ('"30 m"', '"30 s"', "line 43, line.discharge (entry 1) length: unit 's' does not measure"),
    ('size = "ISO 2037 51"', 'inside_diameter = "0 mm"', "found '0 mm'; it must be above 10⁻⁶ m"),
    ('size = "ISO 2037 51"', "", "give inside_diameter [m] or a catalogue size"),
    ("ISO 2037 51", "ISO 2037 50", "unknown pipe size 'ISO 2037 50' (nearest:"),
    ("count = 2", "count = 0", "line.discharge (entry 2) count: found 0; it must be 1 or more"),
    ("count = 2", 'count = "two"', "found 'two'; it must be a whole number"),
    (
        '[{ part = "vessel", level = "2 m", name = "tank" }]',
        "3",
        "suction: found 3; it must be a list",
    ),
    (
        '{ part = "vessel", level = "2 m", name = "tank" }',
        "3",
        "(entry 1): found 3; it must be a",
    ),
    ('kind = "positive-displacement"', 'kind = "screw"', "unknown kind of pump 'screw'; there are"),
    ("displacement = ", "displacment = ", "did you mean 'displacement'?"),
    ('"concentric-cylinders"', '"cylinders"', "geometry.kind: unknown geometry 'cylinders'"),
    ("inner_radius", "inner_diameter", "geometry.inner_diameter: unknown key 'inner_diameter'"),
    ('"14 mm"', '"14 °C"', "readings (entry 1) geometry.inner_radius: unit '°C' does not measure"),
    ("torque =", "torqe =", "readings (entry 1) columns.torqe: unknown key 'torqe'"),
    ("[1, 4]", "[0]", "exclude (entry 1): found 0; it must be 1 or more"),
    ('"up"', '"upward"', "found 'upward'; it must be one of 'up', 'down', 'both'"),
    ('file = "data/sauce.csv"\n', "", "found neither of 'file' and 'text'; give one of them"),
    ('"data/sauce.csv"', '"../sauce.csv"', "line 15, readings (entry 1) file: '../sauce.csv' lies"),
    ('["bingham", ', '["binghm", ', "fit.models: unknown model 'binghm' (did you mean 'bingham'?)"),
    ('["bingham", "herschel-bulkley"]', "[]", "the list is empty; name at least one model"),
    ('model = "her', 'model = "x-her', "fit.model: unknown model 'x-herschel-bulkley'"),
    (
        'model = "her',
        'weighting = "fair"\nmodel = "her',
        "unknown weighting 'fair'; there are",
    ),
    ('title = "Sauce to the filler"', "title = 3", "title: found 3; it must be a text in quotes"),
    (
        'title = "Sauce to the filler"',
        'title = "a',
        "line 2, column 11: it is not valid TOML:",
    ),
    ('title = "Sauce to the filler"', "title = 1\ntitle = 2", "a key is given twice"),
    ('title = "Sauce to the filler"', "title = ", "it is not valid TOML: a value is missing"),
    ('title = "Sauce to the filler"', "t = " + 2000 * "[", "nested too deep"),
    ("[product]", "[[product]]", "product: found a list; it must be a table of keys"),
    ("schema = 1\n", "", "key 'schema' is missing; write 'schema = 1' at the top"),
    ("schema = 1", "schema = 9", "line 1, schema: schema is 9; this program reads 1; the file was"),
    ("schema = 1", 'schema = "1"', "schema is '1'; this program reads 1"),
]


@pytest.mark.parametrize(("old", "new", "sentence"), COMPLAINTS)
def test_complaints_name_the_place_and_what_is_allowed(old, new, sentence):
    said = complaint_of(changed(old, new))
    assert said.startswith("sauce.toml")
    assert sentence in said
    assert "\n" not in said


def test_files_that_cannot_be_read(tmp_path):
    with pytest.raises(CaseError, match=r"none\.toml: there is no such file"):
        load_case(tmp_path / "none.toml")
    with pytest.raises(CaseError, match="it is a folder"):
        load_case(tmp_path)
    (tmp_path / "empty.toml").write_bytes(b" \n")
    with pytest.raises(CaseError, match=r"empty\.toml: the file is empty; a case begins with"):
        load_case(tmp_path / "empty.toml")
    (tmp_path / "latin.toml").write_bytes(b"schema = 1\ntitle = '\xe4'\n")
    with pytest.raises(CaseError, match=r"latin\.toml, line 2: it is not UTF-8 text"):
        load_case(tmp_path / "latin.toml")
    with pytest.raises(CaseError, match="cannot be written"):
        save_case(case_from_text(CASE), tmp_path / "no" / "case.toml")


def test_paths_may_leave_the_folder_only_when_allowed(folder, tmp_path):
    text = changed('"data/sauce.csv"', '"../sauce.csv"')
    (folder / "sauce.toml").write_text(text, "utf-8")
    with pytest.raises(CaseError, match="lies outside the folder of the case"):
        load_case(folder / "sauce.toml")
    assert load_case(folder / "sauce.toml", allow_outside=True).readings[0].file == "../sauce.csv"
    (folder / "link").symlink_to(tmp_path.parent)
    (folder / "sauce.toml").write_text(changed('"data/sauce.csv"', '"link/sauce.csv"'), "utf-8")
    with pytest.raises(CaseError, match="lies outside the folder of the case"):
        load_case(folder / "sauce.toml")


def test_a_byte_order_mark_is_no_mistake(folder):
    (folder / "bom.toml").write_bytes(b"\xef\xbb\xbf" + CASE.encode())
    assert load_case(folder / "bom.toml") == load_case(folder / "sauce.toml")


def test_the_lists_of_kinds_are_those_of_the_blocks():
    with pytest.raises(ValueError, match="part"):
        LineBlock.model_validate({"discharge": [{"part": "x"}]})
    assert complaint_of(changed('part = "pipe"', 'part = "x"')).endswith(", ".join(PART_TAGS))
    assert complaint_of(changed("positive-displacement", "x")).endswith(", ".join(PUMP_TAGS))


def test_defaults_of_the_file_are_those_of_the_engine():
    from rheo.case import line_blocks
    from rheo.line import parts

    checked = 0
    for tag in PART_TAGS:
        name = tag.capitalize()
        block = getattr(line_blocks, f"{name}Block")
        part = getattr(parts, name)
        for key, field in part.__dataclass_fields__.items():
            if field.default is not field.default_factory:
                assert block.model_fields[key].default == field.default, f"{name}.{key}"
                checked += 1
    assert checked > 20
