"""Residuals of a fit: what the model does not explain."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from rheo.report.display import unit_label
from rheo.report.picture import Axis, Limit, Panel, Picture, Points, Strip, array
from rheo.report.text import one_line

_OF_STRIP = " The strip holds the root mean square of them all."


def residuals(
    rate: ArrayLike,
    measured: ArrayLike,
    fitted: ArrayLike,
    *,
    excluded: ArrayLike | None = None,
    flagged: ArrayLike | None = None,
    usual: float | None = None,
    name: str = "",
    index: ArrayLike | None = None,
    system: str = "metric",
) -> Picture:
    """Draw how far each reading lies from the model, in percent of the model.

    Parameters
    ----------
    rate : array_like, shape (n,)
        Shear rate [1/s].
    measured, fitted : array_like, shape (n,)
        The reading and what the model predicts, in the same unit.
    excluded, flagged : array_like of bool, shape (n,), optional
        Drawn hollow, and drawn with a ring.
    usual : float, optional
        Root mean square of the relative residuals [-], shaded either side of 0.
    name : str
        Name of the model.
    index : array_like of int, shape (n,), optional
        Numbers of the readings, counted from 0; their order when absent.
    system : str
        Unit system.

    Returns
    -------
    Picture
        With one panel.
    """
    rate, measured, fitted = array(rate), array(measured), array(fitted)
    numbers = np.arange(rate.size) if index is None else np.asarray(index)
    percent = 100.0 * (measured / fitted - 1.0)
    out = np.zeros(rate.size, dtype=bool) if excluded is None else np.asarray(excluded, dtype=bool)
    ringed = np.zeros(rate.size, dtype=bool) if flagged is None else np.asarray(flagged, dtype=bool)
    marks: list[Strip | Limit | Points] = [Limit(0.0, "", colour="muted")]
    if usual is not None:
        marks.insert(0, Strip(-100 * usual, 100 * usual, axis="y"))
    for hollow, words in ((False, "readings"), (True, "not fitted")):
        these = np.flatnonzero(out == hollow)
        if these.size:
            hover = tuple(f"reading {numbers[i] + 1}\n{percent[i]:+.2g} %" for i in these)
            marks.append(
                Points(
                    rate[these], percent[these], words, hollow=hollow, ringed=ringed[these],
                    hover=hover, index=tuple(int(numbers[i]) for i in these),
                )
            )  # fmt: skip
    largest = float(np.nanmax(np.abs(percent), initial=1.0)) * 1.2
    return Picture(
        key="residuals",
        title="Residuals",
        description=(
            f"Reading over model minus one, in percent, against shear rate{_of(name)}. A trend "
            "means that the model has the wrong shape; scatter means noise."
            f"{_OF_STRIP if usual is not None else ''}"
        ),
        x=Axis("Shear rate γ̇", unit_label("rate", system), log=True),
        panels=(Panel(Axis("Residual", "%", low=-largest, high=largest), tuple(marks)),),
        height=270.0,
    )


def _of(name: str) -> str:
    return f", for {one_line(name, 60)}" if name else ""
