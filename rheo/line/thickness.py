"""A product that is thicker or thinner than its readings, and what more solids do to it."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import InputError
from rheo.line.parts import FloatArray
from rheo.line.product import FlowCurveSource, Product
from rheo.models import Model
from rheo.models.scaled import scaled
from rheo.models.state_curve import ScaledCurve

# Common practice: spheres of mixed size pack at random to about this share of the volume.
RANDOM_PACKING = 0.63
# Einstein's intrinsic viscosity of spheres [-] (A. Einstein, Annalen der Physik 34 (1911) 591).
EINSTEIN = 2.5


def thicker(product: Product, factor: float) -> Product:
    """Return the product with `factor` times the stress at every shear rate.

    Parameters
    ----------
    product : Product
        Flow curve, draws and static yield stress are scaled.
    factor : float
        Above 0 [-].

    Returns
    -------
    Product
        The shape of its flow curve is kept: a guess, where the batch was not measured itself.
    """
    static = product.static_yield_stress
    return replace(
        product,
        model=thicker_curve(product.model, factor),
        draws=tuple(thicker_curve(source, factor) for source in product.draws),
        static_yield_stress=None if static is None else np.asarray(static) * factor,
    )


def thicker_curve(source: FlowCurveSource, factor: float) -> FlowCurveSource:
    """Return a flow curve with `factor` times the stress [-], in the kind that it was given."""
    if isinstance(source, Model):
        return scaled(source, factor)
    if isinstance(source, ScaledCurve):
        return source.thicker(factor)
    by_temperature = source
    return lambda temperature: scaled(by_temperature(temperature), factor)


def solids_factor(
    before: ArrayLike, after: ArrayLike, packing: float = RANDOM_PACKING
) -> FloatArray:
    """Return by how much another content of solids thickens a suspension [-].

    The ratio of relative viscosities (1 - φ/φ_m)^(-2.5 φ_m) after and before.

    Parameters
    ----------
    before, after : array_like
        Volume fractions of solids, 0 or more and below `packing` [-].
    packing : float
        Volume fraction φ_m at which nothing flows any more [-].

    Returns
    -------
    array
        The shape to which they broadcast.

    Raises
    ------
    InputError
        If a fraction lies outside its range.

    Notes
    -----
    I. M. Krieger & T. J. Dougherty, Transactions of the Society of Rheology 3 (1959) 137, for
    spheres without attraction. Flocculated and fine slurries, and yield stresses, rise faster.
    """
    if not 0 < packing <= 1:
        raise InputError(f"packing is {packing:g}; it must be above 0 and at most 1", "solids")
    found = np.asarray(before, dtype=float), np.asarray(after, dtype=float)
    for name, fraction in zip(("before", "after"), found, strict=True):
        if not np.all((fraction >= 0) & (fraction < packing)):
            worst = float(np.max(fraction))
            raise InputError(
                f"the volume fraction of solids {name} is {worst:g}; it must be 0 or more and "
                f"below {packing:g}, where a suspension packs",
                "solids",
            )
    old, new = found
    return ((1.0 - new / packing) / (1.0 - old / packing)) ** (-EINSTEIN * packing)


def density_with_solids(
    density: float, before: float, after: float, solids_density: float, by: str = "volume"
) -> float:
    """Return the density of a suspension with another content of solids [kg/m3].

    Parameters
    ----------
    density : float
        Of the suspension as it is [kg/m3].
    before, after : float
        Fractions of solids [-].
    solids_density : float
        Of the solids themselves [kg/m3].
    by : str
        ``volume`` or ``mass``: what they are fractions of.

    Returns
    -------
    float
        Volumes add up: the liquid between the solids keeps its density.

    Raises
    ------
    InputError
        If the liquid would come out without weight, or without volume.
    """
    if by == "mass":
        liquid_volume = (1.0 / density - before / solids_density) / (1.0 - before)
        if liquid_volume <= 0:
            raise InputError(
                f"{before:g} of the mass as solids of {solids_density:g} kg/m3 take more room than "
                f"the whole product of {density:g} kg/m3",
                "solids",
            )
        return 1.0 / (after / solids_density + (1.0 - after) * liquid_volume)
    liquid = (density - before * solids_density) / (1.0 - before)
    if liquid <= 0:
        raise InputError(
            f"solids of {solids_density:g} kg/m3 at a volume fraction of {before:g} weigh more "
            f"than the whole product of {density:g} kg/m3",
            "solids",
        )
    return after * solids_density + (1.0 - after) * liquid
