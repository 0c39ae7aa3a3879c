"""One line of the table that `run_all.py` prints: a ratio against an ordinary alternative."""

from __future__ import annotations

MARK = "compared:\t"


def report(what: str, times: float, wanted: float | None = None) -> bool:
    """Print a ratio, and say whether it is what it must be.

    Parameters
    ----------
    what : str
        What was compared with what.
    times : float
        How many times as long the alternative takes [-].
    wanted : float, optional
        The least that it must be.
    """
    met = wanted is None or times >= wanted
    verdict = "" if wanted is None else f"{wanted:g}\t{'met' if met else 'MISSED'}"
    print(f"{MARK}{what}\t{times:.3g}\t{verdict}")
    return met
