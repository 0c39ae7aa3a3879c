"""One palette for the page, the note and the workbook.

Six series colours that stay apart for the three common kinds of colour blindness; each has a
marker and a dash of its own, so that a grey print can be read too.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Series:
    """How one series is told apart.

    Parameters
    ----------
    colour : str
        Hexadecimal colour.
    marker : str
        One of `MARKERS`.
    dash : tuple of float
        Lengths of strokes and gaps in line widths; empty for a solid line.
    """

    colour: str
    marker: str
    dash: tuple[float, ...]


@dataclass(frozen=True)
class Palette:
    """Colours of one variant, light or dark.

    Parameters
    ----------
    name : str
        ``light`` or ``dark``.
    background, surface : str
        The page and what lies on it.
    ink, muted, rule : str
        Text, secondary text, and grid or table lines.
    accent : str
        The one colour for what the reader should look at first.
    good, warning, bad : str
        States; always with a word beside them.
    strip : str
        Shaded strips behind the data.
    series : tuple of Series
        Told apart by colour, marker and dash.
    """

    name: str
    background: str
    surface: str
    ink: str
    muted: str
    rule: str
    accent: str
    good: str
    warning: str
    bad: str
    strip: str
    series: tuple[Series, ...]

    def style(self, number: int) -> Series:
        """Return the series style of a number; past the last one the colours come round again."""
        return self.series[number % len(self.series)]


MARKERS = ("circle", "square", "triangle", "diamond", "cross", "triangle-down")
DASHES: tuple[tuple[float, ...], ...] = (
    (),
    (5.0, 2.5),
    (1.2, 2.0),
    (6.0, 2.0, 1.2, 2.0),
    (9.0, 3.0),
    (3.0, 2.0, 3.0, 5.0),
)


def _series(*colours: str) -> tuple[Series, ...]:
    return tuple(
        Series(colour, marker, dash)
        for colour, marker, dash in zip(colours, MARKERS, DASHES, strict=True)
    )


LIGHT = Palette(
    name="light",
    background="#fbfaf7",
    surface="#ffffff",
    ink="#1d2529",
    muted="#566269",
    rule="#d9dcda",
    accent="#0559b7",
    good="#1f7a4d",
    warning="#9a5b00",
    bad="#b3261e",
    strip="#dfe9e4",
    series=_series("#0559b7", "#a53104", "#01a093", "#682f5e", "#c67300", "#a56cf0"),
)

DARK = Palette(
    name="dark",
    background="#14191d",
    surface="#1b2227",
    ink="#e9edee",
    muted="#a3afb5",
    rule="#37424a",
    accent="#5aa2f2",
    good="#5fcf95",
    warning="#f0b557",
    bad="#ff8a7d",
    strip="#24343a",
    series=_series("#3f8fea", "#d4572a", "#52ead5", "#e58fa8", "#ead04a", "#a7b4ff"),
)


def palette(dark: bool = False) -> Palette:
    """Return the light or the dark variant."""
    return DARK if dark else LIGHT
