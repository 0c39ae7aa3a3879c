"""Make the demonstration readings: invented products of an invented plant, from known truths.

Run ``python sample_data/make_samples.py`` to write the files again, byte for byte the same. Each
reading is what the exact relation of its geometry gives for the true flow curve, and then noise
with a fixed seed. The truths stand here only, so that a result can be held against them.
"""

from __future__ import annotations

import csv
import io
import sys
from collections.abc import Iterable, Sequence
from datetime import datetime
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

import rheo

FloatArray = NDArray[np.float64]
Row = Sequence[str | float]

PLANT = "Holm Fen works, an invented plant"
NOTICE = "Invented for demonstration; no real product, plant, person or instrument"
GAS_CONSTANT = 8.314462618
ZERO_CELSIUS = 273.15


# --- brown condiment sauce: concentric cylinders, three temperatures, up and down ------------

SAUCE_TEMPERATURES = (20.0, 40.0, 60.0)  # °C
SAUCE_REFERENCE = 40.0  # °C
SAUCE_YIELD_STRESS = 11.0  # Pa at the reference temperature
SAUCE_CONSISTENCY = 4.2  # Pa.s^n at the reference temperature
SAUCE_FLOW_INDEX = 0.46
SAUCE_YIELD_ACTIVATION = 5.0e3  # J/mol
SAUCE_CONSISTENCY_ACTIVATION = 17.0e3  # J/mol
SAUCE_STRUCTURE = 0.04  # share of stress that the rested product adds, broken by the sweep up
SAUCE_BREAKING_SPEED = 60.0  # rpm
SAUCE_SPEEDS = (2, 5, 10, 20, 50, 100, 200, 500)  # rpm
SAUCE_CYLINDERS = {
    "inner_radius": 0.0140,
    "outer_radius": 0.0185,
    "length": 0.0460,
    "end_factor": 1.10,
}
SAUCE_FULL_SCALE = 10.0  # mN.m


def sauce(celsius: float) -> rheo.Model:
    """Return the true flow curve of the sauce at a temperature."""
    lag = 1.0 / (celsius + ZERO_CELSIUS) - 1.0 / (SAUCE_REFERENCE + ZERO_CELSIUS)
    return rheo.model(
        "herschel-bulkley",
        yield_stress=SAUCE_YIELD_STRESS * np.exp(SAUCE_YIELD_ACTIVATION / GAS_CONSTANT * lag),
        consistency=SAUCE_CONSISTENCY * np.exp(SAUCE_CONSISTENCY_ACTIVATION / GAS_CONSTANT * lag),
        flow_index=SAUCE_FLOW_INDEX,
    )


def sauce_rows() -> list[Row]:
    """Return time, temperature, branch, speed and torque of six sweeps."""
    noise = np.random.default_rng(1101)
    cylinders = rheo.geometry("concentric-cylinders", **SAUCE_CYLINDERS)
    speeds = np.asarray(SAUCE_SPEEDS, dtype=float)
    rows: list[Row] = []
    seconds = 0
    for celsius in SAUCE_TEMPERATURES:
        torque = 1e3 * cylinders.predict(sauce(celsius), speeds * np.pi / 30.0)
        structure = 1.0 + SAUCE_STRUCTURE * np.exp(-speeds / SAUCE_BREAKING_SPEED)
        for branch, order in (("up", slice(None)), ("down", slice(None, None, -1))):
            true = (torque * structure if branch == "up" else torque)[order]
            read = _with_noise(noise, true, 0.008, 0.001 * SAUCE_FULL_SCALE)
            held = celsius + noise.normal(0.0, 0.1, true.size)
            for speed, at, reading in zip(speeds[order], held, read, strict=True):
                seconds += 30
                rows.append((str(seconds), f"{at:.1f}", branch, f"{speed:.0f}", f"{reading:.3f}"))
        seconds += 900
    return rows


# --- mineral thickener underflow: tube viscometer, three diameters ---------------------------

UNDERFLOW = {"yield_stress": 16.0, "consistency": 0.90, "flow_index": 0.62}
UNDERFLOW_SLIP = 1.5e-4  # slip velocity over wall stress [m/(s.Pa)]
UNDERFLOW_ENTRANCE = 2.5  # entrance loss in diameters
UNDERFLOW_DIAMETERS = (8.0, 14.0, 25.0)  # mm
UNDERFLOW_LENGTH = 2.0  # m
UNDERFLOW_RATES = (30.0, 600.0)  # 1/s at the wall, lowest and highest
UNDERFLOW_POINTS = 10


def underflow_rows() -> list[Row]:
    """Return diameter, length, flow and pressure drop of three tubes."""
    noise = np.random.default_rng(2202)
    truth = rheo.model("herschel-bulkley", **UNDERFLOW)
    rows: list[Row] = []
    for number, diameter in enumerate(UNDERFLOW_DIAMETERS):
        tube = rheo.geometry(
            "tube",
            diameter=diameter / 1e3,
            length=UNDERFLOW_LENGTH,
            entrance_diameters=UNDERFLOW_ENTRANCE,
            slip_coefficient=UNDERFLOW_SLIP,
        )
        # Nobody meets the same wall stress in two tubes.
        wall_rate = np.geomspace(*UNDERFLOW_RATES, UNDERFLOW_POINTS) * 1.13 ** (number - 1)
        setting = tube.setting_for_rate(truth, wall_rate)
        flow = setting * 6e4  # L/min
        drop = tube.predict(truth, setting) / 1e3  # kPa
        flow = _with_noise(noise, flow, 0.005, 0.001)
        drop = _with_noise(noise, drop, 0.005, 0.02)
        rows += [
            (f"{diameter:.1f}", f"{UNDERFLOW_LENGTH:.3f}", f"{one:.3f}", f"{other:.2f}")
            for one, other in zip(flow, drop, strict=True)
        ]
    return rows


# --- gum solution: cone and plate, from the plateau down the slope ---------------------------

GUM = {
    "zero_shear_viscosity": 8.0,
    "infinite_shear_viscosity": 0.004,
    "time_constant": 2.2,
    "flow_index": 0.36,
}
GUM_RATES = (0.01, 1000.0)  # 1/s
GUM_POINTS = 26
GUM_LEAST_STRESS = 0.002  # Pa, what the instrument resolves


def gum_rows() -> list[Row]:
    """Return shear rate, shear stress and temperature of one sweep."""
    noise = np.random.default_rng(3303)
    truth = rheo.model("carreau", **GUM)
    rate = np.geomspace(*GUM_RATES, GUM_POINTS)
    rate = np.array([float(f"{one:.4g}") for one in rate])
    stress = _with_noise(noise, truth.stress(rate), 0.012, GUM_LEAST_STRESS)
    celsius = 25.0 + noise.normal(0.0, 0.05, rate.size)
    return [
        (float(f"{one:.4g}"), float(f"{other:.4g}"), round(float(at), 2))
        for one, other, at in zip(rate, stress, celsius, strict=True)
    ]


# --- files -----------------------------------------------------------------------------------


def _with_noise(
    noise: np.random.Generator, true: FloatArray, relative: float, absolute: float
) -> FloatArray:
    """Return readings with a share of the reading and a share of the range as their noise."""
    return true + noise.normal(size=true.size) * np.hypot(relative * true, absolute)


def _table(notes: Sequence[str], rows: Iterable[Row], delimiter: str) -> bytes:
    text = io.StringIO()
    text.writelines(f"# {note}\r\n" for note in notes)
    csv.writer(text, delimiter=delimiter, lineterminator="\r\n").writerows(rows)
    return text.getvalue().encode("utf-8")


def sauce_file() -> bytes:
    """Return a comma-separated file with units in the headings and the geometry above them."""
    lengths = {key: f"{1e3 * value:g} mm" for key, value in SAUCE_CYLINDERS.items()}
    notes = (
        NOTICE,
        f"{PLANT}; brown condiment sauce, lot 7",
        f"geometry: concentric-cylinders, inner_radius {lengths['inner_radius']}, "
        f"outer_radius {lengths['outer_radius']}, length {lengths['length']}, "
        f"end_factor {SAUCE_CYLINDERS['end_factor']:g}",
        f"full_scale_torque: {SAUCE_FULL_SCALE:g} mN.m",
        "density: 1125 kg/m3",
        "particle_diameter: 0.3 mm",
    )
    heading = ("Time [s]", "Temperature [°C]", "Branch", "Speed [rpm]", "Torque [mN.m]")
    return _table(notes, [heading, *sauce_rows()], ",")


def underflow_file() -> bytes:
    """Return a semicolon-separated file with decimal commas, a tube to every reading."""
    notes = (
        NOTICE,
        f"{PLANT}; underflow of the clay thickener, 46 % solids by weight",
        "geometry: tube",
        "temperature: 18 °C",
        "density: 1400 kg/m3",
    )
    heading = ("Tube diameter [mm]", "Tube length [m]", "Flow [L/min]", "Pressure drop [kPa]")
    rows = [tuple(str(cell).replace(".", ",") for cell in row) for row in underflow_rows()]
    return _table(notes, [heading, *rows], ";")


def gum_file() -> bytes:
    """Return a workbook with notes above the readings."""
    import xlsxwriter

    made = io.BytesIO()
    with xlsxwriter.Workbook(made, {"in_memory": True}) as book:
        book.set_properties({"created": datetime(2024, 1, 1), "comments": NOTICE})
        sheet = book.add_worksheet("Readings")
        lines: list[Row] = [
            (NOTICE,),
            (f"{PLANT}; gum solution for the sauce, 1.2 % by weight",),
            ("geometry: cone-plate, radius 25 mm, angle 2 deg",),
            (),
            ("Shear rate [1/s]", "Shear stress [Pa]", "Temperature [°C]"),
            *gum_rows(),
        ]
        for number, line in enumerate(lines):
            sheet.write_row(number, 0, line)
        sheet.set_column(0, 2, 20)
    return made.getvalue()


FILES = {
    "sauce_readings.csv": sauce_file,
    "thickener_readings.csv": underflow_file,
    "gum_readings.xlsx": gum_file,
}


def main(folder: Path) -> None:
    """Write the files into a folder."""
    for name, make in FILES.items():
        (folder / name).write_bytes(make())


if __name__ == "__main__":
    main(Path(sys.argv[1]) if len(sys.argv) > 1 else Path(__file__).parent)
