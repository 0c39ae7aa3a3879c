"""What a transition criterion and a turbulent method are: one record each."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.models import Model


@dataclass(frozen=True)
class Range:
    """Where a method has been tested, in numbers, ends included.

    Parameters
    ----------
    flow_index : tuple of float
        Local flow index n' [-].
    reynolds : tuple of float
        Metzner-Reed Reynolds number [-].
    hedstrom : tuple of float
        Hedstrom number [-]; for methods made for Bingham fluids.
    """

    flow_index: tuple[float, float] = (0.0, np.inf)
    reynolds: tuple[float, float] = (0.0, np.inf)
    hedstrom: tuple[float, float] = (0.0, np.inf)


@dataclass(frozen=True)
class Criterion:
    """One criterion for the end of laminar flow.

    Parameters
    ----------
    key, name : str
        Registry key and the field's name.
    number : callable
        ``number(pipe, rate)``: the criterion's number over its critical value [-] at the wall
        shear rate [1/s] of laminar flow; 1 where laminar flow ends.
    models : tuple of str or None
        Keys of the flow curves that it is made for; None for any.
    source, validity : str
        Where it was published; where it may be used.
    """

    key: str
    name: str
    number: Callable[[Pipe, FloatArray], FloatArray]
    models: tuple[str, ...] | None
    source: str
    validity: str

    def applies(self, model: Model) -> bool:
        """Return whether the criterion is made for this flow curve."""
        return self.models is None or model.key in self.models


@dataclass(frozen=True)
class TurbulentMethod:
    """One friction method for turbulent flow, as a curve over the logarithm of a shear rate.

    Parameters
    ----------
    key, name : str
        Registry key and the field's name.
    curve : callable
        ``curve(pipe, rate)`` -> (wall stress [Pa], 1/√f [-] in a smooth pipe), f the Fanning
        friction factor. `rate` [1/s] is the shear rate at the wall stress, or, with
        `along_laminar`, the wall rate of laminar flow at the same velocity.
    models : tuple of str or None
        Keys of the flow curves that it can be computed for; None for any.
    range : Range
        Where its authors tested it.
    source, validity : str
        Where it was published; where it may be used.
    default_rank : callable
        ``default_rank(model)``: the method with the largest rank is the default for a model.
    along_laminar : bool
        What `rate` means.
    may_fold : bool
        Whether the velocity can fall for a while as the stress rises.
    in_spread : tuple of str or None
        Keys of the flow curves for which it counts as a rival of the default; None for all of
        `models`.
    """

    key: str
    name: str
    curve: Callable[[Pipe, FloatArray], tuple[FloatArray, FloatArray]]
    models: tuple[str, ...] | None
    range: Range
    source: str
    validity: str
    default_rank: Callable[[Model], int]
    along_laminar: bool = False
    may_fold: bool = False
    in_spread: tuple[str, ...] | None = None

    def applies(self, model: Model) -> bool:
        """Return whether the method can be computed for this flow curve."""
        return self.models is None or model.key in self.models

    def counts(self, model: Model) -> bool:
        """Return whether the method counts as a rival of the default for this flow curve."""
        return self.applies(model) and (self.in_spread is None or model.key in self.in_spread)
