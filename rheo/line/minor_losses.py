"""Losses of fittings, reducers, entrances and exits, in the pipe that each belongs to."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from rheo.errors import InputError
from rheo.hydraulics import PipeFlow
from rheo.hydraulics.fittings import reducer_loss
from rheo.line.kinetic_energy import kinetic_pressure
from rheo.line.parts import Entrance, Exit, Fitting, FloatArray, Pipe, Reducer
from rheo.line.published_losses import published_entrance, published_fitting
from rheo.line.route import Step


def minor_loss(step: Step, at: PipeFlow, beside: Callable[[Pipe], PipeFlow]) -> FloatArray:
    """Return the total pressure that a part other than a pipe or equipment loses [Pa].

    Parameters
    ----------
    step : Step
        The part where it stands.
    at : PipeFlow
        Flow in the pipe whose velocity counts.
    beside : callable
        From a pipe next to it to the flow there.

    Returns
    -------
    array
        K ρV²/2 of all pieces together.
    """
    part = step.part
    if isinstance(part, Fitting):
        return part.count * _fitting_coefficient(part, at) * velocity_pressure(at)
    if isinstance(part, Entrance):
        return _entrance_coefficient(part, at) * velocity_pressure(at)
    if isinstance(part, Exit):
        if part.loss_coefficient is None:
            return kinetic_pressure(at)
        return np.asarray(part.loss_coefficient) * velocity_pressure(at)
    if isinstance(part, Reducer) and step.before is not None and step.after is not None:
        return _reducer_loss(part, beside(step.before), beside(step.after))
    raise InputError(f"'{part.name}' has no loss of its own")


def velocity_pressure(at: PipeFlow) -> FloatArray:
    """Return ρV²/2 [Pa]."""
    return 0.5 * at.density * at.velocity**2


def _fitting_coefficient(part: Fitting, at: PipeFlow) -> FloatArray:
    if part.loss_coefficient is not None:
        return np.asarray(part.loss_coefficient, dtype=float)
    published = published_fitting(part.kind, part.table, part.name)
    return published.coefficient(at.reynolds, at.diameter)


def _entrance_coefficient(part: Entrance, at: PipeFlow) -> FloatArray:
    if part.loss_coefficient is not None:
        return np.asarray(part.loss_coefficient, dtype=float)
    return published_entrance(part.kind, part.name).coefficient(at.reynolds, at.diameter)


def _reducer_loss(part: Reducer, before: PipeFlow, after: PipeFlow) -> FloatArray:
    if part.loss_coefficient is None:
        return reducer_loss(before, after, part.angle)
    narrow = np.asarray(before.diameter) <= np.asarray(after.diameter)
    pressure = np.where(narrow, velocity_pressure(before), velocity_pressure(after))
    return np.asarray(part.loss_coefficient) * pressure
