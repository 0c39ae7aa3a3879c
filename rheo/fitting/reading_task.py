"""Fit flow curves in what was measured: predicted less measured torque or pressure drop."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from rheo.errors import FitError, InputError
from rheo.fitting.final import global_minima
from rheo.fitting.problem import Problem
from rheo.fitting.reading_problem import ReadingProblem
from rheo.fitting.search import QUICK, search
from rheo.fitting.task import Task
from rheo.fitting.weighting import Weighting
from rheo.geometry import Geometry
from rheo.geometry.tube_corrections import find_tube_corrections
from rheo.models import ModelRecord, Parameter
from rheo.readings import Readings

FloatArray = NDArray[np.float64]

# Far below what AICc or an interval could show; lmfit's last pass goes on from there.
TOLERANCE = 3e-5

ENTRANCE = Parameter("entrance_diameters", "e", "-", "entrance loss in diameters", 0.0, 1e4)
SLIP = Parameter("slip_coefficient", "β", "m/(Pa.s)", "slip velocity over wall stress", 0.0, 1.0)


def reading_task(
    readings: Readings, weights: Weighting, entrance: bool = False, slip: bool = False
) -> Task:
    """Return the task of fitting readings in their geometry.

    Parameters
    ----------
    readings : Readings
        With a geometry. Readings that the user excluded are left out.
    weights : Weighting
        In the unit of the reading.
    entrance, slip : bool
        For tubes: whether to fit the entrance loss and the slip coefficient with the model.

    Raises
    ------
    InputError
        If entrance loss or slip is asked of another geometry, or of tubes that do not differ.
    """
    points = np.flatnonzero(np.logical_not(np.asarray(readings.excluded)))
    if points.size == 0:
        raise FitError("all readings are excluded; there must be at least one to fit", "fit")
    used = readings.used()
    assert used.geometry is not None
    setting, reading = np.asarray(used.setting), np.asarray(used.reading)
    extra = tuple(one for one, wanted in ((ENTRANCE, entrance), (SLIP, slip)) if wanted)
    geometry = used.geometry
    if extra:
        if geometry.key != "tube":
            raise InputError(
                f"entrance loss and slip belong to tubes; the readings are from '{geometry.key}'",
                "fit",
            )
        geometry = find_tube_corrections(geometry, setting, reading, entrance, slip).geometry
    curve = _start_curve(geometry, setting, reading)

    def pose(records: Sequence[ModelRecord]) -> list[ReadingProblem]:
        return [
            ReadingProblem(record, geometry, setting, reading, weights, curve[0], extra)
            for record in records
        ]

    def solve(records: Sequence[ModelRecord]) -> list[tuple[Problem, FloatArray, float]]:
        problems = pose(records)
        rate, stress = curve
        share = weights.sigma(reading) / reading
        found = search(records, rate, stress, share * stress, QUICK)
        corrections = [float(np.ravel(geometry.dimensions[one.key])[0]) for one in extra]
        starts = [
            np.concatenate([one, np.tile(corrections, (len(one), 1))], axis=-1) for one in found
        ]
        minima = global_minima(problems, starts, tolerance=TOLERANCE)
        return [(problem, *one) for problem, one in zip(problems, minima, strict=True)]

    return Task(solve, pose, reading, np.unique(setting).size, points, len(extra))


def _start_curve(
    geometry: Geometry, setting: FloatArray, reading: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Return shear rates and stresses to start from: found without a model where that works."""
    try:
        found = geometry.flow_points(setting, reading)
        rate, stress = np.asarray(found.rate), np.asarray(found.stress)
        if np.all((rate > 0) & (stress > 0) & np.isfinite(rate) & np.isfinite(stress)):
            return rate, stress
    except InputError:
        # Too few readings, or readings that do not rise: the nominal conversion always works.
        pass
    rate, stress = geometry.nominal(setting, reading)
    return np.asarray(rate), np.asarray(stress)
