"""What fitted models predict, with the doubt of readings, parameters and model choice."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import InputError
from rheo.models import Model
from rheo.models.state_curve import ScaledCurve

if TYPE_CHECKING:
    from rheo.fitting.fits import Fits

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Prediction:
    """Shear stress with a band.

    Parameters
    ----------
    rate : array, shape (m,)
        Shear rate [1/s].
    stress : array, shape (m,)
        Shear stress [Pa] by the best model.
    low, high : array, shape (m,)
        Band [Pa] that holds the true stress with the confidence of `level`.
    level : float
        Confidence level [-].
    """

    rate: FloatArray
    stress: FloatArray
    low: FloatArray
    high: FloatArray
    level: float


def predict_stress(
    fits: Fits,
    rate: ArrayLike,
    count: int = 2000,
    seed: int = 1,
    level: float = 0.95,
    state: float | None = None,
) -> Prediction:
    """Return the shear stress at shear rates, with a band from draws over all models.

    Parameters
    ----------
    fits : Fits
        Ranked models; each counts by its Akaike weight.
    rate : array_like, shape (m,)
        Shear rate [1/s], 0 or more.
    count, seed : int
        Number of draws and seed.
    level : float
        Confidence level, between 0 and 1.
    state : float, optional
        Temperature [K] or solids fraction, where readings at several were fitted.

    Returns
    -------
    Prediction

    Raises
    ------
    InputError
        For a level outside 0 to 1, a negative rate, or a state that is missing.
    """
    if not 0.0 < level < 1.0:
        raise InputError(f"the level is {level:g}; it must lie between 0 and 1", "predict")
    at = np.atleast_1d(np.asarray(rate, dtype=float))
    drawn = [_at_state(one, state) for one in fits.draws(count, seed)]
    stresses = np.concatenate([one.with_new_axis().stress(at) for one in drawn])
    tail = 50.0 * (1.0 - level)
    low, high = np.percentile(stresses, [tail, 100.0 - tail], axis=0)
    return Prediction(at, _at_state(fits.source(), state).stress(at), low, high, level)


def _at_state(curve: Model | ScaledCurve, state: float | None) -> Model:
    if isinstance(curve, Model):
        return curve
    if state is None:
        raise InputError(
            f"readings at several values of {curve.law.state} were fitted; say at which",
            "predict",
        )
    return curve(state)
