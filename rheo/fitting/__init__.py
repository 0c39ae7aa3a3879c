"""Least squares, ranking, intervals, bootstrap, temperature."""

from __future__ import annotations

from rheo.fitting.core import least_squares
from rheo.fitting.entry import fit
from rheo.fitting.fits import Fits
from rheo.fitting.intervals import FittedParameter
from rheo.fitting.result import Fit
from rheo.fitting.weighting import Instrument, Weighting

__all__ = [
    "Fit",
    "Fits",
    "FittedParameter",
    "Instrument",
    "Weighting",
    "fit",
    "least_squares",
]
