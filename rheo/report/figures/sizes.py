"""Candidate sizes side by side: pressure drop, velocity, yearly cost, and why some fail."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike

from rheo.report.display import shown, unit_label
from rheo.report.picture import Axis, Bars, Limit, Mark, Panel, Picture, array
from rheo.report.text import one_line
from rheo.report.words import without_shared_words

# Letters that fit along the axis.
_TICK_LETTERS = 110


def sizes(
    names: Sequence[str],
    pressure: ArrayLike,
    velocity: ArrayLike,
    cost: ArrayLike | None = None,
    *,
    reasons: Sequence[str] = (),
    recommended: int | None = None,
    pressure_limit: float | None = None,
    currency: str = "",
    system: str = "metric",
) -> Picture:
    """Draw the candidate sizes, smallest first.

    Parameters
    ----------
    names : sequence of str
        Name of each size.
    pressure, velocity : array_like, shape (n,)
        Pressure drop [Pa] and velocity [m/s].
    cost : array_like, shape (n,), optional
        Yearly cost.
    reasons : sequence of str
        Why each size fails; an empty text for a size that passes.
    recommended : int, optional
        Index of the recommended size.
    pressure_limit : float, optional
        [Pa].
    currency : str
        Unit of the cost.
    system : str
        Unit system.

    Returns
    -------
    Picture
        With two panels, or three with a cost.
    """
    count = len(names)
    at = np.arange(count, dtype=float)
    why = tuple(reasons) or ("",) * count
    failed = np.array([bool(reason) for reason in why])
    rows: list[tuple[str, str, np.ndarray, list[Mark]]] = [
        (words, unit_label(kind, system), shown(array(values), kind, system), [])
        for words, kind, values in (
            ("Pressure drop", "pressure", pressure),
            ("Velocity", "velocity", velocity),
        )
    ]
    if pressure_limit is not None:
        rows[0][3].append(Limit(float(shown(pressure_limit, "pressure", system)), "limit"))
    if cost is not None:
        rows.append(("Cost", f"{currency or 'money'}/year", array(cost), []))
    panels = []
    for number, (quantity, unit, values, limits) in enumerate(rows):
        hover = tuple(
            f"{name}\n{value:.3g} {unit}" + (f"\nfails: {reason}" if reason else "")
            for name, value, reason in zip(names, values, why, strict=True)
        )
        bars: list[Mark] = []
        for words, these, style in (
            ("passes", ~failed, 0),
            ("fails", failed, 0),
            ("recommended", at == recommended, 2),
        ):
            chosen = these & (at != recommended) if words != "recommended" else these
            where = np.flatnonzero(chosen & np.isfinite(values))
            if where.size:
                bars.append(
                    Bars(
                        at[where],
                        np.zeros(where.size),
                        values[where],
                        words,
                        style=style,
                        muted=failed[where],
                        hover=tuple(hover[i] for i in where),
                    )
                )
        high = _top(values, failed, limits) if number == 0 else None
        panels.append(Panel(Axis(quantity, unit, low=0.0, high=high), (*bars, *limits)))
    shared, short = without_shared_words(names)
    # A telephone has no room for the inches behind each DN; the table has them.
    bare = tuple(name.split(" (")[0] for name in short)
    short = bare if len(set(bare)) == count else short
    longest = max((len(name) for name in short), default=1)
    every = max(1, -(-count * (longest + 2) // _TICK_LETTERS))
    ticks = tuple((float(i), one_line(short[i], 24)) for i in range(0, count, every))
    return Picture(
        key="sizes",
        title="Sizes",
        description=(
            "Pressure drop, velocity and yearly cost of each candidate size. Hatched grey sizes "
            "fail a limit; the table gives the reason."
        ),
        x=Axis(
            f"Size, {one_line(shared, 50)}" if shared else "Size",
            "",
            low=-0.6,
            high=count - 0.4,
            ticks=ticks,
        ),
        panels=tuple(panels),
        height=150.0 * len(panels) + 60.0,
    )


def _top(values: np.ndarray, failed: np.ndarray, limits: Sequence[Mark]) -> float | None:
    """Return the top of the pressure axis: very small sizes would flatten all the others."""
    passing = values[~failed & np.isfinite(values)]
    known = [mark.value for mark in limits if isinstance(mark, Limit)]
    if passing.size == 0 and not known:
        return None
    interesting = max([*known, *passing.tolist()])
    top = float(np.nanmax(values, initial=0.0))
    if top > 3 * interesting:
        return 1.6 * interesting
    # Room for the name of the limit above its line.
    return max(1.1 * top, 1.35 * max(known)) if known else None
