"""Doubt budget: what the uncertainty of the pressure drop is made of."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import Caution
from rheo.hydraulics.registry import turbulent_methods
from rheo.line.checks import require_number, require_positive
from rheo.line.parts import FloatArray, Line, Part, Pipe
from rheo.line.product import FlowCurveSource, Product, interval
from rheo.line.walk import walk
from rheo.models import Model

# A tolerance is taken as evenly likely between its ends: standard deviation = half width/√3.
_EVEN = 1.0 / np.sqrt(3.0)
# One wild draw in a thousand would outweigh all others in a variance: the middle 99 % count.
_KEPT = 0.99
_TWO_SIDED_95 = 1.96


@dataclass(frozen=True)
class Doubts:
    """How well the inputs are known.

    The defaults are stated guesses of ours, to be replaced by what the plant knows.

    Parameters
    ----------
    density : float
        Standard deviation over value [-].
    diameter_tolerance : float
        Largest deviation of the inside diameter over its nominal value [-], all pipes alike.
    roughness : float
        Standard deviation over value [-].
    temperature : float
        Standard deviation [K].
    flow : float
        Standard deviation over value [-].
    """

    density: float = 0.01
    diameter_tolerance: float = 0.01
    roughness: float = 0.3
    temperature: float = 1.0
    flow: float = 0.02

    def __post_init__(self) -> None:
        for name in ("density", "diameter_tolerance", "roughness", "temperature", "flow"):
            require_number(getattr(self, name), name, "doubts", low=0.0)


@dataclass(frozen=True)
class DoubtShare:
    """One bar of the budget.

    Parameters
    ----------
    key, name : str
        Short word, and words for display.
    standard_deviation : float
        Of the pressure drop by this cause alone [Pa].
    share : float
        Of the variance [-].
    """

    key: str
    name: str
    standard_deviation: float
    share: float


@dataclass(frozen=True)
class DoubtBudget:
    """What makes the pressure drop uncertain.

    Parameters
    ----------
    pressure : float
        Differential pressure [Pa].
    standard_deviation : float
        Of all causes together, taken as independent [Pa].
    shares : tuple of DoubtShare
        The largest first; their shares add up to 1 unless all are 0.
    sentence : str
        The budget in words.
    cautions : tuple of Caution
        Causes that could not be counted.
    """

    pressure: float
    standard_deviation: float
    shares: tuple[DoubtShare, ...]
    sentence: str
    cautions: tuple[Caution, ...]

    @property
    def interval(self) -> tuple[float, float]:
        """Ends of the 95 % interval of the pressure by all causes together [Pa]."""
        half = _TWO_SIDED_95 * self.standard_deviation
        return self.pressure - half, self.pressure + half

    @property
    def chart(self) -> tuple[tuple[str, ...], tuple[float, ...]]:
        """Names and shares for a bar chart, the largest first."""
        return tuple(one.name for one in self.shares), tuple(one.share for one in self.shares)


def doubt_budget(
    line: Line,
    product: Product,
    flow: float,
    doubts: Doubts | None = None,
    method: str | None = None,
    pressures: FloatArray | None = None,
) -> DoubtBudget:
    """Split the variance of a line's differential pressure by its causes.

    Readings and model choice come from the product's draws, by the law of total variance: the
    spread within the draws of each model, and the spread between the models' means, both over the
    middle 99 % of the draws (one wild draw would outweigh all others). The friction method is the
    spread of all methods that apply to the flow curve and are in their range. Each other input is
    moved up and down by its standard deviation.

    Parameters
    ----------
    line : Line
        The line.
    product : Product
        With draws, one entry a model.
    flow : float
        [m3/s].
    doubts : Doubts, optional
        How well the inputs are known.
    method : str, optional
        Turbulent friction method; the default for the model when absent.
    pressures : array, shape (draws,), optional
        Differential pressure of every draw [Pa], as `LineResult.draws` has it, where that is known
        already.

    Returns
    -------
    DoubtBudget
        To first order, the causes taken as independent.
    """
    require_positive(flow, "flow [m3/s]", line.name)
    known = doubts or Doubts()

    def pressure(
        line_: Line = line,
        product_: Product = product,
        flow_: float | FloatArray = flow,
        method_: str | None = method,
    ) -> FloatArray:
        return walk(line_, product_, flow_, method=method_).differential_pressure

    centre = float(pressure())
    readings, choice = _of_product(line, product, flow, method, pressures)
    sides = np.array([1.0, -1.0])
    size = known.diameter_tolerance * _EVEN
    causes = [
        ("readings", "Readings", readings),
        ("model-choice", "Model choice", choice),
        (
            "friction-method",
            "Friction method",
            _of_methods(line, product, flow, method, lambda key: pressure(method_=key)),
        ),
        (
            "density",
            "Density",
            _half(
                pressure(
                    product_=replace(
                        product, density=np.asarray(product.density) * (1.0 + known.density * sides)
                    )
                )
            ),
        ),
        (
            "diameter",
            "Inside-diameter tolerance",
            _half(
                pressure(
                    line_=_with_pipes(
                        line,
                        lambda pipe: replace(
                            pipe, inside_diameter=pipe.diameter * (1.0 + size * sides)
                        ),
                    )
                )
            ),
        ),
        (
            "roughness",
            "Roughness",
            _half(
                pressure(
                    line_=_with_pipes(
                        line,
                        lambda pipe: replace(
                            pipe,
                            roughness=np.asarray(pipe.roughness)
                            * np.maximum(1.0 + known.roughness * sides, 0.0),
                        ),
                    )
                )
            ),
        ),
        ("temperature", "Temperature", _of_temperature(line, product, flow, known, method)),
        ("flow", "Flow", _half(pressure(flow_=flow * (1.0 + known.flow * sides)))),
    ]
    variance = sum(deviation**2 for _, _, deviation in causes)
    shares = tuple(
        DoubtShare(key, name, deviation, deviation**2 / variance if variance > 0 else 0.0)
        for key, name, deviation in sorted(causes, key=lambda cause: -cause[2])
    )
    total = float(np.sqrt(variance))
    return DoubtBudget(centre, total, shares, _sentence(centre, total, shares), _left_out(product))


def _half(pair: FloatArray) -> float:
    """Half the difference of two values; 0 where the cause moves nothing."""
    values = np.asarray(pair, dtype=float)
    return float(abs(values[0] - values[1]) / 2.0) if values.ndim else 0.0


def _with_pipes(line: Line, change: Callable[[Pipe], Pipe]) -> Line:
    def changed(part: Part) -> Part:
        return change(part) if isinstance(part, Pipe) else part

    return replace(
        line,
        suction=tuple(changed(part) for part in line.suction),
        discharge=tuple(changed(part) for part in line.discharge),
    )


def _of_product(
    line: Line, product: Product, flow: float, method: str | None, known: FloatArray | None
) -> tuple[float, float]:
    """Standard deviations [Pa] within the models' draws, and between the models' means."""
    if not product.draws:
        return 0.0, 0.0

    def pressure(source: FlowCurveSource) -> FloatArray:
        at = np.full(1, flow)
        return walk(line, product, at, source=source, method=method).differential_pressure

    values = product.over_draws(pressure) if known is None else known
    model = np.repeat(np.arange(len(product.draws)), product.draw_sizes)
    low, high = interval(values, _KEPT)
    kept = (values >= low) & (values <= high)
    blocks = [values[kept & (model == index)] for index in range(len(product.draws))]
    blocks = [block for block in blocks if block.size]
    weights = np.array([block.size for block in blocks]) / kept.sum()
    means = np.array([block.mean() for block in blocks])
    within = float(weights @ np.array([block.var() for block in blocks]))
    between = float(weights @ (means - weights @ means) ** 2)
    return float(np.sqrt(within)), float(np.sqrt(between))


def _of_methods(
    line: Line,
    product: Product,
    flow: float,
    method: str | None,
    pressure: Callable[[str], FloatArray],
) -> float:
    """Standard deviation [Pa] of the methods that count in every pipe of the line.

    The one in use always does; another only where it is made for the flow curve and lies in its
    range at the pipe's flow index and Reynolds number.
    """
    model = product.model_at(product.temperature)
    keys = {key for key, record in turbulent_methods().items() if record.applies(model)}
    for step in walk(line, product, flow, method=method).steps:
        if step.kind == "pipe" and step.flow is not None:
            keys &= {key for key, counts in step.flow.method_counts.items() if np.all(counts)}
    values = np.array([float(pressure(key)) for key in sorted(keys)])
    return float(values.std(ddof=1)) if values.size > 1 else 0.0


def _of_temperature(
    line: Line, product: Product, flow: float, known: Doubts, method: str | None
) -> float:
    if not product.knows_temperature or known.temperature == 0:
        return 0.0
    shift = known.temperature * np.array([1.0, -1.0])

    def warmer(temperature: ArrayLike) -> Model:
        return product.model_at(np.asarray(temperature) + shift)

    return _half(walk(line, product, flow, source=warmer, method=method).differential_pressure)


def _sentence(centre: float, total: float, shares: tuple[DoubtShare, ...]) -> str:
    if total == 0:
        return "Nothing is in doubt: no draws of the product and no doubt in the inputs were given."
    largest = shares[0]
    relative = f" ({100 * total / abs(centre):.2g} %)" if centre else ""
    text = (
        f"The pressure of {centre / 1e5:.3g} bar has a standard deviation of "
        f"{total / 1e5:.2g} bar{relative}, {100 * largest.share:.0f} % of its variance from "
        f"{largest.name.lower()}"
    )
    second = shares[1]
    if second.share >= 0.05:
        text += f" and {100 * second.share:.0f} % from {second.name.lower()}"
    return f"{text}."


def _left_out(product: Product) -> tuple[Caution, ...]:
    found = []
    if not product.draws:
        found.append(
            Caution(
                "doubt-without-draws",
                "The doubt in the readings and in the model choice is not counted, since no draws "
                "of the flow curve are given.",
                "Fit readings, and take draws of the fits.",
                product.name,
            )
        )
    if not product.knows_temperature:
        found.append(
            Caution(
                "doubt-without-temperature",
                "The doubt in the temperature is not counted, since the flow curve is known at "
                "one temperature only.",
                "Take readings at two temperatures or more.",
                product.name,
            )
        )
    return tuple(found)
