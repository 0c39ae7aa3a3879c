"""Cases opened from samples and from files that the user uploads."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cache
from pathlib import Path

from rheo.case import Case, case_from_document, case_from_text
from rheo.errors import CaseError
from rheo.report.text import one_line
from ui import state
from ui.results import StoredFile, safe_name

SAMPLES = Path(__file__).resolve().parent.parent / "sample_data"
FIRST_SAMPLE = "sauce"


def sample_names() -> tuple[str, ...]:
    """Return the samples that come with the program, the first one first."""
    names = sorted(path.stem for path in SAMPLES.glob("*.toml"))
    return tuple(sorted(names, key=lambda name: name != FIRST_SAMPLE))


@cache
def sample(name: str) -> Case:
    """Return a sample case."""
    path = SAMPLES / f"{name}.toml"
    return case_from_text(path.read_text(encoding="utf-8"), path.name)


@cache
def sample_files(name: str) -> dict[str, StoredFile]:
    """Return the readings files of a sample, by name."""
    named = [block.file for block in sample(name).readings if block.file]
    return {one: StoredFile((SAMPLES / one).read_bytes(), one) for one in named}


def is_sample_title(title: str) -> bool:
    """Return whether a title is that of a sample."""
    return any(sample(name).title == title for name in sample_names())


def is_untouched_sample() -> bool:
    """Return whether the case is the first sample as it comes."""
    return state.case() is sample(FIRST_SAMPLE)


def borrowed() -> tuple[str, ...]:
    """Return which parts of the case are still those of a sample though its readings are not.

    Returns
    -------
    tuple of str
        Some of ``product``, ``duty``, ``line``; none while a sample is shown as it is.
    """
    case = state.case()
    samples = [sample(name) for name in sample_names()]
    given = {file.data for file in state.files().values()}
    if any(given == {file.data for file in sample_files(name).values()} for name in sample_names()):
        return ()
    parts = []
    if any(case.product.density == one.product.density for one in samples):
        parts.append("product")
    if any(case.duty == one.duty for one in samples):
        parts.append("duty")
    if any(case.line == one.line for one in samples):
        parts.append("line")
    return tuple(parts)


def open_sample(name: str) -> None:
    """Open a sample case with its files."""
    state.put(sample(name), sample_files(name), opened=True)


def open_case(uploads: Mapping[str, bytes]) -> None:
    """Open a case file, with the readings files that came with it.

    Parameters
    ----------
    uploads : mapping of str to bytes
        By the names that the user's machine gave: one ``.toml`` file, and the files it names.

    Raises
    ------
    InputError
        If it cannot be understood, or names a file that did not come with it.
    """
    cases = [name for name in uploads if name.lower().endswith(".toml")]
    if len(cases) != 1:
        found = ", ".join(f"'{one_line(name, 40)}'" for name in uploads) or "nothing"
        raise CaseError(
            f"found {found}; choose one case file that ends with .toml, and the readings files "
            "that it names"
        )
    label = one_line(cases[0], 60)
    try:
        text = uploads[cases[0]].decode("utf-8-sig")
    except UnicodeDecodeError:
        raise CaseError("it is not UTF-8 text; a case is a TOML file in UTF-8", label) from None
    document = case_from_text(text, label).document()
    given = {safe_name(name): StoredFile(data, name) for name, data in uploads.items()}
    named = {}
    for block in document["readings"]:
        if "file" not in block:
            continue
        wanted = safe_name(block["file"])
        if wanted not in given:
            raise CaseError(
                f"it takes its readings from '{one_line(block['file'], 60)}'; choose that file "
                "together with the case",
                label,
            )
        block["file"] = wanted
        named[wanted] = given[wanted]
    state.put(case_from_document(document), named, opened=True)
