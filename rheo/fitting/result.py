"""One fitted model: parameters, intervals, residuals and how far to trust them."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import Caution, merge_cautions
from rheo.fitting.bootstrap import bootstrap_parameters
from rheo.fitting.final import Final, finish
from rheo.fitting.identify import identification_cautions
from rheo.fitting.intervals import FittedParameter, fitted_parameters
from rheo.fitting.judge import misfit_cautions
from rheo.fitting.problem import Problem, parameter_keys
from rheo.fitting.profile import Profile, profile
from rheo.fitting.ranking import fewest_readings
from rheo.fitting.runs import runs_test
from rheo.fitting.scaling import ScaledProblem
from rheo.models import Model, ModelRecord
from rheo.models.state_curve import ScaledCurve

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Fit:
    """One model fitted to readings.

    The global minimum is known when the fit is made; lmfit's final pass, the covariance and all
    that follows from them are worked out when they are first asked for.

    Parameters
    ----------
    problem : Problem
        Readings, weights and the model's predictions.
    minimum : array, shape (p,)
        Parameters at the global minimum.
    minimum_sum_of_squares : float
        Weighted sum of squares there [-].
    aicc : float
        Akaike's criterion for small samples [-]; infinite for too few readings.
    weight : float
        Akaike weight among the models fitted together [-].
    points : array of int, shape (n,)
        Indices of the readings fitted, as given by the user, counted from 0.
    """

    problem: Problem
    minimum: FloatArray
    minimum_sum_of_squares: float
    aicc: float
    weight: float
    points: NDArray[np.intp]

    @property
    def record(self) -> ModelRecord:
        """The model's record."""
        return self.problem.record

    @property
    def key(self) -> str:
        """Registry key of the model."""
        return self.record.key

    @property
    def parameter_count(self) -> int:
        """Number of parameters fitted, those at a bound included."""
        return self.minimum.size

    @property
    def readings_for_aicc(self) -> int | None:
        """Readings from which AICc is known on; None where it is known."""
        return None if math.isfinite(self.aicc) else fewest_readings(self.parameter_count)

    @cached_property
    def final(self) -> Final:
        """lmfit's result from the global minimum."""
        return finish(self.problem, self.minimum, self.minimum_sum_of_squares)

    @cached_property
    def model(self) -> Model:
        """The fitted flow curve."""
        return self.model_of(self.final.parameters)

    @cached_property
    def parameters(self) -> Mapping[str, FittedParameter]:
        """Every parameter with standard error and 95 % interval, by key."""
        return fitted_parameters(self.problem, self.final)

    @property
    def parameter_keys(self) -> tuple[str, ...]:
        """Keys of the parameters that the covariance is over: those not at a bound, in order."""
        keys = parameter_keys(self.problem)
        return tuple(key for key, free in zip(keys, self.final.free, strict=True) if free)

    @property
    def covariance(self) -> FloatArray:
        """Covariance of `parameter_keys`, shape (k, k); NaN where they cannot be told apart."""
        return self.final.covariance

    @property
    def correlation(self) -> dict[tuple[str, str], float]:
        """Correlation of each pair of `parameter_keys` [-]; empty without a covariance."""
        error = np.sqrt(np.diag(self.covariance))
        if not np.isfinite(error).all():
            return {}
        keys = self.parameter_keys
        matrix = self.covariance / np.where(np.outer(error, error) > 0, np.outer(error, error), 1.0)
        return {
            (keys[i], keys[j]): float(matrix[i, j])
            for i in range(len(keys))
            for j in range(i + 1, len(keys))
        }

    @property
    def freedom(self) -> int:
        """Readings less free parameters."""
        return int(self.problem.observed.size - self.final.free.sum())

    @property
    def weighted_ss(self) -> float:
        """Weighted sum of squares of the residuals [-]."""
        return self.final.sum_of_squares

    @property
    def scatter(self) -> float:
        """Standard deviation of a weighted residual [-]: sqrt(weighted_ss/freedom)."""
        return float(np.sqrt(self.weighted_ss / max(self.freedom, 1)))

    @cached_property
    def predicted(self) -> FloatArray:
        """Predicted readings, shape (n,)."""
        return self.problem.predict(self.final.parameters)

    @property
    def observed(self) -> FloatArray:
        """Measured readings, shape (n,)."""
        return self.problem.observed

    @cached_property
    def rates(self) -> FloatArray:
        """Shear rates [1/s] to which the readings belong by this fit, shape (n,)."""
        return self.problem.rates(self.final.parameters)

    @property
    def residuals(self) -> FloatArray:
        """Predicted less measured reading over its standard deviation [-], shape (n,)."""
        return (self.predicted - self.observed) / self.problem.weighting.sigma(self.observed)

    @property
    def relative_errors(self) -> FloatArray:
        """Predicted over measured reading, less 1 [-], shape (n,)."""
        return self.predicted / self.observed - 1.0

    @property
    def rms_relative_error(self) -> float:
        """Root mean square of the relative errors [-]."""
        return float(np.sqrt(np.mean(self.relative_errors**2)))

    @property
    def worst_relative_error(self) -> float:
        """Largest size of a relative error [-]."""
        return float(np.max(np.abs(self.relative_errors)))

    @property
    def worst_point(self) -> int:
        """Index of the reading with the worst relative error, counted from 0."""
        return int(self.points[np.argmax(np.abs(self.relative_errors))])

    @cached_property
    def runs(self) -> tuple[int, float]:
        """Runs of residual signs along the rate, and the chance of so few."""
        return runs_test(self.residuals[self.problem.order])

    @cached_property
    def cautions(self) -> tuple[Caution, ...]:
        """What to know before the fit is used."""
        return merge_cautions(
            misfit_cautions(self),
            identification_cautions(self.model, self.parameters, self.correlation, self.rates),
        )

    def model_of(self, parameters: FloatArray) -> Model:
        """Return the flow curve at parameters of shape (..., p)."""
        keys = self.record.parameter_keys
        return Model(self.record, {key: parameters[..., i] for i, key in enumerate(keys)})

    def bootstrap(self, count: int, seed: int = 1, kind: str = "residual") -> Model | ScaledCurve:
        """Return the flow curve with arrays of parameters from refits to drawn readings.

        Parameters
        ----------
        count : int
            Number of replicates.
        seed : int
            Of the random numbers.
        kind : str
            ``residual`` or ``parametric``: see `bootstrap.bootstrap_parameters`.

        Returns
        -------
        Model or ScaledCurve
            With parameter arrays of shape (count,); a function of the state where several
            temperatures or solids fractions were fitted.
        """
        return self.source_of(bootstrap_parameters(self, count, seed, kind))

    def profile(self, key: str, level: float = 0.95) -> Profile:
        """Return the profile-likelihood interval of a parameter, with its trace.

        Parameters
        ----------
        key : str
            One of `parameters`.
        level : float
            Confidence level, between 0 and 1.
        """
        return profile(self, key, level)

    def source_of(self, parameters: FloatArray) -> Model | ScaledCurve:
        """Return the flow curve at all parameters of the fit, shape (..., p), as a line takes it.

        A function of temperature or solids where readings at several were fitted.
        """
        if isinstance(self.problem, ScaledProblem):
            return self.problem.curve(parameters)
        return self.model_of(parameters)

    def jacobian(self, rate: ArrayLike) -> FloatArray:
        """Return d stress/d parameter at shear rates [1/s], shape (..., k), by `parameter_keys`.

        A parameter of the instrument has no influence on the flow curve: its column is 0.
        """
        whole = self.model.jacobian(rate)
        keys = self.record.parameter_keys
        nothing = np.zeros(whole.shape[:-1])
        return np.stack(
            [whole[..., keys.index(k)] if k in keys else nothing for k in self.parameter_keys],
            axis=-1,
        )

    def __repr__(self) -> str:
        values = ", ".join(f"{key}={one.value:.5g}" for key, one in self.parameters.items())
        return f"Fit({self.key!r}, {values}, aicc={self.aicc:.2f}, weight={self.weight:.3f})"
