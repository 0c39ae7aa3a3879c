"""Fit readings of one temperature, or of several, by what the readings say."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from rheo.fitting.entry import fit
from rheo.fitting.fits import Fits
from rheo.fitting.temperature import fit_temperatures
from rheo.fitting.weighting import Instrument, Weighting
from rheo.readings import FlowCurve, Readings

# Readings this much apart in temperature [K] are no longer taken at one temperature.
ONE_TEMPERATURE = 2.0


def at_several_temperatures(data: FlowCurve | Readings) -> bool:
    """Return whether the readings are more than `ONE_TEMPERATURE` apart."""
    taken = data.temperature
    return taken is not None and bool(np.ptp(np.asarray(taken, dtype=float)) > ONE_TEMPERATURE)


def fit_readings(
    data: FlowCurve | Readings,
    models: str | Sequence[str] | None = None,
    weighting: str | Instrument | Weighting = "relative",
    temperature: float | None = None,
) -> Fits:
    """Fit by `rheo.fit_temperatures` where there are several temperatures, else by `rheo.fit`.

    Parameters
    ----------
    data, models, weighting
        As for `rheo.fit`.
    temperature : float, optional
        Where there are several, the temperature [K] at which parameters are given, moved into the
        range of the readings.

    Returns
    -------
    Fits
    """
    if not at_several_temperatures(data):
        return fit(data, models, weighting)
    if temperature is None:
        return fit_temperatures(data, models, weighting)
    taken = np.asarray(data.temperature, dtype=float)
    inside = float(np.clip(temperature, taken.min(), taken.max()))
    return fit_temperatures(data, models, weighting, inside)
