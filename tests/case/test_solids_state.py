"""A case whose readings hold several solids contents: which one is pumped, and what is said."""

import dataclasses

import numpy as np
import pytest

import rheo
from rheo.case import case_from_text, case_text
from rheo.case.comparisons import pressure_by_model
from rheo.case.embed import embedded
from rheo.case.solids_state import solids_basis
from rheo.case.what_if import SolidsChange, WhatIf, what_if
from rheo.errors import CaseError, InputError
from rheo.report.case_pictures import flow_curve_picture
from rheo.report.case_readings import case_points
from rheo.report.design_note import design_note

RATES = np.geomspace(1.0, 400.0, 9)
CONSISTENCY, INDEX, SLOPE, REFERENCE = 8.0, 0.35, 9.0, 0.46


def stress(share, rates=RATES):
    return CONSISTENCY * np.exp(SLOPE * (share - REFERENCE)) * rates**INDEX


def rows(*shares, warm=("20",)):
    return "\n".join(
        f"{rate!r},{value!r},{100 * share:g},{degrees}"
        for share in shares
        for degrees in warm
        for rate, value in zip(RATES.tolist(), stress(share).tolist(), strict=True)
    )


def case(product='solids_fraction = "45 wt%"', table=None, heading="Solids [wt%]", more=""):
    table = rows(0.42, 0.46, 0.50) if table is None else table
    return case_from_text(
        f"""
schema = 1
product = {{ name = "mud", density = "1400 kg/m3", temperature = "20 °C"
             {"," if product else ""} {product} }}
duty = {{ flow = "10 m3/h" }}
fit = {{ models = ["newtonian", "power-law", "bingham"] {more} }}
doubt = {{ draws = 100 }}
[[readings]]
text = '''
Shear rate [1/s],Shear stress [Pa],{heading},Temperature [°C]
{table}
'''
[line]
discharge = [
    {{ part = "pipe", length = "80 m", inside_diameter = "100 mm" }},
    {{ part = "vessel" }},
]
""".replace("\n             ", " ")
    )


def codes(result):
    return {one.code for one in result.cautions}


def said(result, code):
    (found,) = [one for one in result.cautions if one.code == code]
    return found.sentence


def test_the_law_is_found_again_and_the_line_is_that_of_the_product():
    result = rheo.run_case(case())
    values = result.chosen.parameters
    assert result.chosen.key == "power-law"
    assert values["solids_slope"].value == pytest.approx(SLOPE, rel=1e-6)
    assert values["consistency"].value == pytest.approx(
        CONSISTENCY * np.exp(SLOPE * (0.45 - REFERENCE)), rel=1e-6
    )
    assert result.product.solids_fraction == pytest.approx(0.45)
    assert result.model.stress(RATES) == pytest.approx(stress(0.45), rel=1e-6)
    # The same line with a product of just that flow curve.
    known = rheo.model(
        "power-law", consistency=float(stress(0.45, np.ones(1))[0]), flow_index=INDEX
    )
    alone = rheo.solve_line(
        case().line.build(),
        dataclasses.replace(result.product, model=known, draws=()),
        result.flow,
    )
    assert float(result.line.friction_pressure) == pytest.approx(
        float(alone.friction_pressure), rel=1e-6
    )
    assert result.product.draw_count == 100
    assert not codes(result) & {
        *("outside-measured-fraction", "solids-not-given", "solids-of-readings"),
        *("solids-not-in-model", "temperature-not-in-model"),
    }
    assert result.as_dict()["solids_fraction"] == pytest.approx(0.45)
    assert result.as_dict()["fits"]["state"]["name"] == "solids fraction"
    assert result.next_readings is not None


def test_the_power_form_is_the_users_choice():
    table = "\n".join(
        f"{rate!r},{8.0 * (share / 0.46) ** 5 * rate**INDEX!r},{100 * share:g},20"
        for share in (0.42, 0.46, 0.50)
        for rate in RATES.tolist()
    )
    result = rheo.run_case(case(table=table, more=', solids_form = "power"'))
    assert result.chosen.parameters["solids_slope"].value == pytest.approx(5.0, rel=1e-6)
    with pytest.raises(CaseError, match="unknown form 'linear'; there are exponential, power"):
        case(more=', solids_form = "linear"')


def test_more_solids_than_measured_are_said():
    result = rheo.run_case(case('solids_fraction = "53 wt%"'))
    assert said(result, "outside-measured-fraction") == (
        "The solids fraction is 53 %; the readings were taken between 42 % and 50 %."
    )
    # Parameters stand at the nearest measured content, the line at the product's.
    assert result.chosen.parameters["consistency"].value == pytest.approx(
        float(stress(0.50, 1.0)), rel=1e-6
    )
    assert result.model.stress(10.0) == pytest.approx(float(stress(0.53, 10.0)), rel=1e-6)


def test_without_a_word_on_the_product_the_thickest_is_taken_and_said():
    result = rheo.run_case(case(""))
    assert result.product.solids_fraction == pytest.approx(0.50)
    assert said(result, "solids-not-given") == (
        "The readings hold 42 % to 50 % by mass of solids and the case does not say how much is "
        "pumped; the most, 50 % by mass, is taken."
    )


def test_solids_that_the_readings_do_not_know_are_said():
    bare = rows(0.46).replace(",46,", ",,")
    result = rheo.run_case(case(table=bare, heading="Lot"))
    assert "the readings do not say how much they held" in said(result, "solids-not-in-model")


def test_one_content_that_is_not_the_products_is_said():
    result = rheo.run_case(case(table=rows(0.50)))
    assert said(result, "solids-of-readings") == (
        "The readings were taken at 50 % by mass of solids and the product is pumped at "
        "45 % by mass."
    )
    assert "solids-of-readings" not in codes(rheo.run_case(case(table=rows(0.45))))


def test_several_temperatures_and_several_contents_are_refused():
    both = case(table=rows(0.42, 0.50, warm=("20", "40")))
    with pytest.raises(InputError) as refused:
        rheo.run_case(both)
    assert str(refused.value) == (
        "readings text: the readings are at several temperatures (20.0 to 40.0 °C) and several "
        "solids fractions (42 % to 50 %), and one fit follows one of the two; leave readings out "
        "so that temperatures are within 2 K of each other, or all solids fractions are the same"
    )
    # What it allows is enough: the warm ones, or the thin ones, left out.
    warm = [*range(10, 19), *range(28, 37)]
    document = both.document()
    document["readings"][0]["exclude"] = warm
    result = rheo.run_case(rheo.case.storage.case_from_document(document))
    assert "solids_slope" in result.chosen.parameters
    document["readings"][0]["exclude"] = list(range(1, 19))
    result = rheo.run_case(rheo.case.storage.case_from_document(document))
    assert "activation_energy" in result.chosen.parameters


def test_mass_and_volume_are_not_mixed():
    with pytest.raises(CaseError, match="by volume, and the solids of the readings are by mass"):
        rheo.run_case(case('solids_fraction = "20 vol%"'))
    result = rheo.run_case(case('solids_fraction = "45 %"'))
    assert solids_basis(result.case, result.fitted) == "mass"


def test_sets_of_their_own_contents_are_fitted_together():
    def one(share, word="wt%"):
        table = "\n".join(
            f"{rate!r},{value!r}"
            for rate, value in zip(RATES.tolist(), stress(share).tolist(), strict=True)
        )
        return {
            "text": f"Shear rate [1/s],Shear stress [Pa]\n{table}\n",
            "solids_fraction": f"{100 * share:g} {word}",
        }

    document = case().document()
    document["readings"] = [one(0.42), one(0.50)]
    result = rheo.run_case(rheo.case.storage.case_from_document(document))
    assert result.chosen.parameters["solids_slope"].value == pytest.approx(SLOPE, rel=1e-6)
    document["readings"] = [one(0.42), one(0.50, "vol%")]
    with pytest.raises(CaseError, match="by mass in one set and by volume in another"):
        rheo.run_case(rheo.case.storage.case_from_document(document))
    document["readings"] = [one(0.42), {"text": one(0.50)["text"]}]
    result = rheo.run_case(rheo.case.storage.case_from_document(document))
    assert "known of some sets of readings only" in said(result, "solids-of-some-sets")


@pytest.mark.parametrize(
    ("product", "why"),
    [
        ('solids_fraction = "45 g/L"', "is a mass in a volume; write a share such as wt% or vol%"),
        ('solids_fraction = "much"', "is no share of solids; write it like '25 %'"),
        ("solids_fraction = 45", "found 45; it must be above 0 and at most 0.99, such as '25 %'"),
        ('solids_fraction = "-2 %"', "found '-2 %'; it must be above 0"),
        ('solids = "45 %"', "it is the table of coarse particles, .* write solids_fraction"),
    ],
)
def test_what_is_no_share_of_solids_is_refused(product, why):
    with pytest.raises(InputError, match=why):
        case(product)


def test_a_case_file_keeps_what_was_written():
    first = case()
    again = case_from_text(case_text(first))
    assert again == first
    assert again.product.solids_fraction.written == "45 wt%"


def test_solids_stated_for_a_set_travel_with_the_case(tmp_path):
    from openpyxl import Workbook

    book = Workbook()
    sheet = book.active
    sheet.append(["solids_fraction: 46 wt%"])
    sheet.append(["Shear rate [1/s]", "Shear stress [Pa]"])
    for pair in zip(RATES.tolist(), stress(0.46).tolist(), strict=True):
        sheet.append(list(pair))
    book.save(tmp_path / "lot.xlsx")
    document = case().document()
    document["readings"] = [{"file": "lot.xlsx"}]
    there = rheo.case.storage.case_from_document(document).in_folder(tmp_path)
    (readings,) = rheo.run_case(embedded(there)).readings
    assert readings.solids_fraction == pytest.approx(np.full(RATES.size, 0.46))
    assert readings.solids_basis == "mass"


def test_note_and_figure_show_each_content_and_the_products():
    result = rheo.run_case(case())
    names = [
        mark.name
        for mark in flow_curve_picture(result).panels[0].marks
        if getattr(mark, "name", "").startswith("Power law")
    ]
    assert names == [
        *(f"Power law, {share} % solids" for share in ("42.0", "46.0", "50.0")),
        "Power law, 45 % solids, as pumped",
    ]
    points = case_points(result)
    assert points.stress == pytest.approx(np.concatenate([stress(s) for s in (0.42, 0.46, 0.50)]))
    note = repr(design_note(result))
    assert "('Solids', '45 % by mass')" in note
    assert "Solids [% by mass]" in note
    assert "Flow curve over solids fraction" in note


def test_what_if_solids_follow_the_fitted_law():
    result = rheo.run_case(case())
    other = what_if(result, WhatIf(solids=SolidsChange(None, 0.49, density=2650.0)))
    assert other.product.solids_fraction.written == "49 % by mass"
    assert other.product.stress_factor is None
    # By hand: 1 kg at 1400 kg/m3 with 45 % of 2650 kg/m3; volumes add up.
    liquid = (1 / 1400.0 - 0.45 / 2650.0) / 0.55
    assert float(other.product.density) == pytest.approx(
        1 / (0.49 / 2650.0 + 0.51 * liquid), rel=1e-5
    )
    found = rheo.run_case(other)
    assert found.model.stress(RATES) == pytest.approx(stress(0.49), rel=1e-6)
    assert "product-not-as-measured" not in codes(found)
    thick = rheo.run_case(what_if(result, WhatIf(solids=SolidsChange(None, 0.55))))
    assert "outside-measured-fraction" in codes(thick)
    with pytest.raises(InputError, match=r"solids: the solids fraction is 1\.2; it must"):
        what_if(result, WhatIf(solids=SolidsChange(None, 1.2)))
    with pytest.raises(InputError, match="take more room than the whole product"):
        what_if(result, WhatIf(solids=SolidsChange(None, 0.49, density=500.0)))


def test_what_if_moves_a_static_yield_stress_with_the_curve():
    result = rheo.run_case(case('solids_fraction = "45 wt%", static_yield_stress = "40 Pa"'))
    other = what_if(result, WhatIf(solids=SolidsChange(None, 0.49)))
    # A power law yields at nothing: the least measured stress stands for it.
    assert float(other.product.static_yield_stress) == pytest.approx(
        40.0 * np.exp(SLOPE * 0.04), rel=1e-5
    )


def test_what_if_without_a_fitted_law_asks_what_the_readings_held():
    result = rheo.run_case(case(table=rows(0.45)))
    with pytest.raises(InputError, match="give the solids of the readings too"):
        what_if(result, WhatIf(solids=SolidsChange(None, 0.3)))


def test_every_model_is_compared_at_the_solids_of_the_product():
    result = rheo.run_case(case())
    found = {one.fit.key: one for one in pressure_by_model(result, least_weight=0.0)}
    used = found[result.chosen.key]
    assert used.friction_pressure == pytest.approx(float(result.line.friction_pressure), rel=1e-12)
    assert used.share == 0.0
    named = rheo.run_case(case(more=', model = "bingham"'))
    assert found["bingham"].friction_pressure == pytest.approx(
        float(named.line.friction_pressure), rel=1e-9
    )
