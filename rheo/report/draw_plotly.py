"""Draw a picture with Plotly, for the page and for the HTML note."""

from __future__ import annotations

import html
import math
from typing import TYPE_CHECKING, Any

import numpy as np

from rheo.errors import GROUP
from rheo.report.palette import Palette, palette
from rheo.report.picture import (
    Axis,
    Band,
    Bars,
    Label,
    Limit,
    Line,
    Mark,
    Panel,
    Picture,
    Points,
    Strip,
    axis_range,
)
from rheo.report.text import one_line
from rheo.report.ticks import log_ticks

if TYPE_CHECKING:
    import plotly.graph_objects

FONT = "system-ui, 'Segoe UI', 'Noto Sans', 'DejaVu Sans', sans-serif"
TEXT_SIZE = 13
_LONGEST = 60
_SYMBOLS = {
    "circle": "circle",
    "square": "square",
    "triangle": "triangle-up",
    "diamond": "diamond",
    "cross": "x-thin",
    "triangle-down": "triangle-down",
}
_GAP_BETWEEN_PANELS = 0.07


def label(value: str, longest: int = _LONGEST) -> str:
    """Return text as Plotly shows it: markup and template signs stand for themselves."""
    lines = [one_line(line, longest) for line in str(value).split("\n")]
    return "<br>".join(html.escape(line, quote=False).replace("%{", "%\u200b{") for line in lines)


# So many names of places along an axis no longer stand in one row on a telephone.
_MANY_NAMES = 8


def figure(picture: Picture, dark: bool = False) -> plotly.graph_objects.Figure:
    """Return a Plotly figure of a picture.

    Parameters
    ----------
    picture : Picture
        What to draw.
    dark : bool
        Whether it stands on a dark page.

    Returns
    -------
    plotly.graph_objects.Figure
        Its width follows the page; readings carry their number in ``customdata``.
    """
    import plotly.graph_objects as go

    colours = palette(dark)
    drawn = go.Figure(layout=_layout(picture, colours))
    everything = tuple(mark for panel in picture.panels for mark in panel.marks)
    last = len(picture.panels)
    drawn.layout.xaxis = _axis(picture.x, axis_range(picture.x, everything, "x"), colours)
    drawn.layout.xaxis.anchor = _axis_name("y", last)
    if len(picture.x.ticks or ()) >= _MANY_NAMES:
        # In two rows, so that they stay apart on a narrow page.
        names = drawn.layout.xaxis.ticktext
        drawn.layout.xaxis.ticktext = [
            f"<br>{name}" if place % 2 else name for place, name in enumerate(names)
        ]
    named: set[str] = set()
    for number, (panel, domain) in enumerate(
        zip(picture.panels, _domains(picture.panels), strict=True), 1
    ):
        key = "yaxis" if number == 1 else f"yaxis{number}"
        axis = _axis(panel.y, axis_range(panel.y, panel.marks, "y"), colours)
        axis["domain"] = domain
        drawn.layout[key] = axis
        for mark in panel.marks:
            if isinstance(mark, Strip | Limit):
                drawn.add_shape(_shape(mark, number, colours))
                continue
            for trace in _TRACES[type(mark)](mark, colours):
                _name_once(trace, named)
                drawn.add_trace({**trace, "xaxis": "x", "yaxis": _axis_name("y", number)})
    drawn.layout.showlegend = bool(named)
    return drawn


def _axis_name(letter: str, number: int) -> str:
    return letter if number == 1 else f"{letter}{number}"


def _domains(panels: tuple[Panel, ...]) -> list[list[float]]:
    """Return the vertical share of each panel, the first at the top."""
    free = 1.0 - _GAP_BETWEEN_PANELS * (len(panels) - 1)
    total = sum(panel.share for panel in panels)
    top, domains = 1.0, []
    for panel in panels:
        bottom = max(top - free * panel.share / total, 0.0)
        domains.append([bottom, top])
        top = bottom - _GAP_BETWEEN_PANELS
    return domains


def _layout(picture: Picture, colours: Palette) -> dict[str, Any]:
    return {
        "template": "none",
        "height": picture.height,
        "margin": {"l": 76, "r": 18, "t": 12, "b": 56},
        "font": {"family": FONT, "size": TEXT_SIZE, "color": colours.ink},
        "paper_bgcolor": "rgba(0,0,0,0)",
        "plot_bgcolor": "rgba(0,0,0,0)",
        "legend": {"orientation": "h", "x": 0, "y": 1.02, "yanchor": "bottom"},
        "hoverlabel": {"font": {"family": FONT, "size": TEXT_SIZE}, "namelength": -1},
        "hovermode": "closest",
        "barmode": "overlay",
        "colorway": [series.colour for series in colours.series],
        "separators": f".{GROUP}",
        "meta": {"description": label(picture.description, 500)},
    }


def _axis(axis: Axis, ends: tuple[float, float], colours: Palette) -> dict[str, Any]:
    drawn: dict[str, Any] = {
        "title": {"text": label(axis.title), "standoff": 10},
        "gridcolor": colours.rule,
        "linecolor": colours.muted,
        "tickcolor": colours.muted,
        "showline": True,
        "ticks": "outside",
        "zeroline": False,
        "automargin": True,
        "exponentformat": "power",
        "minexponent": 6,
    }
    low, high = ends
    if axis.log:
        low, high = math.log10(low), math.log10(high)
        minor = {"showgrid": high - low < 4, "dtick": "D1", "gridcolor": _rgba(colours.rule, 0.45)}
        # As in the static figures: decades from 0.001 to 10,000 are written out.
        plain = low > -4 and high < 5
        powers = {"exponentformat": "none" if plain else "power", "minexponent": 3}
        drawn |= {"type": "log", "dtick": 1, **powers, "minor": minor}
        if high - low < 2.0:
            # Plotly would name 20 and 50 as bare 2 and 5.
            named, _ = log_ticks(*ends)
            drawn |= {
                "tickvals": [at for at, _ in named],
                "ticktext": [words for _, words in named],
            }
    if axis.ticks:
        names = [label(name, 28) for _, name in axis.ticks]
        drawn |= {"tickvals": [at for at, _ in axis.ticks], "ticktext": names, "showgrid": False}
    drawn["range"] = [high, low] if axis.descending else [low, high]
    return drawn


def _name_once(trace: dict[str, Any], named: set[str]) -> None:
    """Show each name once in the legend, and traces without a name never."""
    name = trace.get("name", "")
    trace["showlegend"] = bool(name) and name not in named
    trace["legendgroup"] = name
    if name:
        named.add(name)


def _hover(texts: tuple[str, ...], name: str) -> dict[str, Any]:
    if texts:
        return {"hovertext": [label(text, 90) for text in texts], "hoverinfo": "text"}
    extra = "<extra>%{fullData.name}</extra>" if name else "<extra></extra>"
    return {"hovertemplate": "%{x:.4~g}, %{y:.4~g}" + extra}


def _points(mark: Points, colours: Palette) -> list[dict[str, Any]]:
    series = colours.style(mark.style)
    shape = colours.style(mark.marker).marker if mark.marker is not None else series.marker
    colour = getattr(colours, mark.colour) if mark.colour else series.colour
    symbol = _SYMBOLS[shape]
    marker: dict[str, Any] = {"symbol": symbol, "size": mark.size, "color": colour}
    if mark.hollow:
        marker |= {"symbol": symbol.removesuffix("-thin") + "-open", "line": {"width": 1.6}}
    elif symbol == "x-thin":
        marker["line"] = {"width": 2, "color": colour}
    traces: list[dict[str, Any]] = [
        {
            "type": "scatter",
            "mode": "markers",
            "x": mark.x,
            "y": mark.y,
            "name": label(mark.name),
            "marker": marker,
            "customdata": list(mark.index) or None,
            **_hover(mark.hover, mark.name),
        }
    ]
    if mark.ringed is not None and np.any(mark.ringed):
        ring = {"symbol": "circle-open", "size": mark.size + 9, "color": colours.bad}
        traces.append(
            {
                "type": "scatter",
                "mode": "markers",
                "x": mark.x[mark.ringed],
                "y": mark.y[mark.ringed],
                "name": "flagged",
                "marker": {**ring, "line": {"width": 2}},
                "hoverinfo": "skip",
            }
        )
    return traces


def _dash(dash: tuple[float, ...], width: float) -> str:
    return ",".join(f"{length * width:g}px" for length in dash) if dash else "solid"


def _line(mark: Line, colours: Palette) -> list[dict[str, Any]]:
    series = colours.style(mark.style)
    dash = colours.style(mark.dash).dash if mark.dash is not None else series.dash
    width = 1.2 if mark.faint else mark.width
    return [
        {
            "type": "scatter",
            "mode": "lines",
            "x": mark.x,
            "y": mark.y,
            "name": label(mark.name),
            "opacity": 0.75 if mark.faint else 1.0,
            "line": {
                "color": getattr(colours, mark.colour) if mark.colour else series.colour,
                "width": width,
                "dash": _dash(dash, width),
                "shape": "hv" if mark.steps else "linear",
            },
            **_hover((mark.hover,) if mark.hover else (), mark.name),
        }
    ]


def _rgba(colour: str, opacity: float) -> str:
    red, green, blue = (int(colour[i : i + 2], 16) for i in (1, 3, 5))
    return f"rgba({red},{green},{blue},{opacity:g})"


def _band(mark: Band, colours: Palette) -> list[dict[str, Any]]:
    known = np.isfinite(mark.low) & np.isfinite(mark.high)
    x, low, high = mark.x[known], mark.low[known], mark.high[known]
    return [
        {
            "type": "scatter",
            "mode": "lines",
            "x": np.concatenate([x, x[::-1]]),
            "y": np.concatenate([low, high[::-1]]),
            "fill": "toself",
            "fillcolor": _rgba(colours.style(mark.style).colour, 0.18),
            "line": {"width": 0},
            "name": label(mark.name),
            "hoverinfo": "skip",
        }
    ]


def _bars(mark: Bars, colours: Palette) -> list[dict[str, Any]]:
    muted = mark.muted if mark.muted is not None else np.zeros(mark.at.shape, dtype=bool)
    colour = colours.style(mark.style).colour
    edge = colours.rule if mark.plain else colours.muted
    length = mark.high - mark.low
    along, across = ("x", "y") if mark.horizontal else ("y", "x")
    return [
        {
            "type": "bar",
            "orientation": "h" if mark.horizontal else "v",
            across: mark.at,
            along: length,
            "base": mark.low,
            "width": mark.width,
            "name": label(mark.name),
            "text": [label(item) for item in mark.labels] or None,
            "textposition": "outside",
            "cliponaxis": False,
            "marker": {
                "color": [colours.rule if grey else colour for grey in muted],
                "line": {
                    "color": [edge if grey else colour for grey in muted],
                    "width": 1,
                },
                "pattern": {"shape": ["/" if grey and not mark.plain else "" for grey in muted]},
            },
            **_hover(mark.hover, mark.name),
        }
    ]


def _aside(words: str, mark: Label) -> str:
    """Move a text away from the marker at its point."""
    if mark.anchor != "middle":
        room = "&nbsp;" * 3
        words = room + words if mark.anchor == "start" else words + room
    if mark.shift <= -12:
        return f"&nbsp;<br>{words}"
    return f"{words}<br>&nbsp;" if mark.shift >= 12 else words


def _label(mark: Label, colours: Palette) -> list[dict[str, Any]]:
    across = {"start": "right", "middle": "center", "end": "left"}[mark.anchor]
    up = "top" if mark.shift > 0 else "bottom" if mark.shift < 0 else "middle"
    return [
        {
            "type": "scatter",
            "mode": "text",
            "x": [mark.x],
            "y": [mark.y],
            "text": [_aside(label(mark.text), mark)],
            "textposition": f"{up} {across}",
            "textfont": {"color": getattr(colours, mark.colour), "size": TEXT_SIZE - 1},
            "hoverinfo": "skip",
            "cliponaxis": False,
        }
    ]


_TRACES: dict[type[Mark], Any] = {
    Points: _points,
    Line: _line,
    Band: _band,
    Bars: _bars,
    Label: _label,
}


def _shape(mark: Strip | Limit, number: int, colours: Palette) -> dict[str, Any]:
    y_name = _axis_name("y", number)
    along_x = mark.axis == "x"
    place = {
        "xref": "x" if along_x else "x domain",
        "yref": f"{y_name} domain" if along_x else y_name,
    }
    along, across = ("x", "y") if along_x else ("y", "x")
    named = {"text": label(mark.name), "font": {"size": TEXT_SIZE - 1, "color": colours.muted}}
    if isinstance(mark, Strip):
        return {
            "type": "rect",
            f"{along}0": mark.low,
            f"{along}1": mark.high,
            f"{across}0": 0,
            f"{across}1": 1,
            "fillcolor": colours.strip,
            "line": {"width": 0},
            "layer": "below",
            "label": {**named, "textposition": "top left"},
            **place,
        }
    colour = getattr(colours, mark.colour)
    return {
        "type": "line",
        f"{along}0": mark.value,
        f"{along}1": mark.value,
        f"{across}0": 0,
        f"{across}1": 1,
        "line": {"color": colour, "width": 1.6, "dash": "6px,3px"},
        "label": {
            **named,
            "font": {"size": TEXT_SIZE - 1, "color": colour},
            "textposition": "end",
            "yanchor": "bottom",
            "xanchor": "right",
        },
        **place,
    }
