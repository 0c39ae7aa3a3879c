"""Where the files that a case names may lie."""

from __future__ import annotations

from pathlib import Path

from rheo.errors import CaseError


def inside_folder(name: str, folder: Path | None, allow_outside: bool = False) -> Path:
    """Return the path of a file that a case names.

    Parameters
    ----------
    name : str
        As written in the case; relative to the case's folder.
    folder : Path or None
        Folder of the case file; None for a case that has none.
    allow_outside : bool
        Whether the user allows files outside that folder.

    Returns
    -------
    Path
        Links followed.

    Raises
    ------
    CaseError
        If it lies outside the folder and that is not allowed, or is no path at all.
    """
    if not name.strip() or "\0" in name:
        raise CaseError("found an empty or impossible file name; write the name of a readings file")
    if folder is None:
        raise CaseError(
            f"'{name[:60]}' is a file, and this case has no folder to find it in; "
            "embed the readings as 'text'"
        )
    base = folder.resolve()
    try:
        path = (base / name).resolve()
    except (OSError, RuntimeError):
        raise CaseError(f"'{name[:60]}' is no path that can be followed") from None
    if not allow_outside and not path.is_relative_to(base):
        raise CaseError(
            f"'{name[:60]}' lies outside the folder of the case; "
            "move it there, embed the readings as 'text', or allow it (--allow-outside)"
        )
    return path
