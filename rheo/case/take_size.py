"""Another size for the pipes of a case."""

from __future__ import annotations

from rheo.case.schema import Case
from rheo.case.storage import case_from_document
from rheo.errors import CaseError
from rheo.line.catalogue import PipeSize


def with_size(case: Case, size: PipeSize) -> Case:
    """Return the case with one size in all pipes whose size is not fixed.

    Parameters
    ----------
    case : Case
        The case.
    size : PipeSize
        Of a catalogue, or the user's own.

    Returns
    -------
    Case
        In the same folder.

    Raises
    ------
    CaseError
        If the size of every pipe is fixed.
    """
    document = case.document()
    changed = 0
    for side in ("suction", "discharge"):
        for part in document["line"].get(side, ()):
            if part["part"] != "pipe" or part.get("fixed_size"):
                continue
            changed += 1
            if size.standard == "own":
                part.pop("size", None)
                part["inside_diameter"] = f"{1e3 * size.inside_diameter:.10g} mm"
            else:
                part.pop("inside_diameter", None)
                part["size"] = size.name
    if not changed:
        raise CaseError("every pipe has a fixed size; free one of them first", "line")
    return case_from_document(document).in_folder(case.folder, case.allow_outside)
