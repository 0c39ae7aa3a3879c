"""The one registry of models: every RECORD in the files of this folder."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cache
from typing import cast

from numpy.typing import ArrayLike

from rheo.models.record import FloatArray, Model, ModelRecord
from rheo.registry import named, records_in


@cache
def model_records() -> dict[str, ModelRecord]:
    """Return the records of all models by key, the simplest first."""
    found = records_in("rheo.models", ModelRecord)
    found.sort(key=lambda record: (len(record.parameters), record.has_yield_stress, record.key))
    return {record.key: record for record in found}


def model_record(key: str) -> ModelRecord:
    """Return the record of a model.

    Raises
    ------
    InputError
        If no model has this key; the sentence names those that exist.
    """
    return named(model_records(), key, "model")


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
