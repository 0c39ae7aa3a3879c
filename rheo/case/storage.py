"""Case files: from TOML to a `Case` and back."""

from __future__ import annotations

import os
import re
import tomllib
from pathlib import Path
from typing import Any

import tomli_w
from pydantic import ValidationError

from rheo.case.complaints import complaint, path_in_file, place_of
from rheo.case.paths import inside_folder
from rheo.case.schema import Case
from rheo.case.upgrade import upgraded
from rheo.errors import CaseError

LARGEST_FILE = 20_000_000

_POSITION = re.compile(r" \(at (?:line (\d+), column (\d+)|(end of document))\)$")
# The parser shows a table as Python does: ('line', 'pipe').
_PATH = re.compile(r"\((?:'[^']*',? ?)+\)")
_NAMES = re.compile(r"'([^']*)'")
# What the parser says where its own words would puzzle a reader.
_PLAIN_WORDS = {
    "Cannot overwrite a value": "a key is given twice",
    "Invalid statement": "this is neither a key, a table nor a comment",
    "Illegal character '\\n'": "a text has no closing quote on its line",
    "Invalid value": "a value is missing or is not valid; texts such as '50 mm' stand in quotes",
}


def load_case(path: str | os.PathLike[str], allow_outside: bool = False) -> Case:
    """Read a case file.

    Parameters
    ----------
    path : str or path
        A TOML file of the current or an older schema.
    allow_outside : bool
        Whether files that the case names may lie outside its folder.

    Returns
    -------
    Case
        With the folder from which its relative paths are resolved.

    Raises
    ------
    CaseError
        If the file cannot be read or understood; the place names file, line and key.
    """
    path = Path(path)
    text = _read(path)
    return case_from_text(text, path.name, path.parent, allow_outside)


def case_from_text(
    text: str, source: str = "case", folder: Path | None = None, allow_outside: bool = False
) -> Case:
    """Read a case from TOML text.

    Parameters
    ----------
    text : str
        The TOML document.
    source : str
        What messages call it.
    folder : Path, optional
        Where the relative paths of the case start; None when it has no files.
    allow_outside : bool
        Whether files that the case names may lie outside that folder.

    Returns
    -------
    Case
        The case, checked.

    Raises
    ------
    CaseError
        If it cannot be understood.
    """
    try:
        document = tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise _not_toml(error, source) from None
    except (RecursionError, ValueError):
        raise CaseError(
            "it is not valid TOML: nested too deep, or a number with too many digits", source
        ) from None
    try:
        current = upgraded(document)
    except CaseError as error:
        raise CaseError(error.sentence, place_of(("schema",), text, source)) from None
    case = case_from_document(current, text if current is document else "", source)
    case = case.in_folder(folder, allow_outside)
    for number, block in enumerate(case.readings):
        # A case without a folder is asked for its files when they are wanted.
        if block.file is not None and folder is not None:
            try:
                inside_folder(block.file, folder, allow_outside)
            except CaseError as error:
                path = path_in_file(("readings", number, "file"), current)
                where = place_of(path, text, source)
                raise CaseError(error.sentence, where) from None
    return case


def case_from_document(document: dict[str, Any], text: str = "", source: str = "case") -> Case:
    """Check plain data, as a TOML parser gives it, and return it as a case.

    Parameters
    ----------
    document : dict
        Data of the current schema.
    text, source : str
        TOML text and name of the file, for the place of an error [-].

    Returns
    -------
    Case
        Without a folder.

    Raises
    ------
    CaseError
        For the first thing that is wrong.
    """
    keys = {key: value for key, value in document.items() if key != "schema"}
    try:
        return Case.model_validate(keys)
    except ValidationError as error:
        raise complaint(error, document, text, source) from None


def case_text(case: Case) -> str:
    """Return a case as TOML text: what the user gave, in the order of the schema."""
    document = case.document()
    return tomli_w.dumps(document, multiline_strings=True)


def save_case(case: Case, path: str | os.PathLike[str], embed: bool = False) -> Path:
    """Write a case file; loading it gives the same case.

    Parameters
    ----------
    case : Case
        The case.
    path : str or path
        The file to write; it is replaced as a whole or not at all.
    embed : bool
        Whether to put the readings into the case, so that one file travels alone.

    Returns
    -------
    Path
        The file written.

    Raises
    ------
    CaseError
        If it cannot be written, or its files could not be found from the new folder.
    """
    target = Path(path)
    if embed:
        from rheo.case.embed import embedded

        case = embedded(case)
    elif case.folder is None or case.folder.resolve() != target.parent.resolve():
        case = _moved(case, target.parent)
    _write(target, case_text(case).encode("utf-8"))
    return target


def _read(path: Path) -> str:
    try:
        with path.open("rb") as file:
            data = file.read(LARGEST_FILE + 1)
    except FileNotFoundError:
        raise CaseError("there is no such file; give the path of a case file", str(path)) from None
    except IsADirectoryError:
        raise CaseError("it is a folder; give the path of a case file", str(path)) from None
    except (OSError, ValueError) as error:
        raise CaseError(f"it cannot be read: {_reason(error)}", str(path)) from None
    if len(data) > LARGEST_FILE:
        raise CaseError(
            f"it is larger than {LARGEST_FILE // 1_000_000} MB; that is no case file", path.name
        )
    if not data.strip():
        raise CaseError("the file is empty; a case begins with 'schema = 1'", path.name)
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = data[: error.start].count(b"\n") + 1
        raise CaseError(
            "it is not UTF-8 text; a case is a TOML file in UTF-8", f"{path.name}, line {line}"
        ) from None


def _reason(error: Exception) -> str:
    text = getattr(error, "strerror", None) or str(error)
    return text[:1].lower() + text[1:]


def _not_toml(error: tomllib.TOMLDecodeError, source: str) -> CaseError:
    message = str(error)
    found = _POSITION.search(message)
    place, plain = source, message
    if found:
        plain = message[: found.start()]
        where = "at its end" if found[3] else f"line {found[1]}, column {found[2]}"
        place = f"{source}, {where}"
    plain = _PLAIN_WORDS.get(plain, plain[:1].lower() + plain[1:])
    plain = _PATH.sub(lambda match: f"'{'.'.join(_NAMES.findall(match[0]))}'", plain)
    return CaseError(f"it is not valid TOML: {plain}", place)


def _moved(case: Case, folder: Path) -> Case:
    """Return the case with its file names as they are from another folder."""
    if case.folder is None:
        return case.in_folder(folder)
    base = folder.resolve()
    blocks = []
    for number, block in enumerate(case.readings):
        if block.file is not None:
            file = inside_folder(block.file, case.folder, case.allow_outside)
            if not file.is_relative_to(base):
                raise CaseError(
                    f"'{block.file[:60]}' lies outside the folder that the case is saved to; "
                    "save with the readings embedded, or beside its files",
                    place_of(("readings", number, "file")),
                )
            block = block.model_copy(update={"file": file.relative_to(base).as_posix()})
        blocks.append(block)
    return case.model_copy(update={"readings": tuple(blocks)}).in_folder(folder)


def _write(path: Path, data: bytes) -> None:
    part = path.with_name(f".{path.name}.{os.getpid()}.part")
    try:
        with part.open("xb") as file:
            file.write(data)
        part.replace(path)
    except (OSError, ValueError) as error:
        part.unlink(missing_ok=True)
        raise CaseError(f"it cannot be written: {_reason(error)}", str(path)) from None
