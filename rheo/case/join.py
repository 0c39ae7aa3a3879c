"""Several sets of readings as one, so that they can be fitted together."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from rheo.errors import CaseError, Caution, merge_cautions
from rheo.geometry import Geometry, make_geometry
from rheo.readings import Readings
from rheo.readings.quantities import BY_KEY


def joined(sets: Sequence[Readings]) -> Readings:
    """Return sets of readings as one set.

    Parameters
    ----------
    sets : sequence of Readings
        Taken with one kind of geometry, or all without one.

    Returns
    -------
    Readings
        The columns that all sets have, one set after the other.

    Raises
    ------
    CaseError
        If the sets differ in kind of geometry, or in what was measured.
    """
    if len(sets) == 1:
        return sets[0]
    kinds = [None if one.geometry is None else one.geometry.key for one in sets]
    if len(set(kinds)) > 1:
        found = ", ".join(kind or "none" for kind in dict.fromkeys(kinds))
        raise CaseError(
            f"the sets have different geometries ({found}); fit sets of one kind together, "
            "or give all of them as shear rate and stress without a geometry",
            "readings",
        )
    shared = [key for key in sets[0].present if all(key in one.present for one in sets)]
    columns: dict[str, Any] = {
        key: np.concatenate([getattr(one, key) for one in sets]) for key in (*shared, "excluded")
    }
    if kinds[0] is not None:
        columns["geometry"] = _geometry([one.geometry for one in sets if one.geometry], sets)
    for key in ("full_scale_torque", "stress_per_degree", "nominal_form", "particle_diameter"):
        columns[key] = _same(key, sets)
    if "solids_fraction" in shared:
        columns["solids_basis"] = _basis(sets)
    return Readings(
        **columns,
        density=sets[0].density,
        source=", ".join(dict.fromkeys(one.source for one in sets)),
        columns=sets[0].columns,
        cautions=merge_cautions(*(one.cautions for one in sets), _said_of_some(shared, sets)),
    )


def _said_of_some(shared: Sequence[str], sets: Sequence[Readings]) -> tuple[Caution, ...]:
    """Return a Caution for what decides the state of the product and only some sets say."""
    return tuple(
        Caution(
            f"{key.partition('_')[0]}-of-some-sets",
            f"The {BY_KEY[key].name} is known of some sets of readings only, so the fit takes no "
            "account of it.",
            f"Give the {BY_KEY[key].name} of every set.",
            "readings",
        )
        for key in ("temperature", "solids_fraction")
        if key not in shared and any(key in one.present for one in sets)
    )


def _basis(sets: Sequence[Readings]) -> str:
    said = sorted({one.solids_basis for one in sets} - {""})
    if len(said) > 1:
        raise CaseError(
            "solids fractions are by mass in one set and by volume in another; give them by one",
            "readings",
        )
    return said[0] if said else ""


def _geometry(geometries: Sequence[Geometry], sets: Sequence[Readings]) -> Geometry:
    dimensions: dict[str, Any] = {}
    for key in geometries[0].dimensions:
        values = [np.asarray(one.dimensions[key]) for one in geometries]
        if all(value.ndim == 0 and value == values[0] for value in values):
            dimensions[key] = values[0]
        else:
            dimensions[key] = np.concatenate(
                [np.broadcast_to(value, len(one)) for value, one in zip(values, sets, strict=True)]
            )
    return make_geometry(geometries[0].key, **dimensions)


def _same(key: str, sets: Sequence[Readings]) -> Any:
    values = [getattr(one, key) for one in sets]
    if any(value != values[0] for value in values):
        raise CaseError(
            f"{key} differs between the sets; fit sets taken with one instrument together",
            "readings",
        )
    return values[0]
