"""The one place that keeps state between two runs of the script: the case, its files, the choices.

What is kept:

* the **case** is a `rheo.case.Case`, always valid; the **files** that it names are bytes by name.
  Nothing is stored on disk. Everything else is worked out from the two (`ui.results`);
* the unit system that is shown; complaints, which stand beside the widget that caused them;
* **what-if** values lie apart from the case and change nothing in it.

How stops use it::

    case = state.case()                       # what the user has
    result = state.result()                   # CaseResult, or None: then state.problem() says why
    sets = state.readings()                   # tuple of Readings, or None
    fitted = state.fitted()                   # FittedCase (ranked models, product), or None
    state.change(("duty", "flow"), "5 m3/h")  # put a value into the case; raises InputError
    state.attempt("flow", state.change, ("duty", "flow"), "5 m3/h")
                                              # the same; an InputError becomes complaint "flow"
    state.complaint("flow")                   # the sentence to show beside the widget, or ""
    state.what_if()                           # dict of the what-if values, changed in place
    state.key("flow")                         # widget key that changes when another case is opened

Call `change` and `attempt` from widget callbacks (``on_change=``, ``on_click=``): they run before
the page is drawn, so that the walk and the answer strip show the new values at once.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from itertools import pairwise
from typing import Any

import streamlit as st

from rheo.case import Case, CaseResult, case_from_document
from rheo.case.run import FittedCase
from rheo.errors import InputError
from rheo.readings import Readings
from rheo.report.text import one_line
from ui import results
from ui.catch import Catch
from ui.results import Files, StoredFile

_CASE = "rheo.case"
_FILES = "rheo.files"
_UNITS = "rheo.units"
_WHAT_IF = "rheo.what_if"
_COMPLAINTS = "rheo.complaints"
_GENERATION = "rheo.generation"
_VERSION = "rheo.version"


def is_empty() -> bool:
    """Return whether nothing has been opened in this session yet."""
    return _CASE not in st.session_state


def case() -> Case:
    """Return the case as the user has it."""
    found: Case = st.session_state[_CASE]
    return found


def files() -> Files:
    """Return the files that the case names, by name."""
    found: dict[str, StoredFile] = st.session_state[_FILES]
    return found


def put(new: Case, new_files: Files | None = None, *, opened: bool = False) -> None:
    """Make `new` the current case.

    Parameters
    ----------
    new : Case
        The case.
    new_files : mapping of str to StoredFile, optional
        The files that it names; those at hand are kept when absent.
    opened : bool
        Whether it is another case: what-if values, complaints and widget states are dropped.
    """
    st.session_state[_CASE] = new
    if new_files is not None:
        st.session_state[_FILES] = dict(new_files)
    if opened:
        st.session_state[_WHAT_IF] = {}
        st.session_state[_COMPLAINTS] = {}
        st.session_state[_GENERATION] = int(st.session_state.get(_GENERATION, 0)) + 1


def key(name: str) -> str:
    """Return a widget key that changes when another case is opened."""
    return f"{name}.{st.session_state.get(_GENERATION, 0)}"


def version() -> int:
    """Return a number that grows whenever `touch` is called; a part of the keys of editors."""
    return int(st.session_state.get(_VERSION, 0))


def touch() -> None:
    """Make editors draw the case anew, after it was changed from elsewhere."""
    st.session_state[_VERSION] = version() + 1


def change(path: tuple[str | int, ...], value: Any) -> None:
    """Put one value into the case, or take it out with None.

    Parameters
    ----------
    path : tuple of str or int
        Keys down to it as in the case file, such as ``("readings", 0, "sweep")``.
    value : object
        Plain data as it stands in a case file: text with unit, number, list, table; None takes
        the key out.

    Raises
    ------
    InputError
        If the case would not be valid; it then stays as it was.
    """
    put(changed(case(), path, value))


def changed(old: Case, path: tuple[str | int, ...], value: Any) -> Case:
    """Return a case with one value replaced; see `change`."""
    document = old.document()
    where: Any = document
    for step, following in pairwise(path):
        if isinstance(where, dict) and where.get(step) is None:
            where[step] = [] if isinstance(following, int) else {}
        where = where[step]
    last: Any = path[-1]
    if value is not None:
        where[last] = value
    elif isinstance(where, list) or last in where:
        del where[last]
    return case_from_document(document)


def change_document(edit: Callable[[dict[str, Any]], None]) -> None:
    """Change several values at once: `edit` gets the case as plain data and changes it in place.

    Raises
    ------
    InputError
        If the case would not be valid; it then stays as it was.
    """
    document = case().document()
    edit(document)
    put(case_from_document(document))


def readings() -> tuple[Readings, ...] | None:
    """Return every set of readings as the case says they are read; None with a problem."""
    found: tuple[Readings, ...] | None = results.readings_of(case(), files()).value
    return found


def fitted() -> FittedCase | None:
    """Return what was fitted to the readings, line or no line; None with a problem."""
    found: FittedCase | None = results.fitted_of(case(), files()).value
    return found


def result() -> CaseResult | None:
    """Return the result of the case; None when it cannot be worked out (see `problem`)."""
    found: CaseResult | None = results.result_of(case(), files()).value
    return found


def problem() -> InputError | None:
    """Return why there is no result, or None."""
    return results.result_of(case(), files()).problem


def what_if() -> dict[str, Any]:
    """Return the what-if values; change the dict in place. They are no part of the case."""
    found: dict[str, Any] = st.session_state.setdefault(_WHAT_IF, {})
    return found


def system() -> str:
    """Return the unit system that is shown: a key of ``rheo.report.display.SYSTEMS``."""
    return str(st.session_state.get(_UNITS, "metric"))


def set_system(name: str) -> None:
    """Show another unit system; nothing stored changes."""
    st.session_state[_UNITS] = name


def dark() -> bool:
    """Return whether the page is shown dark, for figures."""
    return st.context.theme.type == "dark"


def attempt(name: str, act: Callable[..., Any], *arguments: Any) -> None:
    """Call `act`; what goes wrong becomes the complaint `name`, to be shown beside its widget.

    Parameters
    ----------
    name : str
        Name of the complaint.
    act : callable
        Such as `change`.
    *arguments : object
        For `act`.
    """
    complaints: dict[str, str] = st.session_state.setdefault(_COMPLAINTS, {})
    complaints.pop(name, None)
    with Catch() as caught:
        act(*arguments)
    if caught.problem is not None:
        complaints[name] = sentence(caught.problem)


def complaint(name: str) -> str:
    """Return the complaint of that name, or an empty text."""
    complaints: Mapping[str, str] = st.session_state.get(_COMPLAINTS, {})
    return complaints.get(name, "")


def sentence(error: InputError) -> str:
    """Return an error as one sentence for the page."""
    words = one_line(str(error), 400)
    # The name of a file is written as it is.
    if "." not in error.place:
        words = words[:1].upper() + words[1:]
    return words + ("" if words.endswith((".", "?")) else ".")
