"""`rheo models`: the flow-curve models and their parameters."""

from __future__ import annotations

from rheo.cli import terminal
from rheo.cli.options import Json


def models(as_json: Json = False) -> None:
    """List the flow-curve models: equation, parameters, source, range."""
    from rheo.models import model_records

    records = model_records().values()
    if as_json:
        terminal.print_json(
            [
                {
                    "key": record.key,
                    "name": record.name,
                    "equation": record.equation,
                    "source": record.source,
                    "validity": record.validity,
                    "parameters": [
                        {
                            "key": one.key,
                            "symbol": one.symbol,
                            "unit": one.unit,
                            "description": one.description,
                            "lower": one.lower,
                            "upper": one.upper,
                        }
                        for one in record.parameters
                    ],
                }
                for record in records
            ]
        )
        return
    out = terminal.console()
    for record in records:
        terminal.heading(out, record.key, record.equation)
        terminal.values(
            out,
            [
                *(
                    (one.key, f"{one.symbol} [{one.unit}]  {one.description}")
                    for one in record.parameters
                ),
                ("use", record.validity),
                ("source", record.source),
            ],
        )
