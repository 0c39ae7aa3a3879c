"""What-if cases, another size for the pipes, and comparisons beside a result."""

import numpy as np
import pytest

import rheo
from rheo.case import case_from_text
from rheo.case.comparisons import (
    central_operating_point,
    pressure_by_model,
    regime_margins,
)
from rheo.case.run import fit_case
from rheo.case.take_size import with_size
from rheo.case.what_if import SolidsChange, WhatIf, what_if
from rheo.errors import CaseError, InputError
from rheo.line import PipeSize, pipe_size

RATES = np.geomspace(0.5, 300.0, 16)
STRESS = 6.0 * RATES**0.4 * np.where(np.arange(16) % 2, 1.01, 0.99)
TABLE = "\n".join(
    ["Shear rate [1/s],Shear stress [Pa]"]
    + [f"{rate!r},{stress!r}" for rate, stress in zip(RATES.tolist(), STRESS.tolist(), strict=True)]
)
CASE = case_from_text(
    f"""
schema = 1
product = {{ name = "gel", density = "1320 kg/m3", temperature = "20 °C" }}
duty = {{ flow = "4 m3/h" }}
fit = {{ models = ["newtonian", "power-law", "bingham"] }}
doubt = {{ draws = 100 }}
[[readings]]
text = '''
{TABLE}
'''
[line]
suction = [
    {{ part = "vessel", level = "1 m" }},
    {{ part = "pipe", length = "2 m", size = "ISO 2037 63.5", fixed_size = true }},
]
discharge = [
    {{ part = "pipe", name = "riser", length = "20 m", inside_diameter = "50 mm", rise = "3 m" }},
    {{ part = "equipment", loss = "20 kPa", at_flow = "4 m3/h", outlet_temperature = "35 °C" }},
    {{ part = "pipe", name = "after", length = "20 m", size = "ISO 2037 51" }},
    {{ part = "vessel" }},
]
"""
)


@pytest.fixture(scope="module")
def result():
    return rheo.run_case(CASE)


def rerun(result, case):
    fitted = fit_case(case, result.readings, result.fits)
    return rheo.run_case(case, fitted=fitted)


def test_no_change_is_the_same_case(result):
    assert WhatIf().changes_nothing
    assert what_if(result, WhatIf()) == CASE


def test_a_thicker_product_needs_that_much_more_in_laminar_pipes(result):
    case = what_if(result, WhatIf(thicker=1.2))
    found = rerun(result, case)
    for now, then in zip(result.line.parts, found.line.parts, strict=True):
        if now.kind == "pipe":
            assert now.regime == then.regime == "laminar"
            assert float(then.pressure_loss) == pytest.approx(1.2 * float(now.pressure_loss))
    codes = {one.code for one in found.cautions}
    assert {"product-not-as-measured", "equipment-loss-as-given"} <= codes
    assert "product-not-as-measured" not in {one.code for one in result.cautions}
    again = what_if(found, WhatIf(thicker=1.5))
    assert float(again.product.stress_factor) == pytest.approx(1.8)


def test_flow_is_kept_as_written(result):
    case = what_if(result, WhatIf(flow="20 gpm"))
    assert case.document()["duty"]["flow"] == "20 gpm"
    assert float(what_if(result, WhatIf(flow=0.002)).duty.flow) == 0.002
    with pytest.raises(InputError, match=r"duty.flow: found '-1 m3/h'; it must be above 0"):
        what_if(result, WhatIf(flow="-1 m3/h"))


def test_every_temperature_of_the_product_moves(result):
    case = what_if(result, WhatIf(warmer=-10.0))
    assert float(case.product.temperature) == pytest.approx(283.15)
    assert float(case.line.discharge[1].outlet_temperature) == pytest.approx(298.15)
    assert CASE.document()["line"]["discharge"][1]["outlet_temperature"] == "35 °C"


def test_more_solids_thicken_and_weigh(result):
    change = SolidsChange(before=0.2, after=0.3, density=2600.0)
    case = what_if(result, WhatIf(solids=change))
    assert float(case.product.stress_factor) == pytest.approx((0.33 / 0.43) ** -1.575, rel=1e-5)
    assert float(case.product.density) == pytest.approx(0.3 * 2600 + 0.7 * 1000)
    light = what_if(result, WhatIf(solids=SolidsChange(0.2, 0.3)))
    assert float(light.product.density) == 1320.0
    with pytest.raises(InputError, match="where a suspension packs"):
        what_if(result, WhatIf(solids=SolidsChange(0.2, 0.9)))


def test_a_size_is_taken_into_every_pipe_that_is_free():
    case = with_size(CASE, pipe_size("ISO 2037 76.1"))
    suction, discharge = case.line.suction, case.line.discharge
    assert suction[1].size == "ISO 2037 63.5"
    assert discharge[0].size == discharge[2].size == "ISO 2037 76.1"
    assert discharge[0].inside_diameter is None
    own = with_size(case, PipeSize("own", "hose", 0.04321))
    assert own.line.discharge[0].size is None
    assert float(own.line.discharge[2].inside_diameter) == pytest.approx(0.04321)


def test_a_line_of_fixed_sizes_takes_no_other():
    document = CASE.document()
    for part in document["line"]["discharge"]:
        if part["part"] == "pipe":
            part["fixed_size"] = True
    fixed = rheo.case.case_from_document(document)
    with pytest.raises(CaseError, match="every pipe has a fixed size"):
        with_size(fixed, pipe_size("ISO 2037 51"))


def test_each_model_has_its_own_pressure(result):
    found = {one.fit.key: one for one in pressure_by_model(result, least_weight=0.0)}
    assert set(found) == {"newtonian", "power-law", "bingham"}
    used = found[result.chosen.key]
    assert used.friction_pressure == pytest.approx(float(result.line.friction_pressure))
    assert used.share == 0.0
    bingham = rheo.run_case(rheo.case.changed(CASE, {"fit.model": "bingham"}))
    assert found["bingham"].friction_pressure == pytest.approx(
        float(bingham.line.friction_pressure), rel=1e-9
    )
    likely = pressure_by_model(result)
    assert [one.fit.key for one in likely] == [result.chosen.key]
    thick = rerun(result, what_if(result, WhatIf(thicker=1.4)))
    (one,) = pressure_by_model(thick)
    assert one.friction_pressure == pytest.approx(float(thick.line.friction_pressure))


def test_margins_to_the_end_of_laminar_flow(result):
    margins = regime_margins(result)
    assert [one.name for one in margins] == ["pipe", "riser", "after"]
    for one in margins:
        assert one.regime == "laminar"
        assert 0 < one.share < 1
        assert one.critical_flow == pytest.approx(result.flow / one.share)
    fast = rheo.run_case(
        rheo.case.changed(CASE, {"duty.flow": 1.05 * margins[2].critical_flow}),
        result.readings,
    )
    assert regime_margins(fast)[2].regime != "laminar"
    assert regime_margins(fast)[2].share > 1


def test_the_central_operating_point_is_that_of_the_flow_curve_alone(result):
    assert central_operating_point(result) is None
    pump = {"kind": "positive-displacement", "displacement": "1 L", "speed": "100 rpm"}
    pump |= {"rated_pressure": "10 bar", "slip_flow": "0.5 m3/h", "slip_pressure": "5 bar"}
    pumped = rheo.run_case(rheo.case.changed(CASE, {"pump": pump}), result.readings)
    point = central_operating_point(pumped)
    assert point.found
    assert point.flow == pytest.approx(pumped.operating.flow, rel=1e-9)
    assert point.flow_interval is None
