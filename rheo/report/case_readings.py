"""The readings of a result as points of a flow curve, numbered over all sets."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from rheo.case.load_readings import screened
from rheo.case.result import CaseResult
from rheo.case.solids_state import follows_solids
from rheo.errors import Caution
from rheo.fitting import Fit
from rheo.fitting.scaled_fits import ScaledFits
from rheo.models import Model
from rheo.models.state_curve import ScalingLaw
from rheo.readings import FlowCurve, Readings
from rheo.report.picture import FloatArray


@dataclass(frozen=True, eq=False)
class CasePoints:
    """All readings of a result; arrays have one entry a reading, the sets one after the other.

    Parameters
    ----------
    result : CaseResult
        Of `run_case`.
    fit : Fit
        Whose conversion places the fitted readings; the chosen one unless another is looked at.
    """

    result: CaseResult
    fit: Fit

    @cached_property
    def curves(self) -> tuple[FlowCurve, ...]:
        """Nominal flow curve of each set."""
        return tuple(one.flow_curve() for one in self.result.readings)

    @cached_property
    def cautions(self) -> tuple[tuple[Caution, ...], ...]:
        """Cautions of each set, from reading it and from screening it."""
        return tuple(
            tuple(dict.fromkeys((*one.cautions, *screened(self.result.case, one))))
            for one in self._sets
        )

    @property
    def _sets(self) -> tuple[Readings, ...]:
        return self.result.readings

    @cached_property
    def fitted(self) -> NDArray[np.intp]:
        """Numbers of the readings that were fitted, in the order of the fit's own arrays."""
        numbers: list[NDArray[np.intp]] = []
        start = 0
        for one, block in zip(self._sets, self.result.case.readings, strict=True):
            mine = np.arange(start, start + len(one))
            if block.sweep != "both" and one.branch is not None:
                mine = mine[one.branch == block.sweep]
            numbers.append(mine)
            start += len(one)
        return np.concatenate(numbers)[self.fit.points]

    @cached_property
    def rate(self) -> FloatArray:
        """Shear rates [1/s]: by the fit where a reading was fitted, else nominal."""
        found = np.concatenate([curve.rate for curve in self.curves])
        flowing = self.fit.rates > 0
        found[self.fitted[flowing]] = self.fit.rates[flowing]
        return found

    @cached_property
    def stress(self) -> FloatArray:
        """Shear stresses [Pa] at those rates: the model's, times reading over predicted reading."""
        found = np.concatenate([curve.stress for curve in self.curves])
        flowing = self.fit.rates > 0
        model = self._model_stress(flowing)
        ratio = self.fit.observed[flowing] / self.fit.predicted[flowing]
        found[self.fitted[flowing]] = model * ratio
        return found

    def _model_stress(self, flowing: NDArray[np.bool_]) -> FloatArray:
        """Stress of the fitted model at the fitted readings, each at its own state [Pa]."""
        fits = self.result.fits
        model = self.fit.model
        if isinstance(fits, ScaledFits) and fits.states is not None:
            model = fits.at(fits.states[flowing], self.fit.key)
        return np.asarray(model.stress(self.fit.rates[flowing]), dtype=float)

    @cached_property
    def temperature(self) -> FloatArray | None:
        """Temperatures [K]; None unless every set has them."""
        return self._column("temperature")

    @cached_property
    def solids(self) -> FloatArray | None:
        """Solids fractions [-] where the flow curve follows them; else None."""
        return self._column("solids_fraction") if follows_solids(self.result.fits) else None

    def _column(self, key: str) -> FloatArray | None:
        columns = [getattr(one, key) for one in self._sets]
        return None if any(one is None for one in columns) else np.concatenate(columns)

    @cached_property
    def branch(self) -> NDArray[np.str_]:
        """Branches; empty texts where not known."""
        return np.concatenate(
            [
                np.full(len(one), "", dtype="U4") if one.branch is None else one.branch
                for one in self._sets
            ]
        )

    @cached_property
    def left_out(self) -> NDArray[np.bool_]:
        """Readings that were not fitted."""
        mask = np.ones(self.rate.size, dtype=bool)
        mask[self.fitted] = False
        return mask

    @cached_property
    def flagged(self) -> NDArray[np.bool_]:
        """Readings that a Caution points at."""
        mask = np.zeros(self.rate.size, dtype=bool)
        start = 0
        for one, cautions in zip(self._sets, self.cautions, strict=True):
            for caution in cautions:
                inside = [start + point for point in caution.points if 0 <= point < len(one)]
                mask[inside] = True
            start += len(one)
        return mask


def temperature_law(result: CaseResult) -> ScalingLaw | None:
    """Return how the fitted flow curves follow the temperature; None where they do not."""
    law = getattr(result.fits, "law", None)
    return law if isinstance(law, ScalingLaw) and law.state == "temperature" else None


def model_at(result: CaseResult, fit: Fit, kelvin: FloatArray | float | None) -> Model:
    """Return the flow curve of a fit at temperatures [K], as far as it knows of temperature.

    Where it follows the solids instead, it is taken at those of the product.
    """
    fits = result.fits
    if not isinstance(fits, ScaledFits):
        return fit.model
    if follows_solids(fits):
        solids = result.product.solids_fraction
        return fit.model if solids is None else fits.at(solids, fit.key)
    return fit.model if kelvin is None else fits.at(kelvin, fit.key)


def case_points(result: CaseResult, fit: Fit | None = None) -> CasePoints:
    """Return all readings of a result as points; by the chosen fit unless another is given."""
    return CasePoints(result, fit or result.chosen)
