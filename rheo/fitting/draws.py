"""Draws of the flow curve: parameter doubt by the bootstrap, model choice by Akaike weight."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError
from rheo.fitting.bootstrap import bootstrap_parameters
from rheo.models import Model
from rheo.models.state_curve import ScaledCurve

if TYPE_CHECKING:
    from rheo.fitting.fits import Fits
    from rheo.fitting.result import Fit

FloatArray = NDArray[np.float64]


def parameter_draws(
    fit: Fit, count: int, seed: int, progress: Callable[[int], None] | None = None
) -> FloatArray:
    """Return parameters (count, p) of a fit from its bootstrap.

    With as many free parameters as readings there is no scatter to draw from, and the fit's own
    parameters are repeated: `Fit.cautions` says so.
    """
    if fit.freedom < 1:
        return np.repeat(fit.final.parameters[np.newaxis], count, axis=0)
    return bootstrap_parameters(fit, count, seed, progress=progress)


def shares(weights: Sequence[float], count: int) -> list[int]:
    """Return how many of `count` draws each weight earns: whole numbers that add up to `count`."""
    if count < 1:
        raise InputError(f"the number of draws is {count}; it must be 1 or more")
    exact = count * np.asarray(weights, dtype=float)
    parts = np.floor(exact).astype(int)
    parts[np.argsort(parts - exact, kind="stable")[: count - int(parts.sum())]] += 1
    return [int(part) for part in parts]


def mixed_draws(
    fits: Fits,
    count: int,
    seed: int,
    key: str | None = None,
    progress: Callable[[float], None] | None = None,
) -> tuple[Model | ScaledCurve, ...]:
    """Draw flow curves from all models fitted, each in proportion to its Akaike weight.

    Parameters
    ----------
    fits : Fits
        Ranked models.
    count : int
        Number of draws over all models.
    seed : int
        Of the random numbers.
    key : str, optional
        The only model to draw from.
    progress : callable, optional
        Told the share that is done [-]; what it raises ends the work.

    Returns
    -------
    tuple of Model or ScaledCurve
        With parameter arrays whose lengths add up to `count`; models with no draw are left out.

    Raises
    ------
    InputError
        If `count` is less than 1.
    """
    some = list(fits) if key is None else [fits[key]]
    parts = shares([fit.weight if key is None else 1.0 for fit in some], count)
    drawn = 0

    def tell(more: int) -> None:
        nonlocal drawn
        drawn += more
        if progress is not None:
            progress(drawn / count)

    return tuple(
        fit.source_of(parameter_draws(fit, part, seed + index, tell))
        for index, (fit, part) in enumerate(zip(some, parts, strict=True))
        if part > 0
    )
