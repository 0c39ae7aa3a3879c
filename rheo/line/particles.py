"""Particles in the product: held at rest or not, and the flow that keeps them off the floor."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import Caution, InputError
from rheo.line.checks import require_number, require_positive
from rheo.line.constants import GRAVITY
from rheo.line.parts import FloatArray

# A. N. Beris, J. A. Tsamopoulos, R. C. Armstrong & R. A. Brown, J. Fluid Mech. 158 (1985) 219.
YIELD_NUMBER_AT_REST = 0.143


@dataclass(frozen=True, eq=False)
class SuspendedParticle:
    """Whether a sphere is held in a yield-stress product at rest.

    Parameters
    ----------
    yield_number : array
        3τ_y/(gΔρd) [-].
    held : array of bool
        Whether it reaches 0.143.
    largest_held : array
        Largest sphere [m] that this yield stress holds; infinite without a density difference.
    """

    yield_number: FloatArray
    held: NDArray[np.bool_]
    largest_held: FloatArray


def suspended_particle(
    yield_stress: ArrayLike, diameter: ArrayLike, particle_density: ArrayLike, density: ArrayLike
) -> SuspendedParticle:
    """Check whether a sphere stays where it is in a product at rest.

    A sphere is held while 3τ_y/(gΔρd) ≥ 0.143, that is τ_y ≥ 0.048 gΔρd (Beris et al. 1985).

    Parameters
    ----------
    yield_stress : array_like
        Yield stress of the product at rest [Pa].
    diameter : array_like
        Of the sphere [m].
    particle_density, density : array_like
        Of the sphere and of the product [kg/m3]; all arguments broadcast.

    Returns
    -------
    SuspendedParticle
        Valid for one smooth sphere without vibration or flow; a sheared product holds less.
    """
    require_number(yield_stress, "yield_stress [Pa]", "suspended particle", low=0.0)
    require_positive(diameter, "diameter [m]", "suspended particle")
    require_positive(particle_density, "particle_density [kg/m3]", "suspended particle")
    require_positive(density, "density [kg/m3]", "suspended particle")
    stress, size = np.asarray(yield_stress, float), np.asarray(diameter, float)
    weight = GRAVITY * np.abs(np.asarray(particle_density, float) - np.asarray(density, float))
    stress, size, weight = np.broadcast_arrays(stress, size, weight)
    with np.errstate(divide="ignore", invalid="ignore"):
        number = np.where(weight > 0, 3.0 * stress / (weight * size), np.inf)
        largest = np.where(weight > 0, 3.0 * stress / (YIELD_NUMBER_AT_REST * weight), np.inf)
    return SuspendedParticle(number, number >= YIELD_NUMBER_AT_REST, largest)


@dataclass(frozen=True)
class Solids:
    """Particles carried by the product.

    Parameters
    ----------
    diameter : float
        Size of the coarse particles [m] (d50 or d85, as the user judges).
    density : float
        Of the particle [kg/m3].
    volume_fraction : float
        Of the particles in the mixture [-].
    carrier_viscosity : float
        Of the liquid between the particles [Pa.s].
    carrier_density : float
        Of that liquid [kg/m3].
    """

    diameter: float
    density: float
    volume_fraction: float
    carrier_viscosity: float = 0.001
    carrier_density: float = 1000.0

    def __post_init__(self) -> None:
        for what in ("diameter", "density", "carrier_viscosity", "carrier_density"):
            require_positive(getattr(self, what), what, "solids")
        if not 0 < self.volume_fraction < 0.7:
            raise InputError(
                f"volume_fraction is {self.volume_fraction:g}; it must lie between 0 and 0.7",
                "solids",
            )


def deposition_velocity(solids: Solids, diameter: ArrayLike) -> FloatArray:
    """Return the mean velocity [m/s] below which particles lie on the floor of a level pipe.

    V/√(gd(s-1)) = 1.85 C^0.1536 (1-C)^0.3564 (D/d)^0.378 N^0.09 x^0.30 with
    N = Dρ√(gd(s-1))/μ of the carrier and x = 1 (A. R. Oroskar & R. M. Turian, AIChE J. 26
    (1980) 550; form from memory).

    Parameters
    ----------
    solids : Solids
        Particles heavier than the carrier; 0 is returned when they are not.
    diameter : array_like
        Inside diameter of the pipe [m].

    Returns
    -------
    array
        For turbulent flow of a Newtonian carrier; within about 25 % of the data behind it
        (from memory).
    """
    pipe = np.asarray(diameter, dtype=float)
    require_positive(pipe, "diameter [m]", "deposition velocity")
    excess = solids.density / solids.carrier_density - 1.0
    if excess <= 0:
        return np.zeros(pipe.shape)
    scale = np.sqrt(GRAVITY * solids.diameter * excess)
    number = pipe * solids.carrier_density * scale / solids.carrier_viscosity
    share = solids.volume_fraction
    return (
        scale
        * 1.85
        * share**0.1536
        * (1.0 - share) ** 0.3564
        * (pipe / solids.diameter) ** 0.378
        * number**0.09
    )


def settling_cautions(
    solids: Solids,
    yield_stress: float,
    density: float,
    diameter: float,
    velocity: float,
    laminar: bool,
    place: str,
) -> tuple[Caution, ...]:
    """Return what may go wrong with coarse particles in one pipe.

    Parameters
    ----------
    solids : Solids
        The coarse particles.
    yield_stress, density : float
        Of the product as the flow curve saw it [Pa], [kg/m3].
    diameter, velocity : float
        Of the pipe [m], mean in it [m/s].
    laminar : bool
        Whether the flow is laminar.
    place : str
        Name of the pipe.

    Returns
    -------
    tuple of Caution
        Codes ``settles-at-rest``, ``below-deposition-velocity``, ``laminar-settling``.
    """
    found = []
    held = suspended_particle(yield_stress, solids.diameter, solids.density, density)
    if not bool(held.held):
        found.append(
            Caution(
                "settles-at-rest",
                f"Particles of {1e3 * solids.diameter:.3g} mm settle in the product at rest: their "
                f"yield number is {float(held.yield_number):.2g}, below 0.143.",
                "Flush the line before a stop, or show by a settling test that it restarts.",
                place,
            )
        )
        limit = float(deposition_velocity(solids, diameter))
        if velocity < limit:
            found.append(
                Caution(
                    "below-deposition-velocity",
                    f"The mean velocity of {velocity:.2f} m/s is below the deposition velocity of "
                    f"{limit:.2f} m/s (Oroskar & Turian 1980).",
                    "Take a smaller pipe or more flow; the homogeneous pressure drop does not hold "
                    "for a bed that lies or slides.",
                    place,
                )
            )
    if laminar:
        found.append(
            Caution(
                "laminar-settling",
                "The flow is laminar, which keeps no coarse particles up: sheared product lets "
                "them sink even where it would hold them at rest.",
                "Ask for a loop test over the whole length, or keep the flow turbulent.",
                place,
            )
        )
    return tuple(found)
