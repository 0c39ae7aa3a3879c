"""Which readings belong to the way up, the way down, or a hold at one speed."""

from __future__ import annotations

import itertools

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.readings.flow_curve import FloatArray

# Settings closer than this are one setting: speeds are measured with some jitter.
SAME_SETTING = 2e-3
# A turn counts when the setting comes back by more than this share of its range.
_TURN = 0.05
_LEAST_ON_A_HOLD = 3

_UP = (
    *("up", "rise", "rising", "ascending", "increasing", "increase", "forward", "u", "↑"),
    *("auf", "aufwärts", "aufwaerts", "steigend", "hoch", "hin", "montée", "montee", "croissant"),
    *("subida", "ascendente", "subiendo"),
)
_DOWN = (
    *("down", "fall", "falling", "descending", "decreasing", "decrease", "backward", "d", "↓"),
    *("ab", "abwärts", "abwaerts", "fallend", "runter", "zurück", "zurueck", "descente"),
    *("décroissant", "decroissant", "bajada", "descendente", "bajando", "return"),
)
_HOLD = ("hold", "constant", "steady", "halten", "konstant", "palier", "constante", "const")
BRANCH_WORDS: dict[str, str] = {
    **dict.fromkeys(_UP, "up"),
    **dict.fromkeys(_DOWN, "down"),
    **dict.fromkeys(_HOLD, "hold"),
    "": "",
    "-": "",
}


def branch_of_word(word: str) -> str | None:
    """Return the branch that a word names, None for an unknown word."""
    return BRANCH_WORDS.get(word.strip().casefold())


def branches_by_order(setting: ArrayLike, group: ArrayLike | None = None) -> NDArray[np.str_]:
    """Find the branches from the order of the settings.

    Parameters
    ----------
    setting : array_like, shape (n,)
        What was set, or the shear rate, in the order of measuring.
    group : array_like, shape (n,), optional
        Readings of different groups (blocks, tubes, gaps) are looked at apart.

    Returns
    -------
    array of str, shape (n,)
        ``up``, ``down``, ``hold``, or empty in a group whose settings go up and down so often
        that no branch can be told.
    """
    values = np.asarray(setting, dtype=float)
    groups = np.zeros(values.size, dtype=int) if group is None else np.asarray(group)
    result = np.full(values.size, "", dtype="<U4")
    if values.size == 0:
        return result
    # Groups are runs: the same label later on is another run.
    starts = np.flatnonzero(np.r_[True, groups[1:] != groups[:-1]]).tolist()
    for start, end in itertools.pairwise([*starts, values.size]):
        result[start:end] = _of_one_group(values[start:end])
    return result


def _of_one_group(values: FloatArray) -> NDArray[np.str_]:
    count = values.size
    low, high = float(values.min()), float(values.max())
    result = np.full(count, "", dtype="<U4")
    if high - low <= 5 * SAME_SETTING * high:
        result[:] = "hold" if count > 1 else ""
        return result
    turns = _turning_points(values, _TURN * (high - low))
    if len(turns) - 1 > max(2, count // 2):
        return result
    for left, right in itertools.pairwise(turns):
        result[left + (left > 0) : right + 1] = "up" if values[right] > values[left] else "down"
        # A single step back to the start, as before the next sweep, is no branch.
        if right - left == 1 and left > 0 and right < count - 1:
            result[right] = result[left]
    runs = _runs(values)
    usual = float(np.median(runs[:, 1] - runs[:, 0]))
    for turn in turns:
        start, end = runs[np.searchsorted(runs[:, 0], turn, side="right") - 1]
        if end - start >= max(_LEAST_ON_A_HOLD, 2.0 * usual):
            result[start:end] = "hold"
        elif end - start == 2 and start > 0 and end < count:
            # Measured twice at the turn: once on the way there, once on the way back.
            result[start], result[end - 1] = result[start - 1], result[end]
        elif start > 0:
            result[start:end] = result[start - 1]
    return result


def _runs(values: FloatArray) -> NDArray[np.int64]:
    """Return start and end of each run of readings at one setting, shape (runs, 2)."""
    change = np.abs(np.diff(values)) > SAME_SETTING * np.maximum(values[1:], values[:-1])
    starts = np.r_[0, np.flatnonzero(change) + 1]
    return np.column_stack([starts, np.r_[starts[1:], values.size]])


def _turning_points(values: FloatArray, least: float) -> list[int]:
    """Return the ends and the turns between them, small wiggles left out.

    A running extreme becomes a turn once the values have come back from it by more than `least`.
    """
    turns = [0]
    high = low = direction = 0
    for index, value in enumerate(values.tolist()):
        high = index if value > values[high] else high
        low = index if value < values[low] else low
        if direction >= 0 and values[high] - value > least:
            turns.append(high)
            direction, low = -1, index
        elif direction <= 0 and value - values[low] > least:
            turns.append(low)
            direction, high = 1, index
    return list(dict.fromkeys([*turns, values.size - 1]))
