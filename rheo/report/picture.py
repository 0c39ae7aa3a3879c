"""What a figure shows, said once: drawn by Plotly on the page and in HTML, as SVG in the PDF.

A picture has one x axis and one or more panels above each other, each with its own y axis and
marks. Numbers are in the units shown; text is plain text and is escaped where it is drawn.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike, NDArray

if TYPE_CHECKING:
    import plotly.graph_objects

FloatArray = NDArray[np.float64]


def array(values: ArrayLike) -> FloatArray:
    """Return a 1-D float array."""
    return np.atleast_1d(np.asarray(values, dtype=float))


@dataclass(frozen=True)
class Axis:
    """One axis.

    Parameters
    ----------
    quantity, unit : str
        What is drawn along it, and its unit; shown as ``quantity [unit]``.
    log : bool
        Logarithmic.
    low, high : float, optional
        Ends; taken from the marks where absent.
    ticks : tuple of (float, str)
        Named positions instead of numbers, for categories.
    descending : bool
        Whether it runs downwards (categories listed from the top).
    """

    quantity: str
    unit: str
    log: bool = False
    low: float | None = None
    high: float | None = None
    ticks: tuple[tuple[float, str], ...] = ()
    descending: bool = False

    @property
    def title(self) -> str:
        """Quantity with its unit in brackets."""
        return f"{self.quantity} [{self.unit}]" if self.unit else self.quantity


@dataclass(frozen=True, eq=False)
class Points:
    """Markers.

    Parameters
    ----------
    x, y : array
        Positions, the same length.
    name : str
        In the legend; none when empty.
    style : int
        Number of the series style.
    marker : int, optional
        Number of another style whose marker is used, to tell branches apart within a colour.
    hollow : bool
        Drawn as outlines: excluded points.
    ringed : array of bool, optional
        Points with a ring around them: flagged.
    hover : tuple of str
        A text a point.
    index : tuple of int
        Numbers of the readings behind the points, for clicks.
    size : float
        Marker size in px.
    colour : str
        Name of a palette colour that replaces the style's.
    """

    x: FloatArray
    y: FloatArray
    name: str = ""
    style: int = 0
    marker: int | None = None
    hollow: bool = False
    ringed: NDArray[np.bool_] | None = None
    hover: tuple[str, ...] = ()
    index: tuple[int, ...] = ()
    size: float = 8.0
    colour: str = ""


@dataclass(frozen=True, eq=False)
class Line:
    """A line through points; gaps where a value is not a number.

    Parameters
    ----------
    x, y : array
        Positions.
    name : str
        In the legend; none when empty.
    style : int
        Number of the series style.
    width : float
        In px.
    dash : int, optional
        Number of another style whose dash is used; 0 is solid.
    steps : bool
        Horizontal, then vertical.
    faint : bool
        Drawn thin and light: rivals.
    colour : str
        Name of a palette colour that replaces the style's.
    hover : str
        A text for the whole line.
    """

    x: FloatArray
    y: FloatArray
    name: str = ""
    style: int = 0
    width: float = 2.2
    dash: int | None = None
    steps: bool = False
    faint: bool = False
    colour: str = ""
    hover: str = ""


@dataclass(frozen=True, eq=False)
class Band:
    """A filled band between two lines: doubt."""

    x: FloatArray
    low: FloatArray
    high: FloatArray
    name: str = ""
    style: int = 0


@dataclass(frozen=True, eq=False)
class Bars:
    """Bars from `low` to `high` at positions along the other axis.

    Parameters
    ----------
    at, low, high : array
        Positions and ends.
    name : str
        In the legend; none when empty.
    style : int
        Number of the series style.
    horizontal : bool
        Whether they run along x.
    muted : array of bool, optional
        Bars drawn grey: failed, or beside the point.
    hover, labels : tuple of str
        A text a bar: on hover, and beside its end.
    width : float
        Thickness, in units of the position axis.
    plain : bool
        Whether muted bars are filled grey instead of hatched.
    """

    at: FloatArray
    low: FloatArray
    high: FloatArray
    name: str = ""
    style: int = 0
    horizontal: bool = False
    muted: NDArray[np.bool_] | None = None
    hover: tuple[str, ...] = ()
    labels: tuple[str, ...] = ()
    width: float = 0.7
    plain: bool = False


@dataclass(frozen=True)
class Strip:
    """A shaded strip between two values of an axis, behind everything else."""

    low: float
    high: float
    name: str = ""
    axis: str = "x"


@dataclass(frozen=True)
class Limit:
    """A limit: a line across the panel at one value of an axis, with its name on it."""

    value: float
    name: str
    axis: str = "y"
    colour: str = "bad"


@dataclass(frozen=True)
class Label:
    """A text at a point; `anchor` is ``start``, ``middle`` or ``end``, `shift` in px upwards."""

    x: float
    y: float
    text: str
    anchor: str = "middle"
    shift: float = 8.0
    colour: str = "ink"


Mark = Points | Line | Band | Bars | Strip | Limit | Label


@dataclass(frozen=True)
class Panel:
    """One y axis with its marks; `share` of the picture's height."""

    y: Axis
    marks: tuple[Mark, ...]
    share: float = 1.0


@dataclass(frozen=True)
class Picture:
    """A whole figure.

    Parameters
    ----------
    key : str
        Short stable name, used for ids and file names.
    title : str
        One line above it.
    description : str
        What it shows in words, for captions and for readers who cannot see it.
    x : Axis
        Shared by the panels.
    panels : tuple of Panel
        From top to bottom.
    height : float
        In px on the page; the width follows the page.
    """

    key: str
    title: str
    description: str
    x: Axis
    panels: tuple[Panel, ...]
    height: float = 380.0

    def plotly(self, dark: bool = False) -> plotly.graph_objects.Figure:
        """Return the picture as an interactive Plotly figure, light or dark."""
        from rheo.report.draw_plotly import figure

        return figure(self, dark)

    def svg(self, width: float = 482.0, height: float | None = None) -> str:
        """Return the picture as static SVG text, sized in points (A4 text width by default)."""
        from rheo.report.draw_svg import drawing

        return drawing(self, width, height)


def extent(values: FloatArray, log: bool) -> tuple[float, float] | None:
    """Return the least and largest value that an axis can show, or None."""
    usable = values[np.isfinite(values) & ((values > 0) | (not log))]
    return (float(usable.min()), float(usable.max())) if usable.size else None


def _along(mark: Mark, axis: str) -> Iterator[ArrayLike]:
    if isinstance(mark, Points | Line):
        yield mark.x if axis == "x" else mark.y
    elif isinstance(mark, Band):
        if axis == "x":
            yield mark.x
        else:
            yield mark.low
            yield mark.high
    elif isinstance(mark, Bars):
        if mark.horizontal == (axis == "x"):
            yield mark.low
            yield mark.high
        else:
            yield mark.at - mark.width / 2
            yield mark.at + mark.width / 2
    elif isinstance(mark, Strip):
        if mark.axis == axis:
            yield [mark.low, mark.high]
    elif isinstance(mark, Limit):
        if mark.axis == axis:
            yield mark.value
    else:
        yield mark.x if axis == "x" else mark.y


def _extent_of_marks(axis: Axis, marks: tuple[Mark, ...], which: str) -> tuple[float, float]:
    """Return the ends of what is drawn; a band no more than doubles what the rest needs."""

    def of(chosen: list[Mark]) -> tuple[float, float] | None:
        columns = [array(values) for mark in chosen for values in _along(mark, which)]
        return extent(np.concatenate(columns), axis.log) if columns else None

    every = of(list(marks))
    rest = of([mark for mark in marks if not isinstance(mark, Band)])
    if every is None:
        return (1.0, 10.0) if axis.log else (0.0, 1.0)
    if rest is None or which == "x":
        return every
    if axis.log:
        factor = max(rest[1] / rest[0], 10.0)
        return max(every[0], rest[0] / factor), min(every[1], rest[1] * factor)
    room = rest[1] - rest[0] or abs(rest[1])
    return max(every[0], rest[0] - room), min(every[1], rest[1] + room)


def axis_range(axis: Axis, marks: tuple[Mark, ...], which: str) -> tuple[float, float]:
    """Return the ends of an axis: its own where given, else those of its marks with some room.

    Parameters
    ----------
    axis : Axis
        The axis.
    marks : tuple of Mark
        Everything drawn against it.
    which : str
        ``x`` or ``y``.

    Returns
    -------
    tuple of float
        Low and high; positive on a logarithmic axis, never equal.
    """
    low, high = _extent_of_marks(axis, marks, which)
    if axis.log:
        room = max(0.04 * np.log(high / low), 0.05)
        low, high = low * float(np.exp(-room)), high * float(np.exp(room))
    else:
        room = 0.05 * (high - low) or 0.05 * abs(high) or 0.5
        # A quantity that is never negative keeps its axis from going below zero.
        low = 0.0 if low >= 0 and low - room < 0 else low - room
        high += 1.8 * room
    low = axis.low if axis.low is not None else low
    high = axis.high if axis.high is not None else high
    return (low, high) if high > low else (low, low * 1.1 if axis.log else low + 1.0)
