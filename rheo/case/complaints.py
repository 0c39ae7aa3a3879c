"""What is wrong with a case file, as one plain sentence with its place."""

from __future__ import annotations

import difflib
from collections.abc import Callable, Mapping, Sequence
from typing import Any

from pydantic import ValidationError

from rheo.case.block import KeyedError
from rheo.case.line_blocks import PART_TAGS
from rheo.case.pump_blocks import PUMP_TAGS
from rheo.case.quantity import describe
from rheo.case.toml_lines import KeyPath, key_lines, line_of
from rheo.errors import CaseError, InputError

TAGS = frozenset({*PART_TAGS, *PUMP_TAGS})

Detail = Mapping[str, Any]


def complaint(error: ValidationError, document: Any, text: str = "", source: str = "") -> CaseError:
    """Return the first complaint of a validation as an error that users can act on.

    Parameters
    ----------
    error : ValidationError
        What pydantic found.
    document : dict
        What was checked.
    text : str
        The TOML text it came from, to find lines in; empty when it came from elsewhere.
    source : str
        Name of the file.

    Returns
    -------
    CaseError
        Its place names the file, the line and the key.
    """
    details = _worth_saying(error.errors(include_url=False))
    first: Detail = details[0]
    path, sentence = _path_and_sentence(first, document)
    if len(details) > 1:
        others = "another key is" if len(details) == 2 else f"{len(details) - 1} other keys are"
        sentence = f"{sentence} ({others} wrong too)"
    return CaseError(sentence, place_of(path, text, source))


def place_of(path: KeyPath, text: str = "", source: str = "") -> str:
    """Return where a key stands, in words: ``sauce.toml, line 12, duty.flow``."""
    line = line_of(key_lines(text), path) if text and path else None
    parts = (source, f"line {line}" if line else "", words_of(path))
    return ", ".join(part for part in parts if part)


def words_of(path: KeyPath) -> str:
    """Return a path in words: ``line.discharge (entry 2) length``."""
    words = ""
    for key in path:
        if isinstance(key, int):
            words += f" (entry {key + 1})"
        else:
            joint = " " if words.endswith(")") else "." if words else ""
            words += f"{joint}{str(key)[:60]}"
    return words.strip()


def _worth_saying(details: Sequence[Detail]) -> list[Detail]:
    """Leave out that a list is too short where that follows from a bad entry."""
    return [
        detail
        for detail in details
        if detail["type"] != "too_short" or not _has_bad_entry(detail["loc"], details)
    ]


def _has_bad_entry(loc: KeyPath, details: Sequence[Detail]) -> bool:
    return any(detail["loc"][: len(loc)] == loc != detail["loc"] for detail in details)


def _path_and_sentence(detail: Detail, document: Any) -> tuple[KeyPath, str]:
    path = path_in_file(detail["loc"], document)
    cause = detail.get("ctx", {}).get("error")
    if isinstance(cause, KeyedError):
        return (*path, cause.key), cause.sentence
    if isinstance(cause, InputError):
        place = f"{cause.place}: " if cause.place else ""
        return path, f"{place}{cause.sentence}"
    say = _SENTENCES.get(detail["type"], _as_reported)
    return path, say(detail)


def path_in_file(loc: tuple[int | str, ...], document: Any) -> KeyPath:
    """Return pydantic's path without what is no key of the file.

    That is the tag by which it chose among kinds, and the index of a list of one that the file
    writes as a single table.
    """
    path: KeyPath = ()
    here = document
    for key in loc:
        if isinstance(here, dict) and key not in here and (isinstance(key, int) or key in TAGS):
            continue
        path = (*path, key)
        try:
            here = here[key]
        except (KeyError, IndexError, TypeError):
            here = None
    return path


def _missing(detail: Detail) -> str:
    return f"key '{detail['loc'][-1]}' is missing; it is needed here"


def _unknown_tag(detail: Detail) -> str:
    context = detail["ctx"]
    expected = context["expected_tags"].replace("'", "").split(", ")
    tag = describe(context["tag"]).strip("'")
    near = difflib.get_close_matches(tag.lower(), expected, n=1)
    hint = f" (did you mean '{near[0]}'?)" if near else ""
    what = "kind of pump" if set(expected) == set(PUMP_TAGS) else "part"
    return f"unknown {what} '{tag[:60]}'{hint}; there are {', '.join(expected)}"


def _no_tag(detail: Detail) -> str:
    if not isinstance(detail["input"], dict):
        return f"found {describe(detail['input'])}; it must be a table of keys"
    return f"key 'part' is missing; it is one of {', '.join(PART_TAGS)}"


def _expected(what: str) -> Callable[[Detail], str]:
    return lambda detail: f"found {describe(detail['input'])}; it must be {what}"


def _at_least(detail: Detail) -> str:
    return f"found {describe(detail['input'])}; it must be {detail['ctx']['ge']:g} or more"


def _at_most(detail: Detail) -> str:
    return f"found {describe(detail['input'])}; it must be {detail['ctx']['le']:g} at most"


def _too_long(detail: Detail) -> str:
    return f"the text is too long; it may have {detail['ctx']['max_length']} characters"


def _too_few(detail: Detail) -> str:
    return f"the list is too short; it needs {detail['ctx']['min_length']} entries or more"


def _choice(detail: Detail) -> str:
    expected = detail["ctx"]["expected"].replace(" or ", ", ")
    return f"found {describe(detail['input'])}; it must be one of {expected}"


def _as_reported(detail: Detail) -> str:
    return f"found {describe(detail['input'])}; {detail['msg'][:1].lower()}{detail['msg'][1:]}"


_SENTENCES: Mapping[str, Callable[[Detail], str]] = {
    "missing": _missing,
    "union_tag_invalid": _unknown_tag,
    "union_tag_not_found": _no_tag,
    "model_attributes_type": _expected("a table of keys"),
    "model_type": _expected("a table of keys"),
    "dict_type": _expected("a table of keys"),
    "tuple_type": _expected("a list"),
    "list_type": _expected("a list"),
    "string_type": _expected("a text in quotes"),
    "bool_type": _expected("true or false"),
    "int_type": _expected("a whole number"),
    "int_from_float": _expected("a whole number"),
    "literal_error": _choice,
    "greater_than_equal": _at_least,
    "less_than_equal": _at_most,
    "string_too_long": _too_long,
    "too_short": _too_few,
}
