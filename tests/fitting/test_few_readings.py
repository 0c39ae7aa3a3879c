"""Few readings: the ranking says where it could not reward the closer model."""

import numpy as np
import pytest

import rheo
from rheo.fitting.ranking import aicc, small_sample_term

MUD = rheo.model("herschel-bulkley", yield_stress=4.0, consistency=0.35, flow_index=0.66)
CODE = "too-few-readings-to-rank"


def readings(count: int) -> rheo.FlowCurve:
    rate = np.geomspace(5.0, 1000.0, count)
    wobble = 1.0 + 0.01 * np.array([1, -1, -1, 1, 1, -1] * 6)[:count]
    return rheo.FlowCurve(rate, MUD.stress(rate) * wobble)


def test_the_small_sample_term_is_what_aicc_adds() -> None:
    """AIC is n ln(S/n) + 2k."""
    plain = 9 * np.log(0.3 / 9) + 2 * 4
    assert float(aicc(0.3, 9, 3)) == pytest.approx(plain + small_sample_term(9, 3), rel=1e-12)
    assert small_sample_term(5, 3) == float("inf")


def test_six_readings_of_a_mud() -> None:
    models = ["power-law", "bingham", "herschel-bulkley"]
    few = rheo.fit(readings(6), models=models)
    assert few.best.key != "herschel-bulkley"
    assert few["herschel-bulkley"].rms_relative_error < 0.3 * few.best.rms_relative_error
    (one,) = [one for one in few.cautions if one.code == CODE]
    assert "6 readings are few for 3 parameters" in one.sentence
    assert "Herschel-Bulkley" in one.advice


def test_enough_readings_and_equals_are_passed_over() -> None:
    assert CODE not in {one.code for one in rheo.fit(readings(18)).cautions}
    rate = np.geomspace(5.0, 1000.0, 6)
    line = rheo.FlowCurve(rate, 0.2 * rate * np.array([1.01, 0.99, 1.0, 1.01, 0.99, 1.0]))
    assert CODE not in {one.code for one in rheo.fit(line).cautions}
