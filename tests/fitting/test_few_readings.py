"""Few readings: the ranking says where it could not reward the closer model."""

import numpy as np
import pytest

import rheo
from rheo.case.as_data import fits_data
from rheo.errors import FitError
from rheo.fitting.ranking import aicc, small_sample_term
from rheo.report.sections.fitted import ranking_table

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


def test_models_are_compared_from_where_aicc_is_known() -> None:
    rates = np.array([1.0, 10.0, 100.0, 1000.0])
    curve = rheo.FlowCurve(rates, 10.0 * rates**0.3)
    with pytest.raises(FitError, match="there are 4 readings to fit; at least 5 at different"):
        rheo.fit(curve, models=["power-law", "bingham"])
    alone = rheo.fit(curve, models="power-law").best
    assert alone.readings_for_aicc == 5
    more = rheo.FlowCurve(np.append(rates, 3e3), np.append(curve.stress, 10.0 * 3e3**0.3))
    found = rheo.fit(more, models=["power-law", "bingham"])
    assert [fit.readings_for_aicc for fit in found] == [None, None]


def test_tables_say_how_many_readings_aicc_needs() -> None:
    rates = np.array([1.0, 10.0, 100.0])
    curve = rheo.FlowCurve(rates, 10.0 * rates**0.3 * np.array([1.01, 0.99, 1.01]))
    fits = rheo.fit(curve, models="power-law")
    assert ranking_table(fits, fits.best).rows[0][2] == "needs 5 readings"
    found = fits_data(fits)["ranking"][0]
    assert (found["aicc"], found["readings_for_aicc"]) == (None, 5)
