"""Small changes to words that several files make."""

from __future__ import annotations

import math
from collections.abc import Sequence

from rheo.report.numbers import number


def capital(name: str) -> str:
    """Return a name with a capital letter at its beginning."""
    return name[:1].upper() + name[1:]


def percent(share: float, digits: int = 2) -> str:
    """Return a share as a percentage."""
    return f"{number(100 * share, digits)} %" if math.isfinite(share) else "not known"


def without_shared_words(names: Sequence[str]) -> tuple[str, tuple[str, ...]]:
    """Take the words that all names begin or end with out of them.

    Parameters
    ----------
    names : sequence of str
        Such as ``ISO 2037 38`` and ``ISO 2037 51``.

    Returns
    -------
    shared : str
        The words in common, ``…`` where the names differ; empty when there are none.
    short : tuple of str
        What is left of each name; never nothing.
    """
    words = [name.split(" ") for name in names]
    if len(words) < 2:
        return "", tuple(names)
    front = _shared(words)
    back = _shared([one[front:][::-1] for one in words])
    # A bracket that opens before stays whole.
    while back and ")" in words[0][-back]:
        back -= 1
    first, last = " ".join(words[0][:front]), " ".join(words[0][len(words[0]) - back :])
    short = tuple(" ".join(one[front : len(one) - back]) for one in words)
    return (f"{first} … {last}" if last else first).strip(), short


def _shared(words: Sequence[Sequence[str]]) -> int:
    """Return how many words all begin with, leaving at least one of each."""
    count = 0
    while all(len(one) > count + 1 for one in words) and len({one[count] for one in words}) == 1:
        count += 1
    return count
