"""A case with some values changed is checked as a file would be."""

import pytest

from rheo.case import case_from_text, changed
from rheo.errors import CaseError

CASE = case_from_text("""
schema = 1
title = "one"
product = { density = "1100 kg/m3", temperature = "20 °C" }
duty = { flow = "5 m3/h" }
line.discharge = [
    { part = "pipe", length = "30 m", size = "ISO 2037 51" },
    { part = "fitting", loss_coefficient = 0.9 },
]
[[readings]]
text = "Rate [1/s],Stress [Pa]"
""")


def test_values_change_and_the_case_given_stays():
    new = changed(
        CASE,
        {
            "title": "two",
            "duty.flow": "6 m3/h",
            "line.discharge.0.length": "40 m",
            "limits.max_velocity": "2 m/s",
            "product.temperature": None,
            "line.discharge.1": None,
        },
    )
    assert (new.title, CASE.title) == ("two", "one")
    assert float(new.duty.flow) == pytest.approx(6 / 3600)
    assert float(new.line.discharge[0].length) == 40
    assert len(new.line.discharge) == 1
    assert float(new.limits.max_velocity) == 2
    assert new.product.temperature is None
    assert float(CASE.line.discharge[0].length) == 30
    assert len(CASE.line.discharge) == 2


def test_a_part_can_be_exchanged():
    part = {"part": "pipe", "length": "1 m", "inside_diameter": "40 mm"}
    assert float(changed(CASE, {"line.discharge.1": part}).line.discharge[1].length) == 1


def test_no_change_is_the_same_case():
    assert changed(CASE, {}) == CASE
    assert changed(CASE, {"title": "one"}) == CASE


@pytest.mark.parametrize(
    ("path", "value", "sentence"),
    [
        ("duty.flow", "0 m3/h", "duty.flow: found '0 m3/h'; it must be above 0"),
        ("duty.flaw", "1 m3/h", "duty.flaw: unknown key 'flaw' (did you mean 'flow'?)"),
        ("duty.flow", None, "duty.flow: key 'flow' is missing"),
        ("line.discharge.7.length", "1 m", "line.discharge (entry 8): there are only 2 entries"),
        ("line.discharge.x", "1 m", "line.discharge.x: there is no such key to change"),
        ("title.0", "1 m", "title (entry 1): there is no such key to change"),
    ],
)
def test_complaints(path, value, sentence):
    with pytest.raises(CaseError) as caught:
        changed(CASE, {path: value})
    assert sentence in str(caught.value)
