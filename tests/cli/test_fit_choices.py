"""`rheo fit --compare`: what weighting and branch do to a fit."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from typer.testing import CliRunner

from rheo.cli.app import app

SAUCE = str(Path(__file__).parents[2] / "sample_data" / "sauce_readings.csv")
GUM = str(Path(__file__).parents[2] / "sample_data" / "gum_readings.xlsx")


def run(*arguments):
    result = CliRunner().invoke(app, ["fit", *arguments])
    assert result.exit_code == 0, result.output
    return result.stdout


def test_weightings_and_sweeps_are_told_in_words():
    text = run(SAUCE, "--compare")
    for words in ("Weightings", "absolute", "Sweeps", "The way down lies", "For start-up take"):
        assert words in text


def test_weightings_and_sweeps_are_data():
    found = json.loads(run(SAUCE, "--compare", "--json"))
    assert found["weightings"]["relative"] == {"best": "herschel-bulkley", "largest_change": 0.0}
    assert 0 < found["weightings"]["absolute"]["largest_change"] < 0.1
    # The sample's rested product adds up to 4 % of stress, which the sweep up breaks down.
    assert 0.0 < found["sweeps"]["loop_share"] < 0.04
    assert found["sweeps"]["static_yield_stress"] == pytest.approx(11.5, rel=0.1)


def test_readings_of_one_branch_have_no_sweeps():
    found = json.loads(run(GUM, "--compare", "--json", "-m", "carreau"))
    assert set(found["weightings"]) == {"relative", "absolute"}
    assert "sweeps" not in found
