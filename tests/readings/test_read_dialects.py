"""Random tables, written in many dialects, are read back exactly."""

from __future__ import annotations

import io
from dataclasses import dataclass

import numpy as np
import openpyxl
from hypothesis import given, settings
from hypothesis import strategies as st

from rheo import read_readings
from rheo.readings.headings import convert
from rheo.readings.quantities import BY_KEY

HEADINGS = {
    "rate": (["Shear rate", "rate", "Scherrate", "γ̇", "gamma dot"], ["1/s", "s-1", "1/min"]),
    "stress": (["Shear stress", "Stress", "tau", "Contrainte"], ["Pa", "kPa", "dyn/cm2", "mbar"]),
    "viscosity": (["Viscosity", "Viskosität", "eta", "Viscosidad"], ["Pa.s", "mPa·s", "cP"]),
    "angular_speed": (["Speed", "Drehzahl", "Rotational speed"], ["rpm", "1/min", "rad/s", "Hz"]),
    "torque": (["Torque", "Drehmoment", "Couple"], ["N.m", "mN.m", "µN.m", "dyn.cm"]),
    "flow": (["Flow", "Durchfluss", "Débit", "Flow rate"], ["m3/h", "L/min", "mL/s"]),
    "pressure_drop": (["Pressure drop", "ΔP", "Druckverlust"], ["Pa", "mbar", "psi", "kPa"]),
    "temperature": (["Temperature", "Temp.", "Température"], ["°C", "K", "°F"]),
    "time": (["Time", "Zeit", "Elapsed time"], ["s", "min", "h"]),
}
PAIRS = [("rate", "stress"), ("rate", "viscosity"), ("angular_speed", "torque"),
         ("flow", "pressure_drop")]  # fmt: skip
# Separator, decimal marks that it goes with, whether cells are quoted.
SEPARATORS = [(",", ".", False), (",", ",", True), (";", ".", False), (";", ",", False),
              ("\t", ".", False), ("\t", ",", False), ("|", ".", False), ("   ", ".", False),
              ("  ", ",", False), (";", ",", True)]  # fmt: skip
THOUSANDS = {".": ["", "", ",", "'", "\u202f"], ",": ["", "", ".", "'", "\u202f"]}
ABOVE = ["", "Made-up run", "Operator: nobody at all", "# a comment", "Sample 7, batch 12; 3 L",
         "// 1 2 3", "Date: 2024-02-30 10:00"]  # fmt: skip
ENCODINGS = ["utf-8", "utf-8-sig", "utf-16", "utf-16-le", "utf-32"]


@dataclass(frozen=True)
class Table:
    """A table as it is meant: quantities, headings, units, numbers as written and as floats."""

    keys: tuple[str, ...]
    headings: tuple[str, ...]
    units: tuple[str, ...]
    values: tuple[tuple[float, ...], ...]


@st.composite
def tables(draw: st.DrawFn) -> Table:
    pair = draw(st.sampled_from(PAIRS))
    more = draw(st.sets(st.sampled_from(["temperature", "time"])))
    keys = tuple(draw(st.permutations([*pair, *sorted(more)])))
    headings = tuple(draw(st.sampled_from(HEADINGS[key][0])) for key in keys)
    units = tuple(draw(st.sampled_from(HEADINGS[key][1])) for key in keys)
    count = draw(st.integers(3, 9))
    # Four decimals, never three, so that the decimal mark can be told from a thousands separator.
    number = st.integers(1, 10**9).map(lambda n: n / 1e4)
    values = tuple(tuple(draw(number) for _ in keys) for _ in range(count))
    return Table(keys, headings, units, values)


def check(table: Table, data: bytes, name: str) -> None:
    readings = read_readings(data, name=name)
    assert set(readings.present) - {"branch"} == set(table.keys)
    for column, key in enumerate(table.keys):
        written = np.array([row[column] for row in table.values])
        expected = convert(written, BY_KEY[key], table.units[column])
        assert getattr(readings, key).tolist() == expected.tolist(), (name, key)
    said = {record.quantity: record.heading for record in readings.columns if record.quantity}
    assert set(said) == set(table.keys)


@given(tables(), st.data())
@settings(deadline=None, max_examples=400, derandomize=True)
def test_text(table: Table, data: st.DataObject) -> None:
    sign, decimal, quoted = data.draw(st.sampled_from(SEPARATORS))
    thousands = data.draw(st.sampled_from(THOUSANDS[decimal]))
    style = data.draw(st.sampled_from(["plain", "thousands", "exponent"]))

    def number(value: float) -> str:
        if style == "exponent":
            text = f"{value:.14e}"
        else:
            text = f"{value:,.4f}" if style == "thousands" else f"{value:.4f}"
        separator = thousands if sign.strip() != thousands or quoted else ""
        return text.translate({ord(","): separator, ord("."): decimal})

    def line(cells: list[str]) -> str:
        return sign.join(f'"{cell}"' if quoted else cell for cell in cells)

    unit_row = data.draw(st.booleans()) and sign.strip() != ""
    brackets = data.draw(st.sampled_from(["[]", "()"]))
    pairs = zip(table.headings, table.units, strict=True)
    if unit_row:
        head = [
            line(list(table.headings)),
            line([f"{brackets[0]}{unit}{brackets[1]}" for unit in table.units]),
        ]
    else:
        # Between columns parted by blanks a unit keeps to its heading by one blank.
        head = [line([f"{name} {brackets[0]}{unit}{brackets[1]}" for name, unit in pairs])]
    above = data.draw(st.lists(st.sampled_from(ABOVE), max_size=4))
    rows = [line([number(value) for value in row]) for row in table.values]
    for place in data.draw(st.lists(st.integers(0, len(rows)), max_size=3)):
        rows.insert(place, data.draw(st.sampled_from(["", "# a pause", "   "])))
    end = data.draw(st.sampled_from(["\n", "\r\n", "\r"]))
    text = end.join([*above, *head, *rows]) + data.draw(st.sampled_from(["", end, end * 3]))
    check(table, text.encode(data.draw(st.sampled_from(ENCODINGS))), text)


@given(tables(), st.data())
@settings(deadline=None, max_examples=20, derandomize=True)
def test_workbooks(table: Table, data: st.DataObject) -> None:
    book = openpyxl.Workbook()
    sheet = book.active
    left, top = data.draw(st.integers(0, 3)), data.draw(st.integers(0, 4))
    for _ in range(top):
        sheet.append([data.draw(st.sampled_from(ABOVE))])
    unit_row = data.draw(st.booleans())
    as_text = data.draw(st.booleans())
    blank = [""] * left
    if unit_row:
        sheet.append([*blank, *table.headings])
        sheet.append([*blank, *(f"[{unit}]" for unit in table.units)])
    else:
        pairs = zip(table.headings, table.units, strict=True)
        sheet.append([*blank, *(f"{name} in {unit}" for name, unit in pairs)])
    for row in table.values:
        sheet.append([*blank, *(f"{value:.4f}" if as_text else value for value in row)])
        if data.draw(st.integers(0, 4)) == 0:
            sheet.append([])
    stream = io.BytesIO()
    book.save(stream)
    check(table, stream.getvalue(), "made-up.xlsx")
