"""A flow curve given on the command line: ``--model KEY --set name=value``."""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated

import typer

from rheo.cli.options import named_values, quantity, si_unit
from rheo.errors import InputError

if TYPE_CHECKING:
    from rheo.models import Model

ModelKey = Annotated[
    str, typer.Option("--model", "-m", help="Flow-curve model; 'rheo models' lists them.")
]
Settings = Annotated[
    list[str],
    typer.Option(
        "--set",
        "-s",
        metavar="NAME=VALUE",
        help="A parameter of the model; give one --set for each. Without a unit it is in SI.",
    ),
]


def flow_curve(key: str, settings: list[str]) -> Model:
    """Return the flow curve of the options.

    Raises
    ------
    InputError
        For an unknown model or parameter, or a value that is not allowed.
    """
    from rheo.models import model, model_record

    record = model_record(key)
    units = {parameter.key: parameter.unit for parameter in record.parameters}
    given = named_values(settings, "--set")
    return model(key, **{name: _value(name, given[name], units.get(name)) for name in given})


def _value(name: str, value: str, unit: str | None) -> float:
    place = f"--set {name}"
    if unit is None or "^n" in unit:
        # An unknown name is refused by the model; a consistency has no unit of its own to read.
        try:
            return float(value)
        except ValueError:
            known = f" in {unit}" if unit else ""
            raise InputError(f"found '{value[:60]}'; it must be a number{known}", place) from None
    return quantity(value, si_unit(unit), place)
