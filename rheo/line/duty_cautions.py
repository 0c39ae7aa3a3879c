"""What to be careful of in a line's duty."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from rheo.errors import Caution, merge_cautions
from rheo.line.parts import FloatArray
from rheo.line.product import Product
from rheo.line.profile import Profile
from rheo.line.walk import StepResult, Walk

if TYPE_CHECKING:
    from rheo.line.result import PartResult

# Common practice: a viscous rise that moves the temperature by this much [K] moves the flow curve.
_WARMING = 5.0


def inside_measured_range(step: StepResult, product: Product) -> bool | None:
    """Return whether the wall shear rates of a part lie in the measured range, ends included."""
    if step.flow is None or product.measured_rates is None:
        return None
    low, high = product.measured_rates
    rate = step.flow.wall_rate
    return bool(np.all((rate >= low) & (rate <= high)))


def duty_cautions(
    found: Walk,
    product: Product,
    parts: tuple[PartResult, ...],
    npsh: FloatArray | None,
    profile: Profile | None,
) -> tuple[Caution, ...]:
    """Return the Cautions of a duty, those of the pipes included."""
    return merge_cautions(
        _wall_rates(found, product),
        _temperatures(found, product),
        _heating(product, parts),
        _by_itself(found),
        _suction(found, product, npsh),
        _vapour(found, product, profile),
        _of_pipes(found),
    )


def _of_pipes(found: Walk) -> Iterator[Caution]:
    """Yield the Cautions of each pipe; pipes of one name are told apart by their number."""
    pipes = [step for step in found.steps if step.flow is not None and step.kind == "pipe"]
    names = [step.name for step in pipes]
    for number, step in enumerate(pipes, start=1):
        place = step.name if names.count(step.name) == 1 else f"{step.name} (pipe {number})"
        if step.flow is not None:
            for caution in step.flow.cautions:
                yield replace(caution, place=place)


def _wall_rates(found: Walk, product: Product) -> Iterator[Caution]:
    if product.measured_rates is None:
        yield Caution(
            "measured-range-unknown",
            "The range of shear rates that the viscometer saw is not known.",
            "Compare the wall shear rates with the readings by hand.",
            product.name,
        )
        return
    low, high = product.measured_rates
    for step in found.steps:
        if step.kind != "pipe" or step.flow is None or inside_measured_range(step, product):
            continue
        rate = step.flow.wall_rate
        least, most = float(np.min(rate)), float(np.max(rate))
        value = f"{least:.3g}" if least == most else f"{least:.3g} to {most:.3g}"
        yield Caution(
            "outside-measured-range",
            f"The wall shear rate of {value} 1/s lies outside the measured {low:.3g} to "
            f"{high:.3g} 1/s, so the pressure drop rests on an extrapolated flow curve.",
            "Take readings that reach this shear rate, or a size whose wall shear rate they cover.",
            step.name,
        )


def _temperatures(found: Walk, product: Product) -> Iterator[Caution]:
    for step in found.steps:
        if step.flow is None or step.kind != "pipe":
            continue
        low = float(min(np.min(step.temperature), np.min(step.outlet_temperature)))
        high = float(max(np.max(step.temperature), np.max(step.outlet_temperature)))
        if not product.knows_temperature:
            off = max(abs(low - product.temperature), abs(high - product.temperature))
            if off > 1e-9:
                yield Caution(
                    "temperature-not-in-model",
                    f"The product is at {low - 273.15:.1f} °C there, but its flow curve is known "
                    f"at {product.temperature - 273.15:.1f} °C only.",
                    "Take readings at that temperature too.",
                    step.name,
                )
        elif product.temperature_range is not None:
            least, most = product.temperature_range
            if low < least - 1e-9 or high > most + 1e-9:
                yield Caution(
                    "outside-temperature-range",
                    f"The product is at {_span(low - 273.15, high - 273.15)} °C there, outside "
                    f"the {least - 273.15:.1f} to {most - 273.15:.1f} °C of the readings.",
                    "Take readings at that temperature too.",
                    step.name,
                )


def _span(low: float, high: float) -> str:
    words = [f"{low:.1f}", f"{high:.1f}"]
    return " to ".join(dict.fromkeys(words))


def _heating(product: Product, parts: tuple[PartResult, ...]) -> Iterator[Caution]:
    if product.heat_capacity is None:
        return
    rise = sum((part.temperature_rise for part in parts), start=np.zeros(()))
    if np.any(rise > _WARMING):
        yield Caution(
            "viscous-heating",
            f"Friction warms the product by {float(np.max(rise)):.1f} K on its way.",
            "Check the pressure drop with the flow curve of the warmer product, and the product's "
            "own limit.",
            product.name,
        )


def _by_itself(found: Walk) -> Iterator[Caution]:
    least = float(np.min(found.differential_pressure))
    if least < 0:
        yield Caution(
            "runs-by-itself",
            f"Heights and vessels drive the line by {-least / 1e5:.3g} bar more than it needs.",
            "No pump is needed for this flow; a valve must hold it back, or it will run faster.",
            found.line.name,
        )


def _suction(found: Walk, product: Product, npsh: FloatArray | None) -> Iterator[Caution]:
    if npsh is None:
        if product.vapour_pressure is None and found.line.suction:
            yield Caution(
                "npsh-unknown",
                "NPSH available is not worked out, since the vapour pressure is not given.",
                "Give vapour_pressure at the suction temperature.",
                product.name,
            )
    elif np.any(npsh <= 0):
        yield Caution(
            "npsh-negative",
            f"NPSH available is {float(np.min(npsh)):.2f} m: the pump cannot draw this flow.",
            "Shorten or widen the suction pipe, raise the vessel or its pressure, or pump less.",
            "suction",
        )


def _vapour(found: Walk, product: Product, profile: Profile | None) -> Iterator[Caution]:
    if profile is None:
        return
    floor = (product.vapour_pressure or 0.0) - found.line.atmospheric_pressure
    worst = int(np.argmin(profile.pressure))
    if profile.pressure[worst] < floor:
        what = "its vapour pressure" if product.vapour_pressure is not None else "a full vacuum"
        yield Caution(
            "below-vapour-pressure",
            f"The static pressure falls to {profile.pressure[worst] / 1e5:.3g} bar gauge, below "
            f"{what}: the product would part or boil there.",
            "Raise the pressure at that point, or route the line lower.",
            profile.name[worst],
        )
