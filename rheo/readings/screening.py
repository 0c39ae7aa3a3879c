"""Which readings to doubt, and why: advice only, nothing is ever taken out."""

from __future__ import annotations

import dataclasses
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution, InputError, in_percent, merge_cautions
from rheo.geometry.taylor import taylor_cautions
from rheo.readings import one_curve, sweeps
from rheo.readings.conversion import uses_converted_values
from rheo.readings.readings import Readings

FloatArray = NDArray[np.float64]

# Common practice for torque transducers.
LOWEST_TORQUE_SHARE, HIGHEST_TORQUE_SHARE = 0.10, 1.0
# Common practice: ten of the largest particles should fit across the gap.
FEWEST_PARTICLES_ACROSS = 10.0
# Common practice: laminar up to here, by the Reynolds number of Metzner and Reed (1955).
LARGEST_LAMINAR_REYNOLDS = 2100.0
# A laminar profile forms within 0.06 Re diameters (common practice); a tube of which this takes
# up more than a tenth reads too high.
ENTRY_LENGTH_FACTOR, LARGEST_ENTRY_SHARE = 0.06, 0.1
EXACT_CONVERSIONS = ("cone-plate",)


@dataclass(frozen=True)
class Sample:
    """What is known of the sample and the instrument besides the readings.

    Parameters
    ----------
    density : float or None
        [kg/m3]
    particle_diameter : float or None
        Largest particle [m].
    full_scale_torque : float or None
        Torque at 100 % of full scale [N m].
    """

    density: float | None
    particle_diameter: float | None
    full_scale_torque: float | None


Check = Callable[[Readings, Sample], tuple[Caution, ...]]


def screen(
    readings: Readings,
    density: float | None = None,
    particle_diameter: float | None = None,
    full_scale_torque: float | None = None,
) -> tuple[Caution, ...]:
    """Return what is doubtful in a set of readings.

    Looked for are: torque under 10 % or over 100 % of full scale; Taylor vortices; a gap under
    ten particle diameters; rate or stress that does not rise; up and down branches apart; drift at
    constant speed; curves from two gaps or tubes that do not lie on one another (slip, entrance
    loss); turbulent or developing flow in a tube; readings worked back from shear rates.

    Parameters
    ----------
    readings : Readings
        Readings that the user has taken out are passed over.
    density : float, optional
        [kg/m3]; as stated in the file when absent. Needed for Taylor vortices and for turbulent
        or developing flow.
    particle_diameter : float, optional
        Largest particle [m]; as stated in the file when absent.
    full_scale_torque : float, optional
        Torque at 100 % of full scale [N m]; as stated in the file when absent.

    Returns
    -------
    tuple of Caution
        Each with the points it is about, counted from 0 among all readings.
    """
    if readings.excluded is None or np.all(readings.excluded):
        return ()
    known = np.flatnonzero(~readings.excluded)
    sample = Sample(
        density or readings.density,
        particle_diameter or readings.particle_diameter,
        full_scale_torque or readings.full_scale_torque,
    )
    used = dataclasses.replace(readings.used(), full_scale_torque=sample.full_scale_torque)
    found = merge_cautions(*(check(used, sample) for check in CHECKS))
    return tuple(
        dataclasses.replace(caution, points=tuple(int(known[point]) for point in caution.points))
        for caution in found
    )


def flagged(mask: NDArray[np.bool_]) -> tuple[int, ...]:
    """Return the indices at which a mask is true."""
    return tuple(int(index) for index in np.flatnonzero(mask))


def _torque_range(readings: Readings, sample: Sample) -> tuple[Caution, ...]:
    share = readings.torque_fraction
    if share is None and readings.torque is not None and sample.full_scale_torque:
        share = readings.torque / sample.full_scale_torque
    if share is None:
        return ()
    low, high = share < LOWEST_TORQUE_SHARE, share > HIGHEST_TORQUE_SHARE
    cautions = []
    if low.any():
        cautions.append(
            Caution(
                "torque-low",
                f"{int(low.sum())} of {share.size} readings have a torque under "
                f"{in_percent(LOWEST_TORQUE_SHARE)} of full scale, down to "
                f"{float(share.min()):.2g} of it, where the instrument is least exact.",
                "Leave them out, or measure with a larger bob or a softer spring.",
                "torque",
                flagged(low),
            )
        )
    if high.any():
        cautions.append(
            Caution(
                "torque-high",
                f"{int(high.sum())} of {share.size} readings have a torque over "
                f"{in_percent(HIGHEST_TORQUE_SHARE)} of full scale, up to {float(share.max()):.3g} "
                "times.",
                "Leave them out: the instrument was beyond its range.",
                "torque",
                flagged(high),
            )
        )
    return tuple(cautions)


def _taylor_vortices(readings: Readings, sample: Sample) -> tuple[Caution, ...]:
    geometry = readings.geometry
    if geometry is None or sample.density is None or geometry.record.setting != "angular_speed":
        return ()
    pair = sweeps.curve_or_none(readings)
    if pair is None:
        return ()
    rate, stress = pair
    return taylor_cautions(geometry, stress / rate, readings.setting, sample.density)


# The distance across which the fluid is sheared, by geometry.
_GAPS: dict[str, Callable[[dict[str, FloatArray]], FloatArray]] = {
    "concentric-cylinders": lambda size: size["outer_radius"] - size["inner_radius"],
    "six-speed": lambda size: size["outer_radius"] - size["inner_radius"],
    "parallel-plate": lambda size: size["gap"],
    # At the rim, where the gap of a cone is widest.
    "cone-plate": lambda size: size["radius"] * np.tan(size["angle"]),
    "tube": lambda size: size["diameter"],
    "slot": lambda size: 2.0 * size["half_gap"],
}


def _narrow_gap(readings: Readings, sample: Sample) -> tuple[Caution, ...]:
    geometry, particle = readings.geometry, sample.particle_diameter
    if geometry is None or particle is None or geometry.key not in _GAPS:
        return ()
    gap = np.broadcast_to(_GAPS[geometry.key](dict(geometry.dimensions)), len(readings))
    narrow = gap < FEWEST_PARTICLES_ACROSS * particle
    if not narrow.any():
        return ()
    return (
        Caution(
            "gap-narrow",
            f"The gap is {float(gap.min()) * 1e3:.3g} mm, {float(gap.min()) / particle:.2g} times "
            f"the largest particle of {particle * 1e3:.3g} mm, in {int(narrow.sum())} of "
            f"{gap.size} readings; it should be {FEWEST_PARTICLES_ACROSS:g} times.",
            "Measure in a wider gap, or take the result as a rough one.",
            geometry.record.name,
            flagged(narrow),
        ),
    )


def _tube_flow(readings: Readings, sample: Sample) -> tuple[Caution, ...]:
    """Turbulent flow, and flow that is still developing over much of the length."""
    geometry = readings.geometry
    if geometry is None or sample.density is None or geometry.key not in {"tube", "slot"}:
        return ()
    pair = sweeps.curve_or_none(readings)
    if pair is None:
        return ()
    size = geometry.dimensions
    if geometry.key == "tube":
        area, across, factor = np.pi * size["diameter"] ** 2 / 4.0, size["diameter"], 8.0
    else:
        area, across, factor = 2.0 * size["half_gap"] * size["width"], 4.0 * size["half_gap"], 12.0
    velocity = readings.setting / area
    reynolds = factor * sample.density * velocity**2 / pair[1]
    entry = ENTRY_LENGTH_FACTOR * reynolds * across / size["length"]
    turbulent = reynolds > LARGEST_LAMINAR_REYNOLDS
    developing = (entry > LARGEST_ENTRY_SHARE) & ~turbulent
    cautions = []
    if turbulent.any():
        cautions.append(
            Caution(
                "turbulent-flow",
                f"{int(turbulent.sum())} of {turbulent.size} readings have a Reynolds number over "
                f"{LARGEST_LAMINAR_REYNOLDS:g} (Metzner-Reed), up to {float(reynolds.max()):.3g}: "
                "they say nothing of the flow curve.",
                "Leave them out, or use a narrower tube.",
                geometry.record.name,
                flagged(turbulent),
            )
        )
    if developing.any():
        worst = float(entry[developing].max())
        cautions.append(
            Caution(
                "developing-flow",
                f"In {int(developing.sum())} of {developing.size} readings the flow takes up to "
                f"{in_percent(worst)} of the tube's length to develop, and the pressure drop is "
                "too high.",
                "Use a longer tube, or fit the entrance loss with tubes of two lengths.",
                geometry.record.name,
                flagged(developing),
            )
        )
    return tuple(cautions)


def _worked_back(readings: Readings, sample: Sample) -> tuple[Caution, ...]:  # noqa: ARG001
    geometry = readings.geometry
    if geometry is None or geometry.key in EXACT_CONVERSIONS:
        return ()
    try:
        if not uses_converted_values(readings):
            return ()
    except InputError:
        return ()
    form = readings.nominal_form or next(iter(geometry.record.nominal_forms))
    return (
        Caution(
            "worked-back",
            f"{geometry.record.setting.replace('_', ' ').capitalize()} and "
            f"{geometry.record.reading.replace('_', ' ')} were not both measured; they are worked "
            f"back from shear rate and stress by the '{form}' conversion.",
            "Look up which conversion the instrument uses, and name it if it is another.",
            geometry.record.name,
        ),
    )


CHECKS: tuple[Check, ...] = (
    _torque_range,
    _taylor_vortices,
    _narrow_gap,
    lambda readings, _: sweeps.not_rising(readings),
    lambda readings, _: sweeps.branches_apart(readings),
    lambda readings, _: sweeps.drift(readings),
    lambda readings, _: one_curve.curves_apart(readings),
    _tube_flow,
    _worked_back,
)
