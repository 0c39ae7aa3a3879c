"""The palette: readable, and told apart by people who see colours differently."""

from __future__ import annotations

import itertools

import numpy as np
import pytest

from rheo.report.palette import DASHES, MARKERS, Palette, palette

# Simulation of complete protanopia, deuteranopia and tritanopia on linear RGB: Machado, Oliveira
# & Fernandes, IEEE Trans. Vis. Comput. Graph. 15 (2009) 1291, table for severity 1.0 (from memory).
SIGHT = {
    "usual": np.eye(3),
    "protanopia": np.array(
        [
            [0.152286, 1.052583, -0.204868],
            [0.114503, 0.786281, 0.099216],
            [-0.003882, -0.048116, 1.051998],
        ]
    ),
    "deuteranopia": np.array(
        [
            [0.367322, 0.860646, -0.227968],
            [0.280085, 0.672501, 0.047413],
            [-0.011820, 0.042940, 0.968881],
        ]
    ),
    "tritanopia": np.array(
        [
            [1.255528, -0.076749, -0.178779],
            [-0.078411, 0.930809, 0.147602],
            [0.004733, 0.691367, 0.303900],
        ]
    ),
}
# Oklab, Björn Ottosson, "A perceptual color space for image processing" (2020), from memory.
TO_CONES = np.array(
    [
        [0.4122214708, 0.5363325363, 0.0514459929],
        [0.2119034982, 0.6806995451, 0.1073969566],
        [0.0883024619, 0.2817188376, 0.6299787005],
    ]
)
TO_OKLAB = np.array(
    [
        [0.2104542553, 0.7936177850, -0.0040720468],
        [1.9779984951, -2.4285922050, 0.4505937099],
        [0.0259040371, 0.7827717662, -0.8086757660],
    ]
)


def linear(colour: str) -> np.ndarray:
    """Return linear RGB of a hexadecimal colour (IEC 61966-2-1)."""
    value = np.array([int(colour[i : i + 2], 16) for i in (1, 3, 5)]) / 255.0
    return np.where(value <= 0.04045, value / 12.92, ((value + 0.055) / 1.055) ** 2.4)


def contrast(one: str, other: str) -> float:
    """Return the contrast ratio of two colours (WCAG 2.2, 1.4.3)."""
    light = sorted(linear(c) @ np.array([0.2126, 0.7152, 0.0722]) for c in (one, other))
    return float((light[1] + 0.05) / (light[0] + 0.05))


def seen(colour: str, sight: str) -> np.ndarray:
    """Return Oklab coordinates of a colour as seen."""
    return TO_OKLAB @ np.cbrt(TO_CONES @ np.clip(SIGHT[sight] @ linear(colour), 0.0, 1.0))


VARIANTS = pytest.mark.parametrize("chosen", [palette(), palette(dark=True)], ids=lambda p: p.name)


@VARIANTS
@pytest.mark.parametrize("sight", SIGHT)
def test_series_stay_apart_for_every_kind_of_sight(chosen: Palette, sight: str) -> None:
    points = [seen(series.colour, sight) for series in chosen.series]
    nearest = min(np.linalg.norm(a - b) for a, b in itertools.combinations(points, 2))
    # A just noticeable difference is about 0.02 in Oklab; four of them are seen at a glance.
    assert nearest > 0.08


@VARIANTS
def test_text_and_series_stand_out_from_what_is_behind_them(chosen: Palette) -> None:
    for behind in (chosen.background, chosen.surface):
        for text in ("ink", "muted", "accent", "good", "warning", "bad"):
            assert contrast(getattr(chosen, text), behind) >= 4.5, text
        for series in chosen.series:
            assert contrast(series.colour, behind) >= 3.0


@VARIANTS
def test_series_are_told_apart_without_colour(chosen: Palette) -> None:
    assert {series.marker for series in chosen.series} == set(MARKERS)
    assert len({series.dash for series in chosen.series}) == len(DASHES) == len(chosen.series)


def test_more_series_than_colours_come_round_again() -> None:
    light = palette()
    assert light.style(len(light.series)) == light.style(0)
