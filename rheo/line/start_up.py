"""Starting a full line again after a stop."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from rheo.errors import Caution
from rheo.line.constants import GRAVITY
from rheo.line.parts import Equipment, FloatArray, Line, Pipe
from rheo.line.product import Product
from rheo.line.rounding import balance
from rheo.line.route import route
from rheo.line.safety import START_UP
from rheo.line.walk import total as total_of

# A static yield stress lower than the flowing one by less than this share is within their doubt.
_CLOSE = 0.2

METHOD = (
    "Sum of 4 τ_y,static L/D over the line, all of it full, at rest and yielding at once: an upper "
    "estimate, since a line usually yields piece by piece."
)


@dataclass(frozen=True, eq=False)
class Section:
    """One part of the line at rest.

    Parameters
    ----------
    name, side : str
        Of the part; ``suction`` or ``discharge``.
    length_ratio : array
        L/D [-].
    yield_stress : array
        Static yield stress in it [Pa].
    yield_pressure : array
        4 τ_y L/D [Pa].
    length, volume : array
        [m], [m3].
    """

    name: str
    side: str
    length_ratio: FloatArray
    yield_stress: FloatArray
    yield_pressure: FloatArray
    length: FloatArray
    volume: FloatArray


@dataclass(frozen=True, eq=False)
class StartUp:
    """What it takes to move a full line from rest.

    Parameters
    ----------
    sections : tuple of Section
        In order.
    yield_pressure : array
        Sum over the sections [Pa].
    static_pressure : array
        Heights and vessels, which the pump carries at rest as well [Pa].
    rating : float or None
        Pressure that the pump or the line may see [Pa].
    without : tuple of (str, array)
        For each section: the pressure needed when it alone is empty or bypassed [Pa].
    allowed_yield_stress : array or None
        Mean static yield stress [Pa] that the rating could still start.
    flush_length, flush_volume : float or None
        To be flushed with water from the pump onwards before the rest starts [m], [m3].
    heat_to : float or None
        Temperature [K] at which the rating is enough.
    sentence : str
        The result in words.
    cautions : tuple of Caution
        What to know about it.
    safety, method : str
        The safety wording; how it was worked out.
    """

    sections: tuple[Section, ...]
    yield_pressure: FloatArray
    static_pressure: FloatArray
    rating: float | None
    without: tuple[tuple[str, FloatArray], ...]
    allowed_yield_stress: FloatArray | None
    flush_length: float | None
    flush_volume: float | None
    heat_to: float | None
    sentence: str
    cautions: tuple[Caution, ...]
    safety: str = START_UP
    method: str = METHOD

    @property
    def pressure(self) -> FloatArray:
        """Pressure that the pump must give to start the full line [Pa]."""
        return self.yield_pressure + self.static_pressure

    @property
    def restarts(self) -> np.ndarray | None:
        """Whether the rating is enough; None without a rating."""
        return None if self.rating is None else self.pressure <= self.rating


def sections_at_rest(line: Line, product: Product) -> tuple[Section, ...]:
    """Return the parts that hold product at rest, with the pressure that each needs to yield.

    The static yield stress is the product's own; where only the flow curve is known its (dynamic)
    yield stress at the part's temperature stands in. A static value scales with temperature as
    the flow curve's does.
    """
    found = []
    temperature = np.asarray(product.temperature, dtype=float)
    for step in route(line):
        part = step.part
        if isinstance(part, Pipe):
            if part.temperature is not None:
                temperature = np.asarray(part.temperature, dtype=float)
            length = np.asarray(part.length, dtype=float)
            size = part.diameter
            volume = 0.25 * np.pi * size**2 * length
        elif isinstance(part, Equipment):
            if part.outlet_temperature is not None:
                temperature = np.asarray(part.outlet_temperature, dtype=float)
            if part.passage_length is None or part.passage_diameter is None:
                continue
            length = np.asarray(part.passage_length, dtype=float)
            size = np.asarray(part.passage_diameter, dtype=float)
            volume = np.asarray(part.volume, dtype=float)
        else:
            continue
        at_rest = _resting_temperature(part, temperature)
        stress = static_yield_stress(product, at_rest)
        ratio = length / size
        found.append(
            Section(part.name, step.side, ratio, stress, 4.0 * stress * ratio, length, volume)
        )
    return tuple(found)


def _resting_temperature(part: Pipe | Equipment, temperature: FloatArray) -> FloatArray:
    """After a long stop a pipe that loses heat is as warm as its surroundings."""
    if isinstance(part, Pipe) and part.ambient_temperature is not None:
        return np.asarray(part.ambient_temperature, dtype=float)
    return temperature


def static_yield_stress(product: Product, temperature: FloatArray) -> FloatArray:
    """Return the static yield stress [Pa] at a temperature [K]."""
    dynamic = product.model_at(temperature).yield_stress
    if product.static_yield_stress is None:
        return dynamic
    static = np.asarray(product.static_yield_stress, dtype=float)
    if not product.knows_temperature:
        return static
    reference = product.model_at(product.temperature).yield_stress
    if not np.all(reference > 0):
        return static
    return static * dynamic / reference


def start_up(line: Line, product: Product, rating: float | None = None) -> StartUp:
    """Return the pressure that moves the full line from rest.

    Parameters
    ----------
    line : Line
        Lengths and diameters may be arrays; flush and heat are found for scalars only.
    product : Product
        With its static yield stress.
    rating : float, optional
        Pressure that the pump can give and the line can bear [Pa].

    Returns
    -------
    StartUp
        An upper estimate.
    """
    sections = sections_at_rest(line, product)
    total = total_of(section.yield_pressure for section in sections)
    static = _static_pressure(line, product)
    without = tuple((section.name, total - section.yield_pressure + static) for section in sections)
    allowed = flush = volume = heat = None
    if rating is not None:
        ratio = total_of(4.0 * section.length_ratio for section in sections)
        with np.errstate(divide="ignore", invalid="ignore"):
            allowed = np.where(ratio > 0, np.maximum(rating - static, 0.0) / ratio, np.inf)
        if total.ndim == 0 and float(total + static) > rating:
            flush, volume = _flush(sections, float(rating - static))
            heat = _heat(line, product, rating, float(static))
    return StartUp(
        sections,
        total,
        static,
        rating,
        without,
        allowed,
        flush,
        volume,
        heat,
        _sentence(total, static, rating, allowed, flush, volume, heat),
        _cautions(line, product, sections, total),
    )


def _static_pressure(line: Line, product: Product) -> FloatArray:
    weight = np.asarray(product.density, dtype=float) * GRAVITY
    rises = [
        weight * np.asarray(step.part.rise, dtype=float)
        for step in route(line)
        if isinstance(step.part, Pipe | Equipment)
    ]
    source, end = line.source_vessel, line.end_vessel
    levels = weight * np.asarray(end.level), -weight * np.asarray(source.level)
    return balance(end.gauge_pressure, -np.asarray(source.gauge_pressure), *levels, *rises)


def _flush(sections: tuple[Section, ...], available: float) -> tuple[float | None, float | None]:
    """Length and volume of water from the pump onwards that leave a pressure within reach."""
    excess = sum(float(section.yield_pressure) for section in sections) - available
    length = volume = 0.0
    for section in sections:
        if section.side != "discharge" or excess <= 0:
            continue
        pressure = float(section.yield_pressure)
        share = min(1.0, excess / pressure) if pressure > 0 else 1.0
        length += share * float(section.length)
        volume += share * float(section.volume)
        excess -= share * pressure
    return (length, volume) if excess <= 1e-9 * max(abs(available), 1.0) else (None, None)


def _heat(line: Line, product: Product, rating: float, static: float) -> float | None:
    """Temperature of the whole line at which its yield pressure falls to what is available."""
    if product.temperature_range is None or not product.knows_temperature:
        return None
    warmer = np.linspace(product.temperature, product.temperature_range[1], 201)
    if warmer[-1] <= warmer[0]:
        return None
    ratio = sum(float(section.length_ratio) for section in sections_at_rest(line, product))
    pressure = 4.0 * ratio * static_yield_stress(product, warmer) + static
    enough = np.flatnonzero(np.broadcast_to(pressure, warmer.shape) <= rating)
    return float(warmer[enough[0]]) if enough.size else None


def _sentence(
    total: FloatArray,
    static: FloatArray,
    rating: float | None,
    allowed: FloatArray | None,
    flush: float | None,
    volume: float | None,
    heat: float | None,
) -> str:
    if np.ndim(total + static) > 0:
        return "Start-up pressures for several lines at once."
    need = float(total + static)
    if need < 0:
        return (
            "A full line at rest should start by itself: heights and vessels push with "
            f"{-float(static) / 1e5:.3g} bar, and it needs up to {float(total) / 1e5:.3g} bar to "
            "yield."
        )
    text = f"A full line at rest needs up to {need / 1e5:.3g} bar to start"
    if rating is None:
        return f"{text}; no rating is given to compare it with."
    if need <= rating:
        return f"{text}, within the {rating / 1e5:.3g} bar allowed."
    text = f"{text}, more than the {rating / 1e5:.3g} bar allowed"
    if allowed is not None and float(allowed) > 0:
        text += f"; it would start with a static yield stress of {float(allowed):.3g} Pa or less"
    if flush is not None and volume is not None:
        text += f", or with {flush:.3g} m ({1e3 * volume:.3g} L) flushed from the pump onwards"
    if heat is not None:
        text += f", or warmed to {heat - 273.15:.0f} °C throughout"
    return f"{text}."


def _push(available: float) -> str:
    return f"no more than {available / 1e5:.3g} bar" if available > 0 else "nothing"


def _cautions(
    line: Line, product: Product, sections: tuple[Section, ...], total: FloatArray
) -> tuple[Caution, ...]:
    found = []
    if product.static_yield_stress is None and np.any(total > 0):
        found.append(
            Caution(
                "static-yield-stress-missing",
                "The yield stress of the flow curve, taken while flowing, stands in for the "
                "static one, which can be several times larger.",
                "Measure the static yield stress with a vane after the longest stop expected.",
                product.name,
            )
        )
    static = product.static_yield_stress
    flowing = product.model_at(product.temperature).yield_stress
    if static is not None and np.any(np.asarray(static) < (1.0 - _CLOSE) * flowing):
        found.append(
            Caution(
                "static-below-flowing-yield-stress",
                f"The static yield stress of {float(np.min(static)):.3g} Pa is below the "
                f"{float(np.max(flowing)):.3g} Pa of the flow curve, taken while flowing; at rest "
                "it cannot be lower.",
                "Measure it again with a vane; until then count on the flow curve's.",
                product.name,
            )
        )
    unknown = [
        part.name
        for part in (*line.suction, *line.discharge)
        if isinstance(part, Equipment) and part.passage_length is None
    ]
    if unknown and np.any(total > 0):
        found.append(
            Caution(
                "start-up-equipment",
                f"Start-up leaves out {', '.join(unknown)}, whose passages are not known.",
                "Give passage_length and passage_diameter, or ask its supplier.",
                unknown[0],
            )
        )
    available = np.asarray(line.source_vessel.gauge_pressure) + line.atmospheric_pressure
    weight = np.asarray(product.density, dtype=float) * GRAVITY
    rise = total_of(
        np.asarray(part.rise, dtype=float)
        for part in line.suction
        if isinstance(part, Pipe | Equipment)
    )
    available = available + weight * (np.asarray(line.source_vessel.level) - rise)
    available = available - (product.vapour_pressure or 0.0)
    suction = total_of(section.yield_pressure for section in sections if section.side == "suction")
    if np.any(suction > available):
        found.append(
            Caution(
                "suction-will-not-start",
                f"The suction side needs up to {float(np.max(suction)) / 1e5:.3g} bar to yield, "
                f"and {_push(float(np.min(available)))} can push from the vessel.",
                "Shorten or widen the suction pipe, pressurise the vessel, or keep it moving.",
                "suction",
            )
        )
    return tuple(found)
