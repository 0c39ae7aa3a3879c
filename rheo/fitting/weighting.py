"""How much each reading counts: relative, absolute, or as the instrument's data sheet says."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import InputError

FloatArray = NDArray[np.float64]


@dataclass(frozen=True)
class Weighting:
    """Standard deviation of a reading: sigma² = (share · reading)² + constant².

    Only ratios of the deviations matter to a fit; the size of the scatter is found from the
    residuals, except where `known` says that the deviations are the instrument's own.

    Parameters
    ----------
    name : str
        Word for tables.
    share : float
        Part that grows with the reading [-].
    constant : float
        Part that does not [unit of the reading].
    known : bool
        Whether the deviations are true ones, so that a misfit can be told from scatter.
    """

    name: str
    share: float
    constant: float
    known: bool = False

    def sigma(self, reading: ArrayLike) -> FloatArray:
        """Return the standard deviation of readings, in their shape and unit."""
        return np.hypot(self.share * np.asarray(reading, dtype=float), self.constant)


@dataclass(frozen=True)
class Instrument:
    """Weighting from an instrument's data sheet.

    sigma² = (percent_of_reading · reading)² + (percent_of_full_scale · full_scale)². At low speed
    the full-scale part rules.

    Parameters
    ----------
    percent_of_reading : float
        Accuracy as a percentage of the reading [%], 0 or more.
    percent_of_full_scale : float
        Accuracy as a percentage of full scale [%], 0 or more; not both 0.
    full_scale : float
        Full scale in the unit of what is fitted: stress [Pa] for a flow curve, torque [N.m] or
        pressure drop [Pa] for readings with a geometry; above 0.

    Raises
    ------
    InputError
        For a value outside these ranges.
    """

    percent_of_reading: float
    percent_of_full_scale: float
    full_scale: float

    def __post_init__(self) -> None:
        for name in ("percent_of_reading", "percent_of_full_scale"):
            value = getattr(self, name)
            if not (math.isfinite(value) and 0.0 <= value <= 100.0):
                raise InputError(
                    f"{name} is {value:g}; it must lie between 0 and 100 %", "weighting"
                )
        if not (math.isfinite(self.full_scale) and self.full_scale > 0):
            raise InputError(f"full_scale is {self.full_scale:g}; it must be above 0", "weighting")
        if self.percent_of_reading == 0 and self.percent_of_full_scale == 0:
            raise InputError(
                "percent_of_reading and percent_of_full_scale are both 0; one must be above 0",
                "weighting",
            )

    @property
    def weighting(self) -> Weighting:
        """The same as a Weighting."""
        constant = self.percent_of_full_scale / 100.0 * self.full_scale
        return Weighting("instrument", self.percent_of_reading / 100.0, constant, known=True)


WEIGHTINGS: Mapping[str, Weighting] = {
    "relative": Weighting("relative", 1.0, 0.0),
    "absolute": Weighting("absolute", 0.0, 1.0),
}


def resolve_weighting(weighting: str | Instrument | Weighting) -> Weighting:
    """Return the Weighting that a word or an instrument stands for.

    Raises
    ------
    InputError
        For any other word; the sentence names those that exist.
    """
    if isinstance(weighting, Weighting):
        return weighting
    if isinstance(weighting, Instrument):
        return weighting.weighting
    if weighting in WEIGHTINGS:
        return WEIGHTINGS[weighting]
    raise InputError(
        f"unknown weighting '{weighting}'; use {', '.join(WEIGHTINGS)} or an Instrument(...)",
        "weighting",
    )
