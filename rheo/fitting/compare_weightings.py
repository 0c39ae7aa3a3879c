"""What the choice of weighting does to the model chosen and to its parameters."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from rheo.fitting.any_state import fit_readings
from rheo.fitting.concentration import EXPONENTIAL
from rheo.fitting.fits import Fits
from rheo.fitting.weighting import WEIGHTINGS, Instrument, Weighting
from rheo.readings import FlowCurve, Readings


@dataclass(frozen=True, eq=False)
class WeightingComparison:
    """The same readings fitted under several weightings.

    Parameters
    ----------
    fits : mapping of str to Fits
        Ranked models by the name of the weighting; the one in use first.
    """

    fits: Mapping[str, Fits]

    @property
    def best_keys(self) -> dict[str, str]:
        """The model to use under each weighting."""
        return {name: fits.best.key for name, fits in self.fits.items()}

    @property
    def changes(self) -> dict[str, float]:
        """Largest relative difference of the best curves from that of the first weighting [-].

        Over the shear rates of the readings.
        """
        (first, reference), *others = self.fits.items()
        rates = reference.best.rates
        rate = np.unique(rates[rates > 0])
        stress = reference.best.model.stress(rate)
        return {first: 0.0} | {
            name: float(np.max(np.abs(fits.best.model.stress(rate) / stress - 1.0)))
            for name, fits in others
        }

    @property
    def sentence(self) -> str:
        """The effect in one sentence."""
        changes = self.changes
        name = max(changes, key=lambda key: changes[key])
        models = set(self.best_keys.values())
        choice = (
            f"every weighting leads to the {next(iter(self.fits.values())).best.record.name} model"
            if len(models) == 1
            else "the model chosen depends on the weighting"
        )
        first = next(iter(self.fits))
        return (
            f"{choice[0].upper()}{choice[1:]}; with {name} weighting the curve differs from that "
            f"with {first} by up to {changes[name]:.2g} of the stress."
        )


def compare_weightings(
    data: FlowCurve | Readings,
    models: str | Sequence[str] | None = None,
    instrument: Instrument | None = None,
    temperature: float | None = None,
    solids: float | None = None,
    solids_form: str = EXPONENTIAL,
) -> WeightingComparison:
    """Fit readings under relative, absolute and, where it is known, instrument weighting.

    Parameters
    ----------
    data : FlowCurve or Readings
        What is fitted.
    models : str or sequence of str, optional
        Model keys; all models when absent.
    instrument : Instrument, optional
        Accuracy of the instrument.
    temperature : float, optional
        Where there are several, the temperature [K] at which curves are compared.
    solids, solids_form : float and str, optional
        As for `fit_readings`.

    Returns
    -------
    WeightingComparison

    Raises
    ------
    FitError
        If no model can be fitted.
    """
    wanted: dict[str, str | Instrument | Weighting] = {name: name for name in WEIGHTINGS}
    if instrument is not None:
        wanted["instrument"] = instrument
    return WeightingComparison(
        {
            name: fit_readings(data, models, one, temperature, solids, solids_form)
            for name, one in wanted.items()
        }
    )
