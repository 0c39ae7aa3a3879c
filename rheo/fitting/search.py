"""Global search for the flow curve of least squares: a grid of shapes, then the best cells."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.projection import (
    Projection,
    basis,
    clipped,
    from_products,
    raw_parameters,
)
from rheo.models import ModelRecord

FloatArray = NDArray[np.float64]

# The grid needs the course of the data, not every point of it.
_POINTS = 200
_WORST = np.finfo(float).max


def search(
    record: ModelRecord,
    rate: FloatArray,
    stress: FloatArray,
    sigma: FloatArray,
) -> FloatArray:
    """Return parameters at the lowest minima of a model's sum of squares.

    Parameters
    ----------
    record : ModelRecord
        The model.
    rate, stress, sigma : array, shape (n,)
        Shear rate [1/s], shear stress [Pa] and its standard deviation [Pa].

    Returns
    -------
    array, shape (c, p)
        Parameters in record order, the best first.
    """
    with np.errstate(all="ignore"):
        shapes = _best_cells(record, *_thinned(rate, stress, sigma))
        projection = Projection(record, rate, stress, sigma)
        if shapes.shape[-1]:
            found = projection.refine(shapes)
            ranked = np.argsort(found.sum_of_squares, kind="stable")
            shapes = found.parameters[ranked]
        return projection.parameters(shapes, np.arange(shapes.shape[0]))


def _thinned(rate: FloatArray, stress: FloatArray, sigma: FloatArray) -> tuple[FloatArray, ...]:
    if rate.size <= _POINTS:
        return rate, stress, sigma
    chosen = np.argsort(rate, kind="stable")[np.linspace(0, rate.size - 1, _POINTS).astype(int)]
    return rate[chosen], stress[chosen], sigma[chosen]


def _best_cells(
    record: ModelRecord, rate: FloatArray, stress: FloatArray, sigma: FloatArray
) -> FloatArray:
    """Return the shapes (c, q) of the lowest cells of the model's grid."""
    axes = record.separable.grid(rate)
    mesh = np.meshgrid(*axes, indexing="ij")
    shapes = np.stack([part.reshape(-1) for part in mesh], axis=-1) if mesh else np.empty((1, 0))
    columns = [column / sigma for column in basis(record, rate, shapes)]
    target = stress / sigma
    own = [np.einsum("gn,gn->g", column, column) for column in columns]
    toward = [column @ target for column in columns]
    cross = np.einsum("gn,gn->g", *columns) if len(columns) == 2 else None
    coefficients = from_products(own, toward, cross)
    left = target @ target - sum(c * part for c, part in zip(coefficients, toward, strict=True))
    if record.allowed is not None:
        parameters = clipped(record, raw_parameters(record, shapes, coefficients))
        left = np.where(record.allowed(*parameters.T), left, _WORST)
    left = np.where(np.isfinite(left), left, _WORST)
    return shapes[slice_minima(left.reshape([axis.size for axis in axes]))]


def slice_minima(left: FloatArray) -> NDArray[np.intp]:
    """Return flat indices of the lowest cell at every value of every axis, the lowest first."""
    values = left.reshape(-1)
    indices = np.arange(values.size).reshape(left.shape)
    cells = [np.zeros(1, dtype=np.intp)]
    for axis in range(left.ndim):
        lines = np.moveaxis(indices, axis, 0).reshape(left.shape[axis], -1)
        cells.append(lines[np.arange(lines.shape[0]), np.argmin(values[lines], axis=-1)])
    found = np.unique(np.concatenate(cells))
    return found[np.argsort(values[found], kind="stable")]
