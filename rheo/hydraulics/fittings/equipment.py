"""Equipment with its own loss curve: heat exchangers, filters, meters."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import InputError
from rheo.hydraulics.conditions import not_negative, positive
from rheo.hydraulics.fittings.record import FloatArray


@dataclass(frozen=True, eq=False)
class PointLoss:
    """A loss curve through points, straight in logarithms between them and beyond the ends.

    Parameters
    ----------
    flow : array_like, 1-D
        Flows [m3/s], rising, above 0; two or more.
    loss : array_like, 1-D
        Pressure lost with this product [Pa], rising, above 0.
    name : str
        For display.

    Raises
    ------
    InputError
        If there are fewer than two points, or they do not rise.
    """

    flow: FloatArray
    loss: FloatArray
    name: str = "equipment"

    def __post_init__(self) -> None:
        flow = positive(self.flow, f"{self.name}: flow", "m3/s")
        loss = positive(self.loss, f"{self.name}: loss", "Pa")
        if flow.ndim != 1 or flow.shape != loss.shape or flow.size < 2:
            raise InputError("give two or more flows and as many losses", self.name)
        if not (np.all(np.diff(flow) > 0) and np.all(np.diff(loss) > 0)):
            raise InputError("flows and losses must rise from point to point", self.name)
        object.__setattr__(self, "flow", flow)
        object.__setattr__(self, "loss", loss)

    def pressure_drop(self, flow: ArrayLike) -> FloatArray:
        """Return the loss [Pa] at flows [m3/s] of 0 or more."""
        wanted = not_negative(flow, "flow", "m3/s")
        x, y = np.log(self.flow), np.log(self.loss)
        with np.errstate(divide="ignore"):
            at = np.log(wanted)
        piece = np.clip(np.searchsorted(x, at) - 1, 0, x.size - 2)
        slope = np.diff(y)[piece] / np.diff(x)[piece]
        return np.exp(y[piece] + slope * (at - x[piece]))[()]

    def covers(self, flow: ArrayLike) -> NDArray[np.bool_]:
        """Return where flows [m3/s] lie between the first and the last point."""
        wanted = np.asarray(flow, dtype=float)
        return (wanted >= self.flow[0]) & (wanted <= self.flow[-1])


@dataclass(frozen=True)
class PowerLoss:
    """A loss that goes with a power of the flow: ΔP = loss (Q/at_flow)^exponent.

    Parameters
    ----------
    loss : float
        Pressure lost with this product [Pa] at `at_flow`, 0 or more.
    at_flow : float
        Flow [m3/s], above 0.
    exponent : float
        [-], above 0: 2 in turbulent flow, the flow index in laminar power-law flow.
    name : str
        For display.

    Raises
    ------
    InputError
        For an impossible value.
    """

    loss: float
    at_flow: float
    exponent: float = 2.0
    name: str = "equipment"

    def __post_init__(self) -> None:
        not_negative(self.loss, f"{self.name}: loss", "Pa")
        positive(self.at_flow, f"{self.name}: at_flow", "m3/s")
        positive(self.exponent, f"{self.name}: exponent", "-")

    def pressure_drop(self, flow: ArrayLike) -> FloatArray:
        """Return the loss [Pa] at flows [m3/s] of 0 or more."""
        wanted = not_negative(flow, "flow", "m3/s")
        return (self.loss * (wanted / self.at_flow) ** self.exponent)[()]
