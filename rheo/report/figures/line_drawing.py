"""A drawing of the line: the route to scale along its length, with pressures at its ends."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from rheo.report.display import shown, text, unit_label
from rheo.report.picture import Axis, Label, Line, Mark, Panel, Picture, Points, array
from rheo.report.text import one_line

# Names stand this share of the width apart at least, or they would run into each other.
_APART = 0.16

# Marker number of each kind of part, and the words for the legend.
SYMBOLS: dict[str, tuple[int, int, str]] = {
    "vessel": (4, 1, "vessel"),
    "pump": (1, 0, "pump"),
    "fitting": (2, 3, "fitting"),
    "equipment": (3, 1, "equipment"),
    "reducer": (5, 5, "change of diameter"),
}


@dataclass(frozen=True)
class DrawnPart:
    """One part as it is drawn.

    Parameters
    ----------
    kind : str
        ``pipe`` or one of `SYMBOLS`.
    name : str
        For the hover.
    start, end : (float, float)
        Distance along the line and elevation [m] where it begins and ends.
    detail : str
        A line more for the hover: its size, its loss.
    diameter : float
        Inside diameter [m] of a pipe, for the thickness of its line.
    """

    kind: str
    name: str
    start: tuple[float, float]
    end: tuple[float, float]
    detail: str = ""
    diameter: float = 0.0


def line_drawing(
    parts: Sequence[DrawnPart],
    pressures: Sequence[tuple[float, float, float, bool]] = (),
    *,
    system: str = "metric",
) -> Picture:
    """Draw the route, elevation against distance, with its parts and some pressures.

    Parameters
    ----------
    parts : sequence of DrawnPart
        In order along the line.
    pressures : sequence of (float, float, float, bool)
        Distance [m], elevation [m] and gauge pressure [Pa] of points to be labelled, and whether
        the label stands above the point.
    system : str
        Unit system.

    Returns
    -------
    Picture
        With one panel.
    """
    marks: list[Mark] = []
    widest = max((part.diameter for part in parts), default=0.0) or 1.0
    for part in parts:
        if part.kind == "pipe":
            ends = shown(array([part.start, part.end]), "length", system).reshape(2, 2)
            width = 2.5 + 5.0 * part.diameter / widest
            words = f"{part.name}\n{part.detail}".strip()
            marks.append(
                Line(
                    ends[:, 0], ends[:, 1], "pipe", width=width, dash=0, hover=words, colour="muted"
                )
            )
    for kind, (style, marker, legend) in SYMBOLS.items():
        these = [part for part in parts if part.kind == kind]
        if these:
            places = shown(np.array([part.start for part in these]), "length", system)
            hover = tuple(f"{part.name}\n{part.detail}".strip() for part in these)
            size = 14.0 if kind in ("pump", "vessel") else 9.0
            marks.append(
                Points(
                    places[:, 0], places[:, 1], legend, style=style, marker=marker, hover=hover,
                    size=size,
                )
            )  # fmt: skip
    farthest = max((part.end[0] for part in parts), default=0.0)
    for distance, elevation, pressure, above in pressures:
        x, y = (float(v) for v in shown(array([distance, elevation]), "length", system))
        share = distance / farthest if farthest > 0 else 0.5
        anchor = "start" if share < 0.05 else "end" if share > 0.95 else "middle"
        words = text(pressure, "pressure", system)
        marks.append(Label(x, y, words, anchor, shift=13.0 if above else -13.0))
    heights = [end[1] for part in parts for end in (part.start, part.end)] or [0.0]
    low, high = (
        float(shown(min(heights), "length", system)),
        float(shown(max(heights), "length", system)),
    )
    room = max(0.3 * (high - low), 0.5)
    below = [at for at, _, _, above in pressures if not above]
    marks += _names(parts, farthest, below, 0.13 * (high - low + 2 * room), system)
    unit = unit_label("length", system)
    return Picture(
        key="line-drawing",
        title="The line",
        description=(
            "The route: elevation against distance along the line. Thicker lines are wider pipes; "
            "the numbers are gauge pressures."
        ),
        x=Axis("Distance along the line", unit),
        panels=(Panel(Axis("Elevation", unit, low=low - room, high=high + room), tuple(marks)),),
        height=300.0,
    )


def _names(
    parts: Sequence[DrawnPart],
    farthest: float,
    taken: Sequence[float],
    lift: float,
    system: str,
) -> list[Mark]:
    """Name vessels and equipment below the line where there is room, and its end above it.

    Beside its end a name would be cut off; it is then in the hover alone.

    `taken` are the places below the line that have a text already; `lift` is how far the name at
    the end stands above the pressure there, in the units shown.
    """
    found: list[Mark] = []
    places = list(taken)
    for part in parts:
        distance, elevation = part.start
        x, y = (float(v) for v in shown(array([distance, elevation]), "length", system))
        name = one_line(part.name, 26)
        if part.kind == "vessel" and distance == farthest > 0:
            found.append(Label(x, y + lift, name, "end", shift=13.0, colour="muted"))
        elif (
            part.kind in ("vessel", "equipment")
            and distance <= (1.0 - _APART) * farthest
            and all(abs(distance - other) >= _APART * farthest for other in places)
        ):
            places.append(distance)
            found.append(Label(x, y, name, "start", shift=-13.0, colour="muted"))
    return found
