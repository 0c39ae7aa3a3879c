"""The journal beside a table: what is done, so that a batch that was stopped goes on from there."""

from __future__ import annotations

import hashlib
import json
import os
from collections.abc import Iterable
from pathlib import Path
from types import TracebackType
from typing import Self

from rheo.batches.row import Row


class Journal:
    """Rows on disk, one a line, written as they come.

    Parameters
    ----------
    path : Path
        Where it stands.
    stamp : str
        What the rows depend on besides their files: rows under another stamp are not taken up.
    """

    def __init__(self, path: Path, stamp: str) -> None:
        self._path = path
        self._head = json.dumps({"stamp": hashlib.sha256(stamp.encode("utf-8")).hexdigest()})
        self.rows = self._read()
        # A line that was being written when the batch was stopped goes.
        part = path.with_name(path.name + ".part")
        with part.open("w", encoding="utf-8", newline="\n") as file:
            file.write(self._head + "\n")
            file.writelines(_line(row) for row in self.rows.values())
        os.replace(part, path)
        self._file = path.open("a", encoding="utf-8", newline="\n")

    def _read(self) -> dict[str, Row]:
        try:
            lines = self._path.read_text("utf-8").split("\n")
        except (FileNotFoundError, UnicodeDecodeError):
            return {}
        if lines[0] != self._head:
            return {}
        found = {}
        for line in lines[1:]:
            try:
                row = Row.from_dict(json.loads(line))
            except (ValueError, TypeError, KeyError):
                continue
            found[row.file] = row
        return found

    def add(self, rows: Iterable[Row]) -> None:
        """Write rows; they are on disk when this returns."""
        self._file.writelines(_line(row) for row in rows)
        self._file.flush()
        os.fsync(self._file.fileno())

    def __enter__(self) -> Self:
        return self

    def __exit__(
        self,
        kind: type[BaseException] | None,
        error: BaseException | None,
        trace: TracebackType | None,
    ) -> None:
        self._file.close()


def _line(row: Row) -> str:
    return json.dumps(row.as_dict(), ensure_ascii=False, allow_nan=False) + "\n"


def journal_path(table: Path) -> Path:
    """Return where the journal of a table stands."""
    return table.with_name(table.name + ".journal")


def rows_in(path: Path) -> int:
    """Return how many rows stand in a journal in full."""
    return max(0, path.read_bytes().count(b"\n") - 1)
