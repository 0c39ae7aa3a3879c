"""Draws of the flow curve: parameter doubt by the covariance, model choice by Akaike weight."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from rheo.errors import InputError
from rheo.fitting.problem import coordinates
from rheo.models import Model

if TYPE_CHECKING:
    from rheo.fitting.fits import Fits
    from rheo.fitting.result import Fit


def covariance_draws(fit: Fit, count: int, seed: int) -> Model:
    """Draw parameters from a normal distribution in the coordinates of the search.

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
    Model
        With parameter arrays of shape (count,).
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
    return fit.model_of(scale.outer(inner))


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
    if count < 1:
        raise InputError(f"the number of draws is {count}; it must be 1 or more")
    exact = count * np.array([fit.weight for fit in fits])
    shares = np.floor(exact).astype(int)
    left = count - int(shares.sum())
    shares[np.argsort(shares - exact, kind="stable")[:left]] += 1
    return tuple(
        covariance_draws(fit, int(share), seed + index)
        for index, (fit, share) in enumerate(zip(fits, shares, strict=True))
        if share > 0
    )
