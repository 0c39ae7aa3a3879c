"""The flow curve: readings, the chosen model with its band, its rivals, and the rates in use."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.report.display import shown, unit_label
from rheo.report.numbers import number as number_text
from rheo.report.picture import Axis, Band, FloatArray, Line, Mark, Panel, Picture, Points, Strip
from rheo.report.picture import array as as_array

BRANCH_WORDS = {"up": "rising", "down": "falling", "hold": "held", "": ""}
# Temperatures closer than this are drawn as one series [K].
_TEMPERATURE_STEP = 1.0
# Likewise the solids fraction [-].
_SOLIDS_STEP = 0.002


@dataclass(frozen=True, eq=False)
class Curve:
    """A model as a line.

    Parameters
    ----------
    name : str
        In the legend.
    rate, stress : array, shape (n,)
        Shear rate [1/s] and stress [Pa].
    low, high : array, shape (n,), optional
        The band of the stress [Pa].
    style : int
        Number of the series style.
    """

    name: str
    rate: FloatArray
    stress: FloatArray
    low: FloatArray | None = None
    high: FloatArray | None = None
    style: int = 0


def flow_curve(
    rate: ArrayLike,
    stress: ArrayLike,
    *,
    temperature: ArrayLike | None = None,
    solids: ArrayLike | None = None,
    branch: Sequence[str] | NDArray[np.str_] | None = None,
    excluded: ArrayLike | None = None,
    flagged: ArrayLike | None = None,
    chosen: Sequence[Curve] = (),
    rivals: Sequence[Curve] = (),
    in_line: tuple[float, float] | None = None,
    viscosity: bool = False,
    log: bool = True,
    system: str = "metric",
) -> Picture:
    """Draw readings and models as stress or as viscosity against shear rate.

    Parameters
    ----------
    rate, stress : array_like, shape (n,)
        Readings: shear rate [1/s] and stress [Pa].
    temperature : array_like, shape (n,), optional
        [K]; readings within 1 K share a colour.
    solids : array_like, shape (n,), optional
        Solids fraction [-]; tells points apart instead of the temperature.
    branch : sequence of str, shape (n,), optional
        ``up``, ``down``, ``hold`` or an empty text; each has its own marker.
    excluded, flagged : array_like of bool, shape (n,), optional
        Drawn hollow, and drawn with a ring.
    chosen : sequence of Curve
        The chosen model, one a temperature or solids fraction, with its band.
    rivals : sequence of Curve
        The others, drawn thin.
    in_line : (float, float), optional
        Least and largest shear rate in the line [1/s], shaded.
    viscosity, log : bool
        Apparent viscosity instead of stress; logarithmic axes.
    system : str
        Unit system.

    Returns
    -------
    Picture
        With one panel.
    """
    rate, stress = as_array(rate), as_array(stress)
    quantity = "viscosity" if viscosity else "stress"

    def height(at: FloatArray, value: FloatArray) -> FloatArray:
        return shown(value / at if viscosity else value, quantity, system)

    marks: list[Mark] = []
    if in_line is not None:
        marks.append(Strip(*_not_a_line(in_line, log), name="rates in the line"))
    for curve in chosen:
        if curve.low is not None and curve.high is not None:
            low, high = height(curve.rate, curve.low), height(curve.rate, curve.high)
            marks.append(Band(curve.rate, low, high, "95 % interval", curve.style))
    for number, curve in enumerate(rivals):
        line = height(curve.rate, curve.stress)
        marks.append(
            Line(
                curve.rate, line, curve.name, style=number + 1, dash=1 + number % 5, faint=True,
                colour="muted",
            )
        )  # fmt: skip
    for curve in chosen:
        line = height(curve.rate, curve.stress)
        marks.append(Line(curve.rate, line, curve.name, curve.style, width=2.6, dash=0))
    groups = (
        temperature_groups(temperature, rate.size, system)
        if solids is None
        else solids_groups(solids)
    )
    marks += _reading_marks(
        rate, height(rate, stress), groups, branch, excluded, flagged, quantity, system
    )
    name = "Apparent viscosity η" if viscosity else "Shear stress τ"
    return Picture(
        key=f"flow-curve-{quantity}-{'log' if log else 'linear'}",
        title="Viscosity" if viscosity else "Flow curve",
        description=(
            f"{name} of the readings and of the models against shear rate. Hollow points are left "
            "out of the fit; ringed points are flagged."
        ),
        x=Axis("Shear rate γ̇", unit_label("rate", system), log=log),
        panels=(Panel(Axis(name, unit_label(quantity, system), log=log), tuple(marks)),),
        height=430.0,
    )


def _not_a_line(ends: tuple[float, float], log: bool) -> tuple[float, float]:
    """Widen a strip that would be too thin to see."""
    low, high = min(ends), max(ends)
    return (low * 0.97, high * 1.03) if high < low * 1.06 or not log else (low, high)


def _reading_marks(
    rate: FloatArray,
    height: FloatArray,
    grouped: tuple[NDArray[np.int_], list[str]],
    branch: Sequence[str] | NDArray[np.str_] | None,
    excluded: ArrayLike | None,
    flagged: ArrayLike | None,
    quantity: str,
    system: str,
) -> list[Mark]:
    count = rate.size
    out = np.zeros(count, dtype=bool) if excluded is None else np.asarray(excluded, dtype=bool)
    ringed = np.zeros(count, dtype=bool) if flagged is None else np.asarray(flagged, dtype=bool)
    branches = np.array([""] * count if branch is None else branch, dtype=np.str_)
    groups, group_names = grouped
    marks: list[Mark] = []
    kinds = list(dict.fromkeys(branches.tolist()))
    for number, group_name in enumerate(group_names):
        for kind_number, kind in enumerate(kinds):
            for hollow in (False, True):
                these = np.flatnonzero((groups == number) & (branches == kind) & (out == hollow))
                if these.size == 0:
                    continue
                words = [w for w in (group_name, BRANCH_WORDS.get(kind, kind)) if w]
                name = ", ".join(words) or "readings"
                marks.append(
                    Points(
                        rate[these],
                        height[these],
                        f"{name}, not fitted" if hollow else name,
                        style=number if len(group_names) > 1 else kind_number,
                        marker=kind_number if len(kinds) > 1 else None,
                        hollow=hollow,
                        ringed=ringed[these],
                        hover=tuple(
                            _hover(int(i), rate, height, quantity, system, bool(ringed[i]), hollow)
                            for i in these
                        ),
                        index=tuple(int(i) for i in these),
                    )
                )
    return marks


def temperature_groups(
    temperature: ArrayLike | None, count: int, system: str
) -> tuple[NDArray[np.int_], list[str]]:
    """Return the group number of each reading and the name of each group.

    Readings sorted by temperature fall into a new group wherever the step is above 1 K.
    """
    if temperature is None:
        return np.zeros(count, dtype=int), [""]
    kelvin = np.broadcast_to(as_array(temperature), (count,))
    order = np.argsort(kelvin, kind="stable")
    steps = np.diff(kelvin[order], prepend=kelvin[order[:1]]) > _TEMPERATURE_STEP
    groups = np.empty(count, dtype=int)
    groups[order] = np.cumsum(steps)
    unit = unit_label("temperature", system)
    names = [
        f"{number_text(float(shown(kelvin[groups == n].mean(), 'temperature', system)))} {unit}"
        for n in range(int(groups.max(initial=0)) + 1)
    ]
    return groups, names


def solids_groups(solids: ArrayLike) -> tuple[NDArray[np.int_], list[str]]:
    """Return the group number of each reading by its solids, and the name of each group."""
    share = as_array(solids)
    order = np.argsort(share, kind="stable")
    groups = np.empty(share.size, dtype=int)
    groups[order] = np.cumsum(np.diff(share[order], prepend=share[order[:1]]) > _SOLIDS_STEP)
    names = [
        f"{number_text(100.0 * float(share[groups == n].mean()))} % solids"
        for n in range(int(groups.max(initial=0)) + 1)
    ]
    return groups, names


def _hover(
    i: int,
    rate: FloatArray,
    height: FloatArray,
    quantity: str,
    system: str,
    flagged: bool,
    not_fitted: bool,
) -> str:
    state = " (flagged)" if flagged else ""
    state += " (not fitted)" if not_fitted else ""
    return (
        f"reading {i + 1}{state}\n{rate[i]:.4g} {unit_label('rate', system)}, "
        f"{height[i]:.4g} {unit_label(quantity, system)}"
    )
