"""Readings that models are to be fitted to."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution
from rheo.fitting.problem import CurveProblem, Problem
from rheo.fitting.reading_problem import ReadingProblem
from rheo.models import ModelRecord

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Task:
    """Readings that models are to be fitted to.

    Parameters
    ----------
    solve : callable
        ``solve(records)``: for each model the problem, and the parameters and the sum of squares
        at the global minimum.
    pose : callable
        ``pose(records)``: for each model the problem alone.
    observed : array, shape (n,)
        Measured readings.
    distinct : int
        Number of different settings among them.
    points : array of int, shape (n,)
        Their indices as the user gave them.
    extra : int
        Number of parameters that each model has on top of its own.
    cautions : tuple of Caution
        What the readings gave cause for.
    """

    solve: Callable[[Sequence[ModelRecord]], list[tuple[Problem, FloatArray, float]]]
    pose: Callable[[Sequence[ModelRecord]], Sequence[CurveProblem | ReadingProblem]]
    observed: FloatArray
    distinct: int
    points: NDArray[np.intp]
    extra: int = 0
    cautions: tuple[Caution, ...] = ()
