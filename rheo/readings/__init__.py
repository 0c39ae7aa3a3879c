"""What an instrument said: files, units, screening, up and down sweeps."""

from __future__ import annotations

from rheo.readings.flow_curve import FlowCurve

__all__ = ["FlowCurve"]
