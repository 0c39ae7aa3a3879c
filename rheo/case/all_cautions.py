"""Everything that is to be known beside the numbers of a case."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from rheo.case.limit_cautions import limit_cautions
from rheo.case.load_readings import screened
from rheo.case.pump_cautions import pump_cautions
from rheo.case.schema import Case
from rheo.case.solids_state import solids_state_cautions
from rheo.errors import Caution, merge_cautions
from rheo.fitting.any_state import ONE_TEMPERATURE, used_states
from rheo.line import LineResult, Product, Solids, settling_cautions
from rheo.line.operating import OperatingPoint
from rheo.readings import Readings

if TYPE_CHECKING:
    from rheo.case.run import FittedCase


def all_cautions(
    case: Case, found: FittedCase, line: LineResult, operating: OperatingPoint | None
) -> tuple[Caution, ...]:
    """Return the Cautions of readings, fit, line, limits and pump, in the order of the work.

    Parameters
    ----------
    case : Case
        With its limits.
    found : FittedCase
        Readings, fits and product.
    line : LineResult
        At the duty.
    operating : OperatingPoint or None
        Where there is a pump.

    Returns
    -------
    tuple of Caution
        None of them twice.
    """
    sets, fits, chosen, product = found.readings, found.fits, found.chosen, found.product
    return merge_cautions(
        *(one.cautions for one in sets),
        found.fitted.cautions,
        *(screened(case, one) for one in sets),
        fits.data_cautions,
        fits.ranking_cautions if chosen is fits.best else (),
        chosen.cautions,
        _temperature_cautions(case, found.fitted, product),
        solids_state_cautions(case, found.fitted, fits, product.solids_fraction),
        _thickness_cautions(case),
        line.cautions,
        limit_cautions(case, line),
        pump_cautions(case, line, operating),
        _solids_cautions(case, line),
    )


def _temperature_cautions(case: Case, readings: Readings, product: Product) -> tuple[Caution, ...]:
    if product.knows_temperature:
        return ()
    taken = used_states(readings, "temperature")
    if taken is None:
        if case.product.temperature is None:
            return ()
        return (
            Caution(
                "temperature-of-readings-unknown",
                "The readings do not say at which temperature they were taken; they are used as if "
                f"it were the {product.temperature - 273.15:.1f} °C of the product.",
                "Give their temperature, in the file or beside it in the case.",
                product.name,
            ),
        )
    apart = abs(float(np.mean(taken)) - product.temperature)
    if apart <= ONE_TEMPERATURE:
        return ()
    return (
        Caution(
            "temperature-of-readings",
            f"The readings were taken at {float(np.mean(taken)) - 273.15:.1f} °C and the product "
            f"is pumped at {product.temperature - 273.15:.1f} °C.",
            "Take readings at the temperature of the line, or at two temperatures around it.",
            product.name,
        ),
    )


def _thickness_cautions(case: Case) -> tuple[Caution, ...]:
    factor = case.product.stress_factor
    if factor is None or factor == 1.0:
        return ()
    found = [
        Caution(
            "product-not-as-measured",
            f"The product is taken to have {float(factor):.3g} times the measured stress at every "
            "shear rate.",
            "Take readings of the product as it will be pumped.",
            case.product.name,
        )
    ]
    line = case.line
    found += [
        Caution(
            "equipment-loss-as-given",
            "Its loss stays as given, though the product is taken to be thicker or thinner.",
            "Ask its supplier, or measure the loss with that product.",
            part.name,
        )
        for part in (*line.suction, *line.discharge)
        if part.part == "equipment"
    ]
    return tuple(found)


def _solids_cautions(case: Case, line: LineResult) -> tuple[Caution, ...]:
    block = case.product.solids
    if block is None:
        return ()
    solids = Solids(**block.given())
    product = line.product
    at_rest = product.static_yield_stress
    found: list[tuple[Caution, ...]] = []
    for part in line.parts:
        if part.kind != "pipe":
            continue
        flowing = product.model_at(float(part.temperature)).yield_stress
        found.append(
            settling_cautions(
                solids,
                yield_stress=float(flowing if at_rest is None else np.asarray(at_rest)),
                density=float(np.asarray(product.density)),
                diameter=float(part.diameter),
                velocity=float(part.velocity),
                laminar=part.regime == "laminar",
                place=part.name,
            )
        )
    return merge_cautions(*found)
