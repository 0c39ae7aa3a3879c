"""The doubt budget: what makes the pressure drop uncertain, largest first."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike

from rheo.report.picture import Axis, Bars, Panel, Picture, array
from rheo.report.text import one_line


def doubt_budget(names: Sequence[str], shares: ArrayLike) -> Picture:
    """Draw the share of the variance that each source of doubt brings.

    Parameters
    ----------
    names : sequence of str
        What the doubt comes from.
    shares : array_like, shape (n,)
        Shares of the variance of the pressure drop [-].

    Returns
    -------
    Picture
        With one panel of horizontal bars, the largest at the top.
    """
    percent = 100.0 * array(shares)
    order = np.argsort(-percent, kind="stable")
    at = np.arange(order.size, dtype=float)
    labels = tuple(_percent(float(percent[i])) for i in order)
    hover = tuple(f"{names[i]}\n{label}" for i, label in zip(order, labels, strict=True))
    bars = Bars(at, np.zeros(at.size), percent[order], "", 0, True, None, hover, labels, 0.62)
    ticks = tuple((float(n), one_line(names[i], 32)) for n, i in enumerate(order))
    top = max(float(percent.max(initial=0.0)) * 1.3, 10.0)
    return Picture(
        key="doubt-budget",
        title="Where the doubt comes from",
        description="Share of the variance of the pressure drop by source, largest first.",
        x=Axis("Variance share", "%", low=0.0, high=top),
        panels=(
            Panel(
                Axis("", "", low=-0.6, high=at.size - 0.4, ticks=ticks, descending=True), (bars,)
            ),
        ),
        height=100.0 + 28.0 * at.size,
    )


def _percent(value: float) -> str:
    return "< 1 %" if 0 < value < 1 else f"{value:.0f} %"
