"""Note: what is handed to the checker, as PDF, HTML, workbook and case file."""

from __future__ import annotations

import streamlit as st

from rheo.case import CaseResult
from ui import answer_strip, cautions, fields, guard, state, walk, words, work
from ui.fields import TEXT, Field
from ui.note import files

_NAMES = (
    Field("title", "Title", TEXT),
    Field("prepared_by", "Prepared by", TEXT),
    Field("checked_by", "Checked by", TEXT),
)


def show() -> None:
    """Draw the stop."""
    st.header("Note")
    result = answer_strip.need_result()
    fields.group("note", (), _NAMES, columns=(2, 1, 1))
    _show_purpose()
    # The note compares sizes too: done here, where it tells how far it is.
    if work.outcome("sizes", "Comparing sizes", result, result.compare_sizes) is not None:
        files.show()
        _show_cautions(result)
        _show_preview(result)
    cautions.safety("pressure", "start-up", "food-safety")
    walk.onward("note")


def _show_purpose() -> None:
    now = state.case().notes
    widget = state.key(f"note.notes.{hash(now)}")
    with st.expander("What the note is for, in your words", expanded=False):
        st.text_area(
            "Purpose and remarks",
            value=now,
            key=widget,
            height=120,
            on_change=lambda: state.attempt(
                "note.notes", state.change, ("notes",), st.session_state[widget]
            ),
            label_visibility="collapsed",
        )
        cautions.complaint(state.complaint("note.notes"))


def _show_cautions(result: CaseResult) -> None:
    found = result.cautions
    with st.expander(f"What the note warns of: {words.count(len(found), 'caution')}"):
        cautions.show(found)


@st.fragment
def _show_preview(result: CaseResult) -> None:
    with guard.Guard():
        st.markdown("**Preview**")
        with st.spinner("Writing the note"):
            page = files.preview(result)
        with st.container(border=True, key="preview"):
            st.iframe(page, height=files.PREVIEW_HEIGHT, alt="Preview of the design note")


show()
