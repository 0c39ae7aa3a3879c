"""Headings mean a quantity and a unit, or nothing."""

from __future__ import annotations

import itertools

import numpy as np
import pytest

from rheo.errors import UnitError
from rheo.readings.headings import convert, meaning, unit_problem
from rheo.readings.quantities import BY_KEY, QUANTITIES

UNDERSTOOD = {
    "Shear rate [1/s]": ("rate", "1/s"),
    "SHEAR RATE [1/S]": ("rate", "1/S"),
    "Shear\nrate\n[1/s]": ("rate", "1/s"),
    "shear_rate_1/s": ("rate", "1/s"),
    "Shear rate 1/s": ("rate", "1/s"),
    "γ̇ [1/s]": ("rate", "1/s"),
    "D [1/s]": ("rate", "1/s"),
    "Scherrate [1/s]": ("rate", "1/s"),
    "Vitesse de cisaillement (s-1)": ("rate", "s-1"),
    "Velocidad de corte (1/s)": ("rate", "1/s"),
    "Shear rate (measured) [1/s]": ("rate", "1/s"),
    "tau / Pa": ("stress", "Pa"),
    "Shear stress in Pa": ("stress", "Pa"),
    "Stress (lb/100 ft²)": ("stress", "lb/100 ft²"),
    "Schubspannung": ("stress", ""),
    "Contrainte [Pa]": ("stress", "Pa"),
    "Esfuerzo cortante (Pa)": ("stress", "Pa"),
    "Viscosity (cP)": ("viscosity", "cP"),
    "η [mPas]": ("viscosity", "mPas"),
    "Visc. cP": ("viscosity", "cP"),
    "Viskosität [mPa·s]": ("viscosity", "mPa·s"),
    "Speed, rpm": ("angular_speed", "rpm"),
    "RPM": ("angular_speed", "rpm"),
    "n [1/min]": ("angular_speed", "1/min"),
    "Drehzahl [U/min]": ("angular_speed", "U/min"),
    "angular_speed": ("angular_speed", "rad/s"),
    "ω [1/s]": ("angular_speed", "rad/s"),
    "Velocidad [rpm]": ("angular_speed", "rpm"),
    "Torque in mN.m": ("torque", "mN.m"),
    "Torque / mN·m": ("torque", "mN·m"),
    "Torque_mNm": ("torque", "mNm"),
    "Torque": ("torque", ""),
    "M [mNm]": ("torque", "mNm"),
    "Torque (%)": ("torque_fraction", "%"),
    "% torque": ("torque_fraction", "%"),
    "Torque in % of full scale": ("torque_fraction", "% of full scale"),
    "Dial reading [°]": ("dial", "°"),
    "θ [deg]": ("dial", "deg"),
    "Flow rate L/min": ("flow", "L/min"),
    "Débit [L/h]": ("flow", "L/h"),
    "Velocidad [m/s]": ("velocity", "m/s"),
    "ΔP (bar)": ("pressure_drop", "bar"),
    "Druckverlust in mbar": ("pressure_drop", "mbar"),
    "D [mm]": ("tube_diameter", "mm"),
    "Tube length (m)": ("tube_length", "m"),
    "gap [µm]": ("gap", "µm"),
    "T (°C)": ("temperature", "°C"),
    "Temp. [F]": ("temperature", "F"),
    "Temperature (bath)": ("temperature", ""),
    "t [min]": ("time", "min"),
    "Elapsed time [hh:mm:ss]": ("time", "hh:mm:ss"),
    "Direction": ("branch", ""),
}
NOT_UNDERSTOOD = (
    *("D", "n", "M", "T", "velocidad", "No.", "Sample", "Std. dev. torque [mNm]", "x [1/s]"),
    *("Torque (upper) [mNm]", "Kinematic viscosity [cSt]", "Pressure [bar]", "", "shear rate" * 20),
    "geometry: tube, diameter 10 mm",
)


@pytest.mark.parametrize("heading", UNDERSTOOD)
def test_understood(heading: str) -> None:
    found = meaning(heading)
    assert found is not None
    assert (found.quantity.key, found.unit, found.problem) == (*UNDERSTOOD[heading], "")


@pytest.mark.parametrize("heading", NOT_UNDERSTOOD)
def test_not_understood(heading: str) -> None:
    assert meaning(heading) is None


def test_units_in_a_row_below() -> None:
    below = meaning("Torque", "[%]")
    assert below is not None
    assert below.quantity.key == "torque_fraction"
    symbol = meaning("D", "1/s")
    assert symbol is not None
    assert symbol.quantity.key == "rate"


@pytest.mark.parametrize(
    ("heading", "sentence"),
    [
        ("Viscosity (Pa)", "unit 'Pa' does not measure what is wanted here"),
        ("Stress [foo]", "unknown unit 'foo'; use one such as Pa, kPa, bar"),
        ("Torque [MNm]", "unit 'MNm' does not measure what is wanted here"),
        ("Speed [1/s]", "unit '1/s' leaves open what is meant for a speed; write rev/s or rad/s"),
        ("Shear rate [rpm]", "unit 'rpm' leaves open what is meant for a shear rate; write 1/s"),
    ],
)
def test_units_that_cannot_be_used(heading: str, sentence: str) -> None:
    found = meaning(heading)
    assert found is not None
    assert found.problem.startswith(sentence)


@pytest.mark.parametrize(
    ("key", "unit", "si"),
    [
        ("rate", "1/min", 1.0 / 60.0),
        ("angular_speed", "1/min", np.pi / 30.0),
        ("angular_speed", "Hz", 2.0 * np.pi),
        ("viscosity", "mPas", 1e-3),
        ("viscosity", "cps", 1e-3),
        ("stress", "dyn/cm²", 0.1),
        ("stress", "lb/100 ft²", 0.4788025898033584),  # 1 lbf = 4.4482216152605 N exactly
        ("torque", "µNm", 1e-6),
        ("torque", "g.cm", 9.80665e-5),
        ("torque", "dyne-cm", 1e-7),
        ("torque_fraction", "%", 0.01),
        ("dial", "deg", 1.0),
        ("pressure_drop", "mmWS", 9.80665),
        ("temperature", "F", 255.92777777777777),
    ],
)
def test_units_of_the_trade(key: str, unit: str, si: float) -> None:
    assert convert(1.0, BY_KEY[key], unit) == pytest.approx(si, rel=1e-13)


def test_every_unit_in_the_tables_can_be_read() -> None:
    for quantity in QUANTITIES:
        said = {*quantity.unit_words, *quantity.word_units.values(), quantity.default_unit}
        for unit in said - {""}:
            assert unit_problem(quantity, unit) == "", f"{quantity.key}: {unit}"
        for unit in quantity.refused_units:
            assert unit_problem(quantity, unit).startswith(f"unit '{unit}' leaves open")


def test_every_word_is_understood_with_the_documented_unit() -> None:
    for quantity in QUANTITIES:
        for word in quantity.words:
            heading = word if quantity.text else f"{word} [{quantity.default_unit}]"
            found = meaning(heading)
            assert found is not None, heading
            assert found.quantity is quantity, heading


def test_no_word_means_two_quantities_of_the_same_unit() -> None:
    for one, other in itertools.combinations(QUANTITIES, 2):
        shared = {*one.words, *one.word_units} & {*other.words, *other.word_units}
        assert not (shared and one.unit == other.unit), shared


def test_a_share_and_a_dial_take_only_their_own_unit() -> None:
    with pytest.raises(UnitError, match=r"^here: unit 'Pa' is no share of full scale; write %$"):
        convert(1.0, BY_KEY["torque_fraction"], "Pa", "here")
    with pytest.raises(UnitError, match=r"^here: unit 'rad' is no dial degree; write deg$"):
        convert(1.0, BY_KEY["dial"], "rad", "here")
