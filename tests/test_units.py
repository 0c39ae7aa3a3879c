"""Units at the border: what users write, what they get, how nonsense is refused."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from rheo.errors import UnitError
from rheo.units import from_si, is_unit, parse_quantity, to_si

# Written, SI unit wanted, value. Exact definitions: inch 25.4 mm, pound 0.45359237 kg, US gallon
# 231 cubic inches, standard gravity 9.80665 m/s2 (NIST SP 811).
POUND_FORCE = 0.45359237 * 9.80665
FOOT = 0.3048
WRITTEN = [
    ("50 mm", "m", 0.05),
    ("50mm", "m", 0.05),
    ("45 µm", "m", 45e-6),
    ("45 um", "m", 45e-6),
    ("2 in", "m", 0.0508),
    ('2"', "m", 0.0508),
    ("2'", "m", 2 * FOOT),
    ("2 ft", "m", 2 * FOOT),
    (".5 m", "m", 0.5),
    ("5. m", "m", 5.0),
    ("1e-3 m", "m", 1e-3),
    ("+3 m", "m", 3.0),
    ("-3 mm", "m", -3e-3),
    ("−3 mm", "m", -3e-3),
    ("1 [mm]", "m", 1e-3),
    ("1 (mm)", "m", 1e-3),
    ("2 mm²", "m^2", 2e-6),
    ("2.5 bar", "Pa", 2.5e5),
    ("2 barg", "Pa", 2e5),
    ("2 mbar", "Pa", 200.0),
    ("2 kN/m2", "Pa", 2000.0),
    ("1 psi", "Pa", POUND_FORCE / 0.0254**2),
    ("1 psig", "Pa", POUND_FORCE / 0.0254**2),
    ("2 mWC", "Pa", 2 * 9806.65),
    ("10 dyn/cm2", "Pa", 1.0),
    ("10 dyne/cm²", "Pa", 1.0),
    ("1 lb/100ft2", "Pa", POUND_FORCE / (100 * FOOT**2)),
    ("1 lbf/100 ft2", "Pa", POUND_FORCE / (100 * FOOT**2)),
    ("1 lb/100ft²", "Pa", POUND_FORCE / (100 * FOOT**2)),
    ("1 000 Pa", "Pa", 1000.0),
    ("1'000 Pa", "Pa", 1000.0),
    ("12 345.5 Pa", "Pa", 12345.5),
    ("5 m3/h", "m^3/s", 5 / 3600),
    ("5 m³/h", "m^3/s", 5 / 3600),
    ("5 m^3/hr", "m^3/s", 5 / 3600),
    ("5 L/min", "m^3/s", 5e-3 / 60),
    ("5 lpm", "m^3/s", 5e-3 / 60),
    ("5 gpm", "m^3/s", 5 * 231 * 0.0254**3 / 60),
    ("1.2 cP", "Pa.s", 1.2e-3),
    ("1.2 mPa.s", "Pa.s", 1.2e-3),
    ("1.2 mPa s", "Pa.s", 1.2e-3),
    ("1.2 mPa·s", "Pa.s", 1.2e-3),
    ("1.2 mPas", "Pa.s", 1.2e-3),
    ("1 P", "Pa.s", 0.1),
    ("1 kg/(m.s)", "Pa.s", 1.0),
    ("38 1/s", "1/s", 38.0),
    ("100 1/s", "1/s", 100.0),
    ("38 s-1", "1/s", 38.0),
    ("38 s^-1", "1/s", 38.0),
    ("38 s⁻¹", "1/s", 38.0),
    ("38 /s", "1/s", 38.0),
    ("12 rpm", "rad/s", 12 * math.pi / 30),
    ("12 1/min", "rad/s", 12 * math.pi / 30),
    ("12 min-1", "rad/s", 12 * math.pi / 30),
    ("12 min⁻¹", "rad/s", 12 * math.pi / 30),
    ("1 rps", "rad/s", 2 * math.pi),
    ("2 °", "rad", math.pi / 90),
    ("2 mN.m", "N*m", 2e-3),
    ("2 mN m", "N*m", 2e-3),
    ("2 mNm", "N*m", 2e-3),
    ("2 µNm", "N*m", 2e-6),
    ("2 Nm", "N*m", 2.0),
    ("2 dyn.cm", "N*m", 2e-7),
    ("2 dyn-cm", "N*m", 2e-7),
    ("40 °C", "K", 313.15),
    ("40 C", "K", 313.15),
    ("40 degC", "K", 313.15),
    ("104 °F", "K", 313.15),
    ("104 F", "K", 313.15),
    ("313.15 K", "K", 313.15),
    ("1.1 g/cm3", "kg/m^3", 1100.0),
    ("1.1 g/ml", "kg/m^3", 1100.0),
    ("8.3 ppg", "kg/m^3", 8.3 * 0.45359237 / (231 * 0.0254**3)),
    ("4.2 kJ/kgK", "J/(kg*K)", 4200.0),
    ("4.2 kJ/(kg.K)", "J/(kg*K)", 4200.0),
    ("50 %", "dimensionless", 0.5),
]


@pytest.mark.parametrize(("text", "target", "value"), WRITTEN, ids=[row[0] for row in WRITTEN])
def test_what_users_write(text: str, target: str, value: float) -> None:
    assert parse_quantity(text, target) == pytest.approx(value, rel=1e-12)


REFUSED = [
    ("", "m", "'' is not a number with a unit; write it like '1.5 mm'"),
    ("mm", "m", "'mm' is not a number with a unit"),
    ("nan m", "m", "'nan m' is not a number with a unit"),
    ("1e400 m", "m", "'1e400 m' is not a finite number"),
    ("5 furlongz", "m", "unknown unit 'furlongz'; use one such as mm, m, in"),
    ("3 mm long", "m", "unknown unit 'mm long'"),
    ("2 M", "m", "unit 'M' does not measure what is wanted here; use one such as mm, m, in"),
    ("2 MPas", "m", "unit 'MPas' does not measure what is wanted here"),
    ("5 kg/h", "m^3/s", "unit 'kg/h' does not measure what is wanted here; use one such as m3/h"),
    ("1,5 bar", "Pa", "'1,5 bar' has a comma; write decimals with a point"),
    ("1,000 Pa", "Pa", "'1,000 Pa' has a comma; write decimals with a point"),
    ("3-4 mm", "m", "unknown unit '-4 mm'"),
    ("3 9**9**9", "m", "unknown unit '9**9**9'"),
    ("3 m**99999", "m", "unknown unit 'm**99999'"),
    ("1 " + "m" * 500, "m", "unknown unit '" + "m" * 60 + "'"),
    ("3 m; import os", "m", "unknown unit 'm; import os'"),
    (True, "m", "'True' is not a number with a unit"),
    (None, "m", "'None' is not a number with a unit"),
    (float("inf"), "m", "'inf' is not a finite number"),
    (float("nan"), "m", "'nan' is not a finite number"),
]


@pytest.mark.parametrize(
    ("text", "target", "sentence"), REFUSED, ids=[str(row[0])[:20] for row in REFUSED]
)
def test_what_is_refused(text: str, target: str, sentence: str) -> None:
    with pytest.raises(UnitError) as caught:
        parse_quantity(text, target, place="key 'x'")
    assert str(caught.value).startswith(f"key 'x': {sentence}")


def test_a_number_alone_has_the_documented_unit() -> None:
    assert parse_quantity("3", "m") == 3.0
    assert parse_quantity(3, "m", default_unit="mm") == pytest.approx(3e-3, rel=1e-15)
    assert parse_quantity("3", "m", default_unit="mm") == pytest.approx(3e-3, rel=1e-15)
    assert parse_quantity("3 cm", "m", default_unit="mm") == pytest.approx(3e-2, rel=1e-15)
    assert parse_quantity(np.float64(20.0), "K", default_unit="degC") == 293.15


def test_arrays_there_and_back() -> None:
    values = np.array([[0.0, 10.0], [37.0, -40.0]])
    kelvin = to_si(values, "°C", "K")
    np.testing.assert_allclose(kelvin, values + 273.15, rtol=1e-15)
    np.testing.assert_allclose(from_si(kelvin, "K", "°C"), values, atol=1e-12)
    np.testing.assert_allclose(from_si(kelvin, "K", "°F"), values * 1.8 + 32.0, atol=1e-11)
    assert np.isnan(to_si([np.nan], "mm", "m"))[0]


def test_is_unit() -> None:
    assert is_unit("cP", "Pa.s")
    assert is_unit("", "dimensionless")
    assert not is_unit("cP", "Pa")
    assert not is_unit("thick", "Pa.s")


UNITS = sorted({(text.lstrip("-+−0123456789.' e"), target) for text, target, _ in WRITTEN})


@settings(deadline=None, max_examples=200, derandomize=True)
@given(
    number=st.floats(-1e9, 1e9, allow_subnormal=False),
    pair=st.sampled_from([pair for pair in UNITS if pair[0] and is_unit(*pair)]),
)
def test_there_and_back(number: float, pair: tuple[str, str]) -> None:
    unit, target = pair
    back = float(from_si(to_si(number, unit, target), target, unit))
    assert back == pytest.approx(number, rel=1e-12, abs=1e-9)


@settings(deadline=None, max_examples=300, derandomize=True)
@given(text=st.text(max_size=40) | st.from_regex(r"[0-9]{1,4}[ '.,]?[0-9 '/*^()a-zA-Z°%]{0,20}"))
@example("1 (((((m")
@example("1 m/0")
@example("1 m^-")
@example("9 [[m]]")
def test_any_text_is_a_finite_number_or_one_plain_sentence(text: str) -> None:
    sentence, value = "a number", 0.0
    try:
        value = parse_quantity(text, "m")
    except UnitError as error:
        sentence = error.sentence
    assert math.isfinite(value)
    assert "\n" not in sentence
    assert 0 < len(sentence) < 250


@settings(deadline=None, max_examples=100, derandomize=True)
@given(number=st.integers(0, 10**9), unit=st.sampled_from(["1/s", "1/min", "mm", "'"]))
def test_a_unit_that_starts_with_a_digit_stays_out_of_the_number(number: int, unit: str) -> None:
    target = {"1/s": "1/s", "1/min": "rad/s", "mm": "m", "'": "m"}[unit]
    expected = float(to_si(number, unit, target))
    assert parse_quantity(f"{number} {unit}", target) == pytest.approx(expected, rel=1e-15)
    grouped = f"{number:,}".replace(",", " ")
    assert parse_quantity(f"{grouped} {unit}", target) == pytest.approx(expected, rel=1e-15)


@pytest.mark.parametrize("text", ["4 m3/hh", "4 m3/mh", "4 L/mmin", "4 m3/kh", "4 m3/md"])
def test_a_slip_in_a_time_is_no_multiple_of_it(text: str) -> None:
    with pytest.raises(UnitError, match="unknown unit"):
        parse_quantity(text, "m^3/s")


def test_units_with_a_time_in_their_name_are_no_slip() -> None:
    assert parse_quantity("10 mph", "m/s") == pytest.approx(4.4704, rel=1e-12)
    assert parse_quantity("36 km/h", "m/s") == pytest.approx(10.0, rel=1e-12)
