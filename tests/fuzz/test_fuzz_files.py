"""Sample files with damage, all the way from bytes to a row of a batch."""

from __future__ import annotations

import math

import numpy as np
import pytest
from damage import SAMPLES, bytes_changed, number_changed

import rheo
from rheo.batches.job import Job, Settings, run_job

# Cheap and different: a line, a power, a yield stress.
FEW = Settings(models=("newtonian", "power-law", "herschel-bulkley"))
FILES = sorted(SAMPLES.glob("*_readings.*"))


def sound(row) -> None:
    """A row with finite numbers and curves that rise, or a reason in plain words."""
    if not row.fitted:
        assert row.reason.strip()
        assert "\n" not in row.reason
        assert "could not be worked out" not in row.reason, row.reason
        return
    assert row.points >= 3
    assert all(value is not None and math.isfinite(value) for value in row.values.values())
    keys = rheo.model_record(row.best).parameter_keys
    model = rheo.model(row.best, **{key: row.values[key] for key in keys})
    stress = model.stress(np.geomspace(row.lowest_rate, row.highest_rate, 5))
    assert np.isfinite(stress).all()
    assert (np.diff(stress) >= 0).all()


@pytest.mark.parametrize("path", FILES, ids=lambda path: path.name)
@pytest.mark.parametrize("kind", ["bytes", "numbers"])
def test_damaged_samples(path, kind, tmp_path):
    random = np.random.default_rng([len(path.name), len(kind)])
    workbook = path.suffix == ".xlsx"
    if workbook and kind == "numbers":
        data = [path.read_bytes()]
    elif kind == "bytes":
        data = [bytes_changed(path.read_bytes(), random) for _ in range(15 if workbook else 60)]
    else:
        text = path.read_text("utf-8")
        data = [
            number_changed(text, random, int(random.integers(1, 4))).encode() for _ in range(60)
        ]
    files = []
    for number, content in enumerate(data):
        files.append(tmp_path / f"{number}{path.suffix}")
        files[-1].write_bytes(content)
    for row in run_job(Job(tuple(map(str, files)), FEW, None)):
        sound(row)


def test_flow_curves_of_extreme_numbers(tmp_path):
    random = np.random.default_rng(4)
    files = []
    for number in range(120):
        count = int(random.integers(1, 12))
        rate = 10.0 ** random.uniform(-12, 12, count)
        stress = 10.0 ** random.uniform(-12, 12) * rate ** random.uniform(-1, 3)
        if number % 3 == 0:
            stress = 10.0 ** random.uniform(-12, 12, count)
        lines = [f"{a:.6g},{b:.6g}" for a, b in zip(rate, stress, strict=True)]
        files.append(tmp_path / f"{number}.csv")
        files[-1].write_text("\n".join(["Shear rate [1/s],Shear stress [Pa]", *lines]), "utf-8")
    for row in run_job(Job(tuple(map(str, files)), Settings(), None)):
        sound(row)
