"""Solids in readings: headings, units, by volume or by mass, lines above the table."""

import numpy as np
import pytest

import rheo
from rheo.errors import InputError, ReadingsError
from rheo.readings.headings import meaning
from rheo.readings.solids import basis, in_words, read_share


def table(heading, *shares):
    rows = [f"{rate},{3 * rate},{share}" for share in shares for rate in (1, 10, 100)]
    text = "\n".join([f"Shear rate [1/s],Shear stress [Pa],{heading}", *rows])
    return rheo.read_readings(text.encode(), name="slurry.csv")


@pytest.mark.parametrize(
    ("heading", "written", "fraction", "by"),
    [
        ("Solids [%]", "25", 0.25, ""),
        ("Solids fraction", "0.25", 0.25, ""),
        ("Concentration (wt%)", "46", 0.46, "mass"),
        ("Solids [-]", "0.25", 0.25, ""),
        ("Solids content (% w/w)", "46 %", 0.46, "mass"),
        ("Volume fraction", "0.18", 0.18, "volume"),
        ("Volume fraction [%]", "18", 0.18, "volume"),
        ("Solids by weight [%]", "46", 0.46, "mass"),
        ("φ [-]", "0.18", 0.18, ""),
        ("Cw [%]", "46", 0.46, "mass"),
        ("Cv [%]", "18", 0.18, "volume"),
        ("vol% solids", "18", 0.18, "volume"),
        ("Feststoffgehalt [Gew.-%]", "46", 0.46, "mass"),
        ("Solids [v/v]", "0.18", 0.18, "volume"),
        ("Dry matter [% by mass]", "46", 0.46, "mass"),
    ],
)
def test_a_column_of_solids_is_found_by_its_heading(heading, written, fraction, by):
    readings = table(heading, written)
    assert readings.solids_fraction == pytest.approx(np.full(3, fraction))
    assert readings.solids_basis == by
    assert readings.flow_curve().solids_fraction == pytest.approx(np.full(3, fraction))
    assert readings.cautions == ()


def test_the_user_says_column_and_unit():
    text = b"Shear rate [1/s],Shear stress [Pa],Lot\n1,3,18\n10,9,18\n100,30,18\n"
    readings = rheo.read_readings(
        text, columns={"solids_fraction": "Lot"}, units={"solids_fraction": "vol%"}
    )
    assert readings.solids_fraction == pytest.approx(np.full(3, 0.18))
    assert readings.solids_basis == "volume"


def test_solids_without_a_unit_are_in_percent_and_said_to_be():
    readings = table("Solids", "20", "25")
    assert readings.solids_fraction == pytest.approx(np.repeat([0.20, 0.25], 3))
    (said,) = readings.cautions
    assert said.code == "unit-not-stated"
    assert "solids fraction in %" in said.sentence
    codes = [one.code for one in table("Solids [%]", "0.20", "0.25").cautions]
    assert codes == ["share-or-percent"]


@pytest.mark.parametrize("written", ["0", "-3", "100", "140"])
def test_a_share_outside_its_range_is_not_used_and_said_to_be(written):
    readings = table("Solids [%]", written)
    assert readings.solids_fraction is None
    (said,) = readings.cautions
    assert said.code == "column-not-used"
    assert "above 0 and below 1, or 100 %" in said.sentence
    assert "line 2" in said.place


def test_a_mass_in_a_volume_is_no_share():
    readings = table("Concentration [g/L]", "250")
    assert readings.solids_fraction is None
    assert "write a share such as wt% or vol%" in readings.cautions[0].sentence


def test_other_headings_keep_their_meaning():
    assert meaning("Torque [%]").quantity.key == "torque_fraction"
    assert meaning("Torque [-]").quantity.key == "torque"
    assert meaning("Density of solids") is None


def test_solids_may_be_stated_once_above_each_table():
    block = "Shear rate [1/s],Shear stress [Pa]\n1,{0}\n10,{1}\n100,{2}\n"
    text = (
        "# solids_fraction: 20 wt%\n" + block.format(1, 5, 20)
        + "\n# solids_fraction: 25 wt%\n" + block.format(2, 9, 33)
    )  # fmt: skip
    readings = rheo.read_readings(text.encode())
    assert readings.solids_fraction == pytest.approx(np.repeat([0.20, 0.25], 3))
    assert readings.solids_basis == "mass"
    with pytest.raises(ReadingsError, match="by mass in one block and by volume in another"):
        rheo.read_readings(text.replace("25 wt%", "25 vol%").encode())
    with pytest.raises(InputError, match=r"line 1, solids_fraction: it is 120 %; it must be above"):
        rheo.read_readings(text.replace("20 wt%", "120 %").encode(), name="slurry.csv")


@pytest.mark.parametrize(
    ("text", "share", "by"),
    [
        *(("25 %", 0.25, ""), ("46 wt%", 0.46, "mass"), ("18 vol%", 0.18, "volume")),
        *(("0.25", 0.25, ""), ("25% by weight", 0.25, "mass"), ("0.3 w/w", 0.3, "mass")),
    ],
)
def test_a_share_is_read_from_a_text(text, share, by):
    assert read_share(text) == (pytest.approx(share), by)


def test_a_text_that_is_no_share_is_refused():
    for text in ("", "much", "25 bar", "wt%"):
        with pytest.raises(ReadingsError, match="is no share of solids; write it like '25 %'"):
            read_share(text)
    with pytest.raises(ReadingsError, match="mass in a volume"):
        read_share("250 g/L")


def test_a_share_in_words():
    assert in_words(0.25) == "25 %"
    assert in_words(0.4567, "mass") == "45.67 % by mass"
    assert basis("%", "Solids by volume, mass of sample") == ""


def test_a_column_in_python_is_checked():
    with pytest.raises(InputError, match=r"solids fraction: point 2 is 25; it must be above 0 and"):
        rheo.Readings(rate=[1.0, 2.0], stress=[1.0, 2.0], solids_fraction=[0.2, 25.0])
    with pytest.raises(InputError, match=r"solids fraction: point 1 is 1; it must be above 0 and"):
        rheo.FlowCurve([1.0], [1.0], solids_fraction=1.0)


def test_sweeps_of_two_contents_are_two_sweeps():
    """The thinner sweep after the thicker one falls nowhere within one sweep."""
    readings = table("Solids [%]", "25", "20")
    assert [one.code for one in rheo.screen(readings)] == []
