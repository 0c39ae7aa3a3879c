"""The legend of a picture as text that flows, so that a narrow page leaves the picture its room."""

from __future__ import annotations

from typing import Any
from urllib.parse import quote

from ui import style

_WIDE, _HIGH = 26, 14
_SHAPES = {
    "circle": '<circle cx="13" cy="7" r="4.2"/>',
    "square": '<rect x="9" y="3" width="8" height="8"/>',
    "triangle-up": '<path d="M13 2.4L17.8 11H8.2Z"/>',
    "triangle-down": '<path d="M13 11.6L17.8 3H8.2Z"/>',
    "diamond": '<path d="M13 1.8L18.2 7L13 12.2L7.8 7Z"/>',
    "x": '<path d="M9 3L17 11M17 3L9 11"/>',
}


def html(figure: Any) -> str:
    """Return the legend of a Plotly figure as HTML; empty where it has none.

    Parameters
    ----------
    figure : plotly.graph_objects.Figure
        From ``picture.plotly()``.
    """
    entries = []
    bands = 0
    for trace in figure.data:
        if not (trace.showlegend and trace.name):
            continue
        name = style.escape(str(trace.name).replace("<br>", " "))
        if trace.type == "scatter" and trace.fill:
            # One entry for all bands: each has the colour of its line.
            bands += 1
            if bands > 1:
                continue
            name = name.rpartition(", ")[2]
        swatch = _swatch(trace.to_plotly_json())
        entries.append(f"<span>{swatch}{_unescaped(name)}</span>")
    return f'<div class="rheo-legend">{"".join(entries)}</div>' if len(entries) > 1 else ""


def _unescaped(name: str) -> str:
    """Undo the second escaping of names that the drawing has escaped already."""
    for sign in ("lt", "gt", "amp"):
        name = name.replace(f"&amp;{sign};", f"&{sign};")
    return name


def _swatch(trace: dict[str, Any]) -> str:
    marker, line = trace.get("marker", {}), trace.get("line", {})
    if trace["type"] == "bar":
        colour = marker.get("color", "gray")
        colour = next((one for one in colour), "gray") if isinstance(colour, list) else colour
        inside = f'<rect x="6" y="2" width="14" height="10" fill="{colour}"/>'
    elif trace.get("fill"):
        inside = f'<rect x="2" y="2" width="22" height="10" fill="{trace["fillcolor"]}"/>'
    elif "markers" in trace.get("mode", ""):
        inside = _marker(marker)
    else:
        dash = str(line.get("dash") or "solid").replace("px", "")
        dashes = "" if dash == "solid" else f' stroke-dasharray="{dash}"'
        inside = (
            f'<path d="M1 7H25" fill="none" stroke="{line.get("color", "gray")}" '
            f'stroke-width="{line.get("width", 2)}"{dashes}/>'
        )
    size = f'width="{_WIDE}" height="{_HIGH}" viewBox="0 0 {_WIDE} {_HIGH}"'
    drawn = f'<svg xmlns="http://www.w3.org/2000/svg" {size}>{inside}</svg>'
    # An image, because drawings that stand in the text itself are taken out of it.
    return f'<img alt="" width="{_WIDE}" height="{_HIGH}" src="data:image/svg+xml,{quote(drawn)}">'


def _marker(marker: dict[str, Any]) -> str:
    symbol, colour = str(marker.get("symbol", "circle")), marker.get("color", "gray")
    hollow = symbol.endswith("-open")
    shape = symbol.removesuffix("-open").removesuffix("-thin")
    outline = hollow or shape == "x"
    paint = f'fill="{"none" if outline else colour}" stroke="{colour}" stroke-width="1.6"'
    big = ' transform="translate(13 7) scale(1.35) translate(-13 -7)"'
    ring = big if hollow and marker.get("size", 0) > 14 else ""
    return f"<g {paint}{ring}>{_SHAPES.get(shape, _SHAPES['circle'])}</g>"
