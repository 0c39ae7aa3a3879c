"""What a fitting loses: the published forms of a loss coefficient."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError

FloatArray = NDArray[np.float64]

INCH = 0.0254


class Loss(Protocol):
    """Anything with a loss coefficient."""

    @property
    def key(self) -> str:
        """Name in files."""

    @property
    def name(self) -> str:
        """Name in words."""

    def coefficient(self, reynolds: FloatArray, diameter: FloatArray) -> FloatArray:
        """Return K [-] in velocity heads ρV²/2 of the pipe.

        Parameters
        ----------
        reynolds : array
            Metzner-Reed Reynolds number [-], 8ρV² over the laminar wall stress, in every regime.
        diameter : array
            Inside diameter [m].
        """


@dataclass(frozen=True)
class ThreeK:
    """K = K₁/Re + K_i(1 + K_d/D^0.3), D in inches (Darby).

    The nominal size of the source is taken as the inside diameter: for a 2 inch schedule 40 pipe
    that is 0.7 % less in the last term.

    Parameters
    ----------
    key, name : str
        Name in files and in words.
    k1, ki, kd : float
        Constants [-], [-], [in^0.3].
    """

    key: str
    name: str
    k1: float
    ki: float
    kd: float

    def coefficient(self, reynolds: FloatArray, diameter: FloatArray) -> FloatArray:
        """Return K [-]."""
        return self.k1 / reynolds + self.ki * (1.0 + self.kd / (diameter / INCH) ** 0.3)


@dataclass(frozen=True)
class TwoK:
    """K = K₁/Re + K_∞(1 + 1/D), D in inches (Hooper).

    Parameters
    ----------
    key, name : str
        Name in files and in words.
    k1, k_infinity : float
        Constants [-].
    """

    key: str
    name: str
    k1: float
    k_infinity: float

    def coefficient(self, reynolds: FloatArray, diameter: FloatArray) -> FloatArray:
        """Return K [-]."""
        return self.k1 / reynolds + self.k_infinity * (1.0 + INCH / diameter)


@dataclass(frozen=True)
class UserK:
    """The user's own K, with a part that grows as the flow slows: K = K₁/Re + K.

    Parameters
    ----------
    k : float
        Constant part [-], 0 or more.
    k1 : float
        Laminar part [-], 0 or more.
    key, name : str
        Name in files and in words.

    Raises
    ------
    InputError
        If a constant is below 0 or not finite.
    """

    k: float
    k1: float = 0.0
    key: str = "own"
    name: str = "own loss coefficient"

    def __post_init__(self) -> None:
        for what, value in (("k", self.k), ("k1", self.k1)):
            if not (np.isfinite(value) and value >= 0):
                raise InputError(
                    f"{what} is {value:g}; it must be a finite number, 0 or more", self.key
                )

    def coefficient(self, reynolds: FloatArray, diameter: FloatArray) -> FloatArray:
        """Return K [-]."""
        shape = np.broadcast_shapes(np.shape(reynolds), np.shape(diameter))
        return np.broadcast_to(self.k1 / np.asarray(reynolds) + self.k, shape)
