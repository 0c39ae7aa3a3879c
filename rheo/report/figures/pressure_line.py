"""Pressure along the line, with the elevation under it."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike

from rheo.report.display import shown, unit_label
from rheo.report.numbers import number
from rheo.report.picture import Axis, Band, Limit, Line, Mark, Panel, Picture, Points, array

# A limit further off than this many times the largest pressure is told in words, not drawn.
FAR = 2.5


def pressure_line(
    distance: ArrayLike,
    pressure: ArrayLike,
    elevation: ArrayLike | None = None,
    *,
    low: ArrayLike | None = None,
    high: ArrayLike | None = None,
    limits: Sequence[tuple[str, float]] = (),
    steps: Sequence[tuple[str, float, float]] = (),
    system: str = "metric",
) -> Picture:
    """Draw pressure and elevation against the distance along the line.

    Parameters
    ----------
    distance : array_like, shape (n,)
        Distance from the beginning of the line [m]; two nodes at one distance make a step.
    pressure : array_like, shape (n,)
        Gauge pressure at the nodes [Pa].
    elevation : array_like, shape (n,), optional
        Height of the nodes [m]; a panel of its own.
    low, high : array_like, shape (n,), optional
        Interval of the pressure [Pa].
    limits : sequence of (str, float)
        Name and gauge pressure [Pa] of limits: the vapour pressure, the rating.
    steps : sequence of (str, float, float)
        Name, distance [m] and pressure loss [Pa] of fittings and equipment, marked on the line.
    system : str
        Unit system.

    Returns
    -------
    Picture
        With one panel, or two when elevations are given.
    """
    distance = shown(array(distance), "length", system)
    gauge = shown(array(pressure), "pressure", system)
    unit = unit_label("pressure", system)
    marks: list[Mark] = []
    if low is not None and high is not None:
        ends = (shown(array(low), "pressure", system), shown(array(high), "pressure", system))
        marks.append(Band(distance, *ends, name="interval"))
    marks.append(Line(distance, gauge, "pressure", dash=0))
    if steps:
        at = shown(array([place for _, place, _ in steps]), "length", system)
        loss = shown(array([drop for _, _, drop in steps]), "pressure", system)
        hover = tuple(
            f"{name}\nloses {number(float(drop))} {unit}"
            for (name, _, _), drop in zip(steps, loss, strict=True)
        )
        on_line = _before_step(distance, gauge, at)
        marks.append(Points(at, on_line, "fittings and equipment", style=1, hover=hover, size=8.0))
    far: list[str] = []
    largest = float(np.max(np.abs(gauge)))
    for name, value in limits:
        at_limit = float(shown(value, "pressure", system))
        if abs(at_limit) > FAR * largest:
            far.append(f"{name} of {number(at_limit)} {unit} lies beyond the axis")
        else:
            marks.append(Limit(at_limit, name))
    panels = [Panel(Axis("Gauge pressure", unit), tuple(marks), share=2.2)]
    if elevation is not None:
        height = shown(array(elevation), "length", system)
        line = Line(distance, height, style=2, dash=0)
        axis = Axis("Elevation", unit_label("length", system))
        panels.append(Panel(axis, (line,), share=1.0))
    return Picture(
        key="pressure-line",
        title="Pressure along the line",
        description=(
            "Gauge pressure and elevation against the distance along the line. Fittings, equipment "
            "and the pump are steps; dashed lines are limits."
            + (
                ""
                if low is None
                else " The band is the 95 % interval by readings and model choice."
            )
            + "".join(f" The {words}." for words in far)
        ),
        x=Axis("Distance along the line", unit_label("length", system)),
        panels=tuple(panels),
        height=430.0 if elevation is not None else 330.0,
    )


def _before_step(distance: np.ndarray, values: np.ndarray, at: np.ndarray) -> np.ndarray:
    """Return the value at the first node at or beyond each place."""
    places = np.searchsorted(distance, at - 1e-9 * max(float(distance[-1]), 1e-30), side="left")
    return values[np.clip(places, 0, distance.size - 1)]
