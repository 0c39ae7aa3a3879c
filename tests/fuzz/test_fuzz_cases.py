"""Case files with other numbers in them: a result that is sound, or one plain sentence."""

from __future__ import annotations

import json
import time

import numpy as np
import pytest
from damage import VALUES, number_changed, picked

import rheo
from rheo.case import case_from_text

CASE = """\
schema = 1
title = "Made-up product to a made-up tank"

[product]
name = "made-up product"
density = "1100 kg/m3"
temperature = "20 °C"
vapour_pressure = "2.3 kPa"
heat_capacity = "3.5 kJ/kg/K"

[[readings]]
text = '''
Shear rate [1/s],Shear stress [Pa]
1,7.0
2,8.66
5,12.0
10,15.5
20,20.3
50,29.6
100,40.0
'''

[fit]
models = ["power-law", "herschel-bulkley"]

[duty]
flow = "5 m3/h"

[line]
suction = [{ part = "vessel", level = "1 m" }, { part = "entrance" }]
discharge = [
    { part = "pipe", length = "30 m", size = "ISO 2037 51", rise = "2 m", name = "riser" },
    { part = "fitting", kind = "bend", count = 4, loss_coefficient = 0.9 },
    { part = "vessel", level = "1 m" },
]

[pump]
efficiency = "50 %"
rated_pressure = "8 bar"

[doubt]
draws = 100
"""
SLOWEST = 10.0


def outcome(text: str) -> str:
    """Run a case; return what it ended in."""
    start = time.process_time()
    try:
        result = rheo.run_case(case_from_text(text, "case.toml"))
    except rheo.InputError as error:
        said = str(error)
        assert said.strip()
        assert "\n" not in said
        ended = "refused"
    else:
        # JSON holds no NaN: what is not known is null, and a Caution says why.
        data = json.loads(json.dumps(result.as_dict(), allow_nan=False))
        assert data
        pressure = float(result.line.differential_pressure)
        assert np.isfinite(pressure)
        ended = "done"
    assert time.process_time() - start < SLOWEST
    return ended


def test_the_case_itself_runs():
    assert outcome(CASE) == "done"


@pytest.mark.parametrize("seed", range(6))
def test_other_numbers(seed):
    random = np.random.default_rng(seed)
    ended = [
        outcome("schema = 1" + number_changed(CASE.removeprefix("schema = 1"), random))
        for _ in range(12)
    ]
    assert set(ended) <= {"done", "refused"}


def test_other_values():
    random = np.random.default_rng(9)
    lines = CASE.splitlines()
    places = [number for number, line in enumerate(lines) if " = " in line and "[{" not in line]
    for _ in range(150):
        number = places[int(random.integers(len(places)))]
        key = lines[number].partition(" = ")[0]
        value = picked(random, VALUES)
        quoted = json.dumps(value, ensure_ascii=False) if random.random() < 0.7 else value
        outcome("\n".join([*lines[:number], f"{key} = {quoted}", *lines[number + 1 :]]))
