"""Several sets of readings as one, so that they can be fitted together."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from rheo.errors import CaseError, merge_cautions
from rheo.geometry import Geometry, make_geometry
from rheo.readings import Readings


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
    return Readings(
        **columns,
        density=sets[0].density,
        source=", ".join(dict.fromkeys(one.source for one in sets)),
        columns=sets[0].columns,
        cautions=merge_cautions(*(one.cautions for one in sets)),
    )


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
