"""Readings with their exact derivatives, by geometry.

Each reading is an integral over the flow curve. At a given setting a change of the curve changes
it by a weighted mean of dτ over the shear rates in the geometry, so that the model's own Jacobian
at a few rates gives the derivatives. Geometries that are not listed are differentiated by
differences.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from functools import cache

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.gap_readings import GapRates, bob_stress
from rheo.fitting.several import SeveralCurves
from rheo.geometry import GeometryRecord, geometry_record
from rheo.models import Model

FloatArray = NDArray[np.float64]
Dimensions = Mapping[str, FloatArray]
# Reading (b, n), its derivatives by the model's parameters (b, p, n) and by fitted dimensions, and
# the largest shear rate (b, n).
Slopes = tuple[FloatArray, FloatArray, dict[str, FloatArray], FloatArray]
Relation = Callable[[Model, FloatArray, Dimensions, FloatArray], Slopes]

_POWER, _NODES = 3, 40


@cache
def _rule() -> tuple[FloatArray, FloatArray]:
    """Nodes and weights on [0, 1] of ∫f(x)dx with x = t³, which suits powers of x."""
    nodes, weights = np.polynomial.legendre.leggauss(_NODES)
    t = 0.5 * (1.0 + nodes)
    return t**_POWER, 0.5 * weights * _POWER * t ** (_POWER - 1)


def _means(
    model: Model, rate: FloatArray, kernel: Callable[[Model, FloatArray], FloatArray]
) -> FloatArray:
    """Return ∫kernel dτ/dθ dx (b, p, n) over x = γ̇/rate from 0 to 1, for each parameter θ."""
    position, weight = _rule()
    local = model.with_new_axis()
    inside = rate[..., np.newaxis] * position
    weights = kernel(local, inside) * weight
    means = np.empty((*rate.shape[:-1], len(model.record.parameters), rate.shape[-1]))
    for index, column in enumerate(local.record.jacobian(inside, *local)):
        means[..., index, :] = np.sum(weights * column, axis=-1)
    return means


def _scaled(record: GeometryRecord, dimensions: Dimensions, stress: FloatArray) -> FloatArray:
    """Return the reading of a stress where the reading is proportional to it."""
    return record.reading_at(None, 0.0, stress, *dimensions.values())


def in_gap(
    key: str, curves: SeveralCurves, setting: FloatArray, dimensions: Dimensions, start: GapRates
) -> tuple[FloatArray, FloatArray, GapRates]:
    """Return torques (b, n), derivatives (b, p, n) and the rates in the gap of several curves.

    Parameters as for `bob_stress`, with the key of one of `GAPS` and its dimensions.
    """
    ratio = np.asarray(np.inf)
    if "outer_radius" in dimensions:
        ratio = dimensions["outer_radius"] / dimensions["inner_radius"]
    log_ratio = np.broadcast_to(np.log(ratio), setting.shape)
    stress, slopes, rate = bob_stress(curves, setting, log_ratio, start)
    unit = _scaled(geometry_record(key), dimensions, np.asarray(1.0))
    factor = np.broadcast_to(unit, setting.shape)
    return stress * factor, slopes * factor, rate


def _cylinders(key: str) -> Relation:
    def relation(
        model: Model, setting: FloatArray, dimensions: Dimensions, start: FloatArray
    ) -> Slopes:
        rows = model.shape[0]
        curves = SeveralCurves([(model.record, list(model), slice(0, rows))], rows)
        begin = GapRates(np.broadcast_to(start, (rows, setting.size)))
        torque, slopes, rates = in_gap(key, curves, setting, dimensions, begin)
        return torque, slopes, {}, rates.bob

    return relation


def _cone(model: Model, setting: FloatArray, dimensions: Dimensions, _: FloatArray) -> Slopes:
    record = geometry_record("cone-plate")
    rate, stress = record.sheared_at(model, setting, *dimensions.values())
    factor = np.broadcast_to(_scaled(record, dimensions, np.asarray(1.0)), setting.shape)
    slopes = np.empty((stress.shape[0], len(model.record.parameters), setting.size))
    for index, column in enumerate(model.record.jacobian(rate, *model)):
        slopes[:, index] = column
    return stress * factor, slopes * factor, {}, rate


def _plates(model: Model, setting: FloatArray, dimensions: Dimensions, _: FloatArray) -> Slopes:
    """M = 2πR³∫τ x² dx with x = γ̇/γ̇_R."""
    record = geometry_record("parallel-plate")
    rate, stress = record.sheared_at(model, setting, *dimensions.values())
    reading = record.reading_at(model, rate, stress, *dimensions.values())
    position, _ = _rule()
    rates = np.broadcast_to(rate, stress.shape)
    means = _means(model, rates, lambda *_: position**2)
    return reading, 2.0 * np.pi * dimensions["radius"] ** 3 * means, {}, rate


def _slot(model: Model, setting: FloatArray, dimensions: Dimensions, _: FloatArray) -> Slopes:
    """3V/h = G = (3/τ_w²)∫τγ̇dτ, G' = (3γ̇_w - 2G)/τ_w; at a wall stress dG = -(3/τ_w²)∫τ dτ dγ̇."""
    record = geometry_record("slot")
    rate, stress = record.sheared_at(model, setting, *dimensions.values())
    nominal, _ = record.nominal_forms["newtonian"](setting, setting, *dimensions.values())
    means = _means(model, rate, lambda local, inside: local.record.stress(inside, *local))
    share = 3.0 * rate / (stress * (3.0 * rate - 2.0 * nominal))
    factor = np.broadcast_to(_scaled(record, dimensions, np.asarray(1.0)), setting.shape)
    return stress * factor, (share * factor)[:, np.newaxis] * means, {}, rate


def _tube(model: Model, setting: FloatArray, dimensions: Dimensions, _: FloatArray) -> Slopes:
    """8V/D = G + 8βτ_w/D with G = (4/τ_w³)∫τ²γ̇dτ, G' = (4γ̇_w - 3G)/τ_w; ΔP = 4τ_w(L/D + e).

    A fluid that slides as a block has a wall stress that slip alone decides.
    """
    record = geometry_record("tube")
    rate, stress = record.sheared_at(model, setting, *dimensions.values())
    diameter = dimensions["diameter"]
    apparent = 32.0 * setting / (np.pi * diameter**3)
    sliding = 8.0 * dimensions["slip_coefficient"] / diameter
    flows = rate > 0
    safe = np.where(flows, rate, 1.0)
    sheared = apparent - sliding * stress
    rise = np.where(flows, (4.0 * rate - 3.0 * sheared) / stress, 0.0) + sliding
    means = _means(model, safe, lambda local, inside: local.record.stress(inside, *local) ** 2)
    share = np.where(flows, 4.0 * safe / (stress**3 * rise), 0.0)
    aspect = 4.0 * (dimensions["length"] / diameter + dimensions["entrance_diameters"])
    extra = {
        "entrance_diameters": 4.0 * stress,
        "slip_coefficient": -8.0 * stress / diameter / rise * aspect,
    }
    return stress * aspect, (share * aspect)[:, np.newaxis] * means, extra, rate


GAPS = ("concentric-cylinders", "six-speed", "vane")
RELATIONS: Mapping[str, Relation] = {
    **{key: _cylinders(key) for key in GAPS},
    "cone-plate": _cone,
    "parallel-plate": _plates,
    "slot": _slot,
    "tube": _tube,
}
