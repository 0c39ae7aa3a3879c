"""Draws of the flow curve: parameter doubt by the covariance, model choice by Akaike weight."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError
from rheo.fitting.problem import coordinates
from rheo.models import Model

FloatArray = NDArray[np.float64]

if TYPE_CHECKING:
    from rheo.fitting.fits import Fits
    from rheo.fitting.result import Fit


def parameter_draws(fit: Fit, count: int, seed: int) -> FloatArray:
    """Draw all parameters of a fit from a normal distribution in the coordinates of the search.

    Parameters
    ----------
    fit : Fit
        A fitted model. Parameters at a bound, or without a covariance, stay as they are.
    count : int
        Number of draws.
    seed : int
        Of the random numbers.

    Returns
    -------
    array, shape (count, p)
        The model's parameters, then those of the instrument or of a scaling law.
    """
    best = fit.final.parameters
    scale = coordinates(fit.problem)
    inner = np.repeat(scale.inner(best)[np.newaxis], count, axis=0)
    if np.isfinite(fit.covariance).all():
        free = fit.final.free
        slope = scale.slope(inner[0], best)[free]
        covariance = fit.covariance / np.outer(slope, slope)
        normal = np.random.default_rng(seed).multivariate_normal(
            np.zeros(int(free.sum())), 0.5 * (covariance + covariance.T), size=count, method="eigh"
        )
        low, high = scale.inner_bounds
        inner[:, free] = np.clip(inner[:, free] + normal, low[free], high[free])
    return scale.outer(inner)


def covariance_draws(fit: Fit, count: int, seed: int) -> Model:
    """Return the flow curve with arrays of drawn parameters of shape (count,)."""
    return fit.model_of(parameter_draws(fit, count, seed))


def shares(weights: Sequence[float], count: int) -> list[int]:
    """Return how many of `count` draws each weight earns: whole numbers that add up to `count`."""
    if count < 1:
        raise InputError(f"the number of draws is {count}; it must be 1 or more")
    exact = count * np.asarray(weights, dtype=float)
    parts = np.floor(exact).astype(int)
    parts[np.argsort(parts - exact, kind="stable")[: count - int(parts.sum())]] += 1
    return [int(part) for part in parts]


def mixed_draws(fits: Fits, count: int, seed: int) -> tuple[Model, ...]:
    """Draw flow curves from all models fitted, each in proportion to its Akaike weight.

    Parameters
    ----------
    fits : Fits
        Ranked models.
    count : int
        Number of draws over all models.
    seed : int
        Of the random numbers.

    Returns
    -------
    tuple of Model
        With parameter arrays whose lengths add up to `count`; models with no draw are left out.

    Raises
    ------
    InputError
        If `count` is less than 1.
    """
    parts = shares([fit.weight for fit in fits], count)
    return tuple(
        covariance_draws(fit, part, seed + index)
        for index, (fit, part) in enumerate(zip(fits, parts, strict=True))
        if part > 0
    )
