"""System curve of a line, with its band."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import InputError
from rheo.line.checks import require_positive
from rheo.line.parts import FloatArray, Line
from rheo.line.product import Product, interval
from rheo.line.walk import walk

_RANK = {"laminar": 0, "transition": 1, "turbulent": 2}


@dataclass(frozen=True, eq=False)
class SystemCurve:
    """Pressure that a line needs at every flow.

    Parameters
    ----------
    flow : array, shape (flows,)
        [m3/s].
    pressure : array, shape (flows,)
        Total differential pressure [Pa].
    low, high : array or None, shape (flows,)
        Middle 95 % over the product's draws [Pa]; None without draws.
    static_pressure : float
        What it needs with nothing moving, yield stress left out [Pa].
    regime : tuple of str
        At each flow the regime of the pipe that is furthest from laminar.
    """

    flow: FloatArray
    pressure: FloatArray
    low: FloatArray | None
    high: FloatArray | None
    static_pressure: float
    regime: tuple[str, ...]


def system_curve(
    line: Line, product: Product, flows: ArrayLike, method: str | None = None
) -> SystemCurve:
    """Return the pressure that a line needs over a range of flows.

    Parameters
    ----------
    line : Line
        The line.
    product : Product
        Its draws give the band.
    flows : array_like, shape (flows,)
        [m3/s], above 0.
    method : str, optional
        Turbulent friction method.

    Returns
    -------
    SystemCurve
        One point a flow.

    Raises
    ------
    InputError
        If the flows are not one row of numbers above 0.
    """
    flow = np.asarray(flows, dtype=float)
    require_positive(flow, "flows [m3/s]", line.name)
    if flow.ndim != 1:
        raise InputError(f"flows has {flow.ndim} dimensions; it must have one", line.name)
    found = walk(line, product, flow, method=method)
    low = high = None
    if product.draws:
        draws = product.over_draws(
            lambda source: (
                walk(
                    line, product, flow[:, np.newaxis], source=source, method=method
                ).differential_pressure
            )
        )
        low, high = interval(np.broadcast_to(draws, (flow.size, draws.shape[-1])))
    furthest = np.zeros(flow.shape, dtype=int)
    for step in found.steps:
        if step.kind == "pipe" and step.flow is not None:
            names = np.broadcast_to(np.asarray(step.flow.regime), flow.shape)
            furthest = np.maximum(furthest, np.array([_RANK[str(name)] for name in names]))
    words = tuple(_RANK)
    return SystemCurve(
        flow,
        np.broadcast_to(found.differential_pressure, flow.shape),
        low,
        high,
        float(found.static_pressure),
        tuple(words[index] for index in furthest),
    )
