"""`rheo fit` and `rheo run` with readings at several solids contents."""

import json

import numpy as np
import pytest

RATES = np.geomspace(1.0, 300.0, 8)


@pytest.fixture
def slurry(tmp_path):
    rows = [
        f"{rate:.6g},{6.0 * np.exp(10.0 * (share - 0.30)) * rate**0.4:.6g},{100 * share:g}"
        for share in (0.25, 0.30, 0.35)
        for rate in RATES
    ]
    path = tmp_path / "slurry.csv"
    path.write_text("\n".join(["Shear rate [1/s],Shear stress [Pa],Solids [vol%]", *rows]), "utf-8")
    return path


def test_fit_says_over_which_solids_and_at_which(command, slurry):
    ended = command("fit", slurry, "-m", "power-law", "--solids", "32 %")
    assert (ended.status, ended.err) == (0, "")
    words = " ".join(ended.out.split())
    assert "solids 25 to 35 % by volume" in words
    assert "One fit over every solids fraction; values at 32.0 %" in words
    printed = json.loads(command("fit", slurry, "-m", "power-law", "--solids", "32%", "--json").out)
    assert printed["state"]["reference"] == pytest.approx(0.32)
    values = printed["ranking"][0]["parameters"]
    assert values["solids_slope"]["value"] == pytest.approx(10.0, rel=1e-4)
    assert values["consistency"]["value"] == pytest.approx(6.0 * np.exp(0.2), rel=1e-4)


@pytest.mark.parametrize(
    ("option", "why"),
    [
        ("much", "--solids: 'much' is no share of solids; write it like '25 %'"),
        ("32 wt%", "--solids: '32 wt%' is by mass, and the solids of the readings are by volume"),
        ("320 %", "--solids: found '320 %'; it must be above 0 and below 100 %"),
    ],
)
def test_a_bad_share_is_one_sentence(command, slurry, option, why):
    ended = command("fit", slurry, "--solids", option)
    assert (ended.status, ended.out) == (1, "")
    assert why in ended.err
    assert len(ended.err.splitlines()) == 1


def test_run_says_that_the_product_is_outside_the_measured_solids(command, slurry):
    case = slurry.with_name("case.toml")
    case.write_text(
        """
schema = 1
product = { name = "slurry", density = "1400 kg/m3", solids_fraction = "38 vol%" }
duty = { flow = "10 m3/h" }
fit = { models = ["power-law", "bingham"] }
doubt = { draws = 100 }
[[readings]]
file = "slurry.csv"
[line]
discharge = [{ part = "pipe", length = "80 m", inside_diameter = "100 mm" }, { part = "vessel" }]
""",
        "utf-8",
    )
    ended = command("run", case)
    assert (ended.status, ended.err) == (0, "")
    words = " ".join(ended.out.split())
    assert "the solids are outside those of the readings" in words
    assert "solids of the product 38 %" in words
    assert "The solids fraction is 38 %; the readings were taken between 25 % and 35 %." in words
