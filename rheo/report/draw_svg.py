"""Draw a picture as static SVG for the PDF: no browser, the same text for the same picture."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from rheo.report.palette import LIGHT
from rheo.report.picture import (
    Axis,
    Band,
    Bars,
    FloatArray,
    Label,
    Limit,
    Line,
    Mark,
    Picture,
    Points,
    Strip,
    array,
    axis_range,
)
from rheo.report.svg import Svg, shorten, text_width
from rheo.report.ticks import linear_ticks, log_ticks

SIZE = 9.0
_LEGEND_ROW = 14.0
_LEFT, _RIGHT, _BOTTOM, _GAP = 52.0, 12.0, 36.0, 16.0
_LONGEST_TICK = 22


@dataclass(frozen=True)
class _Scale:
    """Maps numbers of an axis to points on the paper."""

    axis: Axis
    low: float
    high: float
    start: float
    end: float

    def __call__(self, values: Any) -> FloatArray:
        raw = np.asarray(values, dtype=float)
        low, high = self.low, self.high
        if self.axis.log:
            usable = np.where(raw > 0, raw, np.nan)
            share = np.log(usable / low) / math.log(high / low)
        else:
            share = (raw - low) / (high - low)
        if self.axis.descending:
            share = 1.0 - share
        return self.start + share * (self.end - self.start)

    def ticks(self, count: int) -> tuple[list[tuple[float, str]], list[float]]:
        if self.axis.ticks:
            return list(self.axis.ticks), []
        if self.axis.log:
            return log_ticks(self.low, self.high)
        return linear_ticks(self.low, self.high, count), []


@dataclass(frozen=True)
class _Frame:
    """One panel on the paper."""

    x: _Scale
    y: _Scale

    @property
    def box(self) -> tuple[float, float, float, float]:
        return self.x.start, self.y.end, self.x.end - self.x.start, self.y.start - self.y.end


def drawing(picture: Picture, width: float = 482.0, height: float | None = None) -> str:
    """Return a picture as SVG text.

    Parameters
    ----------
    picture : Picture
        What to draw.
    width, height : float
        Size in points; the height follows the picture's own when absent.

    Returns
    -------
    str
        A whole SVG document; the same for the same picture.
    """
    height = height if height is not None else 0.62 * picture.height
    svg = Svg(width, height)
    marks = tuple(mark for panel in picture.panels for mark in panel.marks)
    entries = _legend_entries(marks)
    left = _left_margin(picture)
    top = 6.0 + _legend(svg, entries, left, width)
    bottom = height - (_BOTTOM if picture.x.title else 22.0)
    x = _Scale(picture.x, *axis_range(picture.x, marks, "x"), left, width - _RIGHT)
    free = bottom - top - _GAP * (len(picture.panels) - 1)
    total = sum(panel.share for panel in picture.panels)
    for number, panel in enumerate(picture.panels):
        lower = top + free * panel.share / total
        y = _Scale(panel.y, *axis_range(panel.y, panel.marks, "y"), lower, top)
        frame = _Frame(x, y)
        _panel(svg, frame, panel.marks, f"{picture.key}-{number}", panel is picture.panels[-1])
        top = lower + _GAP
    return svg.document(picture.description)


def _left_margin(picture: Picture) -> float:
    names = [name for panel in picture.panels for _, name in panel.y.ticks]
    longest = max((text_width(shorten(name, _LONGEST_TICK), SIZE) for name in names), default=0.0)
    return max(_LEFT, longest + (28.0 if picture.panels[0].y.title else 14.0))


def _legend_entries(marks: tuple[Mark, ...]) -> list[tuple[str, Mark]]:
    entries: dict[str, Mark] = {}
    for mark in marks:
        if isinstance(mark, Points | Line | Band | Bars) and mark.name:
            entries.setdefault(mark.name, mark)
        if isinstance(mark, Points) and mark.ringed is not None and np.any(mark.ringed):
            entries.setdefault("flagged", mark)
    return list(entries.items())


def _legend(svg: Svg, entries: list[tuple[str, Mark]], left: float, width: float) -> float:
    """Draw the legend in rows at the top and return its height."""
    if not entries:
        return 0.0
    x, row = left, 0
    for name, mark in entries:
        shown = shorten(name, 44)
        room = 22.0 + text_width(shown, SIZE) + 12.0
        if x > left and x + room > width:
            x, row = left, row + 1
        y = 8.0 + row * _LEGEND_ROW
        _key(svg, mark, x, y, name == "flagged")
        svg.text(x + 21, y + 3, shown, SIZE, colour=LIGHT.ink)
        x += room
    return (row + 1) * _LEGEND_ROW + 2.0


def _key(svg: Svg, mark: Mark, x: float, y: float, ring: bool) -> None:
    if ring:
        _ring(svg, x + 9, y)
    elif isinstance(mark, Points):
        _marker(svg, mark, x + 9, y)
    elif isinstance(mark, Line):
        svg.path([(x, y), (x + 18, y)], **_stroke(mark))
    elif isinstance(mark, Band | Bars):
        style: dict[str, Any] = {"fill": LIGHT.style(mark.style).colour, "opacity": 0.2}
        if isinstance(mark, Bars):
            style = _bar_style(mark, mark.muted is not None and bool(np.all(mark.muted)))
        svg.add("rect", x=x + 1, y=y - 4, width=16, height=8, **style)


def _panel(svg: Svg, frame: _Frame, marks: tuple[Mark, ...], key: str, last: bool) -> None:
    left, top, width, height = frame.box
    strips = [mark for mark in marks if isinstance(mark, Strip)]
    for strip in strips:
        _strip(svg, frame, strip)
    _grid(svg, frame, last)
    for strip in strips:
        _strip_name(svg, frame, strip)
    svg.clip(key, left - 4, top - 4, width + 8, height + 8)
    svg.open_group(clip_path=f"url(#{key})")
    for mark in marks:
        draw = _DRAW.get(type(mark))
        if draw is not None:
            draw(svg, frame, mark)
    svg.close_group()
    svg.add(
        "rect", x=left, y=top, width=width, height=height, fill="none", stroke=LIGHT.muted,
        stroke_width=0.7,
    )  # fmt: skip
    for mark in marks:
        if isinstance(mark, Limit):
            _limit(svg, frame, mark)


def _grid(svg: Svg, frame: _Frame, last: bool) -> None:
    left, top, width, height = frame.box
    line = {"stroke": LIGHT.rule, "stroke_width": 0.6}
    named, minor = frame.x.ticks(7)
    faint = {"stroke": LIGHT.rule, "stroke_width": 0.25}
    for at, style in [(v, faint) for v in minor] + [(v, line) for v, _ in named]:
        x = float(frame.x(at))
        if not frame.x.axis.ticks:
            svg.add("line", x1=x, y1=top, x2=x, y2=top + height, **style)
    if last:
        size = SIZE if len(named) < 16 else 7.5
        for at, name in named:
            svg.text(
                float(frame.x(at)), top + height + 12, shorten(name, 14), size, "middle", LIGHT.ink
            )
        svg.text(left + width / 2, top + height + 29, frame.x.axis.title, SIZE, "middle", LIGHT.ink)
    named, minor = frame.y.ticks(max(3, int(height / 24)))
    for at, style in [(v, faint) for v in minor] + [(v, line) for v, _ in named]:
        y = float(frame.y(at))
        if not frame.y.axis.ticks:
            svg.add("line", x1=left, y1=y, x2=left + width, y2=y, **style)
    for at, name in named:
        shown = shorten(name, _LONGEST_TICK)
        svg.text(left - 5, float(frame.y(at)) + 3, shown, SIZE, "end", LIGHT.ink)
    middle = top + height / 2
    svg.text(11, middle, frame.y.axis.title, SIZE, "middle", LIGHT.ink, turned=True)


def _strip_box(frame: _Frame, mark: Strip) -> tuple[float, float, float, float]:
    """Return left, top, width and height of a strip, cut at the frame."""
    left, top, width, height = frame.box
    a, b = sorted(
        float(v) for v in (frame.x if mark.axis == "x" else frame.y)([mark.low, mark.high])
    )
    if mark.axis == "x":
        a, b = max(a, left), min(b, left + width)
        return a, top, max(b - a, 0.8), height
    a, b = max(a, top), min(b, top + height)
    return left, a, width, max(b - a, 0.8)


def _strip(svg: Svg, frame: _Frame, mark: Strip) -> None:
    x, y, width, height = _strip_box(frame, mark)
    svg.add("rect", x=x, y=y, width=width, height=height, fill=LIGHT.strip)


def _strip_name(svg: Svg, frame: _Frame, mark: Strip) -> None:
    x, y, _, _ = _strip_box(frame, mark)
    svg.text(x + 3, y + 10, mark.name, 8.5, "start", LIGHT.muted, halo=LIGHT.strip)


def _limit(svg: Svg, frame: _Frame, mark: Limit) -> None:
    left, top, width, height = frame.box
    colour = getattr(LIGHT, mark.colour)
    style = {"stroke": colour, "stroke_width": 1.1, "stroke_dasharray": "5 2.5"}
    if mark.axis == "y":
        y = float(frame.y(mark.value))
        svg.add("line", x1=left, y1=y, x2=left + width, y2=y, **style)
        svg.text(left + width - 3, y - 3, mark.name, 8.5, "end", colour, halo="#fff")
    else:
        x = float(frame.x(mark.value))
        svg.add("line", x1=x, y1=top, x2=x, y2=top + height, **style)
        svg.text(x - 3, top + 4, mark.name, 8.5, "end", colour, turned=True)


def _stroke(mark: Line) -> dict[str, Any]:
    series = LIGHT.style(mark.style)
    dash = LIGHT.style(mark.dash).dash if mark.dash is not None else series.dash
    width = 0.8 if mark.faint else 0.7 * mark.width
    return {
        "fill": "none",
        "stroke": getattr(LIGHT, mark.colour) if mark.colour else series.colour,
        "stroke_width": width,
        "stroke_dasharray": " ".join(f"{length * max(width, 1.0):g}" for length in dash) or None,
        "stroke_linejoin": "round",
    }


def _line(svg: Svg, frame: _Frame, mark: Line) -> None:
    x, y = mark.x, mark.y
    if mark.steps and x.size > 1:
        x, y = np.repeat(x, 2)[1:], np.repeat(y, 2)[:-1]
    across, up = frame.x(x), frame.y(y)
    known = np.isfinite(across) & np.isfinite(up)
    # Where a value is missing the line is broken, not bridged.
    for piece in np.split(np.arange(x.size), np.flatnonzero(np.diff(known.astype(int))) + 1):
        if piece.size > 1 and known[piece[0]]:
            svg.path(zip(across[piece], up[piece], strict=True), **_stroke(mark))


def _band(svg: Svg, frame: _Frame, mark: Band) -> None:
    across, low, high = frame.x(mark.x), frame.y(mark.low), frame.y(mark.high)
    known = np.isfinite(across) & np.isfinite(low) & np.isfinite(high)
    across, low, high = across[known], low[known], high[known]
    outline = np.concatenate([np.c_[across, low], np.c_[across, high][::-1]])
    fill = LIGHT.style(mark.style).colour
    svg.path(map(tuple, outline), True, fill=fill, opacity=0.2)


def _ring(svg: Svg, x: float, y: float) -> None:
    svg.add("circle", cx=x, cy=y, r=5.6, fill="none", stroke=LIGHT.bad, stroke_width=1.3)


def _marker(svg: Svg, mark: Points, x: float, y: float) -> None:
    series = LIGHT.style(mark.style)
    shape = LIGHT.style(mark.marker).marker if mark.marker is not None else series.marker
    colour = getattr(LIGHT, mark.colour) if mark.colour else series.colour
    svg.marker(x, y, shape, 0.34 * mark.size, colour, mark.hollow)


def _points(svg: Svg, frame: _Frame, mark: Points) -> None:
    ringed = mark.ringed if mark.ringed is not None else np.zeros(mark.x.shape, dtype=bool)
    for x, y, ring in zip(frame.x(mark.x), frame.y(mark.y), ringed, strict=True):
        if math.isfinite(x) and math.isfinite(y):
            _marker(svg, mark, float(x), float(y))
            if ring:
                _ring(svg, float(x), float(y))


def _bars(svg: Svg, frame: _Frame, mark: Bars) -> None:
    muted = mark.muted if mark.muted is not None else np.zeros(mark.at.shape, dtype=bool)
    along, across = (frame.x, frame.y) if mark.horizontal else (frame.y, frame.x)
    low = np.where(mark.low > 0, mark.low, along.low) if along.axis.log else mark.low
    starts, ends = along(low), along(mark.high)
    sides = across(array([mark.at - mark.width / 2, mark.at + mark.width / 2]))
    for i, (start, end, grey) in enumerate(zip(starts, ends, muted, strict=True)):
        if not (math.isfinite(start) and math.isfinite(end)):
            continue
        (a, b), (c, d) = sorted((start, end)), sorted(sides[:, i])
        x, y, width, height = (a, c, b - a, d - c) if mark.horizontal else (c, a, d - c, b - a)
        svg.add(
            "rect",
            x=float(x),
            y=float(y),
            width=float(width),
            height=float(height),
            **_bar_style(mark, bool(grey)),
        )
        if mark.labels and mark.horizontal:
            svg.text(b + 4, (c + d) / 2 + 3, mark.labels[i], 8.5, "start", LIGHT.ink)
        elif mark.labels:
            svg.text((c + d) / 2, a - 3, mark.labels[i], 8.5, "middle", LIGHT.ink)


def _bar_style(mark: Bars, grey: bool) -> dict[str, Any]:
    colour = LIGHT.style(mark.style).colour
    if not grey:
        return {"fill": colour, "stroke": colour, "stroke_width": 0.7}
    if mark.plain:
        return {"fill": LIGHT.rule}
    return {
        "fill": "#f1f1ef",
        "stroke": LIGHT.muted,
        "stroke_width": 0.7,
        "stroke_dasharray": "2 1.5",
    }


def _label(svg: Svg, frame: _Frame, mark: Label) -> None:
    x, y = float(frame.x(mark.x)), float(frame.y(mark.y))
    colour = getattr(LIGHT, mark.colour)
    down = 0.6 * mark.shift + (-3.0 if mark.shift == 0 else -7.0 if mark.shift < 0 else 0.0)
    aside = {"start": 8.0, "end": -8.0, "middle": 0.0}[mark.anchor] if mark.shift == 0 else 0.0
    svg.text(x + aside, y - down, mark.text, 8.5, mark.anchor, colour, halo="#fff")


_DRAW: dict[type[Mark], Any] = {
    Line: _line,
    Band: _band,
    Points: _points,
    Bars: _bars,
    Label: _label,
}
