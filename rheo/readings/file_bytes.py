"""The content of a file, or the sentence that says why there is none."""

from __future__ import annotations

import os
import stat
from pathlib import Path
from typing import BinaryIO

from rheo.errors import ReadingsError
from rheo.readings.grid import LONGEST_SHOWN, shown

LARGEST_FILE = 20 * 2**20
_ALLOWED = "give a CSV, TXT, TSV, XLSX, XLS or ODS file"

Source = str | os.PathLike[str] | bytes | BinaryIO


def file_bytes(source: Source, name: str | None = None) -> tuple[bytes, str]:
    """Return the content of a file and what to call it.

    Parameters
    ----------
    source : path, bytes or binary file
        Where the content is.
    name : str, optional
        What to call it in messages; the path as given when absent.

    Raises
    ------
    ReadingsError
        If there is no such file, or it is a folder, empty or too large.
    """
    if isinstance(source, bytes | bytearray | memoryview):
        data, place = bytes(source), shown(name or "the file")
    elif isinstance(source, str | os.PathLike):
        given = os.fspath(source)
        place = shown(name or (given if len(given) <= LONGEST_SHOWN else Path(given).name))
        data = _from_path(Path(source), place)
    else:
        place = shown(name or getattr(source, "name", "") or "the file")
        data = source.read(LARGEST_FILE + 1)
        if isinstance(data, str):
            raise ReadingsError("it was opened as text; open it in binary", place)
    if len(data) > LARGEST_FILE:
        raise _too_large(len(data), place)
    if not data.strip(b"\0\r\n\t ;,\xef\xbb\xbf\xff\xfe"):
        raise ReadingsError(f"the file is empty; {_ALLOWED} with readings", place)
    return data, place


def _from_path(path: Path, place: str) -> bytes:
    try:
        about = path.stat()
        if stat.S_ISDIR(about.st_mode):
            raise ReadingsError(f"it is a folder; {_ALLOWED}", place)
        if not stat.S_ISREG(about.st_mode):
            raise ReadingsError(f"it is no ordinary file; {_ALLOWED}", place)
        if about.st_size > LARGEST_FILE:
            raise _too_large(about.st_size, place)
        with path.open("rb") as stream:
            return stream.read(LARGEST_FILE + 1)
    except (FileNotFoundError, NotADirectoryError):
        raise ReadingsError(f"there is no such file; {_ALLOWED}", place) from None
    except OSError as error:
        reason = error.strerror or "unknown reason"
        raise ReadingsError(f"it cannot be opened ({reason.lower()}); {_ALLOWED}", place) from None
    except ValueError as error:
        if isinstance(error, ReadingsError):
            raise
        raise ReadingsError(f"there is no such file; {_ALLOWED}", place) from None


def _too_large(size: int, place: str) -> ReadingsError:
    megabytes = f"{size / 2**20:.1f}" if size < 100 * 2**20 else f"{size / 2**20:.0f}"
    return ReadingsError(
        f"the file has {megabytes} MB; at most {LARGEST_FILE // 2**20} MB are allowed", place
    )
