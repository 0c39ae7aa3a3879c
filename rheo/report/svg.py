"""A small builder of SVG text: shapes, markers and text that stays text."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any
from xml.sax.saxutils import escape, quoteattr

from rheo.report.text import for_pdf, one_line

FONT = "Libertinus Serif"
# Mean width of a letter of the font, in ems; used to lay out legends.
LETTER_WIDTH = 0.44


def shorten(value: str, longest: int = 60) -> str:
    """Return text on one line that the PDF's fonts can show."""
    return for_pdf(one_line(value, longest))


def text_width(value: str, size: float) -> float:
    """Return about how wide a text is, in the unit of its size."""
    return LETTER_WIDTH * size * len(value)


def _attributes(values: dict[str, object]) -> str:
    parts = []
    for key, value in values.items():
        if value is None:
            continue
        shown = f"{value:.2f}" if isinstance(value, float) else str(value)
        parts.append(f" {key.rstrip('_').replace('_', '-')}={quoteattr(shown)}")
    return "".join(parts)


class Svg:
    """Collects elements; `document` returns the whole text.

    Parameters
    ----------
    width, height : float
        Size in points, which are also the units of all coordinates.
    """

    def __init__(self, width: float, height: float) -> None:
        self.width = width
        self.height = height
        self._parts: list[str] = []

    def add(self, name: str, **attributes: object) -> None:
        """Add an element without content; ``_`` in an attribute's name stands for ``-``."""
        self._parts.append(f"<{name}{_attributes(attributes)}/>")

    def text(
        self,
        x: float,
        y: float,
        value: str,
        size: float = 9.0,
        anchor: str = "start",
        colour: str = "#000",
        turned: bool = False,
        halo: str | None = None,
    ) -> None:
        """Add a text; `turned` makes it read upwards, `halo` keeps lines behind it clear."""
        if not value:
            return
        attributes = _attributes(
            {
                "x": x,
                "y": y,
                "font_size": size,
                "text_anchor": anchor,
                "fill": colour,
                "stroke": halo,
                "stroke_width": 2.5 if halo else None,
                "stroke_linejoin": "round" if halo else None,
                "paint_order": "stroke" if halo else None,
                "transform": f"rotate(-90 {x:.2f} {y:.2f})" if turned else None,
            }
        )
        self._parts.append(f"<text{attributes}>{escape(shorten(value))}</text>")

    def path(
        self, points: Iterable[tuple[float, float]], closed: bool = False, **style: Any
    ) -> None:
        """Add a line through points, filled when closed."""
        steps = " ".join(f"{x:.2f},{y:.2f}" for x, y in points)
        if steps:
            self.add("polygon" if closed else "polyline", points=steps, **style)

    def open_group(self, **attributes: object) -> None:
        """Begin a group."""
        self._parts.append(f"<g{_attributes(attributes)}>")

    def close_group(self) -> None:
        """End the group begun last."""
        self._parts.append("</g>")

    def clip(self, name: str, x: float, y: float, width: float, height: float) -> None:
        """Define a clipping rectangle."""
        inner = _attributes({"x": x, "y": y, "width": width, "height": height})
        self._parts.append(f"<clipPath id={quoteattr(name)}><rect{inner}/></clipPath>")

    def marker(
        self, x: float, y: float, shape: str, radius: float, colour: str, hollow: bool = False
    ) -> None:
        """Add a marker of the palette's shapes, filled or as an outline."""
        style = {"fill": "#fff" if hollow else colour, "stroke": colour, "stroke_width": 1.1}
        r = radius
        if shape == "circle":
            self.add("circle", cx=x, cy=y, r=r, **style)
        elif shape == "square":
            s = 0.88 * r
            self.add("rect", x=x - s, y=y - s, width=2 * s, height=2 * s, **style)
        elif shape == "cross":
            s = 0.8 * r
            style = {"stroke": colour, "stroke_width": 1.1 if hollow else 1.8}
            self.add("line", x1=x - s, y1=y - s, x2=x + s, y2=y + s, **style)
            self.add("line", x1=x - s, y1=y + s, x2=x + s, y2=y - s, **style)
        else:
            self.path([(x + dx * r, y + dy * r) for dx, dy in _CORNERS[shape]], True, **style)

    def document(self, description: str = "") -> str:
        """Return the SVG text."""
        size = f"0 0 {self.width:g} {self.height:g}"
        title = f"<title>{escape(shorten(description, 300))}</title>" if description else ""
        body = "".join(self._parts)
        return (
            f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="{size}" width="{self.width:g}pt" '
            f'height="{self.height:g}pt" font-family="{FONT}">{title}{body}</svg>'
        )


_CORNERS = {
    "triangle": ((0.0, -1.15), (1.05, 0.75), (-1.05, 0.75)),
    "triangle-down": ((0.0, 1.15), (1.05, -0.75), (-1.05, -0.75)),
    "diamond": ((0.0, -1.25), (1.0, 0.0), (0.0, 1.25), (-1.0, 0.0)),
}
