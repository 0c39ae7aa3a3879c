"""Numbers carry the digits that their doubt allows."""

from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from rheo.errors import InputError
from rheo.report import display
from rheo.report.numbers import exact, number, with_doubt, with_interval


@pytest.mark.parametrize(
    ("value", "doubt", "expected"),
    [
        (41.237, 5.3, "41 ± 5 kPa"),
        (41.237, 0.53, "41.2 ± 0.5 kPa"),
        (41.237, 1.3, "41.2 ± 1.3 kPa"),
        (41.237, 0.0996, "41.24 ± 0.10 kPa"),
        (41.237, 1.96, "41 ± 2 kPa"),
        (41.237, 0.96, "41.2 ± 1.0 kPa"),
        (-3.14159, 0.02, "\u22123.14 ± 0.02 kPa"),
        (45390.0, 2300.0, "45\u202f000 ± 2000 kPa"),
        (0.000123, 0.000004, "(1.23 ± 0.04) × 10⁻⁴ kPa"),
        (3.0e9, 4.0e8, "(3.0 ± 0.4) × 10⁹ kPa"),
        (2.0, 30.0, "0 ± 30 kPa"),
        (41.237, 0.0, "41.2 kPa"),
        (41.237, math.nan, "41.2 kPa"),
        (math.nan, 1.0, "not known"),
    ],
)
def test_doubt_sets_the_digits(value: float, doubt: float, expected: str) -> None:
    assert with_doubt(value, doubt, "kPa") == expected


@pytest.mark.parametrize(
    ("ends", "expected"),
    [
        ((41.237, 36.0, 46.6), "41 ± 5 bar"),
        ((41.237, 38.0, 52.0), "41 bar (38 to 52 bar)"),
        ((1.5, 1.5, 1.5), "1.50 bar"),
        ((0.5, 0.6, 0.9), "0.50 bar (0.60 to 0.90 bar)"),
        ((2e-6, 1e-6, 9e-6), "2.00 × 10⁻⁶ bar (1.00 × 10⁻⁶ to 9.00 × 10⁻⁶ bar)"),
    ],
)
def test_intervals_are_even_or_spelled_out(ends: tuple[float, float, float], expected: str) -> None:
    assert with_interval(*ends, "bar") == expected


@pytest.mark.parametrize(
    ("value", "expected"),
    [
        (0.0, "0"),
        (41.237, "41.2"),
        (999.96, "1000"),
        (9.996, "10.0"),
        (45390.0, "45\u202f400"),
        (1234567.0, "1\u202f230\u202f000"),
        (3.2e-5, "3.20 × 10⁻⁵"),
        (9.999e-4, "1.00 × 10⁻³"),
        (-2.5, "\u22122.50"),
        (math.inf, "not known"),
    ],
)
def test_significant_digits(value: float, expected: str) -> None:
    assert number(value) == expected


@pytest.mark.parametrize(
    ("value", "expected"),
    [(50.0, "50"), (0.047, "0.047"), (1.5, "1.5"), (1100.0, "1100"), (48.257, "48.257"), (0, "0")],
)
def test_what_was_given_comes_back_without_zeros(value: float, expected: str) -> None:
    assert exact(value) == expected


def read(text: str) -> float:
    return float(text.replace("\u202f", "").replace("\u2212", "-"))


@settings(deadline=None, max_examples=300, derandomize=True)
@given(
    st.floats(-1e6, 1e6).filter(lambda x: abs(x) > 2e-3),
    st.floats(1e-4, 1e5),
)
def test_rounding_stays_well_within_the_doubt(value: float, doubt: float) -> None:
    shown = with_doubt(value, doubt)
    if " ± " not in shown:
        # The doubt lies beyond the fourth digit, and no more than four are shown.
        assert doubt <= 1e-3 * abs(value)
        return
    if "×" in shown:
        return_value, return_doubt = (
            read(part) * 10 ** read_exponent(shown)
            for part in shown.split(")")[0].strip("(").split(" ± ")
        )
    else:
        return_value, return_doubt = (read(part) for part in shown.split(" ± "))
    # One digit of a doubt of 2 to 9 is off by at most half a unit in that digit, a quarter of 2.
    # and half a unit in the fourth digit of the value where no more digits are shown.
    room = max(0.26 * doubt, 5e-4 * abs(value))
    assert abs(return_value - value) <= room
    assert abs(return_doubt - doubt) <= room


def read_exponent(text: str) -> int:
    ordinary = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")
    return int(text.split("× 10")[1].translate(ordinary))


@pytest.mark.parametrize(
    ("quantity", "value", "system", "expected"),
    [
        ("pressure", 41237.0, "si", "41.2 kPa"),
        ("pressure", 41237.0, "metric", "0.412 bar"),
        ("pressure", 6894.757, "us", "1.00 psi"),
        ("flow", 5.0 / 3600, "metric", "5.00 m³/h"),
        ("flow", 0.003785411784 / 60, "us", "1.00 gpm"),
        ("temperature", 293.15, "metric", "20.0 °C"),
        ("temperature", 293.15, "us", "68.0 °F"),
        ("temperature_rise", 5.0, "us", "9.00 °F"),
        ("diameter", 0.0254, "us", "1.00 in"),
        ("viscosity", 1.2e-3, "us", "1.20 cP"),
        ("pressure", None, "metric", "not known"),
    ],
)
def test_units_shown(quantity: str, value: float | None, system: str, expected: str) -> None:
    assert display.text(value, quantity, system) == expected


def test_text_with_interval_in_the_unit_shown() -> None:
    assert display.text(41e3, "pressure", "si", low=36e3, high=46.4e3) == "41 ± 5 kPa"


@pytest.mark.parametrize("system", display.SYSTEMS)
@pytest.mark.parametrize("quantity", display.QUANTITIES)
def test_shown_and_stored_are_inverses(quantity: str, system: str) -> None:
    values = [0.5, 300.0, 4.2e4]
    back = display.stored(display.shown(values, quantity, system), quantity, system)
    assert back == pytest.approx(values, rel=1e-13)
    assert display.unit_label(quantity, system)


def test_unknown_names_are_refused_with_those_that_exist() -> None:
    with pytest.raises(
        InputError, match="unknown unit system 'imperial'; there are si, metric, us"
    ):
        display.unit_label("pressure", "imperial")
    with pytest.raises(InputError, match="unknown quantity 'presure'; there are stress, rate"):
        display.unit_label("presure")
