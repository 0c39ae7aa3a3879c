"""What follows from a case, kept by a hash of the input.

The caches are shared by all sessions and hold pure results only: the same input gives the same
object. Where ``rheo`` wants a file, it gets a temporary folder that is gone when the call returns.
"""

from __future__ import annotations

import hashlib
import json
import re
from collections.abc import Callable, Iterator, Mapping
from contextlib import contextmanager
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path
from tempfile import TemporaryDirectory
from typing import Any

import streamlit as st

from rheo.case import Case, case_text, run_case
from rheo.case.embed import embedded
from rheo.case.load_readings import whole_readings, without_excluded
from rheo.case.result import CaseResult
from rheo.case.run import FittedCase, fit_case, fit_models, judged_anew
from rheo.case.schema import JUDGES
from rheo.errors import InputError
from rheo.fitting import Fits
from rheo.readings import Readings
from rheo.report.text import one_line
from ui.catch import Catch


@dataclass(frozen=True)
class StoredFile:
    """A file that the user gave.

    Parameters
    ----------
    data : bytes
        Its content.
    label : str
        What the user calls it, for display only.
    """

    data: bytes
    label: str = ""

    @cached_property
    def digest(self) -> str:
        """Hash of the content."""
        return hashlib.sha256(self.data).hexdigest()


Files = Mapping[str, StoredFile]


@dataclass(frozen=True)
class Outcome:
    """What a calculation came to: a value, or the reason why there is none.

    Parameters
    ----------
    value : object or None
        The result.
    problem : InputError or None
        What the user can put right.
    """

    value: Any
    problem: InputError | None = None


def outcome_of(calculate: Callable[[], Any]) -> Outcome:
    """Run a calculation; what goes wrong in it becomes the problem of the outcome."""
    with Catch() as caught:
        return Outcome(calculate())
    return Outcome(None, caught.problem)


def digest(*parts: Any) -> str:
    """Return a short hash of plain data."""
    return hashlib.sha256(json.dumps(parts, default=str).encode()).hexdigest()[:32]


def _file_digests(files: Files) -> list[tuple[str, str]]:
    return sorted((name, file.digest) for name, file in files.items())


def safe_name(name: str) -> str:
    """Return a plain file name made of a name that the user's machine gave.

    Folders, control characters and whatever a file system could read differently are left out, so
    that it can stand in a temporary folder.
    """
    last = re.split(r"[\\/]", name)[-1]
    stem, dot, ending = last.rpartition(".")
    stem = re.sub(r"[^0-9A-Za-z_-]+", "_", stem if dot else last).strip("_")[:60] or "readings"
    ending = re.sub(r"[^0-9A-Za-z]+", "", ending)[:8] if dot else ""
    return f"{stem}.{ending}" if ending else stem


@contextmanager
def in_folder(case: Case, files: Files) -> Iterator[Case]:
    """Give a case a temporary folder with its files for the time of one call."""
    with TemporaryDirectory(prefix="rheo-") as folder:
        place = Path(folder)
        for name, file in files.items():
            (place / safe_name(name)).write_bytes(file.data)
        yield case.in_folder(place)


def saved_text(case: Case, files: Files) -> str:
    """Return the case as one TOML text with its readings inside; raises InputError."""
    with in_folder(case, files) as placed:
        return case_text(embedded(placed))


def readings_of(case: Case, files: Files) -> Outcome:
    """Return the readings of a case: a tuple of Readings, one a set."""
    key = _readings_key(case, files)
    whole: Outcome = _read(key, case, files)
    if whole.value is None:
        return whole
    left_out = [one.get("exclude") for one in case.document()["readings"]]
    found: Outcome = _used(digest(key, left_out), case, files, whole.value)
    return found


def fitted_of(case: Case, files: Files) -> Outcome:
    """Return what was fitted to the readings of a case: a FittedCase.

    The models are fitted once for the same readings, whichever of them is chosen.
    """
    sets = readings_of(case, files)
    if sets.value is None:
        return sets
    fits = fits_of(case, files)
    if fits.value is None:
        return fits
    document = case.document()
    parts = [document.get(name) for name in ("product", "fit", "doubt")]
    key = digest(fits_key(case, files), parts)
    found: Outcome = _fitted(key, case, sets.value, fits.value)
    return found


def fits_of(case: Case, files: Files) -> Outcome:
    """Return the models fitted to the readings of a case, whatever the product: Fits."""
    sets = readings_of(case, files)
    if sets.value is None:
        return sets
    found: Outcome = _fits(fits_key(case, files), case, sets.value)
    return found


def result_of(case: Case, files: Files) -> Outcome:
    """Return the result of a case: a CaseResult."""
    fitted = fitted_of(case, files)
    if fitted.value is None:
        return fitted
    document = case.document()
    worked_with = {name: value for name, value in document.items() if name not in JUDGES}
    key = digest(worked_with, _file_digests(files))
    found: Outcome = _result(key, case, fitted.value)
    if found.value is None:
        return found
    lately: list[CaseResult] = _lately(key, found.value)
    judged: Outcome = _judged(result_key(case, files), case, lately)
    return judged


def result_key(case: Case, files: Files) -> str:
    """Return what everything that follows from a result is kept by."""
    return digest(case.document(), _file_digests(files))


def _readings_key(case: Case, files: Files) -> str:
    document = case.document()
    product = {key: document["product"].get(key) for key in ("density", "solids")}
    sets = [{**one, "exclude": None} for one in document["readings"]]
    return digest(sets, product, _file_digests(files))


def fits_key(case: Case, files: Files) -> str:
    """Return what the fits to the readings of a case are kept by."""
    document = case.document()
    fit = {key: value for key, value in document.get("fit", {}).items() if key != "model"}
    return digest(document["readings"], _file_digests(files), fit)


@st.cache_resource(max_entries=24, show_spinner=False)
def _read(key: str, _case: Case, _files: Files) -> Outcome:  # noqa: ARG001
    def calculate() -> tuple[Readings, ...]:
        with in_folder(_case, _files) as placed:
            return whole_readings(placed)

    found = outcome_of(calculate)
    return Outcome(found.value, _in_the_users_words(found.problem, _files))


@st.cache_resource(max_entries=24, show_spinner=False)
def _used(key: str, _case: Case, _files: Files, _whole: tuple[Readings, ...]) -> Outcome:  # noqa: ARG001
    found = outcome_of(lambda: without_excluded(_case, _whole))
    return Outcome(found.value, _in_the_users_words(found.problem, _files))


def _in_the_users_words(problem: InputError | None, files: Files) -> InputError | None:
    """Name files in a problem as the user's machine names them."""
    if problem is None:
        return None
    place = problem.place
    for name, file in files.items():
        place = place.replace(name, one_line(file.label, 60) or name)
    return type(problem)(problem.sentence, place)


@st.cache_resource(max_entries=24, show_spinner=False)
def _fits(key: str, _case: Case, _readings: tuple[Readings, ...]) -> Outcome:  # noqa: ARG001
    return outcome_of(lambda: fit_models(_case, _readings))


@st.cache_resource(max_entries=48, show_spinner=False)
def _fitted(
    key: str,  # noqa: ARG001
    _case: Case,
    _readings: tuple[Readings, ...],
    _fits: Fits,
) -> Outcome:
    return outcome_of(lambda: fit_case(_case, _readings, _fits))


@st.cache_resource(max_entries=64, show_spinner=False)
def _judged(key: str, _case: Case, _lately: list[CaseResult]) -> Outcome:  # noqa: ARG001
    if _lately[0].case == _case:
        return Outcome(_lately[0])
    found = outcome_of(lambda: judged_anew(_lately[0], _case))
    if found.value is not None:
        _lately[0] = found.value
    return found


@st.cache_resource(max_entries=64, show_spinner=False)
def _lately(key: str, _result: CaseResult) -> list[CaseResult]:  # noqa: ARG001
    """Return the result that was judged last: what has been worked out of it serves the next."""
    return [_result]


@st.cache_resource(max_entries=64, show_spinner=False)
def _result(key: str, _case: Case, _fitted: FittedCase) -> Outcome:  # noqa: ARG001
    return outcome_of(lambda: run_case(_case, fitted=_fitted))
