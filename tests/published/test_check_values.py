"""Flow curves and laminar pipe flow against values computed independently with 30 digits."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import numpy as np
import pytest

import rheo

CASES = json.loads((Path(__file__).parents[1] / "data" / "check_values.json").read_text())["cases"]


def _rows(section: str) -> list[Any]:
    return [pytest.param(row, id=row["id"]) for row in CASES if row["section"] == section]


def _pipe_rows() -> list[Any]:
    return [
        pytest.param(row.values[0], key, id=f"{row.id}-{key}")
        for row in _rows("laminar pipe")
        for key in row.values[0]["expected"]
    ]


def test_every_model_has_a_laminar_row() -> None:
    assert {row["model"] for row in CASES if row["section"] == "laminar pipe"} == set(
        rheo.model_records()
    )


@pytest.mark.parametrize(("row", "key"), _pipe_rows())
def test_laminar_pipe(row: dict[str, Any], key: str) -> None:
    fluid = rheo.model(row["model"], **row["parameters"])
    flow = rheo.pipe_flow(fluid, **row["inputs"], regime="laminar")
    assert float(getattr(flow, key)) == pytest.approx(row["expected"][key], rel=row["rel_tol"])


@pytest.mark.parametrize("row", _rows("laminar pipe"))
def test_wall_point_lies_on_the_flow_curve(row: dict[str, Any]) -> None:
    fluid = rheo.model(row["model"], **row["parameters"])
    rate, stress = row["expected"]["wall_rate"], row["expected"]["wall_stress"]
    assert float(fluid.stress(rate)) == pytest.approx(stress, rel=1e-12)
    # Where the curve is flat the rate is less sure than the stress, by one over its slope.
    allowed = 1e-12 / float(fluid.log_slope(rate))
    assert float(fluid.rate(stress)) == pytest.approx(rate, rel=allowed)


@pytest.mark.parametrize("row", [row for row in _rows("fitting") if row.id.startswith("H-exact")])
def test_flow_curve_points(row: dict[str, Any]) -> None:
    parameters = {
        key: row["expected"][key] for key in rheo.model_record(row["model"]).parameter_keys
    }
    fluid = rheo.model(row["model"], **parameters)
    rate, stress = (np.asarray(row["inputs"][key]) for key in ("shear_rate", "shear_stress"))
    np.testing.assert_allclose(fluid.stress(rate), stress, rtol=1e-13)
