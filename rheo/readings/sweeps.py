"""Screening of sweeps: readings that do not rise, loops, drift at constant speed."""

from __future__ import annotations

import itertools
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import Caution, InputError, in_percent
from rheo.readings.branches import SAME_SETTING, branches_by_order
from rheo.readings.readings import Readings

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.int64]

# A fall of this much is more than the scatter of a good instrument.
FALL = 0.01
# Area between the branches over the area under the way up.
LOOP = 0.05
# Change of the reading along a straight line through a hold, and over its scatter.
DRIFT, DRIFT_OVER_SCATTER = 0.03, 2.0
_LEAST_FOR_DRIFT = 3
# Sweeps further apart than this [K] are not two branches of one.
SAME_TEMPERATURE = 2.0
# Nor are those whose shares of solids differ by more than this share of the largest.
SAME_SOLIDS = 0.02


def curve_or_none(readings: Readings) -> tuple[FloatArray, FloatArray] | None:
    """Return nominal shear rate and stress, None where the columns do not suffice."""
    try:
        curve = readings.flow_curve()
    except InputError:
        return None
    return curve.rate, curve.stress


def pair(readings: Readings) -> tuple[FloatArray, FloatArray] | None:
    """Return shear rate and stress, or what stands for them as long as no geometry is known."""
    curve = curve_or_none(readings)
    if curve is not None:
        return curve
    settings = (readings.angular_speed, readings.flow, readings.velocity, readings.rate)
    answers = (
        *(readings.torque, readings.torque_fraction, readings.dial, readings.pressure_drop),
        readings.stress,
    )
    setting = next((column for column in settings if column is not None), None)
    answer = next((column for column in answers if column is not None), None)
    return None if setting is None or answer is None else (setting, answer)


def groups(readings: Readings, by_block: bool = True) -> IntArray:
    """Return a number for each reading that changes with the tube, gap, temperature and block.

    Parameters
    ----------
    readings : Readings
        The readings.
    by_block : bool
        Whether it changes with the block of the file too.
    """
    count = len(readings)
    change = np.zeros(count, dtype=bool)
    columns: list[NDArray[np.generic]] = []
    if by_block and readings.block is not None:
        columns.append(readings.block)
    if readings.geometry is not None:
        columns += [
            np.broadcast_to(value, count) for value in readings.geometry.dimensions.values()
        ]
    for column in columns:
        change[1:] |= column[1:] != column[:-1]
    if readings.temperature is not None:
        # A bath that drifts stays within a sweep; one that is set anew begins another.
        change[1:] |= np.abs(np.diff(readings.temperature)) > SAME_TEMPERATURE
    if readings.solids_fraction is not None:
        share = readings.solids_fraction
        change[1:] |= np.abs(np.diff(share)) > SAME_SOLIDS * np.max(share)
    return np.cumsum(change)


@dataclass(frozen=True)
class Run:
    """Readings that follow each other on one branch.

    Parameters
    ----------
    branch : str
        ``up``, ``down``, ``hold`` or empty.
    group : int
        Which block, tube, gap and temperature.
    start, end : int
        First reading, and the one after the last.
    """

    branch: str
    group: int
    start: int
    end: int


def runs(readings: Readings, setting: FloatArray) -> tuple[Run, ...]:
    """Return the runs of a set of readings, by the branches given or by the order."""
    group = groups(readings)
    branch = readings.branch
    if branch is None:
        branch = branches_by_order(setting, group)
    change = (branch[1:] != branch[:-1]) | (group[1:] != group[:-1])
    edges = np.r_[0, np.flatnonzero(change) + 1, branch.size].tolist()
    return tuple(
        Run(str(branch[start]), int(group[start]), start, end)
        for start, end in itertools.pairwise(edges)
    )


def not_rising(readings: Readings) -> tuple[Caution, ...]:
    """Flag readings whose stress is below that at a lower rate, or whose rate goes back."""
    both = pair(readings)
    if both is None:
        return ()
    rate, stress = both
    too_low = np.zeros(rate.size, dtype=bool)
    too_high = np.zeros(rate.size, dtype=bool)
    goes_back = np.zeros(rate.size, dtype=bool)
    for run in runs(readings, rate):
        if run.branch not in {"up", "down"}:
            continue
        span = slice(run.start, run.end)
        low, high = _out_of_order(rate[span], stress[span])
        # One reading too high leaves many after it lower: the fewer are the ones to look at.
        blamed = high if high.sum() < low.sum() else low
        (too_high if blamed is high else too_low)[span] |= blamed
        step = np.diff(rate[span]) if run.branch == "up" else -np.diff(rate[span])
        back = step < -SAME_SETTING * rate[span][1:]
        if readings.branch is not None and back.size > 1 and back.mean() < 0.5:
            goes_back[run.start + 1 : run.end] |= back
    cautions = []
    for mask, words, advice in (
        (
            too_low,
            "lower than at a lower shear rate",
            "Look for slip, a sample that leaves the gap, or breakdown under shear.",
        ),
        (
            too_high,
            "higher than at a higher shear rate",
            "Look for a value misread or mistyped, a reading taken too early, slip or breakdown.",
        ),
    ):
        if mask.any():
            cautions.append(
                Caution(
                    "stress-not-rising",
                    f"At {int(mask.sum())} of {rate.size} readings the stress is {words} of the "
                    "same sweep.",
                    advice,
                    "stress",
                    tuple(int(index) for index in np.flatnonzero(mask)),
                )
            )
    if goes_back.any():
        cautions.append(
            Caution(
                "rate-not-rising",
                f"At {int(goes_back.sum())} of {rate.size} readings the shear rate goes back "
                "within a sweep.",
                "Look whether readings are out of order or the branch is wrong.",
                "rate",
                tuple(int(index) for index in np.flatnonzero(goes_back)),
            )
        )
    return tuple(cautions)


def _out_of_order(
    rate: FloatArray, stress: FloatArray
) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    """Which stresses lie below one at a lower rate, and which above one at a higher rate.

    Readings at one rate scatter; only a higher rate must have a higher stress.
    """
    order = np.argsort(rate, kind="stable")
    ordered, sorted_rate = stress[order], rate[order]
    before = np.searchsorted(sorted_rate, sorted_rate * (1.0 - SAME_SETTING)) - 1
    after = np.searchsorted(sorted_rate, sorted_rate / (1.0 - SAME_SETTING), side="right")
    highest = np.maximum.accumulate(ordered)[np.maximum(before, 0)]
    least = np.minimum.accumulate(ordered[::-1])[::-1][np.minimum(after, rate.size - 1)]
    low, high = np.zeros(rate.size, dtype=bool), np.zeros(rate.size, dtype=bool)
    low[order] = (before >= 0) & (ordered < (1.0 - FALL) * highest)
    high[order] = (after < rate.size) & (least < (1.0 - FALL) * ordered)
    return low, high


def loop_area(
    rate_up: ArrayLike, stress_up: ArrayLike, rate_down: ArrayLike, stress_down: ArrayLike
) -> tuple[float, float]:
    """Return the area between two branches, over the shear rates that both have.

    Parameters
    ----------
    rate_up, stress_up : array_like, shape (n,)
        The way up [1/s], [Pa].
    rate_down, stress_down : array_like, shape (m,)
        The way down [1/s], [Pa].

    Returns
    -------
    tuple of float
        Area [Pa/s], positive when the way up lies higher, and that over the area under the way
        up [-]; both NaN when the branches have no shear rates in common.
    """
    up, down = _by_rate(rate_up, stress_up), _by_rate(rate_down, stress_down)
    low, high = max(up[0][0], down[0][0]), min(up[0][-1], down[0][-1])
    if not low < high:
        return float("nan"), float("nan")
    inside = np.concatenate([up[0], down[0]])
    nodes = np.unique(np.r_[low, high, inside[(inside > low) & (inside < high)]])
    over, under = (np.interp(nodes, *branch) for branch in (up, down))
    area = float(np.trapezoid(over - under, nodes))
    return area, area / float(np.trapezoid(over, nodes))


def _by_rate(rate: ArrayLike, stress: ArrayLike) -> tuple[FloatArray, FloatArray]:
    """Return points in order of rate, those at one rate averaged."""
    at, where = np.unique(np.asarray(rate, dtype=float), return_inverse=True)
    total = np.bincount(where, weights=np.asarray(stress, dtype=float))
    return at, total / np.bincount(where)


def branches_apart(readings: Readings) -> tuple[Caution, ...]:
    """Flag the ways up and down that lie apart."""
    both = pair(readings)
    if both is None:
        return ()
    rate, stress = both
    known = [run for run in runs(readings, rate) if run.branch in {"up", "down"}]
    place = groups(readings, by_block=False)
    cautions = []
    for first, second in itertools.pairwise(known):
        up, down = slice(first.start, first.end), slice(second.start, second.end)
        here = place[first.start] == place[second.start] and _as_warm(readings, up, down)
        if not here or (first.branch, second.branch) != ("up", "down"):
            continue
        area, share = loop_area(rate[up], stress[up], rate[down], stress[down])
        if not abs(share) > LOOP:
            continue
        lower, why = (
            ("below", "the product breaks down under shear or was not yet steady")
            if share > 0
            else ("above", "the product builds up under shear, dries or cools")
        )
        cautions.append(
            Caution(
                "branches-apart",
                f"The way down lies {in_percent(abs(share))} {lower} the way up (loop area "
                f"{abs(area):.3g} Pa/s): {why}.",
                "Decide which branch stands for the product in the line, and fit that one.",
                "sweep",
                (*range(first.start, first.end), *range(second.start, second.end)),
            )
        )
    return tuple(cautions)


def _as_warm(readings: Readings, up: slice, down: slice) -> bool:
    if readings.temperature is None:
        return True
    means = readings.temperature[up].mean(), readings.temperature[down].mean()
    return bool(abs(means[0] - means[1]) < SAME_TEMPERATURE)


def drift(readings: Readings) -> tuple[Caution, ...]:
    """Flag readings at constant speed that go on rising or falling with time."""
    both = pair(readings)
    if both is None:
        return ()
    setting, answer = both
    group = groups(readings)
    apart = np.abs(np.diff(setting)) > SAME_SETTING * np.maximum(setting[1:], setting[:-1])
    starts = np.r_[0, np.flatnonzero(apart | (group[1:] != group[:-1])) + 1]
    counts = np.diff(np.r_[starts, setting.size])
    when = np.arange(setting.size, dtype=float) if readings.time is None else readings.time
    # Only its proportions matter, and as a share of the last no square of it can overflow.
    last = float(np.max(np.abs(when)))
    when = when / last if last > 0 else when
    slope, scatter, span = _lines_through(when, answer, starts, counts)
    mean = np.add.reduceat(answer, starts) / counts
    change = slope * span / mean
    known = (counts >= _LEAST_FOR_DRIFT) & (span > 0)
    drifting = known & (np.abs(change) > DRIFT)
    drifting &= np.abs(slope) * span > DRIFT_OVER_SCATTER * scatter
    if not drifting.any():
        return ()
    worst = float(change[drifting][np.argmax(np.abs(change[drifting]))])
    points = np.repeat(drifting, counts)
    return (
        Caution(
            "drift",
            f"At {int(drifting.sum())} constant speed{'s' if drifting.sum() > 1 else ''} the "
            f"reading goes on {'rising' if worst > 0 else 'falling'}, by up to "
            f"{in_percent(abs(worst))}.",
            "Wait until the reading is steady, and take the last ones.",
            "time",
            tuple(int(index) for index in np.flatnonzero(points)),
        ),
    )


def _lines_through(
    x: FloatArray, y: FloatArray, starts: IntArray, counts: IntArray
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return slope, standard deviation about the line and span in x of each run."""

    def total(values: FloatArray) -> FloatArray:
        return np.add.reduceat(values, starts)

    dx = x - np.repeat(total(x) / counts, counts)
    dy = y - np.repeat(total(y) / counts, counts)
    spread = total(dx**2)
    slope = total(dx * dy) / np.where(spread > 0, spread, 1.0)
    residual = dy - np.repeat(slope, counts) * dx
    scatter = np.sqrt(total(residual**2) / np.maximum(counts - 2, 1))
    span = np.maximum.reduceat(x, starts) - np.minimum.reduceat(x, starts)
    return slope, scatter, span
