"""Open, save and sample cases, in the side bar."""

from __future__ import annotations

import re

import streamlit as st

from rheo.case import Case
from rheo.errors import InputError
from ui import cautions, opening, results, state
from ui.results import Files


def show() -> None:
    """Draw the menu."""
    case, files = state.case(), state.files()
    with st.popover("Open or save the case", icon=":material/folder_open:", width="stretch"):
        st.download_button(
            "Save the case",
            data=lambda: saved(case, files),
            file_name=file_name(),
            mime="application/toml",
            icon=":material/download:",
            help="One file with the readings in it. Open it here or with rheo run.",
            on_click="ignore",
            width="stretch",
        )
        st.file_uploader(
            "Open a case",
            type=None,
            accept_multiple_files=True,
            key=state.key("open_case"),
            on_change=_open,
            help="A .toml file that you saved here, or one written by hand together with the "
            "readings files that it names.",
        )
        cautions.complaint(state.complaint("open_case"))
        st.caption("Samples, all invented:")
        for name in opening.sample_names():
            st.button(
                name.capitalize(),
                key=f"sample.{name}",
                on_click=opening.open_sample,
                args=(name,),
                width="stretch",
            )


def file_name() -> str:
    """Return a file name made of the title of the case."""
    case = state.case()
    stem = re.sub(r"[^0-9A-Za-z]+", "-", case.title or case.product.name).strip("-").lower()
    return f"{stem[:50] or 'case'}.toml"


def saved(case: Case, files: Files) -> bytes:
    """Return the case as a file; made when it is asked for, outside of the session."""
    try:
        return results.saved_text(case, files).encode("utf-8")
    except InputError as error:
        # The download has begun: a file that says what is wrong is better than a broken one.
        return f"# The case could not be saved: {state.sentence(error)}\n".encode()


def _open() -> None:
    uploads = {one.name: one.getvalue() for one in st.session_state[state.key("open_case")] or ()}
    if uploads:
        state.attempt("open_case", opening.open_case, uploads)
