"""NIST Statistical Reference Datasets, nonlinear regression (public domain).

Certified values: data, certified parameters and standard deviations of Misra1a and MGH09 as in
tests/data/check_values.json, section "NIST StRD"; DanWood's in section "fitting", its two starts
(1, 5) and (0.7, 4) from memory. Each set is fitted from both starts of the certificate.
"""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
import pytest

import rheo
from rheo.errors import FitError
from rheo.fitting import least_squares

DATA = Path(__file__).parent.parent / "data" / "check_values.json"
ROWS = {row["id"]: row for row in json.loads(DATA.read_text("utf-8"))["cases"]}


def _misra1a(x: Any, b1: Any, b2: Any) -> Any:
    return b1 * (1.0 - np.exp(-b2 * x))


def _mgh09(x: Any, b1: Any, b2: Any, b3: Any, b4: Any) -> Any:
    return b1 * (x**2 + x * b2) / (x**2 + x * b3 + b4)


def _danwood(x: Any, b1: Any, b2: Any) -> Any:
    return b1 * x**b2


Rows = list[list[float]]
Case = tuple[Callable[..., Any], list[float], list[float], Rows, Rows, float]


def _row(name: str, curve: Callable[..., Any]) -> Case:
    row = ROWS[name]
    starts = np.array(list(row["starts"].values())).T.tolist()
    certified = [[pair[0], pair[1]] for pair in row["certified"].values()]
    data = row["data"]
    return curve, data["x"], data["y"], starts, certified, row["residual_sum_of_squares"]


def _danwood_case() -> Case:
    row = ROWS["H-danwood"]
    printed, data = row["published"], row["inputs"]
    certified = [[printed["b1"], printed["sd_b1"]], [printed["b2"], printed["sd_b2"]]]
    return _danwood, data["x"], data["y"], [[1.0, 5.0], [0.7, 4.0]], certified, printed["rss"]


CASES = {
    "Misra1a": _row("N-misra1a", _misra1a),
    "MGH09": _row("N-mgh09", _mgh09),
    "DanWood": _danwood_case(),
}


@pytest.mark.parametrize("start", [0, 1])
@pytest.mark.parametrize("name", CASES)
def test_certified_values_from_both_starts(name: str, start: int) -> None:
    curve, x, y, starts, certified, total = CASES[name]
    x, y = np.array(x), np.array(y)
    found = least_squares(lambda b: curve(x, *b) - y, starts[start])
    values, deviations = np.array(certified).T
    # Certified parameters to 6 digits, standard deviations to 4.
    np.testing.assert_allclose(found.parameters, values, rtol=5e-7)
    np.testing.assert_allclose(found.standard_errors, deviations, rtol=5e-5)
    assert found.sum_of_squares == pytest.approx(total, rel=1e-9)


def test_the_power_law_of_the_library_is_danwood_s() -> None:
    """The certified set is a power law, unweighted: `rheo.fit` needs no start for it."""
    _, x, y, _, certified, total = CASES["DanWood"]
    best = rheo.fit(rheo.FlowCurve(x, y), "power-law", weighting="absolute").best
    found = best.parameters["consistency"], best.parameters["flow_index"]
    for one, (value, deviation) in zip(found, certified, strict=True):
        assert one.value == pytest.approx(value, rel=1e-9)
        assert one.stderr == pytest.approx(deviation, rel=1e-8)
    assert best.weighted_ss == pytest.approx(total, rel=1e-9)


def test_a_start_without_finite_residuals_is_refused() -> None:
    with pytest.raises(FitError, match="at the start are not finite"):
        least_squares(lambda b: np.log(b[0] - np.arange(3.0)), [-1.0])
