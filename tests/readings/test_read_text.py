"""Text files as instruments and people write them; every file is made up here."""

from __future__ import annotations

import io
from pathlib import Path

import numpy as np
import pytest

from rheo import Readings, read_readings

RATE, STRESS = [1.5, 20.0, 1300.25], [12.0, 55.5, 1210.0]


def read(text: str, encoding: str = "utf-8", **arguments: object) -> Readings:
    return read_readings(text.encode(encoding), name="made-up.csv", **arguments)


def check(readings: Readings) -> Readings:
    assert readings.rate is not None
    assert readings.stress is not None
    assert readings.rate.tolist() == RATE
    assert readings.stress.tolist() == STRESS
    return readings


def codes(readings: Readings) -> list[str]:
    return [caution.code for caution in readings.cautions]


PLAIN = "Shear rate [1/s],Stress [Pa]\n1.5,12\n20,55.5\n1300.25,1210\n"
COMMA = "Shear rate [1/s];Stress [Pa]\n1,5;12\n20;55,5\n1300,25;1210\n"

DIALECTS = {
    "commas": PLAIN,
    "semicolons": PLAIN.replace(",", ";"),
    "tabs": PLAIN.replace(",", "\t"),
    "bars": PLAIN.replace(",", "|"),
    "blanks": PLAIN.replace(",", "  "),
    "single blanks": "rate [1/s] stress [Pa]\n1.5 12\n20 55.5\n1300.25 1210\n",
    "decimal commas": COMMA,
    "decimal commas and tabs": COMMA.replace(";", "\t"),
    "decimal commas and blanks": COMMA.replace(";", "   "),
    "quoted decimal commas": '"Shear rate [1/s]","Stress [Pa]"\n"1,5","12"\n"20","55,5"\n'
    '"1300,25","1210"\n',
    "thousands": "rate [1/s];stress [Pa]\n1.5;12\n20;55.5\n1,300.25;1,210\n",
    "thousands the German way": "rate [1/s];stress [Pa]\n1,5;12\n20;55,5\n1.300,25;1.210\n",
    "thousands the Swiss way": "rate [1/s];stress [Pa]\n1.5;12\n20;55.5\n1'300.25;1'210\n",
    "thousands with blanks": "rate [1/s];stress [Pa]\n1,5;12\n20;55,5\n1 300,25;1\u202f210\n",
    "lines above": "Made-up run\nOperator: nobody\nCup 3; 20 °C; 2 L\n\n" + PLAIN.replace(",", ";"),
    "comments": "# made up\n// twice\n" + PLAIN.replace("\n20", "\n# a pause\n20") + "! end\n",
    "headings in a comment": "# " + PLAIN,
    "units below": "Shear rate;Stress\n1/s;Pa\n" + PLAIN.replace(",", ";").split("\n", 1)[1],
    "units in brackets below": "Shear rate;Stress\n[1/s];[Pa]\n---;---\n"
    + PLAIN.replace(",", ";").split("\n", 1)[1],
    "symbols and units below": "D;tau\n1/s;Pa\n" + PLAIN.replace(",", ";").split("\n", 1)[1],
    "blank rows": PLAIN.replace("\n", "\n\n").replace("\n\n20", "\n,\n20"),
    "blank rows of separators": PLAIN.replace(",", ";").replace("\n", "\n;;;\n"),
    "old line ends": PLAIN.replace("\n", "\r"),
    "other line ends": PLAIN.replace("\n", "\r\n"),
    "no last line end": PLAIN.rstrip("\n"),
    "other columns": "No.;Sample;Stress [kPa];Shear rate [1/min];Remark\n"
    "1;A;0.012;90;ok\n2;A;0.0555;1200;ok, slow\n3;A;1.21;78015;\n",
    "a heading over two lines": '"Shear\nrate [1/s]","Stress [Pa]"\n' + PLAIN.split("\n", 1)[1],
    "a lone quote": 'Shear rate [1/s];Stress [Pa];Bob 1"\n1.5;12;\n20;55.5;2"\n1300.25;1210;\n',
    "repeated headings": PLAIN.replace("\n1300", "\n" + PLAIN.split("\n")[0] + "\n1300"),
    "exponents": "rate [1/s];stress [Pa]\n1.5E+00;1.2e1\n2e1;5.55E1\n1.30025E+03;1.21e+03\n",
}


@pytest.mark.parametrize("dialect", DIALECTS)
def test_dialects(dialect: str) -> None:
    check(read(DIALECTS[dialect]))


@pytest.mark.parametrize(
    "encoding",
    ["utf-8", "utf-8-sig", "utf-16", "utf-16-le", "utf-16-be", "utf-32", "latin-1", "cp1252"],
)
def test_encodings(encoding: str) -> None:
    text = (
        "Viskosität [mPa·s];Temperatur [°C];Scherrate [1/s]\n1500;25,5;1\n900;25;10\n300;25;100\n"
    )
    readings = read(text, encoding)
    np.testing.assert_allclose(readings.viscosity, [1.5, 0.9, 0.3], rtol=1e-15)
    np.testing.assert_allclose(readings.temperature, [298.65, 298.15, 298.15], rtol=1e-15)


def test_a_path_a_file_or_bytes(tmp_path: Path) -> None:
    path = tmp_path / "made-up.csv"
    path.write_text(PLAIN, "utf-8")
    assert "made-up.csv" in check(read_readings(path)).source
    check(read_readings(str(path)))
    check(read_readings(PLAIN.encode()))
    with path.open("rb") as stream:
        check(read_readings(stream))
    check(read_readings(io.BytesIO(PLAIN.encode()), name="pasted"))


def test_what_was_understood_is_recorded() -> None:
    readings = read(
        "Point;Shear rate [1/s];Viscosity;Temp.\n;;(cP);\n1;1;2000;20\n2;10;900;20\n3;100;300;21\n"
    )
    found = [(c.quantity, c.heading, c.position, c.unit, c.stated) for c in readings.columns]
    assert found == [
        ("", "Point", 1, "", True),
        ("rate", "Shear rate [1/s]", 2, "1/s", True),
        ("viscosity", "Viscosity", 3, "cP", True),
        ("temperature", "Temp.", 4, "°C", False),
    ]
    assert codes(readings) == ["unit-not-stated"]
    assert "temperature in °C" in readings.cautions[0].sentence
    (block,) = readings.table
    assert block.headings == ("Point", "Shear rate [1/s]", "Viscosity", "Temp.")
    assert block.rows[1] == ("2", "10", "900", "20")
    assert block.units == ("", "", "(cP)", "")
    assert block.lines == (3, 4, 5)
    assert readings.lines is not None
    assert readings.lines.tolist() == [3, 4, 5]


def test_the_users_word_wins() -> None:
    text = "Col A;Col B [1/min];Stress [Pa]\n0.012;90;1\n0.0555;1200;2\n1.21;78015;3\n"
    readings = read(
        text, columns={"rate": "Col B [1/min]", "stress": "col a"}, units={"stress": "kPa"}
    )
    check(readings)
    assert [c.mapped for c in readings.columns if c.quantity] == [True, True]
    check(read(text, columns={"rate": 2, "stress": 1}, units={"stress": "kPa"}))
    check(read(text, columns={"rate": "Col B", "stress": 1}, units={"stress": "kPa"}))
    swapped = read(PLAIN, columns={"rate": 2, "stress": 1}, units={"rate": "1/s", "stress": "Pa"})
    assert swapped.rate is not None
    assert swapped.rate.tolist() == STRESS
    without = read(
        "rate [1/s];stress [Pa];viscosity [Pa.s]\n1;2;9\n2;3;9\n3;4;9\n", columns={"stress": None}
    )
    assert without.stress is None
    assert without.present == ("rate", "viscosity", "branch")


def test_numbers_without_headings_by_their_place() -> None:
    readings = check(read(PLAIN.split("\n", 1)[1], columns={"rate": 1, "stress": 2}))
    assert codes(readings) == ["unit-not-stated"]


def test_decimal_mark_by_the_users_word() -> None:
    text = "rate [1/s];stress [Pa]\n1,234;10\n2,345;20\n3,456;30\n"
    assert read(text, decimal=",").rate.tolist() == [1.234, 2.345, 3.456]
    assert read(text, decimal=".").rate.tolist() == [1234.0, 2345.0, 3456.0]
    assert codes(read(text.replace(",", "."))) == ["decimal-mark"]


BLOCKS = (
    "Run A\nrate [1/s];stress [Pa]\n1;10\n2;20\n3;30\n\n\nRun B\ntemperature: 50 °C\n"
    "stress [kPa];rate [1/s]\n0.02;1\n0.03;2\n"
)


def test_blocks_are_joined_with_their_titles() -> None:
    readings = read(BLOCKS)
    assert readings.block is not None
    assert readings.block.tolist() == ["Run A"] * 3 + ["Run B"] * 2
    np.testing.assert_allclose(readings.stress, [10, 20, 30, 20, 30], rtol=1e-15)
    assert readings.lines.tolist() == [3, 4, 5, 11, 12]
    assert [block.label for block in readings.table] == ["Run A", "Run B"]
    # Only one block says its temperature, so that none is known for all.
    assert readings.temperature is None


def test_blocks_are_picked_by_title_or_number() -> None:
    text = BLOCKS + "0.05;3\n"
    for block in ("Run B", 2, [2], ["Run B"]):
        readings = read(text, block=block)
        np.testing.assert_allclose(readings.stress, [20, 30, 50], rtol=1e-15)
        np.testing.assert_allclose(readings.temperature, 323.15, rtol=1e-15)
    assert len(read(text, block=["Run B", 1])) == 6


def test_titles_between_rows_part_blocks() -> None:
    readings = read("rate;stress\n1;10\n2;20\nInterval 2\ntemperature: 30 °C\n2;21\n1;11\n")
    assert readings.block.tolist() == ["1", "1", "Interval 2", "Interval 2"]
    assert readings.stress.tolist() == [10, 20, 21, 11]


def test_tables_side_by_side() -> None:
    readings = read(
        "rate [1/s];stress [Pa];;rate [1/s];stress [Pa]\n1;10;;1;30\n2;20;;2;40\n3;30;;;\n"
    )
    assert readings.rate.tolist() == [1, 2, 3, 1, 2]
    assert readings.stress.tolist() == [10, 20, 30, 30, 40]
    assert readings.block.tolist() == ["1", "1", "1", "2", "2"]


def test_blocks_of_another_kind_are_left_out_with_a_caution() -> None:
    readings = read(
        "Curve\nrate [1/s];stress [Pa]\n1;10\n2;20\n3;30\n\nCheck\nspeed [rpm];torque [mN.m]\n1;2\n"
    )
    assert readings.rate.tolist() == [1, 2, 3]
    assert codes(readings) == ["blocks-left-out"]
    assert "Blocks Check hold other quantities than block Curve" in readings.cautions[0].sentence


def test_rows_at_rest_and_below_the_table_are_said_to_be_left_out() -> None:
    readings = read(
        "rate [1/s];stress [Pa];viscosity [Pa.s]\n0;0;\n1;10;10\n2;18;9\n3;0;0\n4;30;7,5\n\n"
        "Mean;19,3;8\nEnd of file\n"
    )
    assert readings.rate.tolist() == [1, 2, 4]
    assert readings.viscosity.tolist() == [10, 9, 7.5]
    assert codes(readings) == ["below-the-table", "at-rest"]
    assert "Line 8 below the table holds no full reading" in readings.cautions[0].sentence
    assert "Lines 2, 5 are left out" in readings.cautions[1].sentence
    assert len(readings.table[0].rows) == 7


def test_a_column_that_is_not_needed_may_be_bad() -> None:
    readings = read(
        "rate [1/s];stress [Pa];viscosity [Pa.s];torque [foo];temp [°C]\n"
        "1;10;-;1;20\n2;20;10;1;x\n3;30;10;1;20\n"
    )
    assert readings.present == ("rate", "stress", "branch")
    assert codes(readings) == ["column-not-used"] * 3
    said = [caution.sentence for caution in readings.cautions]
    assert said[0].startswith("The viscosity is not used: '-' is not a number")
    assert said[1].startswith("The torque is not used: unknown unit 'foo'")
    assert said[2].startswith("The temperature is not used: 'x' is not a number")
    assert readings.cautions[2].place == "made-up.csv, line 3, column 'temp [°C]'"


def test_two_columns_of_one_quantity() -> None:
    ranked = read("set speed [rpm];speed [rpm];torque [N.m]\n1;1.1;1\n2;2.1;2\n3;3.1;3\n")
    np.testing.assert_allclose(ranked.angular_speed * 30 / np.pi, [1.1, 2.1, 3.1], rtol=1e-15)
    assert codes(ranked) == []
    same = read("rate [1/s];shear rate [1/s];stress [Pa]\n1;1.1;1\n2;2.1;2\n3;3.1;3\n")
    assert same.rate.tolist() == [1, 2, 3]
    assert codes(same) == ["several-columns"]


def test_branches_from_a_column_or_from_the_order() -> None:
    named = read("rate;stress;sweep\n1;1;auf\n2;2;UP\n2;2;hold\n1;1;down\n")
    assert named.branch.tolist() == ["up", "up", "hold", "down"]
    ordered = read("rate;stress\n1;1\n2;2\n3;3\n2;2\n1;1\n")
    assert ordered.branch.tolist() == ["up", "up", "up", "down", "down"]
    unknown = read("rate;stress;sweep\n1;1;left\n2;2;up\n3;3;up\n")
    assert unknown.branch.tolist() == ["up", "up", "up"]
    assert "'left' is no branch of a sweep; write up, down or hold" in unknown.cautions[0].sentence


def test_clock_times() -> None:
    readings = read("time [hh:mm:ss];rate;stress\n0:00:01;1;10\n0:01:00;2;20\n1:00:00;3;30\n")
    assert readings.time.tolist() == [1, 60, 3600]
    dated = read(
        "time;rate;stress\n2024-01-01 23:59:30;1;1\n2024-01-02 00:00:30;2;2\n"
        "2024-01-02 00:01:30;3;3\n"
    )
    assert dated.time.tolist() == [0, 60, 120]


def test_a_share_of_full_scale_that_is_no_percentage() -> None:
    readings = read("angular_speed;torque_fraction\n1,5;0,1\n2;0,2\n3;0,3\n")
    assert readings.torque_fraction.tolist() == [0.1, 0.2, 0.3]
    assert readings.angular_speed.tolist() == [1.5, 2.0, 3.0]
    assert readings.cautions == ()


def test_percentages_that_may_be_shares() -> None:
    readings = read("speed [rpm];torque [%]\n1;0.1\n2;0.2\n3;1.05\n")
    np.testing.assert_allclose(readings.torque_fraction, [1e-3, 2e-3, 1.05e-2], rtol=1e-15)
    assert codes(readings) == ["share-or-percent"]
    shares = read("speed [rpm];torque [%]\n1;0.1\n2;0.2\n3;1.05\n", units={"torque_fraction": "1"})
    assert shares.torque_fraction.tolist() == [0.1, 0.2, 1.05]
    assert codes(shares) == []
    assert codes(read("speed [rpm];torque [%]\n1;0.1\n2;0.2\n3;40\n")) == []


def test_percent_signs_in_the_cells() -> None:
    readings = read("speed [rpm];torque [%]\n1;10 %\n2;20%\n3;30,5\n")
    np.testing.assert_allclose(readings.torque_fraction, [0.1, 0.2, 0.305], rtol=1e-15)
