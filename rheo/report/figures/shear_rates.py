"""Where the shear rates fall: what was measured, what the line does, what plants do."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike

from rheo.report.display import unit_label
from rheo.report.numbers import number
from rheo.report.picture import Axis, Bars, Label, Mark, Panel, Picture, Points, Strip, array

# Orders of magnitude only; all of it common practice.
PLANT_DUTIES: tuple[tuple[str, float, float], ...] = (
    ("settling at rest", 1e-4, 1e-2),
    ("draining from a wall", 1e-1, 1e1),
    ("pouring and filling", 1e1, 1e2),
    ("pipe flow", 1e0, 1e3),
    ("stirring and mixing", 1e1, 1e3),
    ("pumps and strainers", 1e2, 1e4),
    ("spray nozzles", 1e4, 1e6),
)


def shear_rates(
    measured: tuple[float, float] | None,
    line: Sequence[tuple[str, float]] = (),
    instrument: ArrayLike = (),
    *,
    duties: Sequence[tuple[str, float, float]] = PLANT_DUTIES,
    system: str = "metric",
) -> Picture:
    """Draw the shear rates on one logarithmic axis.

    Parameters
    ----------
    measured : (float, float), optional
        Least and largest shear rate of the readings in use [1/s].
    line : sequence of (str, float)
        Name and wall shear rate [1/s] of each part of the line.
    instrument : array_like
        Shear rates [1/s] at the speeds of the viscometer.
    duties : sequence of (str, float, float)
        Name and range [1/s] of common plant duties; none when empty.
    system : str
        Unit system.

    Returns
    -------
    Picture
        With one panel, a row for each kind.
    """
    marks: list[Mark] = []
    rows: list[str] = []
    unit = unit_label("rate", system)
    if measured is not None:
        low, high = measured
        marks.append(Strip(low, high))
        words = f"{number(low)} to {number(high)} {unit}"
        marks.append(
            Bars(array(0.0), array(low), array(high), horizontal=True, width=0.5, hover=(words,))
        )
        rows.append("measured")
    rates = array(instrument)
    if rates.size:
        row = np.full(rates.size, float(len(rows)))
        hover = tuple(f"viscometer, {number(float(rate))} {unit}" for rate in rates)
        marks.append(Points(rates, row, style=0, marker=1, hover=hover))
        rows.append("viscometer")
    if line:
        marks += _line_marks(line, float(len(rows)), measured, unit)
        rows.append("this line, at the wall")
    for name, low, high in duties:
        words = f"{name}, {number(low)} to {number(high)} {unit} (common practice)"
        at = array(float(len(rows)))
        marks.append(
            Bars(
                at, array(low), array(high), horizontal=True, width=0.22,
                plain=True, muted=np.array([True]),
                hover=(words,),
            )
        )  # fmt: skip
        rows.append(name)
    ticks = tuple((float(i), name) for i, name in enumerate(rows))
    rows_axis = Axis("", "", low=-0.6, high=len(rows) - 0.4, ticks=ticks, descending=True)
    return Picture(
        key="shear-rates",
        title="Where the shear rates fall",
        description=(
            "Shear rates of the readings, of the viscometer's speeds, of the parts of the line at "
            "the wall, and of common plant duties (common practice, orders of magnitude). Parts "
            "outside the shaded range rest on extrapolation."
        ),
        x=Axis("Shear rate γ̇", unit, log=True),
        panels=(Panel(rows_axis, tuple(marks)),),
        height=110.0 + 27.0 * len(rows),
    )


def _line_marks(
    line: Sequence[tuple[str, float]], row: float, measured: tuple[float, float] | None, unit: str
) -> list[Mark]:
    rates = array([rate for _, rate in line])
    inside = (
        np.ones(rates.size, dtype=bool)
        if measured is None
        else (rates >= measured[0]) & (rates <= measured[1])
    )
    marks: list[Mark] = []
    for within, style, words in ((True, 2, "inside"), (False, 1, "outside the measured range")):
        these = np.flatnonzero(inside == within).tolist()
        if these:
            hover = tuple(f"{line[i][0]}\n{number(rates[i])} {unit}, {words}" for i in these)
            marks.append(
                Points(rates[these], np.full(len(these), row), style=style, hover=hover, size=11.0)
            )
    largest, smallest = int(np.argmax(rates)), int(np.argmin(rates))
    named = [(largest, "start")]
    if rates[largest] > 2 * rates[smallest]:
        named.append((smallest, "end"))
    for i, anchor in named:
        # The names stand in the table beside it; on a telephone there is no room for them.
        words = f"{number(rates[i])} {unit}"
        marks.append(Label(float(rates[i]), row, words, anchor, shift=0.0))
    return marks
