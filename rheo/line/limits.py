"""Limits that a size must keep, and whether it does."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError
from rheo.line.checks import require_number, require_optional
from rheo.line.parts import FloatArray

REGIMES = ("laminar", "turbulent")


@dataclass(frozen=True)
class Limits:
    """What the line must keep to; a limit that is None is not checked.

    Parameters
    ----------
    pressure : float, optional
        Largest differential pressure [Pa].
    start_up_pressure : float, optional
        Largest pressure that may be used to restart the full line [Pa].
    min_velocity, max_velocity : float, optional
        Of the mean velocity in the pipes that are sized [m/s].
    max_wall_rate : float, optional
        Largest wall shear rate that the product bears [1/s].
    keep_to_measured_rates : bool
        Whether the wall shear rates must lie in the measured range.
    regime : str, optional
        ``laminar`` or ``turbulent``, where one of them is wanted.
    min_hold_time : float, optional
        Shortest time of the fastest particle in the pipes that are sized [s].
    max_residence_time : float, optional
        Longest mean time in the line [s].
    min_npsh : float, optional
        Least NPSH available [m]: that required, with a margin.
    """

    pressure: float | None = None
    start_up_pressure: float | None = None
    min_velocity: float | None = None
    max_velocity: float | None = None
    max_wall_rate: float | None = None
    keep_to_measured_rates: bool = False
    regime: str | None = None
    min_hold_time: float | None = None
    max_residence_time: float | None = None
    min_npsh: float | None = None

    def __post_init__(self) -> None:
        for what in (
            "pressure",
            "start_up_pressure",
            "min_velocity",
            "max_velocity",
            "max_wall_rate",
            "min_hold_time",
            "max_residence_time",
        ):
            require_optional(getattr(self, what), what, "limits")
        if self.min_npsh is not None:
            require_number(self.min_npsh, "min_npsh [m]", "limits", low=0.0)
        if self.regime is not None and self.regime not in REGIMES:
            raise InputError(
                f"unknown regime '{self.regime}'; it takes {' or '.join(REGIMES)}", "limits"
            )


@dataclass(frozen=True, eq=False)
class Check:
    """One limit against every size.

    Parameters
    ----------
    key : str
        The limit's field, such as ``max_velocity``.
    value : array
        What each size gives, in the limit's unit; sizes along the second last axis, draws along
        the last.
    passes : array of bool
        Whether the limit is kept.
    sentences : tuple of str
        For each size, what was found and what is allowed.
    """

    key: str
    value: FloatArray
    passes: NDArray[np.bool_]
    sentences: tuple[str, ...]


def make_check(
    key: str,
    value: FloatArray,
    limit: float,
    upper: bool,
    what: str,
    unit: str,
    factor: float = 1.0,
) -> Check:
    """Compare values with a limit.

    Parameters
    ----------
    key : str
        The limit's field.
    value : array, shape (sizes, draws or 1)
        In SI.
    limit : float
        In SI.
    upper : bool
        Whether it is a largest value.
    what, unit : str
        For the sentence.
    factor : float
        From SI to `unit`.

    Returns
    -------
    Check
        With one sentence a size, on its first column.
    """
    passes = value <= limit if upper else value >= limit
    word = "at most" if upper else "at least"
    sentences = tuple(
        f"{what} {factor * float(row):.3g} {unit} ({word} {factor * limit:.3g} {unit} allowed)"
        for row in value[:, 0]
    )
    return Check(key, value, passes, sentences)
