"""Which readings to take next, so that the pressure drop is known best.

For each model that may be the right one the pressure drop and the reading at a new speed are
taken as linear in the parameters around the fit: then a further reading
narrows the pressure drop by a known amount (c-optimal design: A. C. Atkinson, A. N. Donev & R. D.
Tobias, Optimum Experimental Designs, Oxford 2007). The models are mixed by their Akaike weights,
which the new reading would move: the expected fall in variance is worked out by Gauss-Hermite
points over the readings that may come.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import Caution, InputError
from rheo.line.checks import require_positive
from rheo.line.parts import FloatArray, Line
from rheo.line.product import Product
from rheo.models import Model

if TYPE_CHECKING:
    from rheo.fitting import Fit, Fits
    from rheo.fitting.problem import Problem
    from rheo.geometry import Geometry
    from rheo.line.rivals import Candidates, Rival

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
    place : str
        Which of several tubes or cups, in words; empty where there is one.
    half_width : float
        Expected half width of the 95 % interval of the pressure drop with these readings, over
        the pressure drop [-].
    variance_share : float
        Expected variance with these readings over that without [-].
    """

    setting: float
    rate: float
    place: str
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


def measure_next(
    fits: Fits,
    line: Line,
    product: Product,
    flow: float,
    *,
    geometry: Geometry | None = None,
    settings: ArrayLike | None = None,
    count: int = 2,
    state: float | None = None,
    method: str | None = None,
    thickness: float = 1.0,
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
        Of the instrument, with scalar dimensions; that of the readings when absent. Without any,
        readings are stresses at shear rates.
    settings : array_like, optional
        Speeds that the instrument has, in the unit of its setting; 41 speeds over the range used
        so far when absent.
    count : int
        Readings to be taken at one speed, at the product's temperature.
    state : float, optional
        For fits over solids fractions the product's fraction; the reference when absent.
    method : str, optional
        Turbulent friction method.
    thickness : float
        Stress of the product in the line over that of the product that is measured [-].

    Returns
    -------
    NextReadings
        Every speed with its expected interval.

    Raises
    ------
    InputError
        If the readings leave the pressure drop open by every model, or the settings or the count
        cannot be used.
    """
    if isinstance(count, bool) or int(count) != count or count < 1:
        raise InputError(f"count is {count!r}; it must be a whole number above 0", "measure_next")
    from rheo.line.rivals import model_at, rival

    likely = [fit for fit in fits if fit.weight >= _LEAST_WEIGHT]
    model = model_at(fits.best, product, state)
    candidates = _candidates(fits.best, model, geometry, settings)
    found = [
        rival(fit, line, product, flow, candidates, state, method, thickness) for fit in likely
    ]
    rivals = [one for one in found if one is not None]
    if not rivals:
        raise InputError(
            "the readings leave the pressure drop open by every model, so that nothing can be said "
            "of further ones; take readings over a wider range of speeds",
            "measure_next",
        )
    before = _variance_now(rivals)
    after = np.clip(before - _expected_fall(rivals, count), 0.0, None)
    rates = _rates(model, candidates)
    ranking = tuple(
        Suggestion(
            float(candidates.setting[i]),
            float(rates[i]),
            candidates.place[i],
            float(_NORMAL_95 * np.sqrt(after[i])),
            float(after[i] / before) if before > 0 else 1.0,
        )
        for i in np.argsort(after, kind="stable")
    )
    half_width = float(_NORMAL_95 * np.sqrt(before))
    return NextReadings(
        candidates.kind,
        count,
        half_width,
        ranking,
        _sentence(candidates.kind, count, half_width, ranking[0], _where(fits.best, product)),
        tuple(_cautions(likely, found)),
    )


def _candidates(
    fit: Fit, model: Model, geometry: Geometry | None, settings: ArrayLike | None
) -> Candidates:
    """Readings that could be taken, with each of the tubes or cups that there are."""
    from rheo.line.rivals import Candidates

    own, measured_at = _instrument(fit.problem)
    geometry = geometry or own
    if geometry is None:
        at = _settings(settings, fit.rates[fit.rates > 0])
        return Candidates("rate", at, None, ("",) * at.size)
    kind = geometry.record.setting
    if geometry.shape == ():
        used = fit.rates[fit.rates > 0]
        used = np.asarray(geometry.setting_for_rate(model, used), dtype=float)
        if own is not None and own.key == geometry.key:
            used = measured_at
        at = _settings(settings, used)
        return Candidates(kind, at, geometry, ("",) * at.size)
    if own is None or own.key != geometry.key:
        raise InputError("its dimensions must be single numbers here", f"geometry {geometry.key}")
    used = measured_at
    return _several(own, used, settings)


def _instrument(problem: Problem) -> tuple[Geometry | None, FloatArray]:
    """Return where the fluid was sheared, None for a flow curve, and each reading's setting."""
    from rheo.fitting.reading_problem import ReadingProblem
    from rheo.fitting.scaling import ScaledProblem

    if isinstance(problem, ReadingProblem | ScaledProblem) and problem.geometry is not None:
        return problem.geometry, np.asarray(problem.setting)
    return None, np.empty(0)


def _several(geometry: Geometry, used: FloatArray, settings: ArrayLike | None) -> Candidates:
    """Candidates for readings that were taken in several tubes or cups."""
    from rheo.line.rivals import Candidates

    columns = geometry.dimensions.values()
    table = np.stack([np.broadcast_to(value, used.shape) for value in columns], axis=-1)
    rows, group = np.unique(table, axis=0, return_inverse=True)
    group = group.reshape(-1)
    parts = [_settings(settings, used[group == i]) for i in range(len(rows))]
    index = np.repeat(np.arange(len(rows)), [part.size for part in parts])
    keys = list(geometry.dimensions)
    whole = geometry.replaced(**{key: rows[index, i] for i, key in enumerate(keys)})
    changing = [i for i in range(len(keys)) if np.ptp(rows[:, i]) > 0]
    words = [", ".join(f"{keys[i]} {1e3 * row[i]:.3g} mm" for i in changing) for row in rows]
    place = tuple(words[i] for i in index)
    return Candidates(geometry.record.setting, np.concatenate(parts), whole, place)


def _settings(settings: ArrayLike | None, used: FloatArray) -> FloatArray:
    if settings is None:
        return np.geomspace(float(np.min(used)), float(np.max(used)), _SPEEDS)
    at = np.unique(np.asarray(settings, dtype=float))
    require_positive(at, "settings", "measure_next")
    if at.size == 0:
        raise InputError("settings is empty; give at least one speed", "measure_next")
    return at


def _rates(model: Model, candidates: Candidates) -> FloatArray:
    if candidates.geometry is None:
        return candidates.setting
    rate, _ = candidates.geometry.sheared(model, candidates.setting)
    return np.broadcast_to(rate, candidates.setting.shape)


def _weights(rivals: list[Rival]) -> FloatArray:
    weight = np.array([rival.weight for rival in rivals])
    return weight / weight.sum()


def _variance_now(rivals: list[Rival]) -> float:
    weight = _weights(rivals)
    value = np.array([rival.log_pressure for rival in rivals])
    within = np.array([rival.variance for rival in rivals])
    return float(weight @ (within + (value - weight @ value) ** 2))


def _expected_fall(rivals: list[Rival], count: int) -> FloatArray:
    """Return the expected fall of the variance at each setting, shape (settings,).

    It is the variance of the mean that the mixture of models would come to (law of total
    variance). Axes below: model that is true, Gauss-Hermite point, model that judges, setting.
    """
    weight = _weights(rivals)
    value = np.array([rival.log_pressure for rival in rivals])
    reading = np.stack([rival.reading for rival in rivals])
    deviation = np.sqrt(np.stack([rival.spread + rival.noise**2 / count for rival in rivals]))
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


def _where(fit: Fit, product: Product) -> str:
    """The temperature of the new readings, where the fit knows temperatures."""
    law = getattr(fit.problem, "law", None)
    if law is None or law.state != "temperature":
        return ""
    return f" at {product.temperature - 273.15:.0f} °C"


def _sentence(kind: str, count: int, now: float, best: Suggestion, warmth: str) -> str:
    where = warmth + (f", {best.place}," if best.place else "")
    numbers = {1: "One more reading", 2: "Two more readings", 3: "Three more readings"}
    start = numbers.get(count, f"{count} more readings")
    if kind == "angular_speed":
        speed = f"{30.0 * best.setting / np.pi:.3g} rpm ({best.rate:.3g} 1/s)"
    elif kind == "flow":
        speed = f"{3.6e6 * best.setting:.3g} L/h ({best.rate:.3g} 1/s)"
    else:
        speed = f"{best.setting:.3g} 1/s"
    speed += where
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
    return f"{100.0 * share:.2g} %" if share < 1.0 else "more than 100 %"


def _cautions(likely: list[Fit], found: list[Rival | None]) -> Iterator[Caution]:
    lost = [fit.record.name for fit, one in zip(likely, found, strict=True) if one is None]
    if lost:
        yield Caution(
            "models-not-counted",
            f"Not counted: {', '.join(lost)}, by which the readings leave the pressure drop open.",
            "Read the answer as one for the other models.",
            "measure_next",
        )
