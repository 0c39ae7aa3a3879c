"""Where the readings come from: a file, a pasted table, a sample."""

from __future__ import annotations

from typing import Any

import streamlit as st

from rheo.case import case_from_document
from rheo.errors import ReadingsError
from ui import cautions, opening, results, state
from ui.readings.look import look
from ui.results import StoredFile, safe_name

ENDINGS = ("csv", "txt", "tsv", "dat", "xlsx", "xls", "ods")


def show() -> None:
    """Draw the three ways to bring readings in."""
    left, right = st.columns([3, 2], vertical_alignment="bottom")
    with left:
        st.file_uploader(
            "Your readings: CSV, text, XLSX, XLS or ODS, up to 20 MB",
            key=state.key("upload"),
            on_change=_take_upload,
            help="Columns are found by their headings: shear rate and stress, speed and torque, or "
            "flow and pressure drop. You can put right what was found.",
        )
    with right, st.container(horizontal=True):
        with st.popover("Paste a table", icon=":material/content_paste:"):
            st.text_area(
                "Table with a row of headings",
                key=state.key("pasted"),
                height=220,
                placeholder="Shear rate [1/s]\tShear stress [Pa]\n1\t12.4\n10\t28.9",
            )
            st.button("Use this table", type="primary", on_click=_take_pasted)
        with st.popover("Use a sample", icon=":material/science:"):
            for name in opening.sample_names():
                st.button(
                    name.capitalize(),
                    key=f"readings.sample.{name}",
                    on_click=opening.open_sample,
                    args=(name,),
                    width="stretch",
                )
            st.caption("Invented for demonstration. Opening one replaces the case at hand.")
    add = len(state.case().readings) < 20
    if add:
        st.toggle(
            "Add to the readings at hand instead of replacing them",
            key=state.key("add_set"),
            help="For a set taken at another temperature, or with another tube or bob.",
        )
    cautions.complaint(state.complaint("upload"))


def take(name: str, data: bytes, *, add: bool = False) -> None:
    """Put a readings file into the case, in place of those at hand or beside them.

    Raises
    ------
    InputError
        If nothing in it can be read. A file that only leaves open which column is which is
        taken in, so that the user can say it.
    """
    file_name = safe_name(name)
    case = state.case()
    document = case.document()
    files = dict(state.files()) if add else {}
    while file_name in files:
        stem, dot, ending = file_name.rpartition(".")
        file_name = f"{stem or ending}_2{dot}{ending if dot else ''}"
    block: dict[str, Any] = {"file": file_name}
    document["readings"] = [*document["readings"], block] if add else [block]
    if not add:
        document.get("fit", {}).pop("model", None)
        document.get("fit", {}).pop("models", None)
    if opening.is_sample_title(document.get("title", "")) and not add:
        document["title"] = name.rpartition(".")[0] or name
        document["notes"] = ""
        document["product"]["name"] = "product"
    files[file_name] = StoredFile(data, name)
    new = case_from_document(document)
    outcome = results.readings_of(new, files)
    if outcome.problem is not None and not any(sheet.headings for sheet in look(files[file_name])):
        raise outcome.problem
    state.put(new, files)
    state.touch()


def _take_upload() -> None:
    upload = st.session_state[state.key("upload")]
    if upload is None:
        return
    ending = upload.name.rpartition(".")[2].lower()
    add = bool(st.session_state.get(state.key("add_set")))

    def act() -> None:
        if ending == "toml":
            opening.open_case({upload.name: upload.getvalue()})
        else:
            take(upload.name, upload.getvalue(), add=add)

    state.attempt("upload", act)


def _take_pasted() -> None:
    text = str(st.session_state.get(state.key("pasted"), ""))
    add = bool(st.session_state.get(state.key("add_set")))

    def act() -> None:
        if not text.strip():
            raise ReadingsError("there is nothing in the field; paste a table with its headings")
        take("pasted table.txt", text.encode("utf-8"), add=add)

    state.attempt("upload", act)
