"""Loss in a change of diameter, narrower or wider, sudden or conical."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import InputError
from rheo.hydraulics.fittings.record import FloatArray

if TYPE_CHECKING:
    from rheo.hydraulics.pipe_result import PipeFlow

# W. B. Hooper, Chem. Eng. 95(16) (1988) 89: the laminar form holds up to these upstream Reynolds
# numbers.
_LAMINAR_CONTRACTION = 2500.0
_LAMINAR_EXPANSION = 4000.0
_STEEP = 0.25 * np.pi


def reducer_loss(before: PipeFlow, after: PipeFlow, angle: ArrayLike = np.pi) -> FloatArray:
    """Return the total pressure that a change of diameter loses.

    Hooper's equations with the Metzner-Reed Reynolds number and the friction factor of the upstream
    pipe. His loss jumps down where laminar flow ends; here the laminar coefficient falls from there
    as 1/Re until it meets the turbulent one, so that the loss never falls as the flow rises (our
    engineering choice).

    Parameters
    ----------
    before, after : PipeFlow
        Flow in the upstream and the downstream pipe, at one volume flow.
    angle : array_like
        Whole angle of the cone [rad], above 0; π for a sudden change.

    Returns
    -------
    array
        [Pa]; 0 where the diameters are equal.

    Raises
    ------
    InputError
        If the angle is not above 0 and at most π.
    """
    angle = np.asarray(angle, dtype=float)
    if not np.all((angle > 0) & (angle <= np.pi * (1.0 + 1e-12))):
        raise InputError("it must be above 0 and at most π rad", "angle")
    ratio = np.asarray(before.diameter / after.diameter)
    reynolds, darcy = np.asarray(before.reynolds), 4.0 * np.asarray(before.friction_factor)
    head = 0.5 * before.density * before.velocity**2
    narrower = _contraction(np.maximum(ratio, 1.0), reynolds, darcy, angle)
    wider = _expansion(np.minimum(ratio, 1.0), reynolds, darcy, angle)
    return (head * np.where(ratio > 1.0, narrower, wider))[()]


def _contraction(
    ratio: FloatArray, reynolds: FloatArray, darcy: FloatArray, angle: FloatArray
) -> FloatArray:
    """Return K of a contraction by the upstream velocity; `ratio` is D₁/D₂ of 1 or more."""
    area = ratio**2
    slow = (1.2 + 160.0 / np.minimum(reynolds, _LAMINAR_CONTRACTION)) * (area**2 - 1.0)
    fast = (0.6 + 0.48 * darcy) * area * (area - 1.0)
    half = np.sin(0.5 * angle)
    shape = np.where(angle > _STEEP, np.sqrt(half), 1.6 * half)
    return shape * _joined(slow, fast, reynolds / _LAMINAR_CONTRACTION)


def _expansion(
    ratio: FloatArray, reynolds: FloatArray, darcy: FloatArray, angle: FloatArray
) -> FloatArray:
    """Return K of an expansion by the upstream velocity; `ratio` is D₁/D₂ of 1 or less."""
    area = ratio**2
    slow = 2.0 * (1.0 - area**2)
    fast = (1.0 + 0.8 * darcy) * (1.0 - area) ** 2
    shape = np.where(angle > _STEEP, 1.0, 2.6 * np.sin(0.5 * angle))
    return shape * _joined(slow, fast, reynolds / _LAMINAR_EXPANSION)


def _joined(slow: FloatArray, fast: FloatArray, relative: FloatArray) -> FloatArray:
    return np.where(relative <= 1.0, slow, np.maximum(fast, slow / np.maximum(relative, 1.0)))
