"""Variable projection: search over the shape of a flow curve, its size in closed form.

Most flow curves are linear in all but one or two parameters. At a given shape the linear ones
(coefficients of 0 or more, of at most two columns) have a closed form, so that only the shape is
searched (G. H. Golub & V. Pereyra, SIAM J. Numer. Anal. 10 (1973) 413; L. Kaufman, BIT 15 (1975)
49).
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.coordinates import Coordinates
from rheo.fitting.core import IntArray, Minimum, minimise
from rheo.fitting.stack import Stack
from rheo.models import ModelRecord

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]

# Columns closer than this to one another are one column.
_COLLINEAR = 1e-13


@dataclass(frozen=True, eq=False)
class Projection:
    """Least squares of several models on flow curves, the size of the curve projected out.

    Parameters
    ----------
    stack : Stack
        The models, with the number of searches of each.
    rate : array, shape (n,)
        Shear rates [1/s].
    stress, sigma : array, shape (n,) or (r, n)
        Shear stress and its standard deviation [Pa]; a row for each of r searches, or one for all.
    """

    stack: Stack[ModelRecord]
    rate: FloatArray
    stress: FloatArray
    sigma: FloatArray

    def refine(self, shapes: FloatArray, steps: int, tolerance: float = 1e-15) -> Minimum:
        """Improve shapes of shape (r, q) until nothing is left to gain."""
        parts = [shape_coordinates(record.key, record) for record in self.stack.kinds]
        scales = Coordinates.stacked(parts, self.stack.counts)
        return minimise(self.evaluate, shapes, scales, steps, tolerance=tolerance)

    def evaluate(self, shapes: FloatArray, rows: IntArray) -> tuple[FloatArray, FloatArray]:
        """Return residuals (r, n) at the best size and how they change with the shape (r, q, n).

        The change is Kaufman's: that of the curve at a fixed size, less what a change of the size
        could make good. Residuals are infinite where the model's record forbids the curve.
        """
        precision, target = self._weighted(rows)
        columns = self._columns(shapes, rows) * precision[..., np.newaxis, :]
        sizes = best_sizes(columns, target)
        residual = np.einsum("rc,rcn->rn", sizes, columns) - target
        slopes = np.zeros((*shapes.shape, self.rate.size))
        for record, part in self.stack.split(rows):
            shape = shapes[part, : len(record.separable.shape)]
            values, along = shape_directions(record, shape, sizes[part])
            residual[part][~_possible(record, values)] = np.inf
            bent = np.zeros((*values.shape, self.rate.size))
            for index, one in enumerate(
                record.jacobian(self.rate, *_each(clipped(record, values)))
            ):
                bent[:, index] = one
            slopes[part, : shape.shape[-1]] = along @ bent
        slopes *= precision[..., np.newaxis, :]
        return residual, without(columns * (sizes > 0)[..., np.newaxis], slopes)

    def parameters(self, shapes: FloatArray, rows: IntArray) -> list[FloatArray]:
        """Return parameters (r, p) of each model at the best size, moved to their bounds."""
        precision, target = self._weighted(rows)
        sizes = best_sizes(self._columns(shapes, rows) * precision[..., np.newaxis, :], target)
        return [
            clipped(record, raw_parameters(record, shapes[part], sizes[part]))
            for record, part in self.stack.split(rows)
        ]

    def _weighted(self, rows: IntArray) -> tuple[FloatArray, FloatArray]:
        if self.stress.ndim == 1:
            return 1.0 / self.sigma, self.stress / self.sigma
        return 1.0 / self.sigma[rows], self.stress[rows] / self.sigma[rows]

    def _columns(self, shapes: FloatArray, rows: IntArray) -> FloatArray:
        """Return the columns (r, 2, n) whose coefficients are the size; 0 for one not there."""
        columns = np.zeros((rows.size, 2, self.rate.size))
        for record, part in self.stack.split(rows):
            for index, one in enumerate(basis(record, self.rate, shapes[part])):
                columns[part, index] = one
        return columns


def basis(record: ModelRecord, rate: FloatArray, shapes: FloatArray) -> tuple[FloatArray, ...]:
    """Return the columns, broadcast to (r, n), whose coefficients are the size of the curve."""
    count = len(record.separable.shape)
    return record.separable.basis(rate, *_each(shapes[:, :count]))


def best_sizes(columns: FloatArray, target: FloatArray) -> FloatArray:
    """Return coefficients (r, 2) of 0 or more of the columns (r, 2, n) for a target (r, n)."""
    products = columns @ columns.swapaxes(-1, -2)
    toward = (columns @ np.broadcast_to(target, columns[:, 0].shape)[..., np.newaxis])[..., 0]
    own = products[:, 0, 0], products[:, 1, 1]
    return np.stack(sizes_from(own, toward.T, products[:, 0, 1]), axis=-1)


def sizes_from(
    own: tuple[FloatArray, FloatArray], toward: FloatArray, cross: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Return two coefficients of 0 or more from products of columns and with the data.

    The solution is the best of three cases: both columns, the first, the second.
    """
    alone = [
        np.where(square > 0, np.maximum(product, 0.0) / np.where(square > 0, square, 1.0), 0.0)
        for square, product in zip(own, toward, strict=True)
    ]
    area = own[0] * own[1] - cross * cross
    apart = area > _COLLINEAR * own[0] * own[1]
    safe = np.where(apart, area, 1.0)
    first = (toward[0] * own[1] - toward[1] * cross) / safe
    second = (toward[1] * own[0] - toward[0] * cross) / safe
    both = apart & (first >= 0) & (second >= 0)
    one = alone[0] * toward[0] >= alone[1] * toward[1]
    return (
        np.where(both, first, np.where(one, alone[0], 0.0)),
        np.where(both, second, np.where(one, 0.0, alone[1])),
    )


def raw_parameters(record: ModelRecord, shapes: FloatArray, sizes: FloatArray) -> FloatArray:
    """Return parameters (..., p) of shapes (..., q) and sizes (..., 2), wherever they lie."""
    shape = tuple(shapes[..., index] for index in range(len(record.separable.shape)))
    values = record.separable.to_parameters(shape, (sizes[..., 0], sizes[..., 1]))
    return np.stack(np.broadcast_arrays(*values), axis=-1)


def clipped(record: ModelRecord, parameters: FloatArray) -> FloatArray:
    """Return parameters (r, p) moved to the bounds of the model where they lie outside."""
    return np.minimum(np.maximum(parameters, _bounds(record.key, record)[0]), _upper(record))


@cache
def _bounds(key: str, record: ModelRecord) -> tuple[FloatArray, FloatArray]:  # noqa: ARG001
    return (
        np.array([one.lower for one in record.parameters]),
        np.array([one.upper for one in record.parameters]),
    )


def _upper(record: ModelRecord) -> FloatArray:
    return _bounds(record.key, record)[1]


def _possible(record: ModelRecord, parameters: FloatArray) -> BoolArray:
    """Say which rows the record allows; a value below its bound is as good as the bound."""
    good = np.all(parameters <= _upper(record), axis=-1)
    return good if record.allowed is None else good & record.allowed(*parameters.T)


def shape_directions(
    record: ModelRecord, shapes: FloatArray, sizes: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Return parameters (r, p) and their change with each shape coordinate (r, q, p).

    Parameters are linear in each shape coordinate, so that one difference is the derivative.
    """
    count = shapes.shape[-1]
    if count == 0:
        values = raw_parameters(record, shapes, sizes)
        return values, np.zeros((len(values), 0, values.shape[-1]))
    moved = np.concatenate([np.zeros((1, count)), np.eye(count)])[:, np.newaxis, :] + shapes
    values = raw_parameters(record, moved, sizes)
    return values[0], np.moveaxis(values[1:] - values[0], 0, 1)


def without(columns: FloatArray, slopes: FloatArray) -> FloatArray:
    """Return slopes (r, q, n) less what lies in the columns (r, 2, n); 0 is no column."""
    first, second = columns[:, 0], columns[:, 1]
    first = _unit(first, first)
    second = _unit(second - np.einsum("rn,rn->r", first, second)[:, np.newaxis] * first, second)
    units = np.stack([first, second], axis=1)
    return slopes - (slopes @ units.swapaxes(-1, -2)) @ units


def _unit(column: FloatArray, whole: FloatArray) -> FloatArray:
    """Return the column at length 1, or 0 if almost nothing is left of the whole."""
    length = np.sqrt(np.einsum("rn,rn->r", column, column))
    real = length > 1e-7 * np.sqrt(np.einsum("rn,rn->r", whole, whole))
    return np.where(real, 1.0 / np.where(real, length, 1.0), 0.0)[:, np.newaxis] * column


def _each(values: FloatArray) -> list[FloatArray]:
    return [values[:, index, np.newaxis] for index in range(values.shape[-1])]


@cache
def shape_coordinates(key: str, record: ModelRecord) -> Coordinates:  # noqa: ARG001
    """Return bounds and scales of a model's shape coordinates.

    A coordinate that is a parameter has its bounds; any other is above 0. A root is taken where
    the curve's slope against a coordinate is infinite at 0, as for Casson's yield stress.
    """
    known = {one.key: one for one in record.parameters}
    names = record.separable.shape
    lower = np.array([known[name].lower if name in known else 0.0 for name in names])
    upper = np.array([known[name].upper if name in known else 1e18 for name in names])
    logarithmic = np.array(record.separable.logarithmic, dtype=bool)
    lower = np.where(logarithmic & (lower <= 0.0), 1e-12, lower)
    values, along = shape_directions(record, lower[np.newaxis], np.ones((1, 2)))
    with np.errstate(all="ignore"):
        slopes = record.jacobian(np.ones(1), *_each(clipped(record, values)))
        slope = np.array([float(np.ravel(one)[0]) for one in slopes])
        steep = np.isinf(np.where(along[0] != 0, along[0] * slope, 0.0)).any(axis=-1)
    return Coordinates(lower, upper, logarithmic, (lower == 0.0) & steep)
