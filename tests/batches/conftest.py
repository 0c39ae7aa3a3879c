"""A folder of lots of one made-up product, two of them bad."""

import pytest
from lot_files import write_lot


@pytest.fixture
def lots(tmp_path):
    """Six good lots, the last a tenth thicker, and two bad files."""
    folder = tmp_path / "lots"
    folder.mkdir()
    for number in range(6):
        write_lot(folder / f"lot{number}.csv", 1.1 if number == 5 else 1.0, seed=number)
    (folder / "bad.csv").write_text("made-up words\n", "utf-8")
    (folder / "worse.xlsx").write_bytes(b"PK\x03\x04 no workbook")
    return folder
