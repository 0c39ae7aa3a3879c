"""Whether readings can tell a parameter, in words."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution, in_percent
from rheo.fitting.intervals import FittedParameter
from rheo.models import Model

FloatArray = NDArray[np.float64]

# A standard error of a quarter of the value leaves a 95 % interval of about ±50 %.
_POORLY_KNOWN = 0.25
_NOT_KNOWN = 1.0
_MOVE_TOGETHER = 0.995
# Beyond this the figure itself says nothing more.
_MANY_TIMES = 10.0


def _below_plateau(model: Model, rates: FloatArray) -> tuple[bool, str]:
    share = float(model.viscosity(rates.min()) / model.parameters["zero_shear_viscosity"])
    return share < 0.9, (
        f"the viscosity at the lowest rate ({rates.min():.3g} 1/s) is {in_percent(share)} of it, "
        "so the plateau at low rates was never reached"
    )


def _above_plateau(model: Model, rates: FloatArray) -> tuple[bool, str]:
    plateau = float(model.parameters["infinite_shear_viscosity"])
    share = plateau / float(model.viscosity(rates.max()))
    return 0.0 < share < 0.5, (
        f"at the highest rate ({rates.max():.3g} 1/s) it makes up {in_percent(share)} of the "
        "viscosity, so the plateau at high rates was never reached"
    )


def _above_yield(model: Model, rates: FloatArray) -> tuple[bool, str]:
    yield_stress = float(model.yield_stress)
    ratio = float(model.stress(rates.min())) / yield_stress if yield_stress > 0 else 1.0
    return ratio > 2.0, (
        f"the lowest stress fitted (at {rates.min():.3g} 1/s) is {ratio:.3g} times it, so it is "
        "an extrapolation"
    )


def _half_stress(model: Model, rates: FloatArray) -> tuple[bool, str]:
    half = float(model.parameters["half_stress"])
    low, high = (float(model.stress(rate)) for rate in (rates.min(), rates.max()))
    return not low / 3.0 <= half <= 3.0 * high, (
        f"it lies outside the stresses fitted ({low:.3g} to {high:.3g} Pa)"
    )


def _onset(model: Model, rates: FloatArray) -> tuple[bool, str]:
    onset = 1.0 / float(model.parameters["time_constant"])
    return not rates.min() / 3.0 <= onset <= 3.0 * rates.max(), (
        f"the bend that it places at {onset:.3g} 1/s lies outside the rates fitted "
        f"({rates.min():.3g} to {rates.max():.3g} 1/s)"
    )


# What the range of the readings must reach for a parameter to be seen and not extrapolated.
_REACH: Mapping[str, tuple[str, Callable[[Model, FloatArray], tuple[bool, str]]]] = {
    "zero_shear_viscosity": ("plateau-not-reached", _below_plateau),
    "infinite_shear_viscosity": ("plateau-not-reached", _above_plateau),
    "yield_stress": ("yield-stress-extrapolated", _above_yield),
    "half_stress": ("bend-outside-range", _half_stress),
    "time_constant": ("bend-outside-range", _onset),
}


def identification_cautions(
    model: Model,
    parameters: Mapping[str, FittedParameter],
    correlation: Mapping[tuple[str, str], float],
    rates: FloatArray,
) -> tuple[Caution, ...]:
    """Say which parameters the readings cannot tell, and why.

    Parameters
    ----------
    model : Model
        The fitted flow curve.
    parameters : mapping of str to FittedParameter
        All parameters of the fit.
    correlation : mapping of pairs of keys to float
        Of the free parameters [-].
    rates : array, shape (n,)
        Shear rates to which the readings belong [1/s].

    Returns
    -------
    tuple of Caution
    """
    return tuple(_cautions(model, parameters, correlation, rates[rates > 0]))


def _cautions(
    model: Model,
    parameters: Mapping[str, FittedParameter],
    correlation: Mapping[tuple[str, str], float],
    rates: FloatArray,
) -> Iterator[Caution]:
    name = model.record.name
    for key, one in parameters.items():
        place = f"{name}, {key}"
        if one.bound:
            yield Caution(
                "parameter-at-bound",
                f"{key} is at its {one.bound} bound, {one.value:g} {_unit(one)}.",
                "It is left out of the covariance; a simpler model says the same.",
                place,
            )
            continue
        if not np.isfinite(one.stderr) or one.relative_error > _NOT_KNOWN:
            yield Caution(
                "parameter-not-identified",
                f"{key} cannot be told from these readings" + _error(one.relative_error),
                "Do not quote it; use a simpler model, or measure where it matters.",
                place,
            )
        elif one.relative_error > _POORLY_KNOWN:
            yield Caution(
                "parameter-poorly-known",
                f"{key} is known only from {one.low:.3g} to {one.high:.3g} {_unit(one)} (95 %).",
                "Treat it as a rough value.",
                place,
            )
        if key in _REACH and key in model.parameters:
            code, test = _REACH[key]
            outside, sentence = test(model, rates)
            if outside:
                yield Caution(
                    code,
                    f"{key}: {sentence}.",
                    "Do not use the curve beyond the rates fitted.",
                    place,
                )
    for (first, second), value in correlation.items():
        doubtful = max(parameters[first].relative_error, parameters[second].relative_error)
        if abs(value) > _MOVE_TOGETHER and doubtful > _POORLY_KNOWN:
            yield Caution(
                "parameters-move-together",
                f"{first} and {second} move together (correlation {value:.3f}): the readings fix "
                "a combination of them, not each.",
                "Use the pair as it stands; do not compare one of them alone between products.",
                f"{name}, {first}",
            )


def _error(relative: float) -> str:
    if not 0 < relative < np.inf:
        return "."
    if relative > _MANY_TIMES:
        return f" (its standard error is more than {_MANY_TIMES:.0f} times its value)."
    return f" (standard error {in_percent(relative)})."


def _unit(one: FittedParameter) -> str:
    return "" if one.unit == "-" else one.unit
