"""Numbers as files write them."""

from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from rheo.errors import ReadingsError
from rheo.readings.numerals import (
    find_decimal_mark,
    looks_numeric,
    parse_clock,
    parse_number,
)


@pytest.mark.parametrize(
    ("text", "with_point", "with_comma"),
    [
        ("12", 12.0, 12.0),
        ("1.5", 1.5, None),
        ("1,5", None, 1.5),
        ("1,234", 1234.0, 1.234),
        ("1.234", 1.234, 1234.0),
        ("0,123", None, 0.123),
        ("1,234.5", 1234.5, None),
        ("1.234,5", None, 1234.5),
        ("1 234,5", None, 1234.5),
        ("1\u00a0234.5", 1234.5, None),
        ("1\u202f234\u202f567", 1234567.0, 1234567.0),
        ("1'234.5", 1234.5, None),
        ("1’234", 1234.0, 1234.0),
        ("−3.5", -3.5, None),
        ("+.5", 0.5, None),
        ("5.", 5.0, None),
        ("1.5E-03", 0.0015, None),
        ("1,5e3", None, 1500.0),
        ("1,23,456", None, None),
        ("12,34.5", None, None),
        ("1.2.3", None, None),
        ("1 2", None, None),
        ("abc", None, None),
        ("5 rpm", None, None),
        ("0x10", None, None),
        ("1_000", None, None),
        ("٣", None, None),
        ("", None, None),
        ("-", None, None),
        (3.5, 3.5, 3.5),
    ],
)
def test_both_marks(text: str, with_point: float | None, with_comma: float | None) -> None:
    assert parse_number(text, ".") == with_point
    assert parse_number(text, ",") == with_comma
    assert looks_numeric(text) == (with_point is not None or with_comma is not None)


@pytest.mark.parametrize("text", ["nan", "NaN", "#N/A", "#DIV/0!", "-inf", "Infinity", "1e999"])
def test_what_is_not_finite_is_no_plain_text(text: str) -> None:
    number = parse_number(text, ".")
    assert number is not None
    assert not math.isfinite(number)
    assert looks_numeric(text)


@given(st.floats(-1e15, 1e15), st.sampled_from(["", ",", ".", "'", " ", "\u202f"]))
@settings(deadline=None, max_examples=200, derandomize=True)
def test_written_numbers_are_read_back(value: float, thousands: str) -> None:
    text = f"{value:,.6f}"
    expected = float(f"{value:.6f}")
    for decimal in ".,":
        if thousands == decimal:
            continue
        written = text.translate({ord(","): thousands, ord("."): decimal})
        assert parse_number(written, decimal) == expected


@pytest.mark.parametrize(
    ("text", "seconds"),
    [
        ("02:03", 123.0),
        ("1:02:03", 3723.0),
        ("0:00:01.5", 1.5),
        ("0:00:01,5", 1.5),
        ("26:00:00", 93600.0),
        ("1.5", None),
        ("1:2", None),
        ("a:b", None),
        ("2024-02-30 10:00:00", None),
    ],
)
def test_clock_times(text: str, seconds: float | None) -> None:
    assert parse_clock(text) == seconds


def test_dates_keep_the_order_past_midnight() -> None:
    before, after = parse_clock("2024-01-01T23:59:30"), parse_clock("2024-01-02 00:00:30")
    assert before is not None
    assert after is not None
    assert after - before == 60.0


def mark(*texts: str) -> tuple[str, bool]:
    found = find_decimal_mark([(text, f"line {n}") for n, text in enumerate(texts, 1)], "f.csv")
    return found.mark, found.assumed


def test_decimal_mark_is_told_by_any_number_that_proves_it() -> None:
    assert mark("1,234", "2.5") == (".", False)
    assert mark("1.234", "2,5") == (",", False)
    assert mark("1.234", "0,123") == (",", False)
    assert mark("1,234,567", "12") == (".", False)
    assert mark("1.234.567", "12") == (",", False)
    assert mark("1,234", "1234,567") == (",", False)
    assert mark("10", "20") == (".", False)
    assert mark("1.234", "10") == (".", True)


def test_decimal_mark_that_cannot_be_told_is_asked_for() -> None:
    with pytest.raises(ReadingsError, match=r"f.csv: '1,234' could have a decimal comma or a thou"):
        mark("1,234", "10")
    with pytest.raises(
        ReadingsError,
        match=r"f.csv: '2\.5' has a decimal point \(line 1\) and '3,5' a decimal comma \(line 2\)",
    ):
        mark("2.5", "3,5")
