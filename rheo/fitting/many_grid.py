"""Starting parameters for many flow curves at once, from one grid of shapes.

The columns of a grid depend on the shear rates only. Each curve is interpolated onto nodes that
curves of about the same range share, so that its grid costs five products of matrices.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.projection import basis, clipped, raw_parameters, sizes_from
from rheo.models import ModelRecord, model_record

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]

NODES = 32
# Steps of log10(rate) to which ranges are rounded outwards, by the decades that a curve spans.
_WIDE, _WIDE_STEP, _NARROW_STEP = 1.0, 0.25, 0.03125
_WORST = np.finfo(float).max


@dataclass(frozen=True, eq=False)
class Curves:
    """Flow curves of one length, padded with points that do not count.

    Parameters
    ----------
    rate, stress : array, shape (c, n)
        Shear rate [1/s] and shear stress [Pa].
    precision : array, shape (c, n)
        One over the standard deviation of a stress [1/Pa]; 0 for a point that does not count.
    """

    rate: FloatArray
    stress: FloatArray
    precision: FloatArray

    def at(self, rows: IntArray) -> Curves:
        """Return some of the curves."""
        return Curves(self.rate[rows], self.stress[rows], self.precision[rows])


@dataclass(frozen=True, eq=False)
class Nodes:
    """Curves on nodes that they share.

    Parameters
    ----------
    window : tuple of float
        First and last log10 of the rate.
    members : array of int, shape (k,)
        Which curves.
    stress, precision : array, shape (m, k)
        Stress [Pa] at the nodes and one over its standard deviation; 0 beyond a curve's ends.
    """

    window: tuple[float, float]
    members: IntArray
    stress: FloatArray
    precision: FloatArray


@dataclass(frozen=True, eq=False)
class _Grid:
    """Shapes of a model (g, q), and its columns on the nodes (g, m) with their products."""

    shapes: FloatArray
    sizes: tuple[int, ...]
    columns: tuple[FloatArray, ...]
    squares: tuple[FloatArray, ...]
    cross: FloatArray | None


def on_nodes(curves: Curves) -> list[Nodes]:
    """Return curves interpolated onto common nodes, those of about the same range together."""
    windows: dict[tuple[float, float], list[int]] = {}
    for index, (rate, precision) in enumerate(zip(curves.rate, curves.precision, strict=True)):
        used = rate[precision > 0]
        windows.setdefault(_window(float(used.min()), float(used.max())), []).append(index)
    return [_interpolated(curves, window, members) for window, members in windows.items()]


def _window(lowest: float, highest: float) -> tuple[float, float]:
    low, high = math.log10(lowest), math.log10(highest)
    step = _WIDE_STEP if high - low >= _WIDE else _NARROW_STEP
    first, last = math.floor(low / step), math.ceil(high / step)
    return first * step, max(last, first + 1) * step


def _interpolated(curves: Curves, window: tuple[float, float], members: list[int]) -> Nodes:
    nodes = np.linspace(*window, NODES)
    gap = nodes[1] - nodes[0]
    stress = np.zeros((NODES, len(members)))
    precision = np.zeros_like(stress)
    for column, member in enumerate(members):
        used = curves.precision[member] > 0
        at = np.log10(curves.rate[member, used])
        order = np.argsort(at, kind="stable")
        at = at[order]
        logs = np.log(curves.stress[member, used][order])
        stress[:, column] = np.exp(np.interp(nodes, at, logs))
        counts = np.exp(np.interp(nodes, at, np.log(curves.precision[member, used][order])))
        # A node just beyond the end stands for the end; there is always one inside or there.
        inside = (nodes > at[0] - 0.5 * gap) & (nodes < at[-1] + 0.5 * gap)
        precision[:, column] = np.where(inside, counts, 0.0)
    return Nodes(window, np.array(members, dtype=np.intp), stress, precision)


@lru_cache(maxsize=256)
def _grid(key: str, window: tuple[float, float]) -> _Grid:
    record = model_record(key)
    rate = 10.0 ** np.linspace(*window, NODES)
    axes = record.separable.grid(rate)
    mesh = np.meshgrid(*axes, indexing="ij")
    shapes = np.stack([part.reshape(-1) for part in mesh], axis=-1) if mesh else np.empty((1, 0))
    whole = np.ones((len(shapes), 1))
    columns = tuple(one * whole for one in basis(record, rate, shapes))
    cross = columns[0] * columns[1] if len(columns) == 2 else None
    sizes = tuple(axis.size for axis in axes)
    return _Grid(shapes, sizes, columns, tuple(one * one for one in columns), cross)


def grid_starts(
    record: ModelRecord, nodes: Nodes, count: int
) -> tuple[FloatArray, NDArray[np.bool_]]:
    """Return the lowest local minima of a model's grid for each of the curves.

    Parameters
    ----------
    record : ModelRecord
        The model.
    nodes : Nodes
        The curves.
    count : int
        Number of minima, at most.

    Returns
    -------
    tuple of array
        Parameters (k, s, p) with s up to `count`, the lowest first, and which of them are minima,
        shape (k, s); the first always is taken as one.
    """
    grid = _grid(record.key, nodes.window)
    weight = nodes.precision**2
    target = nodes.stress * weight
    own = [square @ weight for square in grid.squares]
    toward = [column @ target for column in grid.columns]
    nothing = np.zeros_like(own[0])
    cross = nothing if grid.cross is None else grid.cross @ weight
    if len(own) == 1:
        own.append(nothing)
        toward.append(nothing)
    first, second = sizes_from((own[0], own[1]), np.array(toward), cross)
    left = -first * toward[0] - second * toward[1]
    if record.allowed is not None:
        values = raw_parameters(
            record, grid.shapes[:, np.newaxis, :], np.stack([first, second], -1)
        )
        left = np.where(record.allowed(*np.moveaxis(values, -1, 0)), left, _WORST)
    left = np.where(np.isfinite(left), left, _WORST)
    ranked = np.where(_local_minima(left, grid.sizes), left, _WORST)
    cells = np.argsort(ranked, axis=0, kind="stable")[:count]
    curve = np.arange(left.shape[1])
    real = ranked[cells, curve] < _WORST
    # Where no cell is a minimum of its own, the lowest of all is one.
    cells[0] = np.where(real[0], cells[0], np.argmin(left, axis=0))
    real[0] = True
    sizes = np.stack([first[cells, curve], second[cells, curve]], axis=-1)
    values = raw_parameters(record, grid.shapes[cells], sizes)
    flat = clipped(record, values.reshape(-1, values.shape[-1])).reshape(values.shape)
    return np.moveaxis(flat, 0, 1), real.T


def _local_minima(left: FloatArray, sizes: tuple[int, ...]) -> NDArray[np.bool_]:
    """Say which cells (g, k) are no higher than their neighbours along every axis."""
    values = left.reshape(*sizes, -1)
    found = np.ones(values.shape, dtype=bool)
    for axis in range(len(sizes)):
        along, minima = np.moveaxis(values, axis, 0), np.moveaxis(found, axis, 0)
        minima[1:] &= along[1:] <= along[:-1]
        minima[:-1] &= along[:-1] <= along[1:]
    return found.reshape(left.shape)
