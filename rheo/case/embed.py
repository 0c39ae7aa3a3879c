"""Readings put into the case itself, so that one file travels alone."""

from __future__ import annotations

import csv
import io
from collections.abc import Iterator

import numpy as np

from rheo.case.load_readings import readings_of
from rheo.case.paths import inside_folder
from rheo.case.readings_blocks import ReadingsBlock
from rheo.case.schema import Case
from rheo.readings import RawBlock, Readings
from rheo.readings.file_bytes import file_bytes
from rheo.readings.text_grid import decode
from rheo.readings.workbook_grid import is_workbook


def embedded(case: Case) -> Case:
    """Return the case with every readings file taken in as text.

    A text file is taken in as it is; of a workbook the tables that were read, cell by cell, under
    lines that state what the workbook stated of the instrument.

    Raises
    ------
    InputError
        If a file cannot be read.
    """
    blocks = tuple(
        block if block.file is None else _embedded(case, number, block)
        for number, block in enumerate(case.readings)
    )
    return case.model_copy(update={"readings": blocks})


def _embedded(case: Case, number: int, block: ReadingsBlock) -> ReadingsBlock:
    path = inside_folder(block.file or "", case.folder, case.allow_outside)
    data, place = file_bytes(path)
    readings = readings_of(case, number)
    if is_workbook(data):
        text = "".join([*_stated(readings), *map(_table_text, readings.table)])
    else:
        text = decode(data, place)
    given = block.model_dump(exclude_unset=True, exclude_none=True)
    # A sheet and a choice of blocks belong to the file; the text holds only what was chosen.
    gone = {"file", "sheet"} | ({"block"} if is_workbook(data) else set())
    kept = {key: value for key, value in given.items() if key not in gone}
    return ReadingsBlock.model_validate({**kept, "text": text})


def _stated(readings: Readings) -> Iterator[str]:
    geometry = readings.geometry
    if geometry is not None:
        units = {dimension.key: dimension.unit for dimension in geometry.record.dimensions}
        parts = [
            f"{key} {float(value)!r} {units[key]}".removesuffix(" -")
            for key, value in geometry.dimensions.items()
            if np.ndim(value) == 0
        ]
        yield f"# geometry: {', '.join((geometry.key, *parts))}\n"
    if readings.full_scale_torque is not None:
        yield f"# full_scale_torque: {float(readings.full_scale_torque)!r} N.m\n"
    if readings.nominal_form is not None:
        yield f"# nominal_form: {readings.nominal_form}\n"
    if readings.temperature is not None and not _has_column(readings, "temperature"):
        yield f"# temperature: {float(readings.temperature[0])!r} K\n"
    if readings.solids_fraction is not None and not _has_column(readings, "solids_fraction"):
        by = f" by {readings.solids_basis}" if readings.solids_basis else ""
        yield f"# solids_fraction: {100.0 * float(readings.solids_fraction[0])!r} %{by}\n"


def _has_column(readings: Readings, key: str) -> bool:
    return any(column.quantity == key for column in readings.columns)


def _table_text(block: RawBlock) -> str:
    written = io.StringIO()
    if block.label:
        written.write(f"\n{block.label}\n")
    rows = csv.writer(written, lineterminator="\n")
    rows.writerow(block.headings)
    if block.units:
        rows.writerow(block.units)
    rows.writerows(block.rows)
    return written.getvalue()
