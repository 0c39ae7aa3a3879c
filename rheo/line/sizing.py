"""Which pipe size to take: every size against the limits, and the least annual cost."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution, InputError
from rheo.line.catalogue import PipeSize
from rheo.line.checks import require_positive, require_share
from rheo.line.cleaning import cleaning
from rheo.line.cost import Costs
from rheo.line.draw_blocks import Progress
from rheo.line.limits import Check, Limits
from rheo.line.parts import FloatArray, Line
from rheo.line.product import Product, interval
from rheo.line.safety import GENERAL, PRESSURE, START_UP
from rheo.line.size_survey import SizeSurvey, in_order
from rheo.line.size_values import (
    REGIMES,
    SizeValues,
    checks,
    quantities,
    sized_length,
    with_diameters,
)
from rheo.line.size_words import Candidate, size_cautions, size_sentence


@dataclass(frozen=True)
class Sizing:
    """Sizes compared.

    Parameters
    ----------
    candidates : tuple of Candidate
        In order of inside diameter.
    recommended : Candidate or None
        Of those that pass the one of least annual cost (without costs, the smallest).
    sentence : str
        The recommendation in one sentence.
    choice_by_draw : tuple of (str, float)
        Size that each likely flow curve would choose, with its share [-], the commonest first;
        ``none`` where no size passes. Empty without draws.
    choice_by_flow : tuple of (float, str)
        Flow [m3/s] and the size chosen there.
    cautions : tuple of Caution
        What to know about it.
    safety : tuple of str
        Safety wording.
    """

    candidates: tuple[Candidate, ...]
    recommended: Candidate | None
    sentence: str
    choice_by_draw: tuple[tuple[str, float], ...]
    choice_by_flow: tuple[tuple[float, str], ...]
    cautions: tuple[Caution, ...]
    safety: tuple[str, ...] = (PRESSURE, START_UP, GENERAL)


def size_line(
    line: Line,
    product: Product,
    flow: float,
    sizes: Iterable[PipeSize],
    *,
    limits: Limits | None = None,
    costs: Costs | None = None,
    confidence: float = 0.9,
    flow_spread: float = 0.2,
    method: str | None = None,
    progress: Progress | None = None,
) -> Sizing:
    """Compare pipe sizes for a line and recommend one.

    Parameters
    ----------
    line : Line
        All pipes take the size, but those marked as of fixed size.
    product : Product
        Its draws give intervals, and how the choice moves with the doubt in the product.
    flow : float
        [m3/s].
    sizes : iterable of PipeSize
        From `catalogue`, or the user's own.
    limits : Limits, optional
        What the line must keep to.
    costs : Costs, optional
        How costs are counted; without them the smallest size that passes is recommended.
    confidence : float
        Share of the likely flow curves with which a size must keep every limit [-].
    flow_spread : float
        Part of the flow by which it may be more or less [-].
    method : str, optional
        Turbulent friction method.
    progress : callable, optional
        Told the share of the draws that is done [-], from time to time; what it raises ends the
        comparison.

    Returns
    -------
    Sizing
        Every size with pass, fail and why.

    Raises
    ------
    InputError
        If there is no size, or a limit needs what the product does not give.
    """
    survey = SizeSurvey(line, product, flow, in_order(sizes), method)
    return judge_sizes(
        survey,
        limits=limits,
        costs=costs,
        confidence=confidence,
        flow_spread=flow_spread,
        progress=progress,
    )


def judge_sizes(
    survey: SizeSurvey,
    *,
    limits: Limits | None = None,
    costs: Costs | None = None,
    confidence: float = 0.9,
    flow_spread: float = 0.2,
    progress: Progress | None = None,
) -> Sizing:
    """Compare the sizes of a survey by limits and costs; parameters as for `size_line`.

    What the survey has worked out already is not worked out again.
    """
    line, product, flow, sizes = survey.line, survey.product, survey.flow, survey.sizes
    require_positive(flow, "flow [m3/s]", line.name)
    require_share(confidence, "confidence [-]", line.name)
    if not 0 <= flow_spread < 1:
        raise InputError(f"flow_spread is {flow_spread:g}; it must be 0 or more and below 1")
    if not sizes:
        raise InputError("no sizes are given; choose a standard or give your own", line.name)
    keep = limits or Limits()
    length = sized_length(line)
    central = survey.central
    central_checks = checks(central.of, product, keep)
    passes = _all_pass(central_checks, len(sizes))
    shares = pressures = None
    choice_by_draw: tuple[tuple[str, float], ...] = ()
    if product.draws:
        drawn = survey.over_draws(("pressure", *quantities(keep)), progress)
        pressures = drawn["pressure"]
        kept = _all_pass(checks(drawn.__getitem__, product, keep), len(sizes))
        kept = np.broadcast_to(kept, pressures.shape)
        shares = kept.mean(axis=-1)
        merit = _merit(costs, sizes, length, pressures, flow)
        choice_by_draw = _shares(_choose(merit, kept), sizes)
    flows = survey.flows(flow_spread)
    spread = survey.spread(flow_spread)
    chosen = _choose(
        _merit(costs, sizes, length, spread.pressure, flows),
        np.broadcast_to(
            _all_pass(checks(spread.of, product, keep), len(sizes)), spread.pressure.shape
        ),
    )
    choice_by_flow = tuple(
        (float(at), _name(sizes, int(index))) for at, index in zip(flows, chosen, strict=True)
    )
    candidates = _candidates(
        line,
        sizes,
        central,
        central_checks,
        passes[:, 0],
        shares,
        pressures,
        confidence,
        costs,
        length,
        flow,
    )
    recommended = _best(candidates)
    return Sizing(
        candidates,
        recommended,
        size_sentence(candidates, recommended, costs),
        choice_by_draw,
        choice_by_flow,
        size_cautions(recommended, choice_by_draw, choice_by_flow, costs, sizes),
    )


def _all_pass(found: tuple[Check, ...], count: int) -> NDArray[np.bool_]:
    passes: NDArray[np.bool_] = np.ones((count, 1), dtype=bool)
    for check in found:
        passes = passes & check.passes
    return passes


def _merit(
    costs: Costs | None,
    sizes: tuple[PipeSize, ...],
    length: float,
    pressure: FloatArray,
    flow: float | FloatArray,
) -> FloatArray:
    """What is to be least: annual cost, or the diameter when no costs are given."""
    if costs is None:
        inside = np.array([[size.inside_diameter] for size in sizes])
        return np.broadcast_to(inside, pressure.shape)
    capital = costs.capital_per_metre(sizes)[:, np.newaxis] * length
    return capital * costs.annual_charge + costs.energy(pressure, flow)


def _choose(merit: FloatArray, passes: NDArray[np.bool_]) -> NDArray[np.intp]:
    """Index of the size chosen in each column; -1 where none passes."""
    best = np.argmin(np.where(passes, merit, np.inf), axis=0)
    return np.where(passes.any(axis=0), best, -1)


def _name(sizes: tuple[PipeSize, ...], index: int) -> str:
    return "none" if index < 0 else sizes[index].name


def _shares(chosen: NDArray[np.intp], sizes: tuple[PipeSize, ...]) -> tuple[tuple[str, float], ...]:
    index, counts = np.unique(chosen, return_counts=True)
    order = np.argsort(-counts, kind="stable")
    return tuple((_name(sizes, int(index[i])), float(counts[i] / chosen.size)) for i in order)


def _candidates(
    line: Line,
    sizes: tuple[PipeSize, ...],
    values: SizeValues,
    found: tuple[Check, ...],
    passes: NDArray[np.bool_],
    shares: FloatArray | None,
    pressures: FloatArray | None,
    confidence: float,
    costs: Costs | None,
    length: float,
    flow: float,
) -> tuple[Candidate, ...]:
    diameters = np.array([[size.inside_diameter] for size in sizes])
    washed = cleaning(with_diameters(line, diameters))
    wash_flow = np.broadcast_to(washed.flow, diameters.shape)[:, 0]
    wash_pressure = np.broadcast_to(washed.differential_pressure, diameters.shape)[:, 0]
    limits = None if pressures is None else interval(pressures)
    capital = None if costs is None else costs.capital_per_metre(sizes) * length
    energy = None if costs is None else costs.energy(values.pressure[:, 0], flow)
    rows = []
    for i, size in enumerate(sizes):
        reasons = [check.sentences[i] for check in found if not check.passes[i, 0]]
        share = None if shares is None else float(shares[i])
        if share is not None and passes[i] and share < confidence:
            reasons.append(
                f"keeps every limit with only {100 * share:.0f} % of the likely flow curves "
                f"({100 * confidence:.0f} % wanted)"
            )
        npsh = float(values.npsh[i, 0])
        rows.append(
            Candidate(
                size=size,
                passes=not reasons,
                reasons=tuple(reasons),
                share_passing=share,
                pressure=float(values.pressure[i, 0]),
                pressure_interval=None
                if limits is None
                else (float(limits[0][i]), float(limits[1][i])),
                velocity=float(values.velocity[i, 0]),
                wall_rate=float(values.wall_rate[i, 0]),
                regime=str(REGIMES[int(values.regime[i, 0])]),
                start_up_pressure=float(values.start_up_pressure[i, 0]),
                hold_time=float(values.hold_time[i, 0]),
                residence_time=float(values.residence_time[i, 0]),
                npsh=npsh if np.isfinite(npsh) else None,
                cleaning_flow=float(wash_flow[i]),
                cleaning_pressure=float(wash_pressure[i]),
                capital=None if capital is None else float(capital[i]),
                energy=None if energy is None else float(energy[i]),
                annual_cost=None
                if costs is None or capital is None or energy is None
                else float(capital[i] * costs.annual_charge + energy[i]),
            )
        )
    return tuple(rows)


def _best(candidates: tuple[Candidate, ...]) -> Candidate | None:
    passing = [one for one in candidates if one.passes]
    if not passing:
        return None
    priced = [one for one in passing if one.annual_cost is not None]
    return min(priced, key=lambda one: one.annual_cost or 0.0) if priced else passing[0]
