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
from rheo.models import ModelRecord

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]

# Columns closer than this to one another are one column.
_COLLINEAR = 1e-13


@dataclass(frozen=True, eq=False)
class Projection:
    """Least squares of one model on flow curves, the size of the curve projected out.

    Parameters
    ----------
    record : ModelRecord
        The model.
    rate : array, shape (n,)
        Shear rates [1/s].
    stress, sigma : array, shape (n,) or (r, n)
        Shear stress and its standard deviation [Pa]; a row for each of r searches, or one for all.
    """

    record: ModelRecord
    rate: FloatArray
    stress: FloatArray
    sigma: FloatArray

    def refine(self, shapes: FloatArray, steps: int = 100, damping: float = 1e-3) -> Minimum:
        """Improve shapes of shape (r, q) until nothing is left to gain."""
        scales = shape_coordinates(self.record.key, self.record)
        return minimise(self.evaluate, shapes, scales, None, steps, damping)

    def evaluate(self, shapes: FloatArray, rows: IntArray) -> tuple[FloatArray, FloatArray]:
        """Return residuals (r, n) at the best size and how they change with the shape (r, q, n).

        The change is Kaufman's: that of the curve at a fixed size, less what a change of the size
        could make good. Residuals are infinite where the model's record forbids the curve.
        """
        precision, target = self._weighted(rows)
        columns = self._columns(shapes, precision)
        coefficients = best_coefficients(columns, target)
        predicted = sum(c[:, np.newaxis] * column for c, column in zip(coefficients, columns))
        values = raw_parameters(self.record, shapes, coefficients)
        residual = np.where(
            _possible(self.record, values)[:, np.newaxis], predicted - target, np.inf
        )
        slopes = (
            shape_slopes(self.record, self.rate, shapes, coefficients) * precision[..., None, :]
        )
        used = [
            np.where((c > 0)[:, np.newaxis], column, 0.0)
            for c, column in zip(coefficients, columns)
        ]
        return residual, _without(used, slopes)

    def parameters(self, shapes: FloatArray, rows: IntArray) -> FloatArray:
        """Return parameters (r, p) at the best size, moved to their bounds where outside."""
        precision, target = self._weighted(rows)
        coefficients = best_coefficients(self._columns(shapes, precision), target)
        return clipped(self.record, raw_parameters(self.record, shapes, coefficients))

    def _weighted(self, rows: IntArray) -> tuple[FloatArray, FloatArray]:
        if self.stress.ndim == 1:
            return 1.0 / self.sigma, self.stress / self.sigma
        return 1.0 / self.sigma[rows], self.stress[rows] / self.sigma[rows]

    def _columns(self, shapes: FloatArray, precision: FloatArray) -> list[FloatArray]:
        return [column * precision for column in basis(self.record, self.rate, shapes)]


def basis(record: ModelRecord, rate: FloatArray, shapes: FloatArray) -> tuple[FloatArray, ...]:
    """Return the columns (r, n) whose coefficients are the size, at shapes (r, q)."""
    parts = [shapes[:, index, np.newaxis] for index in range(shapes.shape[-1])]
    whole = (shapes.shape[0], rate.size)
    return tuple(np.broadcast_to(one, whole) for one in record.separable.basis(rate, *parts))


def best_coefficients(columns: list[FloatArray], target: FloatArray) -> tuple[FloatArray, ...]:
    """Return the coefficients (r,) of 0 or more of one or two columns (r, n).

    The solution with two columns is the best of three cases: both, the first, the second.
    """
    own = [np.einsum("rn,rn->r", column, column) for column in columns]
    toward = [np.sum(column * target, axis=-1) for column in columns]
    cross = np.einsum("rn,rn->r", *columns) if len(columns) == 2 else None
    return from_products(own, toward, cross)


def from_products(
    own: list[FloatArray], toward: list[FloatArray], cross: FloatArray | None
) -> tuple[FloatArray, ...]:
    """Return coefficients of 0 or more from the products of columns with themselves and the data."""
    alone = [
        np.where(square > 0, np.maximum(product, 0.0) / np.where(square > 0, square, 1.0), 0.0)
        for square, product in zip(own, toward, strict=True)
    ]
    if cross is None:
        return (alone[0],)
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


def raw_parameters(
    record: ModelRecord, shapes: FloatArray, coefficients: tuple[FloatArray, ...]
) -> FloatArray:
    """Return parameters (r, p) of shapes (r, q) and coefficients (r,), wherever they lie."""
    values = record.separable.to_parameters(tuple(shapes.T), coefficients)
    return np.stack(np.broadcast_arrays(*values), axis=-1)


def clipped(record: ModelRecord, parameters: FloatArray) -> FloatArray:
    """Return parameters (r, p) moved to the bounds of the model where they lie outside."""
    lower = [one.lower for one in record.parameters]
    upper = [one.upper for one in record.parameters]
    return np.clip(parameters, lower, upper)


def _possible(record: ModelRecord, parameters: FloatArray) -> BoolArray:
    """Say which rows the record allows; a value below its bound is as good as the bound."""
    good = np.all(parameters <= [one.upper for one in record.parameters], axis=-1)
    if record.allowed is not None:
        good &= record.allowed(*parameters.T)
    return good


def shape_slopes(
    record: ModelRecord,
    rate: FloatArray,
    shapes: FloatArray,
    coefficients: tuple[FloatArray, ...],
) -> FloatArray:
    """Return d stress/d shape coordinate (r, q, n) at a fixed size, from the model's Jacobian.

    Parameters are linear in each shape coordinate, so that one difference is their derivative.
    """
    values = clipped(record, raw_parameters(record, shapes, coefficients))
    columns = record.jacobian(rate, *(values[:, i, np.newaxis] for i in range(values.shape[-1])))
    count = shapes.shape[-1]
    slopes = np.zeros((shapes.shape[0], count, rate.size))
    whole = raw_parameters(record, shapes, coefficients)
    for index in range(count):
        moved = shapes.copy()
        moved[:, index] += 1.0
        change = raw_parameters(record, moved, coefficients) - whole
        for column, part in zip(columns, change.T, strict=True):
            if part.any():
                slopes[:, index] += part[:, np.newaxis] * column
    return slopes


def _without(columns: list[FloatArray], slopes: FloatArray) -> FloatArray:
    """Return slopes (r, q, n) less what lies in the columns (r, n); columns of 0 are no columns."""
    units: list[FloatArray] = []
    for column in columns:
        left = column
        for unit in units:
            left = left - np.einsum("rn,rn->r", unit, left)[:, np.newaxis] * unit
        size = np.sqrt(np.einsum("rn,rn->r", left, left))
        whole = np.sqrt(np.einsum("rn,rn->r", column, column))
        real = size > 1e-7 * whole
        units.append(np.where(real, 1.0 / np.where(real, size, 1.0), 0.0)[:, np.newaxis] * left)
    for unit in units:
        slopes = slopes - np.einsum("rqn,rn->rq", slopes, unit)[..., np.newaxis] * unit[:, None, :]
    return slopes


@cache
def shape_coordinates(key: str, record: ModelRecord) -> Coordinates:  # noqa: ARG001
    """Return bounds and scales of a model's shape coordinates.

    A coordinate that is a parameter has its bounds; any other is above 0. A root is taken where
    the curve's slope against a coordinate is infinite at 0, as for Casson's yield stress.
    """
    known = {one.key: one for one in record.parameters}
    names = record.separable.shape
    lower = np.array([known[name].lower if name in known else 0.0 for name in names])
    upper = np.array([known[name].upper if name in known else np.inf for name in names])
    logarithmic = np.array(record.separable.logarithmic, dtype=bool)
    lower = np.where(logarithmic & (lower <= 0.0), 1e-12, lower)
    upper = np.where(np.isfinite(upper), upper, 1e15)
    ends = np.where(lower > 0, lower, 0.0)[np.newaxis]
    size = (np.ones(1),) * len(record.separable.basis(np.ones(1), *ends.T))
    with np.errstate(all="ignore"):
        slopes = shape_slopes(record, np.ones(1), ends, size)[0, :, 0]
    return Coordinates(lower, upper, logarithmic, (lower == 0.0) & ~np.isfinite(slopes))
