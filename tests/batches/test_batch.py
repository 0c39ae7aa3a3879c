"""A batch: rows, bad files, drift, any executor, the number of workers, lost processes."""

import multiprocessing
import os
import signal
import subprocess
import sys
import threading
import time
from concurrent.futures import Future, ThreadPoolExecutor
from pathlib import Path

import numpy as np
import pytest
from lot_files import write_lot

import rheo
import rheo.batches.run
from rheo.batches.job import Job, Settings, run_job


class InThisProcess(ThreadPoolExecutor):
    """An executor without a process of its own: quick for tests, and one that is not ours."""

    def __init__(self):
        super().__init__(1)


def paths(folder):
    return sorted(folder.iterdir())


@pytest.fixture
def here():
    with InThisProcess() as executor:
        yield executor


def test_every_file_gets_its_row_in_order(lots, here):
    result = rheo.batch(paths(lots), executor=here)
    assert [Path(row.file).name for row in result.rows] == [path.name for path in paths(lots)]
    assert len(result.fitted) == 6
    reasons = {Path(row.file).name: row.reason for row in result.failed}
    assert "no table of numbers" in reasons["bad.csv"]
    assert "workbook" in reasons["worse.xlsx"]


def test_a_row_says_what_a_fit_of_the_file_says(lots, here):
    file = lots / "lot1.csv"
    (row,) = rheo.batch([file], executor=here).rows
    readings = rheo.read_readings(file)
    fits = rheo.fit(readings)
    assert row.best == fits.best.key
    assert row.points == len(readings)
    assert row.values == pytest.approx(
        {key: one.value for key, one in fits.best.parameters.items()}, rel=1e-6
    )
    assert row.aicc[row.best] == pytest.approx(fits.best.aicc)
    assert set(row.aicc) == set(fits.keys)
    assert row.rms_relative_error == pytest.approx(fits.best.rms_relative_error)
    assert row.worst_relative_error == pytest.approx(fits.best.worst_relative_error)
    codes = {one.code for one in (*readings.cautions, *rheo.screen(readings), *fits.cautions)}
    assert {one.code for one in row.cautions} == codes


def test_a_file_that_is_gone_has_its_reason(lots, here):
    result = rheo.batch([lots / "lot0.csv", lots / "gone.csv"], executor=here)
    assert result.rows[0].fitted
    assert "No such file" in result.rows[1].reason


def test_readings_with_a_geometry_and_at_several_temperatures(tmp_path, here):
    cup = rheo.geometry(
        "concentric-cylinders", inner_radius=0.0125, outer_radius=0.01356, length=0.0375
    )
    model = rheo.model("power-law", consistency=3.0, flow_index=0.5)
    speed = np.geomspace(1.0, 60.0, 12)
    torque = cup.predict(model, speed)
    (tmp_path / "cup.csv").write_text(
        "geometry: concentric-cylinders, inner_radius 12.5 mm, outer_radius 13.56 mm, "
        "length 37.5 mm\nAngular speed [rad/s],Torque [N.m]\n"
        + "".join(f"{a:.8g},{b:.8g}\n" for a, b in zip(speed, torque, strict=True)),
        "utf-8",
    )
    rate = np.geomspace(1.0, 100.0, 10)
    lines = [
        f"{one:.6g},{factor * 3.0 * one**0.5:.6g},{at}"
        for at, factor in ((20, 1.0), (40, 0.6))
        for one in rate
    ]
    (tmp_path / "warm.csv").write_text(
        "\n".join(["Shear rate [1/s],Shear stress [Pa],Temperature [°C]", *lines]), "utf-8"
    )
    write_lot(tmp_path / "lot.csv")
    cup_row, lot, warm = rheo.batch(
        paths(tmp_path), executor=here, reference=tmp_path / "lot.csv"
    ).rows
    assert (cup_row.geometry, cup_row.best) == ("concentric-cylinders", "power-law")
    assert cup_row.values["consistency"] == pytest.approx(3.0, rel=1e-4)
    assert warm.best == "power-law"
    assert warm.drifted is None
    assert "drift-not-compared" in {one.code for one in warm.cautions}
    assert lot.drifted is False


def test_drift_is_flagged_beyond_the_doubt_only(lots, here):
    result = rheo.batch(paths(lots), reference=lots / "lot0.csv", rates=[1.0, 100.0], executor=here)
    assert result.rates == (1.0, 100.0)
    by_name = {Path(row.file).name: row for row in result.fitted}
    assert by_name["lot0.csv"].drifted is False
    assert [one.ratio for one in by_name["lot0.csv"].drift] == pytest.approx([1.0, 1.0])
    thick = by_name["lot5.csv"]
    assert thick.drifted is True
    for one in thick.drift:
        assert one.ratio == pytest.approx(1.1, abs=0.02)
        assert one.low < one.ratio < one.high
    assert "drift-from-reference" in {one.code for one in thick.cautions}


def test_the_interval_of_the_ratio_holds_the_truth_as_often_as_it_says(tmp_path, here):
    for number in range(120):
        write_lot(tmp_path / f"lot{number:03}.csv", seed=1000 + number, scatter=0.03)
    settings = Settings(models=("herschel-bulkley",))
    inside = []
    for number in range(0, 120, 40):
        result = rheo.batch(
            paths(tmp_path), settings, tmp_path / f"lot{number:03}.csv", [10.0], executor=here
        )
        inside += [
            not row.drifted for row in result.rows if not row.file.endswith(f"{number:03}.csv")
        ]
    # Pairs that share a reference are not independent, so the limits are wide.
    assert 0.85 < np.mean(inside) <= 1.0


def test_a_rate_outside_the_reference_is_refused(lots, here):
    with pytest.raises(rheo.InputError, match=r"5000 1/s lies outside .* \(0.1 to 1000 1/s\)"):
        rheo.batch(paths(lots), reference=lots / "lot0.csv", rates=[5000.0], executor=here)


def test_a_lot_at_another_temperature_says_so(tmp_path, here):
    write_lot(tmp_path / "a.csv", temperature=20)
    write_lot(tmp_path / "b.csv", temperature=25)
    rows = rheo.batch(paths(tmp_path), reference=tmp_path / "a.csv", executor=here).rows
    assert "reference-at-other-temperature" not in {one.code for one in rows[0].cautions}
    said = [one for one in rows[1].cautions if one.code == "reference-at-other-temperature"]
    assert "5 K warmer" in said[0].sentence


def test_one_worker_and_two_give_the_same(lots, monkeypatch):
    # Three files a job, so that there is something to share.
    monkeypatch.setattr(rheo.batches.run, "TOGETHER", 3)
    one = rheo.batch(paths(lots), workers=1)
    two = rheo.batch(paths(lots), workers=2)
    assert one.rows == two.rows
    assert len(one.fitted) == 6


def test_nothing_is_left_of_the_limits_on_threads(lots, monkeypatch):
    monkeypatch.setenv("OMP_NUM_THREADS", "7")
    monkeypatch.delenv("OPENBLAS_NUM_THREADS", raising=False)
    rheo.batch([lots / "lot0.csv"], workers=1)
    assert os.environ["OMP_NUM_THREADS"] == "7"
    assert "OPENBLAS_NUM_THREADS" not in os.environ


class Failing(InThisProcess):
    """An executor that loses its second task, as a cluster may."""

    count = 0

    def submit(self, function, /, *arguments):
        self.count += 1
        if self.count == 2:
            future = Future()
            future.set_exception(ConnectionError("the node has gone"))
            return future
        return super().submit(function, *arguments)


def test_a_lost_task_of_an_executor_is_a_reason(lots, monkeypatch):
    monkeypatch.setattr(rheo.batches.run, "TOGETHER", 3)
    with Failing() as executor:
        result = rheo.batch(paths(lots), executor=executor)
    lost = [row for row in result.failed if "the node has gone" in row.reason]
    assert [Path(row.file).name for row in lost] == ["lot2.csv", "lot3.csv", "lot4.csv"]


def test_a_script_that_its_own_processes_would_begin_again_is_told(lots, tmp_path):
    script = tmp_path / "lots.py"
    script.write_text(
        f"import rheo\nrheo.batch([{str(lots / 'lot0.csv')!r}], workers=1)\n", encoding="utf-8"
    )
    done = subprocess.run(
        [sys.executable, str(script)], capture_output=True, text=True, timeout=120
    )
    last = done.stderr.strip().splitlines()[-1]
    assert done.returncode == 1
    assert last.endswith("in a script, call it below if __name__ == '__main__':")


def test_what_fails_unforeseen_stops_nothing(lots, monkeypatch):
    def fail(readings):
        raise ZeroDivisionError(f"made up for {readings.source}")

    monkeypatch.setattr("rheo.batches.job.screen", fail)
    rows = run_job(Job((str(lots / "lot0.csv"),), Settings(), None))
    assert "ZeroDivisionError: made up for lot0.csv" in rows[0].reason


def test_together_or_alone_when_one_curve_breaks_the_fit(lots, monkeypatch):
    def fail(*_):
        raise np.linalg.LinAlgError("made up")

    monkeypatch.setattr("rheo.batches.job.fit_curves", fail)
    rows = run_job(Job(tuple(str(path) for path in paths(lots)), Settings(), None))
    assert sum(row.fitted for row in rows) == 6


def test_wrong_calls_are_refused(lots):
    with pytest.raises(rheo.InputError, match="no file"):
        rheo.batch([])
    with pytest.raises(rheo.InputError, match="workers is 0"):
        rheo.batch(paths(lots), workers=0)
    with pytest.raises(rheo.InputError, match="unknown weighting 'heavy'"):
        rheo.batch(paths(lots), rheo.BatchSettings(weighting="heavy"))
    with pytest.raises(rheo.InputError, match=r"gone\.csv: there is no such file"):
        rheo.batch(paths(lots), reference="gone.csv")


def test_a_killed_process_costs_no_other_file(lots):

    stop = threading.Event()

    def kill_first_child():
        while not stop.is_set():
            children = multiprocessing.active_children()
            if children:
                os.kill(children[0].pid, signal.SIGKILL)
                return
            time.sleep(0.01)

    thread = threading.Thread(target=kill_first_child)
    thread.start()
    result = rheo.batch([lots / "lot0.csv", lots / "bad.csv"], workers=1)
    stop.set()
    thread.join()
    assert result.rows[0].fitted
    assert "no table" in result.rows[1].reason
