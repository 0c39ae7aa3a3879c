"""Damaged case files end in a case or in one plain sentence, never in anything else."""

from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from rheo.case import case_from_text, case_text
from rheo.errors import CaseError

SAMPLES = [
    path.read_text("utf-8")
    for path in sorted((Path(__file__).parents[2] / "sample_data").glob("*.toml"))
]
PIECES = (
    *("", "'", '"', '"""', "[", "]", "[[", "{", "}", "=", ".", ",", "#", "\n", "\0", "\r\n", "\t"),
    *("-", "1e999", "nan", "-inf", "0", "true", "1979-05-27", "[[readings]]\n", "line.x = 1\n"),
    *("\u202e", "\U0001f600", "0x1F", "'1 m'", "'-1 m'", "[]", "{}", "schema", 60 * "["),
)


def outcome(text):
    try:
        return case_from_text(text, "damaged.toml")
    except CaseError as error:
        return error


def ends_plainly(text):
    found = outcome(text)
    if not isinstance(found, CaseError):
        assert case_from_text(case_text(found)) == found
        return
    said = str(found)
    assert said.startswith("damaged.toml")
    assert "\n" not in said
    assert "Error" not in said
    assert len(said) < 1500


@settings(deadline=None, max_examples=400, derandomize=True)
@given(st.data())
def test_pieces_put_in_and_taken_out(data):
    text = data.draw(st.sampled_from(SAMPLES))
    for _ in range(data.draw(st.integers(1, 3))):
        at = data.draw(st.integers(0, len(text)))
        gone = data.draw(st.integers(0, 12))
        text = text[:at] + data.draw(st.sampled_from(PIECES)) + text[at + gone :]
    ends_plainly(text)


@settings(deadline=None, max_examples=200, derandomize=True)
@given(st.data())
def test_a_value_exchanged_for_another(data):
    lines = data.draw(st.sampled_from(SAMPLES)).splitlines()
    number = data.draw(st.sampled_from([i for i, line in enumerate(lines) if " = " in line]))
    key = lines[number].partition(" = ")[0]
    lines[number] = f"{key} = {data.draw(st.sampled_from([p for p in PIECES if p.strip()]))}"
    ends_plainly("\n".join(lines))


@settings(deadline=None, max_examples=100, derandomize=True)
@given(st.text(max_size=200))
def test_any_text(text):
    ends_plainly(text)


@pytest.mark.parametrize("text", SAMPLES)
def test_the_samples_are_sound(text):
    assert case_from_text(case_text(case_from_text(text))) == case_from_text(text)
