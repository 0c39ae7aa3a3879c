"""A flow curve refuses what is no flow curve, and says why."""

from __future__ import annotations

import re

import numpy as np
import pytest

import rheo
from rheo import FlowCurve, InputError


def test_keeps_si_arrays_that_cannot_be_changed_by_mistake() -> None:
    given = np.array([1.0, 10.0])
    curve = FlowCurve(given, [2.0, 5.0], temperature=293.15, branch=["up", "down"])
    given[0] = 99.0
    assert curve.rate.tolist() == [1.0, 10.0]
    assert curve.viscosity.tolist() == [2.0, 0.5]
    assert curve.temperature is not None
    assert curve.temperature.tolist() == [293.15, 293.15]
    with pytest.raises(ValueError, match="read-only"):
        curve.rate[0] = 5.0


def test_select_takes_everything_along() -> None:
    curve = FlowCurve([1, 2, 3], [4, 5, 6], 300.0, ["up", "hold", "down"], [False, True, False])
    part = curve.select(curve.used)
    assert part.rate.tolist() == [1.0, 3.0]
    assert part.branch is not None
    assert part.branch.tolist() == ["up", "down"]
    assert part.used.all()
    assert len(part) == 2
    assert "2 points, 1 to 3 1/s" in repr(part)


@pytest.mark.parametrize(
    ("arguments", "sentence"),
    [
        (([1, 2], [3]), "flow curve: there are 2 shear rates and 1 shear stresses; there must be"),
        (([], []), "flow curve: there is no point; there must be at least one"),
        (([1, -2], [3, 4]), "shear rate: point 2 is -2 1/s; it must be above 0"),
        (([1, 0], [3, 4]), "shear rate: point 2 is 0 1/s; it must be above 0"),
        (([1, 2], [3, 0]), "shear stress: point 2 is 0 Pa; it must be above 0"),
        (([1, np.nan], [3, 4]), "shear rate: point 2 is nan 1/s; it must be a finite number"),
        (([1, 2], [np.inf, 4]), "shear stress: point 1 is inf Pa; it must be a finite number"),
        ((["a", 2], [3, 4]), "shear rate: a value is not a number; every value must be a number"),
        (([[1, 2]], [3, 4]), "shear rate: its shape is (1, 2); it must be a single column"),
        (([1, 2], [3, 4], [300]), "temperature: there are 1 values for 2 points"),
        (([1, 2], [3, 4], -5.0), "temperature: point 1 is -5 K; it must be above 0"),
        (
            ([1, 2], [3, 4], None, ["up", "left"]),
            "branch: point 2 is 'left'; it must be up, down, hold or empty",
        ),
        (([1, 2], [3, 4], None, ["up"]), "branch: there are 1 values for 2 points"),
        (([1, 2], [3, 4], None, None, [0, 1]), "excluded: it must be true or false for each point"),
        (([1, 2], [3, 4], None, None, [True]), "excluded: there are 1 values for 2 points"),
    ],
)
def test_refuses_in_one_sentence(arguments: tuple[object, ...], sentence: str) -> None:
    with pytest.raises(InputError, match=re.escape(sentence)):
        FlowCurve(*arguments)


def test_is_public() -> None:
    assert rheo.FlowCurve is FlowCurve
