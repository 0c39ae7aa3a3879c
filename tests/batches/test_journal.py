"""A batch that was stopped goes on: what is taken up, what is fitted again."""

import json
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path

import pytest
from lot_files import write_lot

import rheo
import rheo.batches.run
from rheo.batches.row import Row


@pytest.fixture(autouse=True)
def two_together(monkeypatch):
    monkeypatch.setattr(rheo.batches.run, "TOGETHER", 2)


class Counting(ThreadPoolExecutor):
    """An executor that counts what it is given."""

    def __init__(self):
        super().__init__(1)
        self.files = []

    def submit(self, function, job):
        self.files += [Path(file).name for file in job.files]
        return super().submit(function, job)


def run(folder, journal, **more):
    with Counting() as executor:
        result = rheo.batch(sorted(folder.iterdir()), executor=executor, journal=journal, **more)
    return result, executor.files


def stopped_after(count):
    def progress(done, _total):
        if done >= count:
            raise KeyboardInterrupt

    return progress


def test_a_stopped_batch_goes_on(lots, tmp_path):
    whole, _ = run(lots, None)
    journal = tmp_path / "fits.csv.journal"
    with pytest.raises(KeyboardInterrupt):
        run(lots, journal, progress=stopped_after(4))
    result, fitted = run(lots, journal)
    assert result.taken_up >= 4 - 1
    assert len(fitted) <= 4
    assert result.rows == whole.rows


def test_a_finished_batch_fits_nothing_again(lots, tmp_path):
    journal = tmp_path / "journal"
    first, _ = run(lots, journal)
    second, fitted = run(lots, journal)
    assert fitted == []
    assert second.rows == first.rows
    assert second.taken_up == len(first.rows)


def test_a_changed_file_is_fitted_again(lots, tmp_path):
    journal = tmp_path / "journal"
    first, _ = run(lots, journal)
    write_lot(lots / "lot2.csv", 1.5, seed=2)
    second, fitted = run(lots, journal)
    assert "lot2.csv" in fitted
    assert len(fitted) == 2
    at = [Path(row.file).name for row in first.rows].index("lot2.csv")
    ratio = second.rows[at].values["yield_stress"] / first.rows[at].values["yield_stress"]
    assert ratio == pytest.approx(1.5, rel=0.01)
    assert [row for i, row in enumerate(first.rows) if i != at] == [
        row for i, row in enumerate(second.rows) if i != at
    ]


def test_other_settings_or_another_reference_start_anew(lots, tmp_path):
    journal = tmp_path / "journal"
    run(lots, journal)
    _, fitted = run(lots, journal, settings=rheo.BatchSettings(models=("bingham",)))
    assert len(fitted) == 8
    _, fitted = run(lots, journal, reference=lots / "lot1.csv")
    assert len(fitted) == 8


def test_a_torn_line_is_fitted_again(lots, tmp_path):
    journal = tmp_path / "journal"
    first, _ = run(lots, journal)
    lines = journal.read_text("utf-8").splitlines()
    journal.write_text("\n".join([*lines[:-1], lines[-1][:50]]), "utf-8")
    second, fitted = run(lots, journal)
    assert len(fitted) == 2
    assert second.rows == first.rows


@pytest.mark.parametrize("content", [b"", b"{}", b"\xff\xfe\x00", b'{"stamp": 1}\n[]\n3\n'])
def test_a_file_that_is_no_journal_is_no_journal(lots, tmp_path, content):
    journal = tmp_path / "journal"
    journal.write_bytes(content)
    result, fitted = run(lots, journal)
    assert len(fitted) == len(result.rows) == 8


def test_a_journal_that_cannot_be_written_is_refused(lots, tmp_path):
    with pytest.raises(rheo.InputError, match="the journal cannot be written"):
        run(lots, tmp_path / "no folder" / "journal")


def test_a_row_comes_back_from_json_as_it_was(lots):
    for row in rheo.batch(sorted(lots.iterdir()), reference=lots / "lot0.csv", workers=1).rows:
        assert Row.from_dict(json.loads(json.dumps(row.as_dict()))) == row
