"""The readings as they were given, with what was flagged and what was left out."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution
from rheo.readings import FlowCurve, Readings
from rheo.report.display import shown, unit_label
from rheo.report.document import Block, Cautions, Facts, Paragraph, Table
from rheo.report.figures.flow_curve import BRANCH_WORDS
from rheo.report.numbers import exact, number

# A table longer than this is cut in the middle; the workbook holds every reading.
_LONGEST_TABLE = 120
_ENDS = 50

_RAW: tuple[tuple[str, str, str], ...] = (
    ("angular_speed", "Speed", "angular_speed"),
    ("torque", "Torque", "torque"),
    ("flow", "Flow", "flow"),
    ("pressure_drop", "Pressure drop", "pressure"),
)


def flagged_mask(count: int, cautions: Iterable[Caution]) -> NDArray[np.bool_]:
    """Return which readings some Caution points at, shape (count,)."""
    mask = np.zeros(count, dtype=bool)
    for caution in cautions:
        for point in caution.points:
            if 0 <= point < count:
                mask[point] = True
    return mask


def reading_words(count: int, cautions: Iterable[Caution]) -> list[str]:
    """Return for each reading the codes of the Cautions that point at it, in words."""
    words: list[list[str]] = [[] for _ in range(count)]
    for caution in cautions:
        for point in caution.points:
            if 0 <= point < count:
                words[point].append(caution.code.replace("-", " "))
    return ["; ".join(dict.fromkeys(codes)) for codes in words]


def readings_blocks(
    readings: Readings,
    curve: FlowCurve,
    cautions: Sequence[Caution],
    name: str,
    fitted: NDArray[np.bool_],
    system: str,
) -> list[Block]:
    """Return the blocks on one set of readings.

    Parameters
    ----------
    readings : Readings
        As given.
    curve : FlowCurve
        Shear rates and stresses, by nominal conversion or as the instrument gave them.
    cautions : sequence of Caution
        From screening.
    name : str
        Where they come from.
    fitted : array of bool, shape (n,)
        Which of them were fitted.
    system : str
        Unit system.

    Returns
    -------
    list of Block
        Facts, the table, the Cautions.
    """
    geometry = readings.geometry
    facts = [("Source", name), ("Readings", str(len(readings)))]
    if geometry is not None:
        facts.append(("Instrument", _geometry_words(readings)))
    left_out = int(np.sum(readings.excluded)) if readings.excluded is not None else 0
    facts.append(("Fitted", str(int(fitted.sum()))))
    facts.append(("Left out by the user", str(left_out)))
    flagged = flagged_mask(len(readings), cautions)
    facts.append(("Flagged", str(int(flagged.sum()))))
    blocks: list[Block] = [Facts(tuple(facts)), _table(readings, curve, cautions, fitted, system)]
    if geometry is not None:
        blocks.append(
            Paragraph(
                "Shear rate and stress here are the instrument's Newtonian conversion, for "
                "orientation; the fit works on the readings themselves.",
                "small",
            )
        )
    if cautions:
        blocks.append(Cautions(tuple(cautions)))
    return blocks


def _geometry_words(readings: Readings) -> str:
    geometry = readings.geometry
    if geometry is None:
        return ""
    units = {dimension.key: dimension.unit for dimension in geometry.record.dimensions}
    parts = []
    for key, value in geometry.dimensions.items():
        if np.ndim(value) == 0:
            unit = "" if units[key] == "-" else f" {units[key]}"
            parts.append(f"{key.replace('_', ' ')} {exact(float(value))}{unit}")
    return ", ".join([geometry.record.name, *parts])


def _table(
    readings: Readings,
    curve: FlowCurve,
    cautions: Sequence[Caution],
    fitted: NDArray[np.bool_],
    system: str,
) -> Table:
    count = len(readings)
    columns: list[tuple[str, list[str], bool]] = [
        ("Reading", [str(i + 1) for i in range(count)], True)
    ]
    for key, words, quantity in _RAW:
        values = getattr(readings, key)
        if values is not None:
            columns.append(_column(words, values, quantity, system))
    columns.append(_column("Shear rate", curve.rate, "rate", system))
    columns.append(_column("Shear stress", curve.stress, "stress", system))
    if readings.temperature is not None:
        columns.append(_column("Temperature", readings.temperature, "temperature", system))
    if readings.solids_fraction is not None:
        by = f" by {readings.solids_basis}" if readings.solids_basis else ""
        share = [number(100.0 * value, 4) for value in readings.solids_fraction.tolist()]
        columns.append((f"Solids [%{by}]", share, True))
    if readings.branch is not None:
        names = [BRANCH_WORDS.get(str(word), str(word)) for word in readings.branch]
        columns.append(("Branch", names, False))
    excluded = readings.excluded if readings.excluded is not None else np.zeros(count, dtype=bool)
    flags = reading_words(count, cautions)
    remarks = [
        "; ".join(filter(None, (_use(bool(out), bool(used)), flag)))
        for out, used, flag in zip(excluded, fitted, flags, strict=True)
    ]
    columns.append(("Remark", remarks, False))
    kept = _kept_rows(count)
    rows = tuple(
        tuple("…" for _ in columns) if i is None else tuple(column[i] for _, column, _ in columns)
        for i in kept
    )
    states = tuple(
        "" if i is None else "flagged" if flags[i] else "" if fitted[i] else "muted" for i in kept
    )
    cut = "" if count <= _LONGEST_TABLE else ", the middle left out; the workbook holds all of them"
    return Table(
        tuple(head for head, _, _ in columns),
        rows,
        numeric=tuple(i for i, (_, _, numeric) in enumerate(columns) if numeric),
        caption=f"Readings{cut}",
        states=states,
    )


def _use(left_out: bool, fitted: bool) -> str:
    if left_out:
        return "left out"
    return "" if fitted else "not fitted"


def _kept_rows(count: int) -> list[int | None]:
    if count <= _LONGEST_TABLE:
        return list(range(count))
    return [*range(_ENDS), None, *range(count - _ENDS, count)]


def _column(
    words: str, values: NDArray[np.float64], quantity: str, system: str
) -> tuple[str, list[str], bool]:
    numbers = [number(value, 4) for value in shown(values, quantity, system).tolist()]
    return f"{words} [{unit_label(quantity, system)}]", numbers, True
