"""From viscometer readings of a thick product to a transfer line that an engineer can sign.

The public names are handed on lazily (PEP 562), so that ``import rheo`` and ``rheo --help``
stay quick.
"""

from __future__ import annotations

import importlib
from typing import Any

__version__ = "0.1.0"

_PUBLIC = {
    "Fit": "rheo.fitting",
    "Fits": "rheo.fitting",
    "FlowCurve": "rheo.readings",
    "Instrument": "rheo.fitting",
    "compare_sweeps": "rheo.fitting.sweeps",
    "compare_weightings": "rheo.fitting.compare_weightings",
    "fit_concentrations": "rheo.fitting.concentration",
    "fit_temperatures": "rheo.fitting.temperature",
    "static_from_vane": "rheo.fitting.sweeps",
    "fit": "rheo.fitting",
    "Readings": "rheo.readings",
    "read_readings": "rheo.readings",
    "screen": "rheo.readings",
    "loop_area": "rheo.readings",
    "InputError": "rheo.errors",
    "Caution": "rheo.errors",
    "Geometry": "rheo.geometry",
    "convert": "rheo.geometry.convert",
    "find_tube_corrections": "rheo.geometry.tube_corrections",
    "geometry": "rheo.geometry",
    "geometry_records": "rheo.geometry",
    "Model": "rheo.models",
    "model": "rheo.models",
    "model_record": "rheo.models",
    "model_records": "rheo.models",
    "PipeFlow": "rheo.hydraulics",
    "pipe_flow": "rheo.hydraulics",
    "friction_factor": "rheo.hydraulics",
    "critical_velocity": "rheo.hydraulics",
    "velocity_for_gradient": "rheo.hydraulics",
    "diameter_for_gradient": "rheo.hydraulics",
    "regime_map": "rheo.hydraulics",
    "velocity_profile": "rheo.hydraulics",
    "residence_curve": "rheo.hydraulics",
    "developing_length": "rheo.hydraulics",
    "slip_flow": "rheo.hydraulics",
    "slot_flow": "rheo.hydraulics",
    "annulus_flow": "rheo.hydraulics",
    "Line": "rheo.line",
    "LineResult": "rheo.line",
    "Product": "rheo.line",
    "solve_line": "rheo.line",
    "size_line": "rheo.line",
    "start_up": "rheo.line",
    "system_curve": "rheo.line",
    "operating_point": "rheo.line",
    "doubt_budget": "rheo.line",
    "measure_next": "rheo.line",
    "holding_tube": "rheo.line",
    "Case": "rheo.case",
    "CaseResult": "rheo.case",
    "load_case": "rheo.case",
    "run_case": "rheo.case",
    "save_case": "rheo.case",
    "note_html": "rheo.report",
    "note_pdf": "rheo.report",
    "workbook": "rheo.report",
    "BatchResult": "rheo.batches",
    "BatchSettings": "rheo.batches",
    "batch": "rheo.batches",
    "write_table": "rheo.batches",
    "write_note": "rheo.report",
}

__all__ = ["__version__", *_PUBLIC]  # noqa: PLE0604


def __getattr__(name: str) -> Any:
    if name not in _PUBLIC:
        raise AttributeError(f"module 'rheo' has no attribute {name!r}")
    value = getattr(importlib.import_module(_PUBLIC[name]), name)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return sorted(__all__)
