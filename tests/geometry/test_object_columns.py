"""Columns of Python objects, as tables of mixed cells hand them on, count as numbers."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np
import pytest

import rheo
from rheo.geometry import make_geometry
from rheo.geometry.classic_plots import bagley_lines, gap_lines, mooney_lines
from rheo.geometry.convert import shear_point
from rheo.geometry.six_speed import dial_from_torque, torque_from_dial
from rheo.geometry.smoothing import smooth_log
from rheo.geometry.taylor import critical_reynolds, critical_speed, taylor_ratio
from rheo.geometry.tube_corrections import find_tube_corrections
from rheo.geometry.vane import peak_torque, static_yield_stress

CURVE = rheo.model("herschel-bulkley", yield_stress=12.0, consistency=4.0, flow_index=0.5)
CUP = make_geometry("concentric-cylinders", inner_radius=0.01, outer_radius=0.012, length=0.05)
TUBE = make_geometry("tube", diameter=0.004, length=0.4)
TUBES = make_geometry("tube", diameter=[0.002, 0.004, 0.008] * 3, length=0.4)
SMOOTH = smooth_log([0.0, 1.0, 2.0, 3.0, 4.0, 5.0, 6.0], [0.0, 1.1, 2.3, 3.6, 5.0, 6.5, 8.1])
RISING = [1.0, 2.0, 3.0, 4.0]
FLOWS = [1e-7, 2e-6, 3e-5, 2e-7, 3e-6, 5e-5, 3e-7, 5e-6, 8e-5]
DROPS = [9e3, 4e3, 2e3, 12e3, 5e3, 2.5e3, 15e3, 6e3, 3e3]

CALLS: dict[str, tuple[Callable[..., Any], list[list[float]]]] = {
    "predict": (lambda setting: CUP.predict(CURVE, setting), [RISING]),
    "sheared": (lambda setting: CUP.sheared(CURVE, setting), [RISING]),
    "setting_for_rate": (lambda rate: TUBE.setting_for_rate(CURVE, rate), [RISING]),
    "nominal": (CUP.nominal, [RISING, RISING]),
    "flow_points": (lambda *columns: vars(TUBE.flow_points(*columns)), [RISING, RISING]),
    "shear_point": (lambda setting: shear_point(CURVE, CUP, setting).setting, [RISING]),
    "bagley_lines": (lambda *columns: vars(bagley_lines(*columns)), [RISING, RISING]),
    "mooney_lines": (lambda *columns: vars(mooney_lines(*columns)), [RISING, RISING]),
    "gap_lines": (lambda *columns: vars(gap_lines(*columns)), [RISING, RISING]),
    "torque_from_dial": (torque_from_dial, [RISING, RISING, RISING, RISING]),
    "dial_from_torque": (dial_from_torque, [RISING, RISING, RISING, RISING]),
    "smooth_log": (lambda *columns: vars(smooth_log(*columns)), [RISING, RISING]),
    "value": (SMOOTH.value, [[-1.0, 0.5, 9.0]]),
    "slope": (SMOOTH.slope, [[-1.0, 0.5, 9.0]]),
    "curvature": (SMOOTH.curvature, [[-1.0, 0.5, 9.0]]),
    "slope_error": (SMOOTH.slope_error, [[-1.0, 0.5, 9.0]]),
    "inverse": (SMOOTH.inverse, [[-1.0, 0.5, 9.0]]),
    "critical_reynolds": (critical_reynolds, [[0.3, 0.5, 0.9]]),
    "critical_speed": (lambda density: critical_speed(CUP, CURVE, density), [[900.0, 1000.0]]),
    "taylor_ratio": (lambda *columns: taylor_ratio(CUP, *columns), [RISING, RISING, RISING]),
    "find_tube_corrections": (
        lambda *columns: vars(find_tube_corrections(TUBES, *columns, entrance=False)),
        [FLOWS, DROPS],
    ),
    "peak_torque": (peak_torque, [RISING, RISING, RISING]),
    "static_yield_stress": (static_yield_stress, [RISING, RISING, RISING]),
}


def _leaves(result: Any) -> list[Any]:
    if isinstance(result, dict):
        return list(result.values())
    return list(result) if isinstance(result, tuple) else [result]


@pytest.mark.parametrize("name", CALLS)
def test_objects_give_what_numbers_give(name: str) -> None:
    function, columns = CALLS[name]
    expected = _leaves(function(*columns))
    found = _leaves(function(*(np.array(column, dtype=object) for column in columns)))
    for one, other in zip(found, expected, strict=True):
        if isinstance(other, np.ndarray | np.floating):
            assert np.asarray(one).dtype == float
            np.testing.assert_array_equal(one, other)


WHOLE = [
    name
    for name, (_, columns) in CALLS.items()
    if all(value == round(value) for column in columns for value in column)
]


@pytest.mark.parametrize("name", WHOLE)
def test_whole_numbers_give_what_decimal_ones_give(name: str) -> None:
    function, columns = CALLS[name]
    expected = _leaves(function(*columns))
    found = _leaves(function(*([int(value) for value in column] for column in columns)))
    for one, other in zip(found, expected, strict=True):
        if isinstance(other, np.ndarray | np.floating):
            np.testing.assert_array_equal(one, other)
