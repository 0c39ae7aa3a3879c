"""The system curve with its band, the pump, and where they meet."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.report.display import shown, text, unit_label
from rheo.report.figures.pressure_line import FAR
from rheo.report.picture import (
    Axis,
    Band,
    FloatArray,
    Label,
    Limit,
    Line,
    Mark,
    Panel,
    Picture,
    Points,
    array,
)

REGIMES = ("laminar", "transition", "turbulent")
_REGIME_DASH = {"laminar": 0, "transition": 2, "turbulent": 1}


@dataclass(frozen=True, eq=False)
class PumpCurve:
    """What the pump can do: pressure rise [Pa] against flow [m3/s], shape (n,)."""

    name: str
    flow: FloatArray
    pressure: FloatArray


def system_curve(
    flow: ArrayLike,
    pressure: ArrayLike,
    *,
    low: ArrayLike | None = None,
    high: ArrayLike | None = None,
    regime: ArrayLike | None = None,
    pump: PumpCurve | None = None,
    operating: tuple[float, float] | None = None,
    duty: tuple[float, float] | None = None,
    rating: float | None = None,
    system: str = "metric",
) -> Picture:
    """Draw the pressure that the line needs against flow.

    Parameters
    ----------
    flow : array_like, shape (n,)
        Rising flows [m3/s].
    pressure : array_like, shape (n,)
        Pressure that the pump must add [Pa].
    low, high : array_like, shape (n,), optional
        Interval of the pressure [Pa].
    regime : array_like of str, shape (n,), optional
        ``laminar``, ``transition`` or ``turbulent``: solid, dotted and dashed.
    pump : PumpCurve, optional
        Drawn in its own style.
    operating, duty : (float, float), optional
        Flow [m3/s] and pressure [Pa] where pump and line meet, and what is asked for.
    rating : float, optional
        Pressure rating [Pa].
    system : str
        Unit system.

    Returns
    -------
    Picture
        With one panel.
    """
    across = shown(array(flow), "flow", system)
    up = shown(array(pressure), "pressure", system)
    marks: list[Mark] = []
    if low is not None and high is not None:
        ends = (shown(array(low), "pressure", system), shown(array(high), "pressure", system))
        marks.append(Band(across, *ends, name="interval"))
    words = np.full(across.size, "", dtype="U10") if regime is None else np.asarray(regime)
    for name, dash, part in _pieces(words):
        marks.append(Line(across[part], up[part], f"line, {name}" if name else "line", dash=dash))
    if pump is not None:
        marks.append(
            Line(
                shown(pump.flow, "flow", system),
                shown(pump.pressure, "pressure", system),
                pump.name,
                style=1,
                dash=3,
            )
        )
    for name, point, other, marker in (
        ("asked for", duty, operating, 3),
        ("operating point", operating, duty, 0),
    ):
        if point is not None:
            x, y = (
                float(shown(point[0], "flow", system)),
                float(shown(point[1], "pressure", system)),
            )
            where = f"{text(point[0], 'flow', system)}, {text(point[1], 'pressure', system)}"
            hover = (f"{name}\n{where}",)
            style = 1 if name == "operating point" else 3
            marks.append(
                Points(array(x), array(y), name, style=style, marker=marker, hover=hover, size=12.0)
            )
            side = _side(point, other, float(np.max(array(flow))))
            # The curve rises: above it there is room on the left, below it on the right.
            marks.append(Label(x, y, where, side, 12.0 if side == "end" else -12.0))
    far = ""
    if rating is not None:
        at_rating = float(shown(rating, "pressure", system))
        if at_rating > FAR * float(np.max(up)):
            far = (
                f" The pressure rating of {text(rating, 'pressure', system)} lies beyond the axis."
            )
        else:
            marks.append(Limit(at_rating, "pressure rating"))
    return Picture(
        key="system-curve",
        title="System curve",
        description=(
            "Pressure that the line needs against flow, with its 95 % interval by readings and "
            "model choice. The line is solid where the flow is laminar, dotted in transition and "
            f"dashed where it is turbulent.{far}"
        ),
        x=Axis("Flow", unit_label("flow", system), low=0.0),
        panels=(Panel(Axis("Pressure", unit_label("pressure", system)), tuple(marks)),),
        height=400.0,
    )


def _side(point: tuple[float, float], other: tuple[float, float] | None, farthest: float) -> str:
    """Return where the text beside a point begins, so that it stays clear of the other point."""
    if other is not None and point[0] != other[0]:
        return "end" if point[0] < other[0] else "start"
    return "end" if point[0] > 0.6 * farthest else "start"


def _pieces(words: NDArray[np.str_]) -> list[tuple[str, int, slice]]:
    """Return name, dash and slice of each stretch of one regime, each joined to the one before."""
    changes = np.flatnonzero(words[1:] != words[:-1]) + 1
    starts = [0, *changes.tolist()]
    ends = [*changes.tolist(), words.size]
    return [
        (str(words[start]), _REGIME_DASH.get(str(words[start]), 0), slice(max(start - 1, 0), end))
        for start, end in zip(starts, ends, strict=True)
    ]
