"""Readings of an instrument, predicted from a flow curve in its geometry."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.problem import bare_model, columns_of
from rheo.fitting.reading_slopes import RELATIONS
from rheo.fitting.weighting import Weighting
from rheo.geometry import Geometry
from rheo.models import Model, ModelRecord, Parameter

FloatArray = NDArray[np.float64]

# A change of this share of a reading is far above the rounding of the integrals (1e-12), and small
# enough that the curvature of the readings does not show.
_SHARE = 1e-6


@dataclass(frozen=True, eq=False)
class ReadingProblem:
    """Measured torques or pressure drops at known speeds or flows.

    Parameters
    ----------
    record : ModelRecord
        The model.
    geometry : Geometry
        Where the fluid is sheared; dimensions of shape () or (n,).
    setting, observed : array, shape (n,)
        Angular speed [rad/s] or flow [m3/s], and measured torque [N m] or pressure drop [Pa].
    weighting : Weighting
        How much each reading counts.
    rough_rates : array, shape (n,)
        Roughly the largest shear rate at each reading [1/s], from which solutions start.
    extra : tuple of Parameter
        Dimensions of the geometry that are fitted with the model, by their keys.
    rough : bool
        Whether `sensitivity` needs to be right to 1e-6 only, as on the way to a minimum.
    """

    record: ModelRecord
    geometry: Geometry
    setting: FloatArray
    observed: FloatArray
    weighting: Weighting
    rough_rates: FloatArray
    extra: tuple[Parameter, ...] = ()
    rough: bool = False

    @cached_property
    def order(self) -> NDArray[np.intp]:
        """Indices of the readings in rising order of the setting."""
        return np.argsort(self.setting, kind="stable")

    def predict(self, parameters: FloatArray) -> FloatArray:
        """Return predicted readings, shape (..., n)."""
        model, dimensions = self._parts(parameters)
        record = self.geometry.record
        rate, stress = record.sheared_at(model, self.setting, *dimensions.values())
        return record.reading_at(model, rate, stress, *dimensions.values())

    def sensitivity(self, parameters: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Return predicted readings (b, n) and their derivatives (b, p, n)."""
        relation = RELATIONS.get(self.geometry.key)
        if relation is None:
            return self._by_differences(parameters)
        model, dimensions = self._parts(parameters)
        reading, slopes, others, _ = relation(
            model, self.setting, dimensions, self.rough_rates, self.rough
        )
        if np.isnan(reading).any():
            return self._by_differences(parameters)
        if not self.extra:
            return reading, slopes
        more = [np.broadcast_to(others[one.key], reading.shape) for one in self.extra]
        return reading, np.concatenate([slopes, np.stack(more, axis=1)], axis=1)

    def _by_differences(self, parameters: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Return `sensitivity` by differences; all shifted parameters go through in one call."""
        count = parameters.shape[-1]
        step = self._steps(parameters)
        moved = np.repeat(parameters[:, np.newaxis, :], count + 1, axis=1)
        index = np.arange(count)
        moved[:, index + 1, index] += step
        step = moved[:, index + 1, index] - parameters
        values = self.predict(moved)
        slopes = (values[:, 1:] - values[:, :1]) / step[..., np.newaxis]
        return values[:, 0], slopes

    def rates(self, parameters: FloatArray) -> FloatArray:
        """Return the shear rates [1/s] where the stress is largest, shape (n,)."""
        model, dimensions = self._parts(parameters)
        rate, _ = self.geometry.record.sheared_at(model, self.setting, *dimensions.values())
        return np.broadcast_to(rate, self.setting.shape)

    def _parts(self, parameters: FloatArray) -> tuple[Model, dict[str, FloatArray]]:
        """Return the model and the dimensions, each with a trailing axis for the readings."""
        columns = columns_of(parameters)
        keys = self.record.parameter_keys
        model = bare_model(self.record, columns[: len(keys)])
        fitted = dict(zip((one.key for one in self.extra), columns[len(keys) :], strict=True))
        return model, {**self.geometry.dimensions, **fitted}

    def _steps(self, parameters: FloatArray) -> FloatArray:
        """Return steps (b, p) that change readings by about a part in a million."""
        count = len(self.record.parameters)
        model, _ = self._parts(parameters)
        rate = self._nominal_rate
        slopes = self.record.jacobian(rate, *model)
        stress = self.record.stress(rate, *model)
        step = np.empty_like(parameters)
        with np.errstate(all="ignore"):
            for index, slope in enumerate(slopes):
                reach = np.min(np.abs(stress / slope), axis=-1)
                value = np.abs(parameters[:, index])
                step[:, index] = np.where(value > 0, np.minimum(value, reach), reach)
        for index, one in enumerate(self.extra):
            value = np.abs(parameters[:, count + index])
            step[:, count + index] = np.maximum(value, self._extra_reach[one.key])
        return _SHARE * np.where(np.isfinite(step) & (step > 0), step, 1.0)

    @cached_property
    def _nominal_rate(self) -> FloatArray:
        rate, _ = self.geometry.nominal(self.setting, self.observed)
        return np.maximum(rate, np.min(rate[rate > 0], initial=1.0) * 1e-3)

    @cached_property
    def _extra_reach(self) -> dict[str, float]:
        """Sizes of entrance loss [-] and slip coefficient [m/(Pa s)] that would be felt."""
        if not self.extra:
            return {}
        tube = self.geometry.dimensions
        aspect = np.min(tube["length"] / tube["diameter"])
        apparent, stress = self.geometry.nominal(self.setting, self.observed)
        slip = np.min(apparent * tube["diameter"] / (8.0 * stress))
        return {"entrance_diameters": float(aspect), "slip_coefficient": float(slip)}
