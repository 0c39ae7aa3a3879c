"""Readings with their exact derivatives, by geometry.

Each reading is an integral over the flow curve. At a given setting a change of the curve changes
it by a weighted mean of dτ over the shear rates in the geometry, so that the model's own Jacobian
at a few rates gives the derivatives. Geometries that are not listed are differentiated by
differences.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.gap_readings import GapRates, bob_stress
from rheo.fitting.nodes import crowded_rule
from rheo.fitting.several import SeveralCurves
from rheo.fitting.tube_readings import tube_wall
from rheo.geometry import GeometryRecord, geometry_record
from rheo.models import Model

FloatArray = NDArray[np.float64]
Dimensions = Mapping[str, FloatArray]
# Called with model, setting, dimensions, rates to start from, and whether 1e-6 will do: reading
# (b, n), its derivatives by the model's parameters (b, p, n) and by fitted dimensions, and
# the largest shear rate (b, n).
Slopes = tuple[FloatArray, FloatArray, dict[str, FloatArray], FloatArray]
_NODES = 40

Relation = Callable[[Model, FloatArray, Dimensions, FloatArray, bool], Slopes]


def _means(
    model: Model, rate: FloatArray, kernel: Callable[[Model, FloatArray], FloatArray]
) -> FloatArray:
    """Return ∫kernel dτ/dθ dx (b, p, n) over x = γ̇/rate from 0 to 1, for each parameter θ."""
    position, weight = crowded_rule(_NODES)
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
        model: Model, setting: FloatArray, dimensions: Dimensions, start: FloatArray, rough: bool
    ) -> Slopes:
        rows = model.shape[0]
        curves = SeveralCurves([(model.record, list(model), slice(0, rows))], rows)
        begin = GapRates(np.broadcast_to(start, (rows, setting.size)), None, rough)
        torque, slopes, rates = in_gap(key, curves, setting, dimensions, begin)
        return torque, slopes, {}, rates.bob

    return relation


def _cone(model: Model, setting: FloatArray, dimensions: Dimensions, *_: object) -> Slopes:
    record = geometry_record("cone-plate")
    rate, stress = record.sheared_at(model, setting, *dimensions.values())
    factor = np.broadcast_to(_scaled(record, dimensions, np.asarray(1.0)), setting.shape)
    slopes = np.empty((stress.shape[0], len(model.record.parameters), setting.size))
    for index, column in enumerate(model.record.jacobian(rate, *model)):
        slopes[:, index] = column
    return stress * factor, slopes * factor, {}, rate


def _plates(model: Model, setting: FloatArray, dimensions: Dimensions, *_: object) -> Slopes:
    """M = 2πR³∫τ x² dx with x = γ̇/γ̇_R."""
    record = geometry_record("parallel-plate")
    rate, stress = record.sheared_at(model, setting, *dimensions.values())
    reading = record.reading_at(model, rate, stress, *dimensions.values())
    position = crowded_rule(_NODES)[0]
    rates = np.broadcast_to(rate, stress.shape)
    means = _means(model, rates, lambda *_: position**2)
    return reading, 2.0 * np.pi * dimensions["radius"] ** 3 * means, {}, rate


def _slot(model: Model, setting: FloatArray, dimensions: Dimensions, *_: object) -> Slopes:
    """3V/h = G = (3/τ_w²)∫τγ̇dτ, G' = (3γ̇_w - 2G)/τ_w; at a wall stress dG = -(3/τ_w²)∫τ dτ dγ̇."""
    record = geometry_record("slot")
    rate, stress = record.sheared_at(model, setting, *dimensions.values())
    nominal = record.nominal_forms["newtonian"](setting, setting, *dimensions.values())[0]
    means = _means(model, rate, lambda local, inside: local.record.stress(inside, *local))
    share = 3.0 * rate / (stress * (3.0 * rate - 2.0 * nominal))
    factor = np.broadcast_to(_scaled(record, dimensions, np.asarray(1.0)), setting.shape)
    return stress * factor, (share * factor)[:, np.newaxis] * means, {}, rate


def _tube(
    model: Model, setting: FloatArray, dimensions: Dimensions, start: FloatArray, rough: bool
) -> Slopes:
    """ΔP = 4τ_w(L/D + e). A fluid that slides as a block has a stress that slip alone decides."""
    diameter = dimensions["diameter"]
    apparent = 32.0 * setting / (np.pi * diameter**3)
    sliding = np.asarray(8.0 * dimensions["slip_coefficient"] / diameter)
    aspect = np.asarray(4.0 * (dimensions["length"] / diameter + dimensions["entrance_diameters"]))
    wall = tube_wall(model, apparent, sliding, start, rough)
    stress, rate, slopes, rise = wall.stress, wall.rate, wall.slopes, wall.rise
    # Near a yield stress, and where Newton's method has not settled.
    missed = np.isnan(stress).any(axis=-1)
    if missed.any():
        few = model.map(lambda value: value[missed] if value.shape[0] > 1 else value)
        tubes = {
            key: value[missed] if np.ndim(value) > 1 else value for key, value in dimensions.items()
        }
        stress[missed], rate[missed], slopes[missed], rise[missed] = _tube_in_full(
            few, setting, tubes
        )
    extra = {
        "entrance_diameters": 4.0 * stress,
        "slip_coefficient": -8.0 * stress / diameter / rise * aspect,
    }
    return stress * aspect, slopes * np.atleast_1d(aspect)[..., np.newaxis, :], extra, rate


def _tube_in_full(
    model: Model, setting: FloatArray, dimensions: Dimensions
) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray]:
    """Return wall stress, rate, slopes and rise as `tube_wall`, however slow the search."""
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
    return stress, rate, share[:, np.newaxis] * means, rise


GAPS = ("concentric-cylinders", "six-speed", "vane")
RELATIONS: Mapping[str, Relation] = {
    **{key: _cylinders(key) for key in GAPS},
    "cone-plate": _cone,
    "parallel-plate": _plates,
    "slot": _slot,
    "tube": _tube,
}
