"""A measured flow curve: shear stress against shear rate, point by point."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import InputError

FloatArray = NDArray[np.float64]
BRANCHES = ("up", "down", "hold", "")


@dataclass(frozen=True, eq=False)
class FlowCurve:
    """Points of a flow curve in SI.

    Parameters
    ----------
    rate : array_like, shape (n,)
        Shear rate [1/s], above 0: a point at rest has no viscosity and no place in a fit in
        logarithms; a yield stress found at rest is a setting of its own.
    stress : array_like, shape (n,)
        Shear stress [Pa], above 0.
    temperature : array_like, shape (n,) or scalar, optional
        Temperature [K].
    branch : sequence of str, shape (n,), optional
        Part of the sweep: ``up``, ``down``, ``hold``, or an empty text where not known.
    excluded : array_like of bool, shape (n,), optional
        Points that the user has taken out; none when absent.
    solids_fraction : array_like, shape (n,) or scalar, optional
        Share of solids, by volume or by mass [-].

    Raises
    ------
    InputError
        For arrays of unequal length, no point at all, or a value that is not allowed.
    """

    rate: FloatArray
    stress: FloatArray
    temperature: FloatArray | None = None
    branch: NDArray[np.str_] | None = None
    excluded: NDArray[np.bool_] | None = None
    solids_fraction: FloatArray | None = None

    def __post_init__(self) -> None:
        rate = positive_column(self.rate, "shear rate", "1/s")
        stress = positive_column(self.stress, "shear stress", "Pa")
        count = rate.size
        if stress.size != count:
            raise InputError(
                f"there are {count} shear rates and {stress.size} shear stresses; "
                "there must be as many of one as of the other",
                "flow curve",
            )
        if count == 0:
            raise InputError("there is no point; there must be at least one", "flow curve")
        temperature = _column_or_one(self.temperature, count, "temperature", "K")
        solids = _column_or_one(self.solids_fraction, count, "solids fraction", "")
        if solids is not None:
            check_below(solids, 1.0, "solids fraction")
        branch = None if self.branch is None else branch_column(self.branch)
        if branch is not None:
            _check_length(branch.size, count, "branch")
        excluded = excluded_mask(self.excluded, count)
        for name, value in (
            ("rate", rate),
            ("stress", stress),
            ("temperature", temperature),
            ("branch", branch),
            ("excluded", excluded),
            ("solids_fraction", solids),
        ):
            if value is not None:
                value.flags.writeable = False
            object.__setattr__(self, name, value)

    def __len__(self) -> int:
        return int(self.rate.size)

    @property
    def viscosity(self) -> FloatArray:
        """Apparent viscosity stress/rate [Pa.s], shape (n,)."""
        return self.stress / self.rate

    @property
    def used(self) -> NDArray[np.bool_]:
        """Mask of the points that the user has not taken out, shape (n,)."""
        if self.excluded is None:
            return np.ones(len(self), dtype=bool)
        return ~self.excluded

    def select(self, mask: ArrayLike) -> FlowCurve:
        """Return the points of a boolean mask or of indices counted from 0."""
        chosen = np.asarray(mask)
        parts = (self.temperature, self.branch, self.excluded, self.solids_fraction)
        return FlowCurve(
            self.rate[chosen],
            self.stress[chosen],
            *(None if part is None else part[chosen] for part in parts),
        )

    def __repr__(self) -> str:
        low, high = float(self.rate.min()), float(self.rate.max())
        return f"FlowCurve({len(self)} points, {low:.4g} to {high:.4g} 1/s)"


def _column_or_one(values: ArrayLike | None, count: int, what: str, unit: str) -> FloatArray | None:
    if values is None:
        return None
    given = np.asarray(values)
    column = positive_column(np.full(count, given) if given.ndim == 0 else given, what, unit)
    _check_length(column.size, count, what)
    return column


def check_below(values: FloatArray, limit: float, what: str) -> None:
    """Refuse a value that is not below a limit [-]."""
    bad = values >= limit
    if bad.any():
        index = int(np.argmax(bad))
        raise InputError(
            f"point {index + 1} is {float(values[index]):g}; it must be above 0 and below "
            f"{limit:g}",
            what,
        )


def positive_column(values: ArrayLike, what: str, unit: str) -> FloatArray:
    """Return a new 1-D array of finite values above 0, or say which value is wrong.

    Parameters
    ----------
    values : array_like
        Values as given; a copy is returned.
    what, unit : str
        The quantity and its unit [-], for the sentence of an error.

    Raises
    ------
    InputError
        For text, a table of more than one column, NaN, infinity, 0 or a negative value.
    """
    try:
        array = np.array(values, dtype=float)
    except (TypeError, ValueError):
        raise InputError("a value is not a number; every value must be a number", what) from None
    if array.ndim != 1:
        raise InputError(f"its shape is {array.shape}; it must be a single column of numbers", what)
    bad = ~(np.isfinite(array) & (array > 0))
    if bad.any():
        index = int(np.argmax(bad))
        value = float(array[index])
        needed = "a finite number above 0" if not np.isfinite(value) else "above 0"
        found = f"{value:g} {unit}".strip()
        raise InputError(f"point {index + 1} is {found}; it must be {needed}", what)
    return array


def branch_column(values: Sequence[str] | NDArray[np.str_]) -> NDArray[np.str_]:
    """Return branches as an array of text, or say which is not allowed."""
    array = np.array(values, dtype=np.str_)
    if array.ndim != 1:
        raise InputError("it must be one word for each point", "branch")
    # Few words, many points: a set of words is quicker than a search for each in numpy.
    if not set(array.tolist()) <= set(BRANCHES):
        index = int(np.argmax(~np.isin(array, BRANCHES)))
        raise InputError(
            f"point {index + 1} is '{str(array[index])[:40]}'; it must be up, down, hold or empty",
            "branch",
        )
    return array


def excluded_mask(values: ArrayLike | None, count: int) -> NDArray[np.bool_] | None:
    """Return the mask of excluded points, or None when none was given."""
    if values is None:
        return None
    array = np.array(values)
    if array.dtype != np.bool_ or array.ndim != 1:
        raise InputError("it must be true or false for each point", "excluded")
    _check_length(array.size, count, "excluded")
    return array


def _check_length(found: int, count: int, what: str) -> None:
    if found != count:
        raise InputError(
            f"there are {found} values for {count} points; there must be as many", what
        )
