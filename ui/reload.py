"""The case over a reload of the browser, which begins a new session.

From the first change on, the address carries a long random word under which the server keeps that
visitor's case in its memory, never on disk, until it ends or many others have come. Without the
word nothing is found. It is put into the address once: were it set again on every run, the
browser's way back would be blocked.
"""

from __future__ import annotations

import secrets
import threading
from collections import OrderedDict
from dataclasses import dataclass, field

import streamlit as st

from rheo.case import Case
from ui import opening, state
from ui.results import Files

_WORD = "kept"
_TOKEN = "rheo.kept"
MOST_CASES = 50
MOST_BYTES = 200_000_000


@dataclass(frozen=True)
class Kept:
    """One visitor's case, its files, and the units shown."""

    case: Case
    files: Files
    system: str

    @property
    def size(self) -> int:
        """Bytes of its files."""
        return sum(len(file.data) for file in self.files.values())


@dataclass
class Store:
    """Cases by their words, those used longest ago dropped first."""

    kept: OrderedDict[str, Kept] = field(default_factory=OrderedDict)
    lock: threading.Lock = field(default_factory=threading.Lock)

    def put(self, word: str, kept: Kept) -> None:
        """Keep a case in place of the one before it."""
        with self.lock:
            self.kept[word] = kept
            self.kept.move_to_end(word)
            while len(self.kept) > 1 and (
                len(self.kept) > MOST_CASES
                or sum(one.size for one in self.kept.values()) > MOST_BYTES
            ):
                self.kept.popitem(last=False)

    def get(self, word: str) -> Kept | None:
        """Return the case of a word, or None."""
        with self.lock:
            return self.kept.get(word)


@st.cache_resource(show_spinner=False)
def store() -> Store:
    """Return the store of this server."""
    return Store()


def begin() -> None:
    """Give a new session the case that its address names, or the first sample."""
    if not state.is_empty():
        return
    word = st.query_params.get(_WORD, "")
    kept = store().get(word) if word else None
    if kept is None:
        opening.open_sample(opening.FIRST_SAMPLE)
        return
    state.put(kept.case, kept.files, opened=True)
    state.set_system(kept.system)
    st.session_state[_TOKEN] = word


def keep() -> None:
    """Keep the case as it is now, once it is no longer a sample as it comes."""
    if _TOKEN not in st.session_state:
        if opening.is_untouched_sample():
            return
        st.session_state[_TOKEN] = secrets.token_urlsafe(24)
        st.query_params[_WORD] = st.session_state[_TOKEN]
    now = Kept(state.case(), state.files(), state.system())
    store().put(st.session_state[_TOKEN], now)


def query() -> dict[str, str]:
    """Return what links within the page carry in their address."""
    word = st.session_state.get(_TOKEN)
    return {_WORD: word} if word else {}
