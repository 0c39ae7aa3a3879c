"""The command line, run in this process."""

import sys
from typing import NamedTuple

import pytest

from rheo.cli import main


class Ended(NamedTuple):
    status: int
    out: str
    err: str


@pytest.fixture
def command(capsys, monkeypatch):
    """Run ``rheo`` with arguments; return exit status and what was written."""
    monkeypatch.setenv("COLUMNS", "100")
    monkeypatch.delenv("FORCE_COLOR", raising=False)

    def run(*arguments: object) -> Ended:
        monkeypatch.setattr(sys, "argv", ["rheo", *map(str, arguments)])
        capsys.readouterr()
        with pytest.raises(SystemExit) as ended:
            main()
        written = capsys.readouterr()
        return Ended(int(ended.value.code or 0), written.out, written.err)

    return run


READINGS = """\
Shear rate [1/s],Shear stress [Pa]
1,7.0
2,8.66
5,12.0
10,15.5
20,20.3
50,29.6
100,40.0
200,54.7
"""

CASE = """\
schema = 1
title = "Made-up product to a made-up tank"

[product]
name = "made-up product"
density = "1100 kg/m3"
temperature = "20 °C"
vapour_pressure = "2.3 kPa"
heat_capacity = "3.5 kJ/kg/K"

[[readings]]
file = "readings.csv"

[duty]
flow = "5 m3/h"

[line]
suction = [{ part = "vessel", level = "1 m" }, { part = "entrance" }]
discharge = [
    { part = "pipe", length = "30 m", size = "ISO 2037 51", rise = "2 m", name = "riser" },
    { part = "fitting", kind = "bend", count = 4, loss_coefficient = 0.9 },
    { part = "vessel", level = "1 m" },
]

[pump]
efficiency = "50 %"
rated_pressure = "8 bar"

[doubt]
draws = 200
"""


@pytest.fixture
def folder(tmp_path):
    """A folder with a case and its readings."""
    (tmp_path / "readings.csv").write_text(READINGS, "utf-8")
    (tmp_path / "case.toml").write_text(CASE, "utf-8")
    return tmp_path
