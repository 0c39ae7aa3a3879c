"""The one registry of models: every RECORD in the files of this folder."""

from __future__ import annotations

import difflib
import importlib
import pkgutil
from collections.abc import Mapping
from functools import cache
from typing import cast

from numpy.typing import ArrayLike

from rheo.errors import InputError
from rheo.models.record import FloatArray, Model, ModelRecord


@cache
def model_records() -> dict[str, ModelRecord]:
    """Return the records of all models by key, the simplest first."""
    import rheo.models as package

    found: list[ModelRecord] = []
    for module in pkgutil.iter_modules(package.__path__):
        record = getattr(importlib.import_module(f"rheo.models.{module.name}"), "RECORD", None)
        if record is not None:
            found.append(record)
    found.sort(key=lambda record: (len(record.parameters), record.has_yield_stress, record.key))
    return {record.key: record for record in found}


def model_record(key: str) -> ModelRecord:
    """Return the record of a model.

    Raises
    ------
    InputError
        If no model has this key; the sentence names those that exist.
    """
    records = model_records()
    if key not in records:
        near = difflib.get_close_matches(str(key), records, n=1)
        hint = f" (did you mean '{near[0]}'?)" if near else ""
        raise InputError(f"unknown model '{key}'{hint}; there are {', '.join(records)}")
    return records[key]


def model(key: str, **parameters: ArrayLike) -> Model:
    """Make a flow curve from a model key and parameter values.

    Parameters
    ----------
    key : str
        A registry key such as ``herschel-bulkley``.
    **parameters : array_like
        SI values by parameter key; arrays broadcast.

    Returns
    -------
    Model
        With ``stress(rate)``, ``rate(stress)``, ``viscosity(rate)``.

    Raises
    ------
    InputError
        For an unknown model, or an unknown, missing or impossible parameter.
    """
    # The model itself turns the values into arrays as it checks them.
    return Model(model_record(key), cast(Mapping[str, FloatArray], parameters))
