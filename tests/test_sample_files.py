"""The demonstration files are what their script makes, and say that they are invented."""

from __future__ import annotations

import io
import zipfile
from pathlib import Path

import pytest

from sample_data import make_samples

FOLDER = Path(__file__).resolve().parent.parent / "sample_data"
SHIPPED = sorted(path for path in FOLDER.iterdir() if path.suffix in {".csv", ".xlsx", ".toml"})


def _content(data: bytes, name: str) -> object:
    """Return bytes, or what a workbook unpacks to: packing is the machine's library's business."""
    if not name.endswith(".xlsx"):
        return data
    with zipfile.ZipFile(io.BytesIO(data)) as packed:
        return {one: packed.read(one) for one in packed.namelist()}


@pytest.mark.parametrize("name", make_samples.FILES)
def test_the_script_makes_the_file(name: str) -> None:
    made, kept = make_samples.FILES[name](), (FOLDER / name).read_bytes()
    assert _content(made, name) == _content(kept, name)


def test_the_script_writes_every_file(tmp_path: Path) -> None:
    make_samples.main(tmp_path)
    assert {path.name for path in tmp_path.iterdir()} == set(make_samples.FILES)


@pytest.mark.parametrize("path", SHIPPED, ids=lambda path: path.name)
def test_each_file_says_that_it_is_invented(path: Path) -> None:
    content = _content(path.read_bytes(), path.name)
    pieces = content.values() if isinstance(content, dict) else [content]
    assert any(b"nvented" in piece for piece in pieces)
