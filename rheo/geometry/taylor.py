"""Taylor vortices: the speed at which the flow around a rotating bob ceases to be plain."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import Caution
from rheo.geometry.concentric_cylinders import log_radius_ratio
from rheo.geometry.dimensioned import Geometry
from rheo.geometry.gap_flow import angular_speed, speed_and_slope
from rheo.models import Model
from rheo.models.monotone import solve_log

FloatArray = NDArray[np.float64]

# A. Esser & S. Grossmann, Phys. Fluids 8 (1996) 1814: fitted to linear stability at a narrow gap.
_ALPHA = 0.1556
ROTATING_BOB = ("concentric-cylinders",)
"""Keys of the geometries whose inner cylinder turns; an outer one that turns is stable."""


def critical_reynolds(radius_ratio: ArrayLike) -> FloatArray:
    """Return the Reynolds number ρωR_i(R_o - R_i)/η at which Taylor vortices set in.

    Parameters
    ----------
    radius_ratio : array_like
        R_i/R_o [-], between 0.1 and 1.

    Returns
    -------
    array
        For a Newtonian fluid, the inner cylinder rotating, long cylinders:
        (1 + κ)²/(2α²κ√((1 - κ)(3 + κ))), α = 0.1556 (Esser & Grossmann 1996); within 3 % of
        linear stability theory. For a narrow gap it is Taylor's 41.3/√((R_o - R_i)/R_i).
    """
    kappa = np.asarray(radius_ratio, dtype=float)
    return (1.0 + kappa) ** 2 / (2.0 * _ALPHA**2 * kappa * np.sqrt((1.0 - kappa) * (3.0 + kappa)))


def taylor_ratio(
    geometry: Geometry, viscosity: ArrayLike, setting: ArrayLike, density: ArrayLike
) -> FloatArray:
    """Return the Reynolds number over its critical value [-]; vortices are expected from 1 on.

    Parameters
    ----------
    geometry : Geometry
        Cylinders.
    viscosity : array_like
        [Pa.s]; for a shear-thinning fluid the apparent viscosity at the bob, the lowest in the
        gap, so that the answer is on the safe side.
    setting : array_like
        Angular speed [rad/s].
    density : array_like
        [kg/m3].

    Returns
    -------
    array
        0 for a geometry whose inner cylinder does not rotate.
    """
    setting, viscosity = np.asarray(setting, dtype=float), np.asarray(viscosity, dtype=float)
    if geometry.key not in ROTATING_BOB:
        return np.zeros(np.broadcast_shapes(setting.shape, viscosity.shape, geometry.shape))
    reynolds = np.asarray(density, dtype=float) * setting * _arm(geometry) / viscosity
    return reynolds / critical_reynolds(_kappa(geometry))


def critical_speed(geometry: Geometry, model: Model, density: ArrayLike) -> FloatArray:
    """Return the angular speed [rad/s] at which Taylor vortices are expected.

    Parameters
    ----------
    geometry : Geometry
        Cylinders with a rotating bob.
    model : Model
        Flow curve; the viscosity at the bob is used.
    density : array_like
        [kg/m3].

    Returns
    -------
    array
        Infinite for a geometry whose inner cylinder does not rotate.
    """
    density = np.asarray(density, dtype=float)
    shape = np.broadcast_shapes(model.shape, geometry.shape, density.shape)
    if geometry.key not in ROTATING_BOB:
        return np.full(shape, np.inf)
    log_ratio = log_radius_ratio(
        geometry.dimensions["inner_radius"], geometry.dimensions["outer_radius"]
    )

    at_bob = speed_and_slope(None)

    def relation(
        local: Model, rate: FloatArray, local_ratio: FloatArray
    ) -> tuple[FloatArray, FloatArray]:
        # ω/η at the bob, which rises with the rate there however the fluid thins.
        speed, rise = at_bob(local, rate, local_ratio)
        stress = local.record.stress(rate, *local)
        return speed * rate / stress, rise + 1.0 - local.record.log_slope(rate, *local)

    wanted = critical_reynolds(_kappa(geometry)) / (density * _arm(geometry))
    rate = solve_log(relation, model, np.broadcast_to(wanted, shape), extra=(log_ratio,))
    return angular_speed(model, rate, log_ratio)


def taylor_cautions(
    geometry: Geometry, viscosity: ArrayLike, setting: ArrayLike, density: ArrayLike
) -> tuple[Caution, ...]:
    """Return a Caution that names the readings taken where Taylor vortices are expected.

    Arguments as for `taylor_ratio`, one value a reading.
    """
    ratio = np.atleast_1d(taylor_ratio(geometry, viscosity, setting, density))
    beyond = np.flatnonzero(ratio > 1.0)
    if beyond.size == 0:
        return ()
    return (
        Caution(
            code="taylor-vortices",
            sentence=f"{beyond.size} of {ratio.size} readings lie above the speed at which Taylor "
            f"vortices set in, by up to {float(np.max(ratio)):.3g} times: their torque is too "
            "high.",
            advice="Leave these readings out, or use a narrower gap.",
            place=geometry.record.name,
            points=tuple(int(index) for index in beyond),
        ),
    )


def _kappa(geometry: Geometry) -> FloatArray:
    return geometry.dimensions["inner_radius"] / geometry.dimensions["outer_radius"]


def _arm(geometry: Geometry) -> FloatArray:
    inner, outer = geometry.dimensions["inner_radius"], geometry.dimensions["outer_radius"]
    return inner * (outer - inner)
