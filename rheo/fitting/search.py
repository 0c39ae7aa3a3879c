"""Global search for flow curves of least squares: a grid of shapes, then the best cells."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.projection import (
    Projection,
    basis,
    clipped,
    raw_parameters,
    sizes_from,
)
from rheo.fitting.stack import Stack, lowest, padded
from rheo.models import ModelRecord

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]

_WORST = np.finfo(float).max


@dataclass(frozen=True)
class Effort:
    """How thoroughly a search looks.

    Parameters
    ----------
    points : int
        Largest number of points for which the grid is worked out: it needs their course only.
    cells : int
        Largest number of cells of a grid; every second value of its axes is left out until it
        is met.
    first_steps : int
        Steps from every cell of the grid that is the lowest of its line.
    kept : int
        Number of minima of each model that are followed further.
    steps : int
        Steps from each of these.
    tolerance : float
        Relative fall of the sum of squares below which a search ends.
    direct : int
        Number of shape coordinates from which on the cells of the grid are returned too, as they
        are: with so many, a search over all parameters finds other minima than one over the shape.
    """

    points: int
    cells: int
    first_steps: int
    kept: int
    steps: int
    tolerance: float
    direct: int


THOROUGH = Effort(
    points=200, cells=10_000, first_steps=5, kept=16, steps=100, tolerance=1e-15, direct=3
)
QUICK = Effort(points=15, cells=600, first_steps=0, kept=2, steps=8, tolerance=1e-4, direct=99)


def search(
    records: Sequence[ModelRecord],
    rate: FloatArray,
    stress: FloatArray,
    sigma: FloatArray,
    effort: Effort = THOROUGH,
) -> list[FloatArray]:
    """Return parameters at the lowest minima of the sum of squares of each model.

    Parameters
    ----------
    records : sequence of ModelRecord
        The models.
    rate, stress, sigma : array, shape (n,)
        Shear rate [1/s], shear stress [Pa] and its standard deviation [Pa].
    effort : Effort
        How thoroughly to look.

    Returns
    -------
    list of array, shape (c, p)
        For each model parameters in record order, the best first.
    """
    with np.errstate(all="ignore"):
        thin = _thinned(rate, stress, sigma, effort.points)
        grids = [_best_cells(record, thin, effort.cells) for record in records]
        cells = grids
        if effort.first_steps:
            shapes, left = _refined(records, cells, rate, stress, sigma, effort.first_steps, 1e-15)
            cells = _kept(shapes, left, effort.kept)
        else:
            cells = [cell[: effort.kept] for cell in cells]
        shapes, left = _refined(records, cells, rate, stress, sigma, effort.steps, effort.tolerance)
        kept = _kept(shapes, left, effort.kept)
        cells = []
        for index, (record, grid) in enumerate(zip(records, grids, strict=True)):
            wider = _from_narrower(record, records, kept, left, (rate, stress, sigma))
            found = kept[index]
            if wider.size and effort.direct > found.shape[-1]:
                found = found[: effort.kept - 1]
            more = grid if found.shape[-1] >= effort.direct else grid[:0]
            cells.append(np.concatenate([wider, found, more]))
        stack = Stack(records, [len(cell) for cell in cells])
        projection = Projection(stack, rate, stress, sigma)
        return projection.parameters(padded(cells), np.arange(stack.edges[-1]))


def _refined(
    records: Sequence[ModelRecord],
    cells: Sequence[FloatArray],
    rate: FloatArray,
    stress: FloatArray,
    sigma: FloatArray,
    steps: int,
    tolerance: float,
) -> tuple[list[FloatArray], list[FloatArray]]:
    """Return improved shapes and their sums of squares, model by model."""
    stack = Stack(records, [len(cell) for cell in cells])
    found = Projection(stack, rate, stress, sigma).refine(padded(cells), steps, tolerance)
    parts = [slice(*pair) for pair in zip(stack.edges[:-1], stack.edges[1:], strict=True)]
    widths = [cell.shape[-1] for cell in cells]
    return (
        [found.parameters[part, :width] for part, width in zip(parts, widths, strict=True)],
        [found.sum_of_squares[part] for part in parts],
    )


def _from_narrower(
    record: ModelRecord,
    records: Sequence[ModelRecord],
    kept: Sequence[FloatArray],
    left: Sequence[FloatArray],
    curve: tuple[FloatArray, FloatArray, FloatArray],
) -> FloatArray:
    """Return the best shape (1, q) that a model with one shape coordinate fewer leads to.

    Only where that model has two coordinates or more and all of them are this model's too, as
    Carreau's are those of Carreau and Yasuda. Empty for the others, and where nothing is gained.
    """
    names = record.separable.shape
    found = np.empty((0, len(names)))
    lowest_yet = float(np.min(left[list(records).index(record)]))
    for narrower, shapes in zip(records, kept, strict=True):
        shared = narrower.separable.shape
        missing = [name for name in names if name not in shared]
        if len(shared) < 2 or len(missing) != 1 or len(names) != len(shared) + 1:
            continue
        axis = record.separable.grid(curve[0])[names.index(missing[0])]
        tries = np.empty((axis.size, len(names)))
        tries[:, names.index(missing[0])] = axis
        for place, name in enumerate(shared):
            tries[:, names.index(name)] = shapes[0, place]
        residual, _ = Projection(Stack([record], [axis.size]), *curve).evaluate(
            tries, np.arange(axis.size)
        )
        totals = np.einsum("rn,rn->r", residual, residual)
        best = int(np.nanargmin(totals))
        if totals[best] < lowest_yet:
            found, lowest_yet = tries[[best]], float(totals[best])
    return found


def _kept(shapes: Sequence[FloatArray], left: Sequence[FloatArray], count: int) -> list[FloatArray]:
    return [shape[lowest(values, count)] for shape, values in zip(shapes, left, strict=True)]


def _thinned(
    rate: FloatArray, stress: FloatArray, sigma: FloatArray, points: int
) -> tuple[FloatArray, FloatArray, FloatArray]:
    if rate.size <= points:
        return rate, stress, sigma
    chosen = np.argsort(rate, kind="stable")[np.linspace(0, rate.size - 1, points).astype(int)]
    return rate[chosen], stress[chosen], sigma[chosen]


def _best_cells(
    record: ModelRecord, curve: tuple[FloatArray, FloatArray, FloatArray], count: int
) -> FloatArray:
    """Return the shapes (c, q) of the lowest cells of a model's grid, the lowest first."""
    rate, stress, sigma = curve
    axes = record.separable.grid(rate)
    while np.prod([axis.size for axis in axes]) > count:
        axes = tuple(axis[::2] for axis in axes)
    mesh = np.meshgrid(*axes, indexing="ij")
    shapes = np.stack([part.reshape(-1) for part in mesh], axis=-1) if mesh else np.empty((1, 0))
    target = stress / sigma
    columns = [one / sigma * np.ones((len(shapes), 1)) for one in basis(record, rate, shapes)]
    nothing = np.zeros(len(shapes))
    own = [np.einsum("gn,gn->g", one, one) for one in columns]
    toward = [one @ target for one in columns]
    cross = np.einsum("gn,gn->g", *columns) if len(columns) == 2 else nothing
    if len(columns) == 1:
        own.append(nothing)
        toward.append(nothing)
    sizes = sizes_from((own[0], own[1]), np.array(toward), cross)
    left = target @ target - sizes[0] * toward[0] - sizes[1] * toward[1]
    if record.allowed is not None:
        values = clipped(record, raw_parameters(record, shapes, np.stack(sizes, axis=-1)))
        left = np.where(record.allowed(*values.T), left, _WORST)
    left = np.where(np.isfinite(left), left, _WORST)
    return shapes[line_minima(left.reshape([axis.size for axis in axes]))]


def line_minima(left: FloatArray) -> IntArray:
    """Return flat indices of the lowest cell at every value of every axis, the lowest first."""
    values = left.reshape(-1)
    indices = np.arange(values.size).reshape(left.shape)
    cells = [np.zeros(1 if left.ndim == 0 else 0, dtype=np.intp)]
    for axis in range(left.ndim):
        lines = np.moveaxis(indices, axis, 0).reshape(left.shape[axis], -1)
        cells.append(lines[np.arange(lines.shape[0]), np.argmin(values[lines], axis=-1)])
    found = np.unique(np.concatenate(cells))
    return found[np.argsort(values[found], kind="stable")]
