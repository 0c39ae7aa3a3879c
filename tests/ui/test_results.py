"""What the page keeps of earlier runs never stands in for what the case says now."""

from __future__ import annotations

from typing import Any

import pytest

from rheo.case import Case, CaseResult, run_case
from ui import opening, results
from ui.state import changed

CHANGES: tuple[tuple[tuple[str | int, ...], Any], ...] = (
    (("product", "density"), "1180 kg/m3"),
    (("product", "temperature"), "35 °C"),
    (("product", "static_yield_stress"), "60 Pa"),
    (("readings", 0, "sweep"), "up"),
    (("readings", 0, "exclude"), [9, 17]),
    (("readings", 0, "full_scale_torque"), "20 mN.m"),
    (("fit", "weighting"), "absolute"),
    (("fit", "models"), ["bingham", "casson"]),
    (("fit", "model"), "bingham"),
    (("doubt", "draws"), 150),
    (("doubt", "seed"), 7),
    (("duty", "flow"), "6 m3/h"),
    (("line", "discharge", 0, "length"), "20 m"),
    (("pump", "rated_pressure"), "4 bar"),
    (("limits", "max_velocity"), "0.3 m/s"),
    (("title",), "Another line"),
)


def _said(result: CaseResult) -> dict[str, Any]:
    found = result.as_dict()
    return {key: found[key] for key in ("line", "fits", "chosen", "cautions", "readings", "pipes")}


@pytest.mark.parametrize(("path", "value"), CHANGES)
def test_each_change_gives_what_a_fresh_run_gives(path: tuple[str | int, ...], value: Any) -> None:
    name = opening.FIRST_SAMPLE
    files = opening.sample_files(name)
    few: Case = changed(opening.sample(name), ("doubt", "draws"), 120)
    # Fill the caches with the case before the change.
    assert results.result_of(few, files).value is not None
    after = changed(few, path, value)
    kept: CaseResult = results.result_of(after, files).value
    fresh = run_case(after.in_folder(opening.SAMPLES))
    assert _said(kept) == _said(fresh)


def test_the_same_input_is_worked_out_once() -> None:
    files = opening.sample_files("gum")
    case = opening.sample("gum")
    assert results.result_of(case, files).value is results.result_of(case, files).value


def test_another_flow_does_not_fit_again() -> None:
    files = opening.sample_files("gum")
    case = changed(opening.sample("gum"), ("doubt", "seed"), 78)
    other = changed(case, ("duty", "flow"), "2 m3/h")
    first, second = (results.result_of(one, files).value for one in (case, other))
    assert first.fits is second.fits
    assert first.line is not second.line


def test_files_are_there_for_the_call_only() -> None:
    case, files = opening.sample("sauce"), opening.sample_files("sauce")
    with results.in_folder(case, files) as placed:
        folder = placed.folder
        assert folder is not None
        assert sorted(one.name for one in folder.iterdir()) == ["sauce_readings.csv"]
    assert not folder.exists()


def test_another_title_works_nothing_out_again() -> None:
    files = opening.sample_files("gum")
    case = changed(opening.sample("gum"), ("duty", "flow"), "1.38 m3/h")
    first: CaseResult = results.result_of(case, files).value
    sizing = first.sizing
    for name in ("title", "notes", "prepared_by", "checked_by"):
        other = changed(case, (name,), "Other words")
        second: CaseResult = results.result_of(other, files).value
        assert second.case == other
        assert second.as_dict()["title"] == other.title
        assert second.line is first.line
        assert second.compare_sizes() is sizing
        assert results.result_of(other, files).value is second
    assert first.case == case


def test_another_limit_works_the_line_out_no_more_than_once() -> None:
    files = opening.sample_files("gum")
    # A flow of its own: nothing is kept of it yet.
    case = changed(opening.sample("gum"), ("duty", "flow"), "1.37 m3/h")
    first: CaseResult = results.result_of(case, files).value
    curve, sizing = first.system_curve, first.sizing
    other = changed(case, ("limits", "max_velocity"), "0.3 m/s")
    second: CaseResult = results.result_of(other, files).value
    assert second.line is first.line
    assert second.system_curve is curve
    assert second.sizing is not sizing
    fresh = run_case(other.in_folder(opening.SAMPLES))
    assert second.cautions == fresh.cautions
    assert "limit-not-kept" in {one.code for one in second.cautions}
    assert "limit-not-kept" not in {one.code for one in first.cautions}
    assert [one.passes for one in second.sizing.candidates] == [
        one.passes for one in fresh.sizing.candidates
    ]
    # Back again, and with other costs.
    assert results.result_of(case, files).value.cautions == first.cautions
    dear = changed(case, ("cost", "energy_price"), 1.0)
    third: CaseResult = results.result_of(dear, files).value
    costs = [one.annual_cost for one in third.sizing.candidates]
    assert costs != [one.annual_cost for one in sizing.candidates]


def test_a_thicker_batch_draws_no_flow_curves_again() -> None:
    files = opening.sample_files("gum")
    # Draws of its own: what is kept of other tests may be of fits that are kept no more.
    case = changed(opening.sample("gum"), ("doubt", "seed"), 77)
    thicker = changed(case, ("product", "stress_factor"), 1.2)
    first, second = (results.fitted_of(one, files).value for one in (case, thicker))
    count, seed = int(case.doubt.draws), int(case.doubt.seed)
    assert first.fits is second.fits
    assert first.fits.draws(count, seed) is second.fits.draws(count, seed)
    assert second.product is not first.product
