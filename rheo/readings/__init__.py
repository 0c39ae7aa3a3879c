"""What an instrument said: files, units, screening, up and down sweeps."""

from __future__ import annotations

from rheo.readings.flow_curve import FlowCurve
from rheo.readings.read import read_readings
from rheo.readings.readings import ColumnRecord, RawBlock, Readings
from rheo.readings.screening import screen
from rheo.readings.sweeps import loop_area

__all__ = [
    "ColumnRecord",
    "FlowCurve",
    "RawBlock",
    "Readings",
    "loop_area",
    "read_readings",
    "screen",
]
