"""The parts of the route as rows of an editable table, and what the user's edits make of them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cache
from typing import Any

from rheo.case.line_blocks import PipeBlock
from rheo.case.schema import Case
from rheo.errors import CaseError
from rheo.hydraulics.fittings import fitting_tables
from rheo.line.catalogue import PipeSize, catalogue
from rheo.line.parts import Pipe
from rheo.report.display import QUANTITIES
from rheo.units import parse_quantity
from ui.fields import COUNT, NUMBER, TEXT, Field

SIDES = {"suction": "before the pump", "discharge": "after the pump"}
# The ends of the line have fields of their own.
ENDS = ("vessel", "entrance", "exit")
OWN_K = "fitting, own K"
# Which fields of a part the table has, by part: a field that a part lacks stays empty.
FIELDS = (
    Field("name", "Name", TEXT),
    Field("size", "Size", TEXT),
    Field("inside_diameter", "Inside", "diameter"),
    Field("length", "Length", "length"),
    Field("rise", "Rise", "length"),
    Field("count", "Pieces", COUNT),
    Field("loss_coefficient", "K", NUMBER),
    Field("loss", "Loss", "pressure"),
)
OWN = {
    "pipe": {"name", "size", "inside_diameter", "length", "rise"},
    "fitting": {"name", "count", "loss_coefficient"},
    "equipment": {"name", "loss", "rise"},
    "reducer": {"name", "loss_coefficient"},
}
_NEEDED = {
    "pipe": (("length", "length"), ("size inside_diameter", "size or inside diameter")),
    "fitting": (),
    "equipment": (("loss", "loss"),),
    "reducer": (),
}


@cache
def kinds() -> dict[str, dict[str, Any]]:
    """Return what can be chosen under Part, in plain names, with what the case then has."""
    published: dict[str, dict[str, Any]] = {}
    known: set[str] = set()
    for table in fitting_tables().values():
        for key, one in table.fittings.items():
            if key not in known:
                published[one.name] = {"part": "fitting", "kind": key}
        known |= set(table.fittings)
    return {
        "pipe": {"part": "pipe"},
        OWN_K: {"part": "fitting", "kind": "fitting"},
        "equipment": {"part": "equipment"},
        "change of diameter": {"part": "reducer"},
        **published,
    }


@dataclass(frozen=True)
class Side:
    """One side of the pump, cut into its ends and the parts between them.

    Parameters
    ----------
    head, inner, tail : tuple of dict
        As plain data of the case; `head` and `tail` hold vessels, entrances and exits.
    """

    head: tuple[dict[str, Any], ...]
    inner: tuple[dict[str, Any], ...]
    tail: tuple[dict[str, Any], ...]


def side_of(document: Mapping[str, Any], side: str) -> Side:
    """Return one side of the line of a case as plain data."""
    parts = list(document["line"].get(side, ()))
    start, end = 0, len(parts)
    while start < end and parts[start]["part"] in ENDS:
        start += 1
    while end > start and parts[end - 1]["part"] in ENDS:
        end -= 1
    return Side(tuple(parts[:start]), tuple(parts[start:end]), tuple(parts[end:]))


def rows(case: Case, side: str) -> dict[str, list[str]]:
    """Return the parts between the ends as columns of text in the units shown, by heading."""
    cut = side_of(case.document(), side)
    blocks = getattr(case.line, side)[len(cut.head) : len(cut.head) + len(cut.inner)]
    columns: dict[str, list[str]] = {"Part": [kind_of(part) for part in cut.inner]}
    for field in FIELDS:
        columns[field.label] = [
            field.shown(getattr(block, field.key)) if part.get(field.key) is not None else ""
            for part, block in zip(cut.inner, blocks, strict=True)
        ]
    return columns


def kind_of(part: Mapping[str, Any]) -> str:
    """Return what a part is called under Part."""
    if part["part"] == "fitting":
        own = part.get("loss_coefficient") is not None
        for name, given in kinds().items():
            if not own and given["part"] == "fitting" and given["kind"] == part.get("kind"):
                return name
        return OWN_K
    return {"reducer": "change of diameter"}.get(part["part"], str(part["part"]))


def edited(
    parts: Sequence[Mapping[str, Any]], edits: Mapping[str, Any], flow: Any = None
) -> list[dict[str, Any]]:
    """Return the parts that come of the user's edits in the table.

    Parameters
    ----------
    parts : sequence of dict
        The parts as the table showed them at first, as plain data of the case.
    edits : mapping
        ``edited_rows``, ``added_rows`` and ``deleted_rows`` of the editor.
    flow : object, optional
        Flow of the duty as the case has it: that at which new equipment has its loss.

    Returns
    -------
    list of dict
        Plain data for the case.

    Raises
    ------
    CaseError
        If a new row leaves something out that its part needs; the sentence names it.
    """
    gone = set(edits.get("deleted_rows", ()))
    changes = {int(row): cells for row, cells in edits.get("edited_rows", {}).items()}
    found = [
        _changed(part, changes.get(row, {}), flow, f"row {row + 1}")
        for row, part in enumerate(parts)
        if row not in gone
    ]
    for row, cells in enumerate(edits.get("added_rows", ()), len(parts) + 1):
        given = {key: value for key, value in cells.items() if value not in (None, "")}
        if given:
            found.append(_changed({}, given, flow, f"row {row}"))
    return found


def _changed(
    part: Mapping[str, Any], cells: Mapping[str, Any], flow: Any, place: str
) -> dict[str, Any]:
    new = dict(part)
    kind = cells.get("Part")
    if kind is not None and (not new or kind_of(new) != kind):
        given = kinds()[kind]
        kept = OWN[given["part"]] - (set() if kind == OWN_K else {"loss_coefficient"})
        new = {**given, **{key: value for key, value in new.items() if key in kept}}
    if not new:
        raise CaseError("choose what it is under Part", place)
    for field in FIELDS:
        if field.label not in cells:
            continue
        text = "" if cells[field.label] is None else str(cells[field.label]).strip()
        if field.key not in OWN[new["part"]]:
            if text:
                raise CaseError(f"{kind_of(new)} has no {field.label.lower()}", place)
            continue
        if text:
            new[field.key] = field.written(text)
            if field.kind in QUANTITIES:
                unit = QUANTITIES[field.kind].unit
                parse_quantity(new[field.key], unit, f"{place}, {field.label}")
        else:
            new.pop(field.key, None)
    _one_diameter(new, cells)
    if new["part"] == "equipment" and flow is not None:
        new.setdefault("at_flow", flow)
    if kind_of(new) == OWN_K and new["part"] == "fitting" and "loss_coefficient" not in new:
        raise CaseError("a fitting of your own needs its K", place)
    for keys, words in _NEEDED[new["part"]]:
        if not any(new.get(key) is not None for key in keys.split()):
            raise CaseError(f"{kind_of(new)} needs its {words}", place)
    return new


def _one_diameter(new: dict[str, Any], cells: Mapping[str, Any]) -> None:
    """Of size and inside diameter keep the one that was given last."""
    if cells.get("Inside"):
        new.pop("size", None)
    elif cells.get("Size"):
        new.pop("inside_diameter", None)


def change_place(document: dict[str, Any], side: str, index: int, act: int | None) -> bool:
    """Move one part, copy it or take it out.

    Parameters
    ----------
    document : dict
        The case as plain data; changed in place.
    side : str
        ``suction`` or ``discharge``.
    index : int
        Of the part among all parts of its side.
    act : int or None
        -1 towards the source, 1 towards the end, 0 to copy it, None to take it out.

    Returns
    -------
    bool
        Whether it came to the other side of the pump.
    """
    line = document["line"]
    cut = side_of(document, side)
    inner, at = list(cut.inner), index - len(cut.head)
    crosses = False
    if act == 0:
        inner.insert(at + 1, dict(inner[at]))
    else:
        part = inner.pop(at)
        if act is not None and 0 <= at + act <= len(inner):
            inner.insert(at + act, part)
        elif act is not None:
            crosses = True
            other = "discharge" if side == "suction" else "suction"
            there = side_of(document, other)
            moved = [part, *there.inner] if act > 0 else [*there.inner, part]
            line[other] = [*there.head, *moved, *there.tail]
    line[side] = [*cut.head, *inner, *cut.tail]
    return crosses


def size_options(case: Case, standard: str, schedule: str | None) -> list[str]:
    """Return the names of the sizes to choose from: those of a standard and those in use."""
    names = [size.name for size in catalogue(standard, schedule)]
    used = [pipe.size.name for pipe in case.line.build().pipes() if isinstance(pipe.size, PipeSize)]
    own = [
        block.size
        for block in (*case.line.suction, *case.line.discharge)
        if isinstance(block, PipeBlock) and block.size is not None
    ]
    return list(dict.fromkeys([*names, *used, *own]))


def first_size(case: Case) -> PipeSize | None:
    """Return the first catalogue size of the line, pipes that may change size first."""
    pipes: list[Pipe] = sorted(case.line.build().pipes(), key=lambda pipe: pipe.fixed_size)
    return next((pipe.size for pipe in pipes if isinstance(pipe.size, PipeSize)), None)
