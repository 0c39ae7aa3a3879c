"""The one registry of transition criteria and turbulent methods: every RECORD in their folders."""

from __future__ import annotations

import difflib
import importlib
import pkgutil
from collections.abc import Mapping
from functools import cache
from typing import TypeVar

from rheo.errors import InputError
from rheo.hydraulics.record import Criterion, TurbulentMethod
from rheo.models import Model

_Record = TypeVar("_Record", Criterion, TurbulentMethod)

DEFAULT_CRITERION = "stability"


def _records_in(package_name: str, kind: type[_Record]) -> dict[str, _Record]:
    package = importlib.import_module(package_name)
    found = []
    for module in pkgutil.iter_modules(package.__path__):
        record = getattr(importlib.import_module(f"{package_name}.{module.name}"), "RECORD", None)
        if isinstance(record, kind):
            found.append(record)
    return {record.key: record for record in sorted(found, key=lambda record: record.key)}


@cache
def criteria() -> dict[str, Criterion]:
    """Return the records of all transition criteria by key."""
    return _records_in("rheo.hydraulics.transition", Criterion)


@cache
def turbulent_methods() -> dict[str, TurbulentMethod]:
    """Return the records of all turbulent methods by key."""
    return _records_in("rheo.hydraulics.turbulent", TurbulentMethod)


def criterion(key: str, model: Model) -> Criterion:
    """Return a criterion that is made for a flow curve.

    Raises
    ------
    InputError
        If there is none of this key, or it is made for other flow curves.
    """
    return _chosen(key, model, criteria(), "transition criterion")


def turbulent_method(key: str | None, model: Model) -> TurbulentMethod:
    """Return a turbulent method for a flow curve; the default one for None.

    Raises
    ------
    InputError
        If there is none of this key, or it is made for other flow curves.
    """
    if key is None:
        able = [record for record in turbulent_methods().values() if record.applies(model)]
        return max(able, key=lambda record: record.default_rank(model))
    return _chosen(key, model, turbulent_methods(), "turbulent method")


def _chosen(key: str, model: Model, records: Mapping[str, _Record], what: str) -> _Record:
    able = ", ".join(name for name, record in records.items() if record.applies(model))
    if key not in records:
        near = difflib.get_close_matches(str(key), records, n=1, cutoff=0.5)
        hint = f" (did you mean '{near[0]}'?)" if near else ""
        raise InputError(
            f"unknown {what} '{key}'{hint}; for {model.key} there are {able}", "method"
        )
    record = records[key]
    if not record.applies(model):
        raise InputError(
            f"{what} '{key}' is made for {', '.join(record.models or ())}, not for {model.key}; "
            f"for {model.key} there are {able}",
            "method",
        )
    return record
