"""One size of a comparison, and the comparison in words."""

from __future__ import annotations

from dataclasses import dataclass

from rheo.errors import Caution, in_groups
from rheo.line.catalogue import PipeSize
from rheo.line.cost import DEFAULT_CAPITAL, Costs


@dataclass(frozen=True)
class Candidate:
    """One size of the comparison.

    Parameters
    ----------
    size : PipeSize
        The size.
    passes : bool
        Whether it keeps every limit, with the confidence wanted.
    reasons : tuple of str
        Why it fails; empty when it passes.
    share_passing : float or None
        Share of the likely flow curves with which it keeps every limit [-]; None without draws.
    pressure : float
        Differential pressure [Pa].
    pressure_interval : tuple of float or None
        Middle 95 % over the product's draws [Pa].
    velocity, wall_rate : float
        In the pipes that are sized [m/s], [1/s].
    regime : str
        Of the pipe that is furthest from laminar.
    start_up_pressure : float
        For the full line at rest [Pa].
    hold_time, residence_time : float
        Of the fastest particle in the pipes that are sized, and mean in the whole line [s].
    npsh : float or None
        Available [m].
    cleaning_flow, cleaning_pressure : float
        Flow [m3/s] that cleans it at 1.5 m/s, and its differential pressure with water [Pa].
    capital, energy, annual_cost : float or None
        Installed price [currency], energy and total of a year [currency/a].
    """

    size: PipeSize
    passes: bool
    reasons: tuple[str, ...]
    share_passing: float | None
    pressure: float
    pressure_interval: tuple[float, float] | None
    velocity: float
    wall_rate: float
    regime: str
    start_up_pressure: float
    hold_time: float
    residence_time: float
    npsh: float | None
    cleaning_flow: float
    cleaning_pressure: float
    capital: float | None
    energy: float | None
    annual_cost: float | None


def size_sentence(
    candidates: tuple[Candidate, ...], best: Candidate | None, costs: Costs | None
) -> str:
    """Return the recommendation in one sentence."""
    if best is None:
        nearest = min(candidates, key=lambda one: len(one.reasons))
        return (
            f"No size keeps every limit; {nearest.size.name} comes nearest: "
            f"{'; '.join(nearest.reasons)}."
        )
    duty = f"{best.pressure / 1e5:.3g} bar at {best.velocity:.3g} m/s"
    if costs is None or best.annual_cost is None:
        why = "the smallest size that keeps every limit"
    else:
        cost = in_groups(f"{best.annual_cost:.0f}")
        why = f"the least annual cost of the sizes that keep every limit, {cost} {costs.currency}"
    text = f"Take {best.size.name}: {duty}, {why}"
    smaller = [one for one in candidates if one.size.inside_diameter < best.size.inside_diameter]
    if smaller and smaller[-1].reasons:
        text += f"; {smaller[-1].size.name} fails, {smaller[-1].reasons[0]}"
    elif smaller and smaller[-1].annual_cost is not None and best.annual_cost is not None:
        more = in_groups(f"{smaller[-1].annual_cost - best.annual_cost:.0f}")
        text += f"; {smaller[-1].size.name} would cost {more} more a year"
    return f"{text}."


def size_cautions(
    best: Candidate | None,
    by_draw: tuple[tuple[str, float], ...],
    by_flow: tuple[tuple[float, str], ...],
    costs: Costs | None,
    sizes: tuple[PipeSize, ...],
) -> tuple[Caution, ...]:
    """Return how the choice hangs on the product, the flow and the default capital."""
    found = []
    name = "none" if best is None else best.size.name
    share = dict(by_draw).get(name, 0.0) if by_draw else 1.0
    if share < 0.8:
        others = ", ".join(f"{one} ({100 * part:.0f} %)" for one, part in by_draw if one != name)
        found.append(
            Caution(
                "size-depends-on-product",
                f"Only {100 * share:.0f} % of the likely flow curves choose {name}; others choose "
                f"{others}.",
                "Narrow the doubt in the product before the size is ordered.",
                name,
            )
        )
    moved = [(flow, other) for flow, other in by_flow if other != name]
    if moved:
        words = "; ".join(f"{other} at {3600 * flow:.3g} m3/h" for flow, other in moved)
        found.append(
            Caution(
                "size-depends-on-flow",
                f"The choice moves with the flow: {words}.",
                "Settle the flow before the size is ordered.",
                name,
            )
        )
    if costs is not None and costs.uses_default(sizes):
        found.append(
            Caution("default-capital", DEFAULT_CAPITAL, "Give capital_by_size or a law.", "costs")
        )
    return tuple(found)
