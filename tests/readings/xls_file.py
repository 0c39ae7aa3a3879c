"""Writes the smallest XLS file that holds a table, for tests only."""

from __future__ import annotations

import struct
from collections.abc import Sequence

_SECTOR = 512
_FREE, _END, _FAT = 0xFFFFFFFF, 0xFFFFFFFE, 0xFFFFFFFD


def xls_bytes(rows: Sequence[Sequence[str | float]], protected: bool = False) -> bytes:
    """Return a BIFF8 workbook of one sheet named Sheet1 in a compound file."""
    return _compound_file(_workbook(rows, protected))


def _record(kind: int, data: bytes) -> bytes:
    return struct.pack("<HH", kind, len(data)) + data


def _bof(kind: int) -> bytes:
    return _record(0x0809, struct.pack("<HHHHII", 0x0600, kind, 0x0DBB, 0x07CC, 0, 6))


def _workbook(rows: Sequence[Sequence[str | float]], protected: bool) -> bytes:
    name = b"Sheet1"
    head = _bof(0x0005)
    if protected:
        head += _record(0x002F, struct.pack("<HHH", 1, 1, 1) + bytes(48))
    tail = _record(0x000A, b"")
    length = len(head) + 4 + 8 + len(name) + len(tail)
    sheet_at = _record(0x0085, struct.pack("<IHBB", length, 0, len(name), 0) + name)
    cells = b""
    for r, row in enumerate(rows):
        for c, cell in enumerate(row):
            if isinstance(cell, str):
                text = cell.encode("utf-16-le")
                cells += _record(0x0204, struct.pack("<HHHHB", r, c, 0, len(cell), 1) + text)
            else:
                cells += _record(0x0203, struct.pack("<HHHd", r, c, 0, float(cell)))
    return head + sheet_at + tail + _bof(0x0010) + cells + _record(0x000A, b"")


def _compound_file(stream: bytes) -> bytes:
    stream = stream.ljust(max(4096, -(-len(stream) // _SECTOR) * _SECTOR), b"\0")
    sectors = len(stream) // _SECTOR
    fat = [_FAT, _END, *range(3, sectors + 2), _END]
    fat += [_FREE] * (_SECTOR // 4 - len(fat))
    header = bytes.fromhex("d0cf11e0a1b11ae1") + bytes(16)
    header += struct.pack("<HHHHH6x", 0x3E, 3, 0xFFFE, 9, 6)
    header += struct.pack("<IIIIIIIII", 0, 1, 1, 0, 4096, _END, 0, _END, 0)
    header += struct.pack("<109I", 0, *[_FREE] * 108)
    entries = _entry("Root Entry", 5, 1, _END, 0) + _entry("Workbook", 2, _FREE, 2, len(stream))
    entries += _entry("", 0, _FREE, 0, 0) * 2
    return header + struct.pack("<128I", *fat) + entries + stream


def _entry(name: str, kind: int, child: int, start: int, size: int) -> bytes:
    text = (name + "\0").encode("utf-16-le") if name else b""
    head = text.ljust(64, b"\0") + struct.pack("<HBB", len(text), kind, 1)
    return (
        head
        + struct.pack("<III", _FREE, _FREE, child)
        + bytes(36)
        + struct.pack("<IQ", start, size)
    )
