"""Long work beside the page: it tells how far it is, and can be cancelled.

``work.outcome("sizes", "Comparing sizes", result, result.compare_sizes)`` returns what
comes of it, as `ui.results.Outcome`; while it is at work it draws its progress with a button that
ends it, and returns None. The page is drawn anew when it is done.
"""

from __future__ import annotations

import threading
from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any

import streamlit as st

from ui import guard
from ui.results import Outcome, outcome_of

Progress = Callable[[float], None]
# What is done sooner than this [s] shows no progress.
SOON = 0.8
_LOOK_EVERY = 0.3


class CancelledError(BaseException):
    """The user has ended the work; no `Exception`, for nothing went wrong."""


@dataclass
class Job:
    """One piece of work.

    Parameters
    ----------
    subject : object
        What it is about: another subject is another job.
    share : float
        How much is done [-].
    cancelled : bool
        Whether the user has ended it.
    outcome : Outcome or None
        What came of it.
    """

    subject: Any
    share: float = 0.0
    cancelled: bool = False
    outcome: Outcome | None = None
    done: threading.Event = field(default_factory=threading.Event)

    def tell(self, share: float) -> None:
        """Note how much is done; raises CancelledError where the user has ended it."""
        self.share = share
        if self.cancelled:
            raise CancelledError

    def run(self, calculate: Callable[[Progress], Any]) -> None:
        """Do the work; called in a thread of its own."""
        try:
            self.outcome = outcome_of(lambda: calculate(self.tell))
        except CancelledError:
            self.cancelled = True
        finally:
            self.done.set()


def outcome(
    name: str, words: str, subject: Any, calculate: Callable[[Progress], Any]
) -> Outcome | None:
    """Return what comes of a piece of work, or draw how far it is and return None.

    Parameters
    ----------
    name : str
        Of the work; one piece of each name is at hand in a session.
    words : str
        What it is, for the eye, such as ``Comparing sizes``.
    subject : object
        What it is about: a key, or a result, which equals itself only.
    calculate : callable
        Does the work; is given what it tells its progress to.
    """
    place = f"rheo.work.{name}"
    job = _begun(place, subject, calculate)
    # Work that was ended may still have to come to the next place where it can stop.
    if job.cancelled or job.done.wait(SOON):
        if job.cancelled:
            st.write(f"You ended it: {words[:1].lower()}{words[1:]}.")
            st.button("Start again", key=f"{place}.again", on_click=_forget, args=(place,))
            return None
        return job.outcome
    _watch(place, words)
    return None


def ended(name: str, subject: Any, calculate: Callable[[Progress], Any]) -> bool:
    """Return whether a piece of work is done, and start it where it is not; draws nothing."""
    job = _begun(f"rheo.work.{name}", subject, calculate)
    return bool(job.done.wait(SOON)) and not job.cancelled


def begin(name: str, subject: Any, calculate: Callable[[Progress], Any]) -> None:
    """Start a piece of work that may be wanted later, and do not wait for it; draws nothing."""
    _begun(f"rheo.work.{name}", subject, calculate)


def drop(name: str) -> None:
    """End a piece of work that is no longer wanted."""
    job: Job | None = st.session_state.pop(f"rheo.work.{name}", None)
    if job is not None:
        job.cancelled = True


def _begun(place: str, subject: Any, calculate: Callable[[Progress], Any]) -> Job:
    """Return the job at hand; a new one where there is none, or another one."""
    job: Job | None = st.session_state.get(place)
    if job is not None and job.subject == subject:
        return job
    if job is not None:
        job.cancelled = True
    return _start(place, subject, calculate)


def _start(place: str, subject: Any, calculate: Callable[[Progress], Any]) -> Job:
    job = Job(subject)
    st.session_state[place] = job
    threading.Thread(target=job.run, args=(calculate,), daemon=True).start()
    return job


def _forget(place: str) -> None:
    st.session_state.pop(place, None)


def _cancel(place: str) -> None:
    st.session_state[place].cancelled = True


@st.fragment(run_every=_LOOK_EVERY)
def _watch(place: str, words: str) -> None:
    with guard.Guard():
        job = st.session_state.get(place)
        if job is None or job.cancelled or job.done.is_set():
            st.rerun()
        # One below the other: beside a bar in a narrow column the word would be cut.
        st.progress(min(job.share, 1.0), text=f"{words}: {100 * job.share:.0f} % done")
        st.button("Cancel", key=f"{place}.cancel", on_click=_cancel, args=(place,))
