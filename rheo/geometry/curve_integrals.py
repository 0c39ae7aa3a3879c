"""Integrals over a flow curve, on which every geometry rests.

All are taken along the logarithm of the shear rate, y = ln(rate/largest rate) <= 0, where the
integrands of all models are smooth, also near the yield stress and across plateaus. Gauss-Legendre
panels are used on a first and a finer level; where these differ, a still finer level decides.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import cache

import numpy as np
from numpy.typing import NDArray

from rheo.models import Model

FloatArray = NDArray[np.float64]
Integrand = Callable[[Model, FloatArray, int], FloatArray]

# Below exp(-42) of the largest rate nothing is left in double precision: the integrands fall at
# least as fast as the rate itself.
_DEPTH = 42.0
_FIRST = (0.0, 1.6, 3.6, 6.6, 11.0, 17.5, 27.0, _DEPTH)
_TOLERANCE = 1e-11
# How deep a rising integrand is followed at first, and what share of an integral is not seen.
_SHALLOW = 17.5
_UNSEEN = 1e-17
# Nodes at a time: what the second-level cache of a processor core holds, twice as fast as more.
_BLOCK = 1 << 15


@cache
def unit_rule(points: int) -> tuple[FloatArray, FloatArray]:
    """Return Gauss-Legendre nodes and weights on [0, 1]."""
    nodes, weights = np.polynomial.legendre.leggauss(points)
    return 0.5 * (1.0 + nodes), 0.5 * weights


@cache
def _to_panel_end(points: int) -> FloatArray:
    """Matrix that takes values at the nodes of [0, 1] to integrals from each node to 1."""
    nodes, _ = unit_rule(points)
    x = 2.0 * nodes - 1.0
    vandermonde = np.polynomial.legendre.legvander(x, points - 1)
    antiderivative: FloatArray = np.empty((points, points))
    for order in range(points):
        unit = np.zeros(order + 1)
        unit[order] = 1.0
        integral = np.polynomial.legendre.legint(unit)
        antiderivative[:, order] = np.polynomial.legendre.legval(
            1.0, integral
        ) - np.polynomial.legendre.legval(x, integral)
    return np.asarray(0.5 * np.linalg.solve(vandermonde.T, antiderivative.T).T, dtype=float)


@cache
def _panels(level: int) -> tuple[FloatArray, FloatArray, FloatArray, int]:
    """Return nodes (deepest panel first), weights, panel widths and points a panel."""
    edges = np.asarray(_FIRST)
    points = 12
    if level >= 1:
        edges = np.sort(np.concatenate([edges, 0.5 * (edges[1:] + edges[:-1])]))
        points = 14
    if level >= 2:
        edges = np.linspace(0.0, _DEPTH, 64)
        points = 16
    edges = -edges[::-1]
    nodes, weights = unit_rule(points)
    widths = np.diff(edges)
    at = edges[:-1, None] + widths[:, None] * nodes
    return at.ravel(), (widths[:, None] * weights).ravel(), widths, points


def integrate_below(
    model: Model,
    rate: FloatArray,
    integrand: Integrand,
    rough: bool = False,
    rising: bool = False,
) -> FloatArray:
    """Integrate over ln(rate) from rest up to a shear rate.

    Parameters
    ----------
    model : Model
        Flow curve; parameters broadcast against `rate`.
    rate : array
        Largest shear rate [1/s], above 0.
    integrand : callable
        ``integrand(local_model, node_rate, level)``: the model with a trailing axis, shear rates at
        the nodes along it, and the level that `cumulative_from_top` needs; returns values along
        that axis.
    rough : bool
        Whether the first level will do, as on the way to a root.
    rising : bool
        Whether the integrand rises everywhere, and at least as the rate does: then the deeper part
        is left out where it is too small to be seen.

    Returns
    -------
    array
        The integral, in the shape to which `rate` and the parameters broadcast.
    """
    shape = np.broadcast_shapes(np.shape(rate), model.shape)
    flat_rate = np.broadcast_to(rate, shape).reshape(-1)
    flat = model.map(lambda value: np.broadcast_to(value, shape).reshape(-1))
    at_level = _cut_short if rising else _at_level
    coarse = at_level(flat, flat_rate, integrand, 0)
    if rough:
        return coarse.reshape(shape)
    fine = at_level(flat, flat_rate, integrand, 1)
    doubtful = np.abs(fine - coarse) > _TOLERANCE * np.abs(fine)
    if np.any(doubtful):
        fine[doubtful] = _at_level(flat.at(doubtful), flat_rate[doubtful], integrand, 2)
    return fine.reshape(shape)


def _cut_short(model: Model, rate: FloatArray, integrand: Integrand, level: int) -> FloatArray:
    """Return `_at_level` of a rising integrand, the deeper part only where it counts.

    Below a depth the integral of what rises at least as the rate is less than its value there.
    """
    nodes, _, _, _ = _panels(level)
    cut = int(np.searchsorted(nodes, -_SHALLOW))
    found = _at_level(model, rate, integrand, level, slice(cut, None))
    with np.errstate(all="ignore"):
        left = integrand(model, rate * np.exp(-_SHALLOW), level)
    counts = ~(left <= _UNSEEN * found)
    if np.any(counts):
        below = _at_level(model.at(counts), rate[counts], integrand, level, slice(cut))
        found[counts] += below
    return found


def _at_level(
    model: Model,
    rate: FloatArray,
    integrand: Integrand,
    level: int,
    some: slice = slice(None),
) -> FloatArray:
    """Return the integral by the rule of a level, or the part of it by some of its nodes."""
    nodes, weights, _, _ = _panels(level)
    nodes, weights = nodes[some], weights[some]
    scale = np.exp(nodes)
    result = np.empty(rate.shape)
    step = max(1, _BLOCK // nodes.size)
    for start in range(0, rate.size, step):
        part = slice(start, start + step)
        local = model.at((part, np.newaxis))
        result[part] = integrand(local, rate[part, np.newaxis] * scale, level) @ weights
    return result


def moment_ratio(model: Model, rate: FloatArray, k: int, rough: bool = False) -> FloatArray:
    """Return the integral of stress^k rate d(stress) up to a rate, over stress^(k+1) rate.

    The flow rate in a tube rests on k = 2, in a slot on k = 1, the largest velocity on k = 0.
    The model's closed form is used where its record has one.

    Parameters
    ----------
    model : Model
        Flow curve; parameters broadcast against `rate`.
    rate : array
        Shear rate [1/s], above 0.
    k : int
        0, 1 or 2.
    rough : bool
        Whether the first level of the quadrature will do.

    Returns
    -------
    array
        Dimensionless, between 0 and 1; n/((k+1)n + 1) for a power law.
    """
    if model.record.moment_ratio is not None:
        return model.record.moment_ratio(k, rate, *model)
    return moment_ratio_by_quadrature(model, rate, k, rough)


def moment_ratio_by_quadrature(
    model: Model, rate: FloatArray, k: int, rough: bool = False
) -> FloatArray:
    """Return `moment_ratio` by quadrature, whether or not a closed form exists.

    Without a yield stress by parts, (k + 1)∫τ^k γ̇ dτ = τ^(k+1)γ̇ - ∫τ^(k+1)dγ̇, for half the work:
    no slope is needed. Near a yield stress the two terms would cancel.
    """
    rate = np.asarray(rate, dtype=float)
    top = model.record.stress(rate, *model)
    if not model.record.has_yield_stress:

        def remainder(local: Model, node_rate: FloatArray, level: int) -> FloatArray:
            return local.record.stress(node_rate, *local) ** (k + 1) * node_rate

        below = integrate_below(model, rate, remainder, rough, rising=True)
        below = below / (top ** (k + 1) * rate)
        return (1.0 - below) / (k + 1)

    def integrand(local: Model, node_rate: FloatArray, level: int) -> FloatArray:
        stress = local.record.stress(node_rate, *local)
        slope = local.record.log_slope(node_rate, *local)
        return stress ** (k + 1) * node_rate * slope

    return integrate_below(model, rate, integrand, rough) / (top ** (k + 1) * rate)


def cumulative_from_top(values: FloatArray, level: int) -> FloatArray:
    """Return integrals from each node up to the largest rate, along the last axis."""
    _, weights, widths, points = _panels(level)
    panels = values.reshape(*values.shape[:-1], widths.size, points)
    within = (panels @ _to_panel_end(points).T) * widths[:, np.newaxis]
    whole = (values * weights).reshape(panels.shape).sum(axis=-1)
    above = np.cumsum(whole[..., ::-1], axis=-1)[..., ::-1] - whole
    return (within + above[..., np.newaxis]).reshape(values.shape)
