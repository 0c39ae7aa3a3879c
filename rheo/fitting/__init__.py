"""Least squares, ranking, intervals, bootstrap, temperature."""

from __future__ import annotations

from rheo.fitting.entry import fit
from rheo.fitting.fits import Fits
from rheo.fitting.general import Solution, least_squares
from rheo.fitting.intervals import FittedParameter
from rheo.fitting.result import Fit
from rheo.fitting.weighting import Instrument, Weighting

__all__ = [
    "Fit",
    "Fits",
    "FittedParameter",
    "Instrument",
    "Solution",
    "Weighting",
    "fit",
    "least_squares",
]
