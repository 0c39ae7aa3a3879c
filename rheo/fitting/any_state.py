"""Fit readings of one state, or of several temperatures or solids fractions, by what they say."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError
from rheo.fitting.concentration import EXPONENTIAL, fit_concentrations
from rheo.fitting.entry import fit
from rheo.fitting.fits import Fits
from rheo.fitting.scaled_fits import ScaledFits
from rheo.fitting.temperature import fit_temperatures
from rheo.fitting.weighting import Instrument, Weighting
from rheo.readings import FlowCurve, Readings
from rheo.readings.solids import in_words
from rheo.readings.sweeps import SAME_SOLIDS, SAME_TEMPERATURE

FloatArray = NDArray[np.float64]

# Readings this much apart in temperature [K] are no longer taken at one temperature.
ONE_TEMPERATURE = SAME_TEMPERATURE


def used_states(data: FlowCurve | Readings, key: str) -> FloatArray | None:
    """Return ``temperature`` [K] or ``solids_fraction`` [-] of the readings that are fitted.

    None where the readings do not have it.
    """
    taken = getattr(data, key)
    if taken is None:
        return None
    left_out = data.excluded
    values = np.asarray(taken, dtype=float)
    return values if left_out is None or np.all(left_out) else values[~np.asarray(left_out)]


def at_several_temperatures(data: FlowCurve | Readings) -> bool:
    """Return whether the readings that are fitted are more than `ONE_TEMPERATURE` apart."""
    taken = used_states(data, "temperature")
    return taken is not None and bool(np.ptp(taken) > ONE_TEMPERATURE)


def at_several_solids(data: FlowCurve | Readings) -> bool:
    """Return whether the solids fractions of the readings that are fitted differ.

    That is by more than `SAME_SOLIDS` of the largest of them.
    """
    taken = used_states(data, "solids_fraction")
    return taken is not None and bool(np.ptp(taken) > SAME_SOLIDS * np.max(taken))


def fit_readings(
    data: FlowCurve | Readings,
    models: str | Sequence[str] | None = None,
    weighting: str | Instrument | Weighting = "relative",
    temperature: float | None = None,
    solids: float | None = None,
    solids_form: str = EXPONENTIAL,
) -> Fits:
    """Fit over several temperatures or solids fractions where there are such, else by `rheo.fit`.

    Parameters
    ----------
    data, models, weighting
        As for `rheo.fit`.
    temperature : float, optional
        Where there are several, the temperature [K] at which parameters are given, moved into the
        range of the readings.
    solids : float, optional
        The same for solids fractions [-].
    solids_form : str
        How the flow curve follows the solids, as for `rheo.fit_concentrations`.

    Returns
    -------
    Fits

    Raises
    ------
    InputError
        If both temperature and solids fraction differ between the readings.
    """
    fits = _fitted(data, models, weighting, solids_form)
    return given_at(fits, temperature, solids)


def _fitted(
    data: FlowCurve | Readings,
    models: str | Sequence[str] | None,
    weighting: str | Instrument | Weighting,
    solids_form: str,
) -> Fits:
    if at_several_solids(data):
        _refuse_both(data)
        return fit_concentrations(data, None, models, weighting, solids_form)
    if at_several_temperatures(data):
        return fit_temperatures(data, models, weighting)
    return fit(data, models, weighting)


def given_at(fits: Fits, temperature: float | None = None, solids: float | None = None) -> Fits:
    """Return fits with their parameters given at a state of the product.

    Parameters
    ----------
    fits : Fits
        Over one state, which stay as they are, or several.
    temperature : float, optional
        Where several were fitted, the temperature [K], moved into the range of the readings.
    solids : float, optional
        The same for solids fractions [-].

    Returns
    -------
    Fits
        The same flow curves.
    """
    if not isinstance(fits, ScaledFits) or fits.law is None:
        return fits
    wanted = temperature if fits.law.state == "temperature" else solids
    return fits if wanted is None else fits.about(float(np.clip(wanted, *fits.range)))


def _refuse_both(data: FlowCurve | Readings) -> None:
    if not at_several_temperatures(data):
        return
    warm, solids = used_states(data, "temperature"), used_states(data, "solids_fraction")
    assert warm is not None
    assert solids is not None
    raise InputError(
        f"the readings are at several temperatures ({warm.min() - 273.15:.1f} to "
        f"{warm.max() - 273.15:.1f} °C) and several solids fractions ({in_words(solids.min())} to "
        f"{in_words(solids.max())}), and one fit follows one of the two; leave readings out so "
        f"that temperatures are within {ONE_TEMPERATURE:g} K of each other, or all solids "
        "fractions are the same",
        getattr(data, "source", "") or "readings",
    )


def refuse_several(data: FlowCurve | Readings, place: str) -> None:
    """Refuse to fit entrance loss or slip where readings are at several states.

    Parameters
    ----------
    data : FlowCurve or Readings
        What is to be fitted.
    place : str
        Place of the error.

    Raises
    ------
    InputError
        If they are.
    """
    for several, what in (
        (at_several_solids, "solids fraction"),
        (at_several_temperatures, "temperature"),
    ):
        if several(data):
            raise InputError(
                f"entrance loss and slip are fitted at one {what} only; exclude the readings at "
                "the others, or leave entrance and slip out",
                place,
            )
