"""Which readings to take next, so that the pressure drop is known best.

For each model that may be the right one the pressure drop and the reading at a new speed are
taken as linear in the parameters around the fit, with the fit's covariance: then a further reading
narrows the pressure drop by a known amount (c-optimal design: A. C. Atkinson, A. N. Donev & R. D.
Tobias, Optimum Experimental Designs, Oxford 2007). The models are mixed by their Akaike weights,
which the new reading would move: the expected fall in variance is worked out by Gauss-Hermite
points over the readings that may come.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import Caution, InputError
from rheo.geometry import Geometry
from rheo.line.checks import require_positive
from rheo.line.parts import FloatArray, Line
from rheo.line.product import Product
from rheo.line.walk import walk
from rheo.models import Model

if TYPE_CHECKING:
    from rheo.fitting import Fit, Fits

_LEAST_WEIGHT = 0.01
_SPEEDS = 41
_NORMAL_95 = 1.959964
_NODES, _WEIGHTS = np.polynomial.hermite_e.hermegauss(24)
_WEIGHTS = _WEIGHTS / _WEIGHTS.sum()


@dataclass(frozen=True)
class Suggestion:
    """One speed at which to read again.

    Parameters
    ----------
    setting : float
        Angular speed [rad/s], flow [m3/s], or shear rate [1/s] without an instrument.
    rate : float
        Largest shear rate there by the best model [1/s].
    half_width : float
        Expected half width of the 95 % interval of the pressure drop with these readings, over
        the pressure drop [-].
    variance_share : float
        Expected variance with these readings over that without [-].
    """

    setting: float
    rate: float
    half_width: float
    variance_share: float


@dataclass(frozen=True)
class NextReadings:
    """Speeds ranked by what a further reading there would tell.

    Parameters
    ----------
    kind : str
        ``angular_speed``, ``flow`` or ``rate``: what `setting` means.
    count : int
        Readings to be taken at each suggested speed.
    half_width : float
        Half width of the 95 % interval of the pressure drop as it is, over the pressure drop [-].
    ranking : tuple of Suggestion
        The most telling first.
    sentence : str
        As an engineer would say it.
    cautions : tuple of Caution
        Models that could not be counted.
    """

    kind: str
    count: int
    half_width: float
    ranking: tuple[Suggestion, ...]
    sentence: str
    cautions: tuple[Caution, ...]

    @property
    def best(self) -> Suggestion:
        """The most telling speed."""
        return self.ranking[0]


@dataclass(frozen=True, eq=False)
class _Rival:
    """One model, linear around its fit.

    `effect` is the covariance of each new reading with ln(pressure), `spread` the variance of its
    predicted value, `noise` its standard deviation as a reading; all shape (settings,).
    """

    weight: float
    log_pressure: float
    variance: float
    reading: FloatArray
    effect: FloatArray
    spread: FloatArray
    noise: FloatArray


def measure_next(
    fits: Fits,
    line: Line,
    product: Product,
    flow: float,
    *,
    geometry: Geometry | None = None,
    settings: ArrayLike | None = None,
    count: int = 2,
    method: str | None = None,
) -> NextReadings:
    """Rank the speeds at which further readings would narrow the pressure drop most.

    Parameters
    ----------
    fits : Fits
        Models fitted to the readings so far.
    line : Line
        Where the pressure drop is wanted.
    product : Product
        Its density and temperature; its flow curve is that of each fit.
    flow : float
        [m3/s].
    geometry : Geometry, optional
        Of the instrument, with scalar dimensions; without one, readings are stresses at shear
        rates.
    settings : array_like, optional
        Speeds that the instrument has, in the unit of its setting; 41 speeds over the range used
        so far when absent.
    count : int
        Readings to be taken at one speed.
    method : str, optional
        Turbulent friction method.

    Returns
    -------
    NextReadings
        Every speed with its expected interval.

    Raises
    ------
    InputError
        If no fitted model has a covariance, or the settings or the count cannot be used.
    """
    if isinstance(count, bool) or int(count) != count or count < 1:
        raise InputError(f"count is {count!r}; it must be a whole number above 0", "measure_next")
    likely = [fit for fit in fits if fit.weight >= _LEAST_WEIGHT]
    usable = [fit for fit in likely if fit.covariance.size and np.isfinite(fit.covariance).all()]
    if not usable:
        raise InputError(
            "no fitted model has a covariance, so that nothing can be said of further readings; "
            "take readings over a wider range of speeds",
            "measure_next",
        )
    at = _settings(usable[0], geometry, settings)
    total = sum(fit.weight for fit in usable)
    rivals = [
        _rival(fit, fit.weight / total, line, product, flow, geometry, at, count, method)
        for fit in usable
    ]
    before = _variance_now(rivals)
    after = np.clip(before - _expected_fall(rivals), 0.0, None)
    rates = _rates(usable[0].model, geometry, at)
    order = np.argsort(after, kind="stable")
    ranking = tuple(
        Suggestion(
            float(at[i]),
            float(rates[i]),
            float(_NORMAL_95 * np.sqrt(after[i])),
            float(after[i] / before) if before > 0 else 1.0,
        )
        for i in order
    )
    kind = "rate" if geometry is None else geometry.record.setting
    half_width = float(_NORMAL_95 * np.sqrt(before))
    return NextReadings(
        kind,
        count,
        half_width,
        ranking,
        _sentence(kind, count, half_width, ranking[0]),
        _cautions(likely, usable),
    )


def _settings(fit: Fit, geometry: Geometry | None, settings: ArrayLike | None) -> FloatArray:
    if settings is not None:
        at = np.unique(np.asarray(settings, dtype=float))
        require_positive(at, "settings", "measure_next")
        if at.size == 0:
            raise InputError("settings is empty; give at least one speed", "measure_next")
        return at
    rates = fit.rates
    ends = np.array([rates[rates > 0].min(), rates.max()])
    if geometry is not None:
        ends = np.asarray(geometry.setting_for_rate(fit.model, ends), dtype=float)
    return np.geomspace(ends[0], ends[1], _SPEEDS)


def _reading(model: Model, geometry: Geometry | None, setting: FloatArray) -> FloatArray:
    return model.stress(setting) if geometry is None else geometry.predict(model, setting)


def _rates(model: Model, geometry: Geometry | None, setting: FloatArray) -> FloatArray:
    return setting if geometry is None else geometry.sheared(model, setting)[0]


def _rival(
    fit: Fit,
    weight: float,
    line: Line,
    product: Product,
    flow: float,
    geometry: Geometry | None,
    settings: FloatArray,
    count: int,
    method: str | None,
) -> _Rival:
    """Derivatives of ln(pressure) and of every reading by central differences, in one call each."""
    free = [fit.record.parameter_keys.index(key) for key in _own_keys(fit)]
    keep = [fit.parameter_keys.index(key) for key in _own_keys(fit)]
    covariance = fit.covariance[np.ix_(keep, keep)]
    centre = np.array([float(value) for value in fit.model], dtype=float)
    steps = _steps(fit, free, centre, np.sqrt(np.diag(covariance)))
    moved = np.repeat(centre[np.newaxis], 2 * len(free) + 1, axis=0)
    for row, (index, step) in enumerate(zip(free, steps, strict=True)):
        moved[1 + 2 * row, index] += step
        moved[2 + 2 * row, index] -= step
    models = fit.model_of(moved)
    pressure = walk(
        line, product, np.full(1, flow), source=models, method=method
    ).differential_pressure
    if not np.all(pressure > 0):
        raise InputError(
            "the line needs no pressure at this flow, so that there is nothing to narrow", line.name
        )
    readings = _reading(models.with_new_axis(), geometry, settings)
    log_pressure = np.log(pressure)
    by_parameter = (log_pressure[1::2] - log_pressure[2::2]) / (2.0 * steps)
    slopes = (readings[1::2] - readings[2::2]) / (2.0 * steps[:, np.newaxis])
    effect = by_parameter @ covariance @ slopes
    spread = np.einsum("is,ij,js->s", slopes, covariance, slopes)
    weighting = fit.problem.weighting
    scatter = max(fit.scatter, 1.0) if weighting.known else fit.scatter
    noise = weighting.sigma(readings[0]) * scatter / np.sqrt(count)
    variance = float(by_parameter @ covariance @ by_parameter)
    return _Rival(weight, float(log_pressure[0]), variance, readings[0], effect, spread, noise)


def _own_keys(fit: Fit) -> list[str]:
    """Free parameters of the flow curve; those of the instrument do not reach the pipe."""
    return [key for key in fit.parameter_keys if key in fit.record.parameter_keys]


def _steps(fit: Fit, free: list[int], centre: FloatArray, error: FloatArray) -> FloatArray:
    """Steps of the central differences: a hundredth of the standard error, inside the bounds."""
    lower = np.array([fit.record.parameters[index].lower for index in free])
    upper = np.array([fit.record.parameters[index].upper for index in free])
    value = centre[free]
    room = 0.5 * np.minimum(value - lower, upper - value)
    return np.minimum(np.maximum(0.01 * error, 1e-6 * np.abs(value)), room)


def _variance_now(rivals: list[_Rival]) -> float:
    weight = np.array([rival.weight for rival in rivals])
    value = np.array([rival.log_pressure for rival in rivals])
    within = np.array([rival.variance for rival in rivals])
    return float(weight @ (within + (value - weight @ value) ** 2))


def _expected_fall(rivals: list[_Rival]) -> FloatArray:
    """Return the expected fall of the variance at each setting, shape (settings,).

    It is the variance of the mean that the mixture of models would come to (law of total
    variance). Axes below: model that is true, Gauss-Hermite point, model that judges, setting.
    """
    weight = np.array([rival.weight for rival in rivals])
    value = np.array([rival.log_pressure for rival in rivals])
    reading = np.stack([rival.reading for rival in rivals])
    deviation = np.sqrt(np.stack([rival.spread + rival.noise**2 for rival in rivals]))
    gain = np.stack([rival.effect for rival in rivals]) / deviation**2
    seen = reading[:, np.newaxis, :] + deviation[:, np.newaxis, :] * _NODES[:, np.newaxis]
    off = seen[:, :, np.newaxis, :] - reading
    log_likelihood = -0.5 * (off / deviation) ** 2 - np.log(deviation)
    log_likelihood += np.log(weight)[:, np.newaxis]
    log_likelihood -= log_likelihood.max(axis=2, keepdims=True)
    share = np.exp(log_likelihood)
    share /= share.sum(axis=2, keepdims=True)
    mean = np.sum(share * (value[:, np.newaxis] + gain * off), axis=2)
    centre = weight @ value
    return np.einsum("l,g,lgs->s", weight, _WEIGHTS, (mean - centre) ** 2)


def _sentence(kind: str, count: int, now: float, best: Suggestion) -> str:
    numbers = {1: "One more reading", 2: "Two more readings", 3: "Three more readings"}
    start = numbers.get(count, f"{count} more readings")
    if kind == "angular_speed":
        speed = f"{30.0 * best.setting / np.pi:.3g} rpm ({best.rate:.3g} 1/s)"
    elif kind == "flow":
        speed = f"{3.6e6 * best.setting:.3g} L/h ({best.rate:.3g} 1/s)"
    else:
        speed = f"{best.setting:.3g} 1/s"
    if best.variance_share > 0.95:
        return (
            f"Further readings would tell little: {start.lower()} near {speed} would leave the "
            f"interval of the pressure drop at ±{_percent(best.half_width)}."
        )
    return (
        f"{start} near {speed} would cut the 95 % interval of the pressure drop from "
        f"±{_percent(now)} to ±{_percent(best.half_width)}."
    )


def _percent(share: float) -> str:
    return f"{100.0 * share:.2g} %"


def _cautions(likely: list[Fit], usable: list[Fit]) -> tuple[Caution, ...]:
    lost = [fit.record.name for fit in likely if fit not in usable]
    if not lost:
        return ()
    return (
        Caution(
            "models-not-counted",
            f"{', '.join(lost)} could not be counted: the readings do not tell its parameters "
            "apart.",
            "Read the answer as one for the other models.",
            "measure_next",
        ),
    )
