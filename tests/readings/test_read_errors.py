"""Bad files: one plain sentence that names the place, what was found and what is allowed."""

from __future__ import annotations

import os
import re
from pathlib import Path

import pytest

import rheo
from rheo import InputError, read_readings
from rheo.readings.file_bytes import LARGEST_FILE

HEAD = "rate [1/s];stress [Pa]\n"
GOOD = HEAD + "1;10\n2;20\n3;30\n"
GIVE = "give a CSV, TXT, TSV, XLSX, XLS or ODS file"
NEEDED = (
    "there must be shear rate and shear stress (or viscosity), speed and torque, or flow and "
    "pressure drop"
)

SENTENCES = {
    "text in a number column": (
        HEAD + "1;10\nabc;20\n3;30\n",
        "bad.csv, line 3, column 'rate [1/s]': 'abc' is not a number; write a number such as 12.5",
    ),
    "text in the last row": (
        HEAD + "1;10\n2;20\n3;abc\n",
        "bad.csv, line 4, column 'stress [Pa]': 'abc' is not a number; write a number such as 12.5",
    ),
    "text in a file with decimal commas": (
        HEAD + "1;10,5\n2;20,5 Pa\n3;30\n",
        "bad.csv, line 3, column 'stress [Pa]': '20,5 Pa' is not a number; write a number such as "
        "12,5",
    ),
    "an empty cell": (
        HEAD + "1;10\n2;\n3;30\n",
        "bad.csv, line 3, column 'stress [Pa]': the cell is empty; write a number such as 12.5",
    ),
    "a short row": (
        HEAD + "1;10\n2\n3;30\n",
        "bad.csv, line 3, column 'stress [Pa]': the cell is empty; write a number such as 12.5",
    ),
    "a negative rate": (
        HEAD + "1;10\n-2;20\n3;30\n",
        "bad.csv, line 3, column 'rate [1/s]': the shear rate is -2 1/s; it must be above 0",
    ),
    "a negative stress": (
        HEAD + "1;10\n2;-20\n3;30\n",
        "bad.csv, line 3, column 'stress [Pa]': the shear stress is -20 Pa; it must be above 0",
    ),
    "NaN": (
        HEAD + "1;10\n2;NaN\n3;30\n",
        "bad.csv, line 3, column 'stress [Pa]': 'NaN' is not a finite number; write one such as "
        "12.5",
    ),
    "infinity": (
        HEAD + "1;10\n2;inf\n3;30\n",
        "bad.csv, line 3, column 'stress [Pa]': 'inf' is not a finite number; write one such as "
        "12.5",
    ),
    "a number too large to hold": (
        HEAD + "1;10\n2;1e999\n3;30\n",
        "bad.csv, line 3, column 'stress [Pa]': '1e999' is not a finite number; write one such as "
        "12.5",
    ),
    "a number that is a slip": (
        HEAD + "1;10\n2;1e200\n3;30\n",
        "bad.csv, line 3, column 'stress [Pa]': the shear stress is 10²⁰⁰ Pa; it must be between "
        "10⁻²⁵ and 10²⁵ in SI",
    ),
    "two points": (HEAD + "1;10\n2;20\n", "bad.csv: it holds 2 readings; a flow curve needs at "),
    "one point": (HEAD + "1;10\n0;0\n", "bad.csv: it holds 1 reading; a flow curve needs at least"),
    "only headings": (HEAD, f"bad.csv: no table of numbers was found; {NEEDED}"),
    "only words": ("hello\nworld\n", f"bad.csv: no table of numbers was found; {NEEDED}"),
    "an unknown unit": (
        GOOD.replace("Pa", "foo"),
        "bad.csv, column 'stress [foo]': unknown unit 'foo'; use one such as Pa, kPa, bar, psi",
    ),
    "a unit of something else": (
        GOOD.replace("Pa", "mm"),
        "bad.csv, column 'stress [mm]': unit 'mm' does not measure what is wanted here; use one",
    ),
    "a unit that could be two": (
        "speed [1/s];torque [N.m]\n1;1\n2;2\n3;3\n",
        "bad.csv, column 'speed [1/s]': unit '1/s' leaves open what is meant for a speed; write "
        "rev/s or rad/s",
    ),
    "headings that mean nothing": (
        GOOD.replace("rate", "foo").replace("stress", "bar"),
        f"bad.csv: no heading was understood of the headings found ('foo [1/s]', 'bar [Pa]'); "
        f"{NEEDED}, so say which column is which",
    ),
    "one heading that means something": (
        GOOD.replace("stress", "bar"),
        f"bad.csv: only shear rate was understood of the headings found ('rate [1/s]', 'bar [Pa]')"
        f"; {NEEDED}",
    ),
    "quantities that do not go together": (
        "rate [1/s];temperature [C]\n1;1\n2;2\n3;3\n",
        f"bad.csv: the columns found are shear rate ('rate [1/s]'), temperature ('temperature "
        f"[C]'); {NEEDED}",
    ),
    "no headings": ("1;10\n2;20\n3;30\n", "bad.csv: no heading was understood of the headings fou"),
    "decimal commas between commas": (
        "rate [1/s],stress [Pa]\n1,5,20,3\n2,5,30,1\n3,1,40,1\n",
        "bad.csv, line 2: there are 4 values for 2 headings; there must be as many, parted by "
        "semicolons or tabs if commas are decimal marks",
    ),
    "headings of several words parted by blanks": (
        "Shear rate Stress Temp\n1 2 3\n2 3 4\n3 4 5\n",
        "bad.csv, line 2: there are 3 values for 4 headings; there must be as many",
    ),
    "two decimal marks": (
        HEAD + "1,5;10\n2.5;20\n3;30\n",
        "bad.csv: '2.5' has a decimal point (bad.csv, line 3, column 'rate [1/s]') and '1,5' a "
        "decimal comma (bad.csv, line 2, column 'rate [1/s]'); use one or the other",
    ),
    "commas that could be two things": (
        HEAD + "1,500;10\n2,500;20\n3,500;30\n",
        "bad.csv: '1,500' could have a decimal comma or a thousands separator, and no other number "
        "tells which; say decimal=',' or decimal='.'",
    ),
    "a marked line with a slip": (
        "# geometry: tube, diametre 10 mm, length 1 m\n" + GOOD,
        "bad.csv, line 1: unknown dimension 'diametre' of tube; it takes diameter, length",
    ),
}


@pytest.mark.parametrize("kind", SENTENCES)
def test_sentence(kind: str) -> None:
    text, sentence = SENTENCES[kind]
    with pytest.raises(InputError, match="^" + re.escape(sentence)) as caught:
        read_readings(text.encode(), name="bad.csv")
    assert "\n" not in str(caught.value)


@pytest.mark.parametrize(
    ("data", "sentence"),
    [
        (b"", f"bad.csv: the file is empty; {GIVE} with readings"),
        (b" \r\n\t\n", "bad.csv: the file is empty"),
        (b"\xef\xbb\xbf", "bad.csv: the file is empty"),
        (b"\xff\xfe", "bad.csv: the file is empty"),
        (bytes(5000), "bad.csv: the file is empty"),
        (bytes(range(256)) * 4, "bad.csv: its content is no text and no workbook; " + GIVE),
        (b"%PDF-1.4\n%\xe2\xe3\xcf\xd3\x00\x01", "bad.csv: its content is no text and no workbook"),
        (b"\xff\xfeabc", "bad.csv: its content is no text and no workbook"),
        (b"\x89PNG\r\n\x1a\n" + bytes(50), "bad.csv: its content is no text and no workbook"),
        (b"x" * (LARGEST_FILE + 1), "bad.csv: the file has 20.0 MB; at most 20 MB are allowed"),
        (b"1;2\n" * 100_001, "bad.csv: it has 100002 lines; at most 100000 are allowed"),
        (b"a" * 30_000, "bad.csv, line 1: the line has 30000 signs; at most 20000 are allowed"),
        (b"1;" * 1_001, "bad.csv, line 1: the line has 1002 columns; at most 1000 are allowed"),
        (
            (HEAD + "1;2\n2;3\n3;4\n\n").encode() * 201,
            "bad.csv: it has 201 rows of headings; at most 200 tables are allowed",
        ),
    ],
    ids=lambda value: value[:30] if isinstance(value, str) else None,
)
def test_content(data: bytes, sentence: str) -> None:
    with pytest.raises(InputError, match="^" + re.escape(sentence)):
        read_readings(data, name="bad.csv")


def test_paths(tmp_path: Path) -> None:
    missing = tmp_path / "missing.csv"
    with pytest.raises(InputError, match=rf"missing.csv: there is no such file; {GIVE}$"):
        read_readings(missing)
    with pytest.raises(InputError, match=rf": it is a folder; {GIVE}$"):
        read_readings(tmp_path)
    with pytest.raises(InputError, match="there is no such file"):
        read_readings("bad\0name.csv")
    with pytest.raises(InputError, match="there is no such file"):
        read_readings(tmp_path / "missing.csv" / "deeper.csv")
    with pytest.raises(InputError, match=r"x: it cannot be opened \(file name too long\)"):
        read_readings("x" * 5000, name="x")
    huge = tmp_path / "huge.csv"
    with huge.open("wb") as stream:
        stream.truncate(3 * 2**30)
    with pytest.raises(
        InputError, match=r"huge.csv: the file has 3072 MB; at most 20 MB are allow"
    ):
        read_readings(huge)
    pipe = tmp_path / "pipe"
    os.mkfifo(pipe)
    with pytest.raises(InputError, match=f"pipe: it is no ordinary file; {GIVE}$"):
        read_readings(pipe)
    good = tmp_path / "good.csv"
    good.write_text(GOOD)
    with good.open() as text, pytest.raises(InputError, match="it was opened as text; open it in"):
        read_readings(text)


@pytest.mark.parametrize(
    ("arguments", "sentence"),
    [
        (
            {"columns": {"rate": "Rte"}},
            "a.csv, column for rate: there is no column 'Rte' (did you mean 'rate [1/s]'?); the "
            "headings are 'rate [1/s]', 'stress [Pa]'",
        ),
        (
            {"columns": {"rate": 3}},
            "a.csv, column for rate: there is no column 3; the columns are numbered 1 to 2",
        ),
        ({"columns": {"rate": 0}}, "a.csv, column for rate: there is no column 0; the columns"),
        (
            {"columns": {"stres": "rate"}},
            "a.csv, columns: unknown quantity 'stres' (did you mean 'stress'",
        ),
        (
            {"columns": {"rate": 1.5}},
            "a.csv, column for rate: 1.5 is no column; give its heading, or its number counted",
        ),
        ({"units": {"foo": "Pa"}}, "a.csv, units: unknown quantity 'foo'"),
        ({"units": {"stress": "mm"}}, "a.csv, unit of stress: unit 'mm' does not measure what is"),
        ({"decimal": ";"}, "a.csv: decimal is ';'; it must be '.' or ','"),
        ({"sheet": "Run"}, "a.csv: it is a text file, which has no sheet 'Run'; leave the sheet"),
        ({"block": 2}, "a.csv: there is no block '2'; there are '1'"),
        ({"block": []}, "a.csv: no block is chosen; choose at least one"),
        ({"geometry": "tub, length 1 m"}, "geometry: unknown geometry 'tub'"),
        ({"geometry": "tube, length 1 m"}, "geometry: dimension 'diameter' is missing; it takes"),
        ({"full_scale_torque": -1.0}, "a.csv: full_scale_torque is -1; it must be above 0"),
    ],
)
def test_arguments(arguments: dict[str, object], sentence: str) -> None:
    with pytest.raises(InputError, match="^" + re.escape(sentence)):
        read_readings(GOOD.encode(), name="a.csv", **arguments)


def test_a_hostile_name_is_only_shown() -> None:
    with pytest.raises(InputError) as caught:
        read_readings(b"", name="../../etc\n\x1b[31m/<script>" + "x" * 500)
    assert len(str(caught.value)) < 150
    assert str(caught.value).isprintable()
    assert str(caught.value).startswith("../../etc ?[31m/<script>xxx")


def test_all_errors_are_of_the_one_family() -> None:
    assert issubclass(rheo.errors.ReadingsError, InputError)
    assert issubclass(rheo.errors.UnitError, InputError)
