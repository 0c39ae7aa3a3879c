"""Sizes that can be bought."""

from __future__ import annotations

import csv
from importlib import resources

import pytest

import rheo
from rheo.line import STANDARDS, PipeSize, catalogue, pipe_size


@pytest.mark.parametrize(
    ("text", "inside"),
    [
        # ISO 2037: 51 x 1.2; ASME BPE: 2 in is 50.8 x 1.65; DIN 11866 row A: DN 50 is 53 x 1.5
        # (dimensions from the tube table in the package).
        ("ISO 2037 51", 0.0486),
        ("iso 2037 51", 0.0486),
        ("ASME BPE 2 in", 0.0475),
        ("DIN 11866 A DN 50", 0.050),
        # ASME B36.10M: NPS 2 schedule 40 is 60.3 x 3.91 mm (from memory).
        ("DN 50 schedule 40", 0.06033 - 2 * 0.00391),
        ("2 in schedule 40", 0.06033 - 2 * 0.00391),
        ("ASME B36.10M DN 50 (2 in) schedule 40", 0.06033 - 2 * 0.00391),
        # ASME B36.19M: NPS 4 schedule 10S is 114.3 x 3.05 mm (from memory).
        ("DN 100 schedule 10S", 0.1143 - 2 * 0.00305),
        ("4 in sch. 10S", 0.1143 - 2 * 0.00305),
    ],
)
def test_sizes_are_found_by_what_people_call_them(text: str, inside: float) -> None:
    # The steel tables round to 0.05 mm.
    assert pipe_size(text).inside_diameter == pytest.approx(inside, abs=6e-5)


def test_an_unknown_size_gives_the_nearest() -> None:
    with pytest.raises(rheo.InputError, match=r"unknown pipe size 'ISO 2037 52' \(nearest: 'ISO"):
        pipe_size("ISO 2037 52")


def test_every_name_finds_its_own_size() -> None:
    for size in catalogue():
        assert pipe_size(size.name) == size


def test_dimensions_belong_together() -> None:
    for size in catalogue():
        assert size.standard in STANDARDS
        by_wall = size.outside_diameter - 2 * size.wall
        # `fluids` rounds outside diameter, inside diameter and wall each by itself.
        assert size.inside_diameter == pytest.approx(by_wall, abs=2e-3, rel=5e-3), size.name


def test_sizes_come_in_order_and_by_standard() -> None:
    inside = [size.inside_diameter for size in catalogue()]
    assert inside == sorted(inside)
    assert {size.standard for size in catalogue("ISO 2037")} == {"ISO 2037"}
    assert all(size.label.endswith("schedule 5") for size in catalogue(schedule="5"))
    assert {size.standard for size in catalogue()} == set(STANDARDS)


def test_every_row_of_the_tube_table_is_there() -> None:
    text = resources.files("rheo.line").joinpath("data", "hygienic_tubes.csv").read_text("utf-8")
    rows = list(csv.DictReader(text.splitlines()))
    assert len(rows) > 30
    names = {size.name for size in catalogue()}
    assert {f"{row['standard']} {row['size']}" for row in rows} <= names


@pytest.mark.parametrize(
    ("arguments", "sentence"),
    [
        ({"standard": "ISO 9999"}, "unknown standard 'ISO 9999'; there are ASME B36.10M"),
        ({"schedule": "41"}, "unknown schedule '41'; there are 5, 10, 20"),
    ],
)
def test_unknown_standards_are_refused(arguments: dict[str, str], sentence: str) -> None:
    with pytest.raises(rheo.InputError, match=sentence):
        catalogue(**arguments)


def test_the_users_own_size() -> None:
    own = PipeSize("own", "hose 38", 0.038)
    assert own.name == "hose 38"
    with pytest.raises(rheo.InputError, match="size hose: inside_diameter"):
        PipeSize("own", "hose", 0.0)
