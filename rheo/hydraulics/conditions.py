"""What flows through what: the arguments of a pipe calculation, checked and laid out flat."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import InputError
from rheo.models import Model

FloatArray = NDArray[np.float64]

# Sizes, velocities and densities beyond this, in SI, are slips of the pen.
FARTHEST = 1e30


@dataclass(frozen=True)
class Pipe:
    """A product and a pipe, one element a draw or a flow: all arrays 1-D and of one length.

    Parameters
    ----------
    model : Model
        Flow curve.
    diameter, density, roughness : array
        Inside diameter [m], density [kg/m3], wall roughness [m].
    """

    model: Model
    diameter: FloatArray
    density: FloatArray
    roughness: FloatArray

    def take(self, index: NDArray[np.intp] | NDArray[np.bool_]) -> Pipe:
        """Return the elements `index`."""
        return Pipe(
            self.model.map(lambda value: value[index]),
            self.diameter[index],
            self.density[index],
            self.roughness[index],
        )

    def with_bore(self, diameter: FloatArray, roughness: FloatArray) -> Pipe:
        """Return the same product in other pipes: diameter and roughness [m]."""
        return Pipe(self.model, diameter, self.density, roughness)

    @property
    def size(self) -> int:
        """Number of elements."""
        return self.diameter.size


def positive(values: ArrayLike, name: str, unit: str) -> FloatArray:
    """Return an array of finite numbers above 0.

    Raises
    ------
    InputError
        If a value is not a number, not finite, or 0 or less.
    """
    array = _numbers(values, name)
    if not np.all(np.isfinite(array) & (array > 0)):
        worst = array[~(np.isfinite(array) & (array > 0))].flat[0]
        raise InputError(f"it is {float(worst):g} {unit}; it must be a finite number above 0", name)
    _within_reach(array, name, unit)
    return array


def not_negative(values: ArrayLike, name: str, unit: str) -> FloatArray:
    """Return an array of finite numbers of 0 or more.

    Raises
    ------
    InputError
        If a value is not a number, not finite, or below 0.
    """
    array = _numbers(values, name)
    if not np.all(np.isfinite(array) & (array >= 0)):
        worst = array[~(np.isfinite(array) & (array >= 0))].flat[0]
        raise InputError(
            f"it is {float(worst):g} {unit}; it must be a finite number, 0 or more", name
        )
    return array


def _within_reach(array: FloatArray, name: str, unit: str) -> None:
    """Refuse sizes whose squares and products would leave the range of numbers."""
    beyond = (array < 1.0 / FARTHEST) | (array > FARTHEST)
    if np.any(beyond):
        raise InputError(
            f"it is {float(array[beyond].flat[0]):g} {unit}; it must lie between "
            f"{1.0 / FARTHEST:g} and {FARTHEST:g}",
            name,
        )


def _numbers(values: ArrayLike, name: str) -> FloatArray:
    try:
        return np.asarray(values, dtype=float)
    except (TypeError, ValueError):
        raise InputError(f"it is {values!r}; it must be a number", name) from None


def lay_out(
    model: Model,
    diameter: ArrayLike,
    density: ArrayLike,
    roughness: ArrayLike = 0.0,
    *others: FloatArray,
) -> tuple[tuple[int, ...], Pipe, tuple[FloatArray, ...]]:
    """Check the arguments of a pipe and broadcast them.

    Parameters
    ----------
    model : Model
        Flow curve.
    diameter, density, roughness : array_like
        Inside diameter [m], density [kg/m3], wall roughness [m].
    *others : array
        Further arrays, checked already, to broadcast with them.

    Returns
    -------
    shape : tuple of int
        Common shape.
    pipe : Pipe
        Flat.
    others : tuple of array
        Flat.

    Raises
    ------
    InputError
        For an impossible value or shapes that do not fit together.
    """
    if not isinstance(model, Model):
        raise InputError(f"it is {model!r:.60}; make one with rheo.model(key, ...)", "model")
    size = positive(diameter, "diameter", "m")
    mass = positive(density, "density", "kg/m3")
    wall = not_negative(roughness, "roughness", "m")
    try:
        shape = np.broadcast_shapes(
            model.shape, size.shape, mass.shape, wall.shape, *(other.shape for other in others)
        )
    except ValueError:
        raise InputError(
            f"their shapes {model.shape}, {size.shape}, {mass.shape}, {wall.shape}, "
            f"{', '.join(str(other.shape) for other in others)} do not broadcast",
            "model, diameter, density, roughness and the rest",
        ) from None
    if np.any(wall >= 0.5 * size):
        worst = int(np.argmax(np.ravel(np.broadcast_to(wall / size, shape))))
        found, widest = (np.ravel(np.broadcast_to(one, shape))[worst] for one in (wall, size))
        raise InputError(
            f"it is {found:g} m; it must be less than half the diameter, {0.5 * widest:g} m",
            "roughness",
        )

    def flat(array: FloatArray) -> FloatArray:
        return np.broadcast_to(array, shape).reshape(-1)

    pipe = Pipe(model.map(flat), flat(size), flat(mass), flat(wall))
    return shape, pipe, tuple(flat(other) for other in others)
