"""A flow curve that is thicker or thinner by one factor at every shear rate."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import InputError
from rheo.models.record import Model


def scaled(model: Model, factor: ArrayLike) -> Model:
    """Return the model whose stress at every shear rate is `factor` times the given one's.

    All equations here are linear in the parameters that hold a stress, once these are taken
    together: a yield stress, a consistency, a viscosity, Ellis's half stress. Flow indices,
    exponents and times stay.

    Parameters
    ----------
    model : Model
        Its parameters may be arrays.
    factor : array_like
        Above 0 [-]; broadcasts against the parameters.

    Returns
    -------
    Model
        Of the same kind.

    Raises
    ------
    InputError
        If the factor is not above 0, or a parameter leaves its range.
    """
    times = np.asarray(factor, dtype=float)
    if not np.all((times > 0) & np.isfinite(times)):
        raise InputError(f"factor is {factor!r}; it must be a finite number above 0", "thickness")
    values = {
        one.key: model.parameters[one.key] * (times if one.unit.startswith("Pa") else 1.0)
        for one in model.record.parameters
    }
    return Model(model.record, values)
