"""A flow curve whose parameters follow temperature or solids.

Each parameter is ``value at the reference * exp(slope * x)``, with x = 0 at the reference. The
slope is one for all viscosity-like parameters and another for those that are a stress or a rate
at yield; exponents are shared.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from rheo.models.record import FloatArray, Model, ModelRecord, Parameter
from rheo.models.scaled import scaled

# Which slope a parameter follows; one that stands in neither keeps its value. A time constant
# goes with the viscosity, as in time-temperature superposition (J. D. Ferry, Viscoelastic
# Properties of Polymers, 3rd ed., Wiley 1980, chapter 11; from memory).
VISCOUS = frozenset(
    {
        "viscosity",
        "consistency",
        "plastic_viscosity",
        "casson_viscosity",
        "zero_shear_viscosity",
        "infinite_shear_viscosity",
        "time_constant",
    }
)
AT_YIELD = frozenset({"yield_stress", "half_stress", "rate_offset"})


@dataclass(frozen=True)
class ScalingLaw:
    """How parameters follow a state of the product, such as its temperature.

    Parameters
    ----------
    state : str
        What is followed, in words, such as ``temperature``.
    unit : str
        Its SI unit.
    reference : float
        The state at which the parameters have their values; inside the data.
    exponent : callable
        ``exponent(state, reference) -> x``, 0 at the reference; about another reference it is the
        same but for a constant.
    slope, yield_slope : Parameter
        The slope of viscosity-like parameters, and that of those at yield.
    equation, source : str
        The law as text; where it was published.
    """

    state: str
    unit: str
    reference: float
    exponent: Callable[[FloatArray, float], FloatArray]
    slope: Parameter
    yield_slope: Parameter
    equation: str
    source: str

    def x(self, state: ArrayLike) -> FloatArray:
        """Return the exponent's variable at a state."""
        return self.exponent(np.asarray(state, dtype=float), self.reference)

    def extra(self, record: ModelRecord) -> tuple[Parameter, ...]:
        """Return the slopes that a model has."""
        keys = set(record.parameter_keys)
        return tuple(
            one
            for one, group in ((self.slope, VISCOUS), (self.yield_slope, AT_YIELD))
            if keys & group
        )

    def slope_of(self, record: ModelRecord) -> tuple[int | None, ...]:
        """Return for each parameter the index of its slope in `extra`; None for one that stays."""
        keys = [one.key for one in self.extra(record)]
        groups = ((VISCOUS, self.slope.key), (AT_YIELD, self.yield_slope.key))
        return tuple(
            next((keys.index(slope) for group, slope in groups if key in group), None)
            for key in record.parameter_keys
        )


@dataclass(frozen=True, eq=False)
class ScaledCurve:
    """A flow curve as a function of the state: call it with a temperature or a fraction.

    Parameters
    ----------
    record : ModelRecord
        The model.
    law : ScalingLaw
        How its parameters follow the state.
    values : tuple of array
        The model's parameters at the reference, then the slopes; scalars or draws, one shape.
    """

    record: ModelRecord
    law: ScalingLaw
    values: tuple[FloatArray, ...]

    def __call__(self, state: ArrayLike) -> Model:
        """Return the flow curve at a state, which broadcasts against the parameters."""
        x = self.law.x(state)
        count = len(self.record.parameters)
        found = {}
        for parameter, value, index in zip(
            self.record.parameters, self.values[:count], self.law.slope_of(self.record), strict=True
        ):
            factor = 1.0 if index is None else np.exp(self.values[count + index] * x)
            found[parameter.key] = np.clip(value * factor, parameter.lower, parameter.upper)
        return Model(self.record, found)

    def about(self, law: ScalingLaw) -> ScaledCurve:
        """Return the same curve by the same law about another reference."""
        x = self.law.x(law.reference)
        count = len(self.record.parameters)
        moved = [
            value if index is None else value * np.exp(self.values[count + index] * x)
            for value, index in zip(
                self.values[:count], self.law.slope_of(self.record), strict=True
            )
        ]
        return ScaledCurve(self.record, law, (*moved, *self.values[count:]))

    def map(self, change: Callable[[FloatArray], FloatArray]) -> ScaledCurve:
        """Return the curve with `change` applied to each of its arrays: to reshape or index."""
        return ScaledCurve(self.record, self.law, tuple(change(value) for value in self.values))

    def thicker(self, factor: float) -> ScaledCurve:
        """Return the curve with `factor` times the stress at every rate and state."""
        count = len(self.record.parameters)
        values = dict(zip(self.record.parameter_keys, self.values[:count], strict=True))
        changed = scaled(Model(self.record, values), factor)
        return ScaledCurve(self.record, self.law, (*changed, *self.values[count:]))
