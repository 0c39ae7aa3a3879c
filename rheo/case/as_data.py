"""Readings and fits as plain data for JSON, in SI under the names of the program."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import fields, is_dataclass
from typing import Any

import numpy as np

from rheo.errors import Caution, without_exponents
from rheo.fitting import Fit, Fits
from rheo.fitting.scaled_fits import ScaledFits
from rheo.hydraulics import PipeFlow
from rheo.line.result import plain
from rheo.models import Model
from rheo.readings import Readings


def model_data(model: Model) -> dict[str, Any]:
    """Return key and parameters of a flow curve."""
    return {
        "key": model.key,
        "parameters": {key: plain(value) for key, value in model.parameters.items()},
    }


def cautions_data(cautions: tuple[Caution, ...]) -> list[dict[str, Any]]:
    """Return Cautions as a list."""
    return [caution.as_dict() for caution in cautions]


def readings_data(readings: Readings) -> dict[str, Any]:
    """Return the columns of readings, their geometry and which are left out."""
    geometry = readings.geometry
    curve = readings.flow_curve()
    return {
        "source": readings.source,
        "count": len(readings),
        "excluded": np.flatnonzero(readings.left_out).tolist(),
        "geometry": None
        if geometry is None
        else {
            "key": geometry.key,
            "dimensions": {key: plain(value) for key, value in geometry.dimensions.items()},
        },
        "columns": {
            key: [str(word) for word in getattr(readings, key)]
            if key in ("branch", "block")
            else plain(getattr(readings, key))
            for key in readings.present
        },
        "flow_curve": {"rate": plain(curve.rate), "stress": plain(curve.stress)},
        "cautions": cautions_data(readings.cautions),
    }


def fit_data(fit: Fit) -> dict[str, Any]:
    """Return one fitted model."""
    return {
        "key": fit.key,
        "name": fit.record.name,
        "parameters": {
            key: {
                "value": plain(one.value),
                "stderr": plain(one.stderr),
                "low": plain(one.low),
                "high": plain(one.high),
                "unit": one.unit,
                "bound": one.bound,
                "note": one.note,
            }
            for key, one in fit.parameters.items()
        },
        "aicc": plain(fit.aicc),
        "readings_for_aicc": fit.readings_for_aicc,
        "weight": plain(fit.weight),
        "rms_relative_error": plain(fit.rms_relative_error),
        "worst_relative_error": plain(fit.worst_relative_error),
        "points": fit.points.tolist(),
        "cautions": cautions_data(fit.cautions),
    }


def fits_data(fits: Fits) -> dict[str, Any]:
    """Return the ranking with its reason."""
    found: dict[str, Any] = {
        "best": fits.best.key,
        "reason": without_exponents(fits.reason),
        "weighting": fits.weighting.name,
        "ranking": [fit_data(fit) for fit in fits.ranking],
        "skipped": dict(fits.skipped),
        "cautions": cautions_data(fits.cautions),
    }
    if isinstance(fits, ScaledFits) and fits.law is not None:
        found["state"] = {
            "name": fits.law.state,
            "unit": fits.law.unit,
            "reference": fits.law.reference,
            "range": plain(fits.range),
            "equation": fits.law.equation,
            "source": fits.law.source,
        }
    return found


PIPE_NAMES = (
    *("diameter", "velocity", "density", "roughness", "method", "criterion", "regime"),
    *("wall_stress", "wall_rate", "nominal_rate", "local_flow_index", "local_consistency"),
    *("reynolds", "critical_reynolds", "critical_velocity", "friction_factor"),
    *("pressure_gradient", "velocity_ratio", "kinetic_energy_factor", "plug_fraction"),
)


def pipe_data(flow: PipeFlow) -> dict[str, Any]:
    """Return the flow in one pipe."""
    return {
        **{name: plain(getattr(flow, name)) for name in PIPE_NAMES},
        "cautions": cautions_data(flow.cautions),
    }


_SENTENCES = {"sentence", "sentences", "reasons"}


def _readable(value: Any) -> Any:
    if isinstance(value, list):
        return [_readable(one) for one in value]
    return without_exponents(value) if isinstance(value, str) else value


def data(value: Any) -> Any:
    """Return a frozen result of the engine, fields and properties of fields, as plain data.

    Parameters
    ----------
    value : dataclass, tuple, mapping, array, number or text
        Nested as deep as it likes.
    """
    if isinstance(value, Caution):
        return value.as_dict()
    if isinstance(value, Model):
        return model_data(value)
    if is_dataclass(value) and not isinstance(value, type):
        found = {one.name: data(getattr(value, one.name)) for one in fields(value)}
        return {name: _readable(one) if name in _SENTENCES else one for name, one in found.items()}
    if isinstance(value, Mapping):
        return {str(key): data(one) for key, one in value.items()}
    if isinstance(value, tuple | list):
        return [data(one) for one in value]
    return plain(value)
