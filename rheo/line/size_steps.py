"""What the next size down and the next size up would change."""

from __future__ import annotations

from dataclasses import dataclass

from rheo.line.parts import Line
from rheo.line.size_words import Candidate
from rheo.line.sizing import Sizing


@dataclass(frozen=True)
class SizeStep:
    """One size beside another.

    Parameters
    ----------
    candidate : Candidate
        The size.
    pressure : float
        How much more pressure it takes [Pa]; negative for less.
    capital, energy, annual_cost : float or None
        How much more it costs [currency], [currency/a], [currency/a]; None without costs.
    """

    candidate: Candidate
    pressure: float
    capital: float | None
    energy: float | None
    annual_cost: float | None


def sizes_beside(sizing: Sizing, at: Candidate) -> tuple[SizeStep | None, SizeStep | None]:
    """Return the next size down and the next size up from a size of a comparison.

    Parameters
    ----------
    sizing : Sizing
        The comparison.
    at : Candidate
        One of its candidates.

    Returns
    -------
    tuple of SizeStep or None
        None where there is no smaller or no larger size. Sizes of one diameter count as one.
    """
    smaller = [
        one for one in sizing.candidates if one.size.inside_diameter < at.size.inside_diameter
    ]
    larger = [
        one for one in sizing.candidates if one.size.inside_diameter > at.size.inside_diameter
    ]
    return (
        _step(smaller[-1], at) if smaller else None,
        _step(larger[0], at) if larger else None,
    )


def candidate_in_line(sizing: Sizing, line: Line) -> Candidate | None:
    """Return the candidate that the pipes of a line have now; None where they differ."""
    inside = {float(pipe.diameter) for pipe in line.pipes() if not pipe.fixed_size}
    if len(inside) != 1:
        return None
    diameter = inside.pop()
    named = {pipe.size_name for pipe in line.pipes() if not pipe.fixed_size}
    same = [one for one in sizing.candidates if abs(one.size.inside_diameter - diameter) < 1e-9]
    by_name = [one for one in same if one.size.name in named]
    return next(iter(by_name or same), None)


def _step(one: Candidate, at: Candidate) -> SizeStep:
    return SizeStep(
        one,
        one.pressure - at.pressure,
        _more(one.capital, at.capital),
        _more(one.energy, at.energy),
        _more(one.annual_cost, at.annual_cost),
    )


def _more(there: float | None, here: float | None) -> float | None:
    return None if there is None or here is None else there - here
