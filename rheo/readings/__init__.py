"""What an instrument said: files, units, screening, up and down sweeps."""

from __future__ import annotations

from rheo.readings.flow_curve import FlowCurve
from rheo.readings.read import read_readings
from rheo.readings.readings import ColumnRecord, RawBlock, Readings

__all__ = ["ColumnRecord", "FlowCurve", "RawBlock", "Readings", "read_readings"]
