"""Constants that several files of the line share."""

from __future__ import annotations

# Standard acceleration of gravity [m/s2], CGPM 1901.
GRAVITY = 9.80665
