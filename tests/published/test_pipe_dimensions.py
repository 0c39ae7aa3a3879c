"""Dimensions of pipe and tube as the handbooks print them. Values are from memory.

ASME B36.10M in inches, as Crane's "Flow of Fluids" (TP 410) tabulates it; ASME BPE hygienic tube.
"""

from __future__ import annotations

import math

import pytest

from rheo.line import pipe_size
from rheo.units import parse_quantity

INCH = 0.0254
# Nominal size: outside diameter, wall, inside diameter [in].
SCHEDULE_40 = {
    "1 in": (1.315, 0.133, 1.049),
    "2 in": (2.375, 0.154, 2.067),
    "3 in": (3.500, 0.216, 3.068),
    "4 in": (4.500, 0.237, 4.026),
    "6 in": (6.625, 0.280, 6.065),
    "8 in": (8.625, 0.322, 7.981),
}


@pytest.mark.parametrize(("nominal", "printed"), SCHEDULE_40.items())
def test_schedule_40(nominal: str, printed: tuple[float, float, float]) -> None:
    size = pipe_size(f"{nominal} schedule 40")
    # The metric table is rounded to 0.1 mm outside and 0.01 mm in the wall.
    outside, wall, inside = (dimension * INCH for dimension in printed)
    assert size.outside_diameter == pytest.approx(outside, abs=0.1e-3)
    assert size.wall == pytest.approx(wall, abs=0.01e-3)
    assert size.inside_diameter == pytest.approx(inside, abs=0.12e-3)


def test_two_hundred_gallons_a_minute_in_four_inch_pipe() -> None:
    """Crane's table of water in schedule 40 pipe: 5.04 ft/s."""
    area = math.pi / 4.0 * pipe_size("4 in schedule 40").inside_diameter ** 2
    velocity = parse_quantity("200 gpm", "m^3/s") / area
    assert velocity / 0.3048 == pytest.approx(5.04, abs=0.006)


def test_hygienic_two_inch_tube() -> None:
    """2.000 in outside and 0.065 in wall, so 1.870 in inside."""
    size = pipe_size("ASME BPE 2 in")
    assert size.inside_diameter == pytest.approx(1.870 * INCH, abs=0.06e-3)
