"""The one registry of transition criteria and turbulent methods: every RECORD in their folders."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cache
from typing import TypeVar

from rheo.errors import InputError
from rheo.hydraulics.record import Criterion, TurbulentMethod
from rheo.models import Model
from rheo.registry import named, records_in

_Record = TypeVar("_Record", Criterion, TurbulentMethod)

DEFAULT_CRITERION = "stability"


def _by_key(package_name: str, kind: type[_Record]) -> dict[str, _Record]:
    found = sorted(records_in(package_name, kind), key=lambda record: record.key)
    return {record.key: record for record in found}


@cache
def criteria() -> dict[str, Criterion]:
    """Return the records of all transition criteria by key."""
    return _by_key("rheo.hydraulics.transition", Criterion)


@cache
def turbulent_methods() -> dict[str, TurbulentMethod]:
    """Return the records of all turbulent methods by key."""
    return _by_key("rheo.hydraulics.turbulent", TurbulentMethod)


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
    able = [name for name, record in records.items() if record.applies(model)]
    record = named(records, key, what, able, f"for {model.key}", "method")
    if not record.applies(model):
        raise InputError(
            f"{what} '{key}' is made for {', '.join(record.models or ())}, not for {model.key}; "
            f"for {model.key} there are {', '.join(able)}",
            "method",
        )
    return record
