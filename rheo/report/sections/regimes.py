"""How far each pipe is from another regime."""

from __future__ import annotations

from collections.abc import Sequence

from rheo.case.comparisons import RegimeMargin
from rheo.report.display import shown, unit_label
from rheo.report.document import Table
from rheo.report.numbers import number
from rheo.report.words import capital, percent

# Between these shares of the flow at which laminar flow ends, the regime is in doubt.
NEAR = (0.7, 1.4)


def regime_sentence(margins: Sequence[RegimeMargin]) -> str:
    """Say in one sentence which regimes there are, and which pipe is nearest to a change."""
    if not margins:
        return "There is no pipe in which a regime could be told."
    regimes = dict.fromkeys(one.regime for one in margins)
    nearest = min(margins, key=lambda one: max(one.share, 1.0 / one.share))
    where = "in every pipe" if len(regimes) == 1 else "along the line"
    text = f"The flow is {' and '.join(regimes)} {where}. "
    if nearest.share < 1.0:
        text += (
            f"{capital(nearest.name)} is nearest to the change, at {percent(nearest.share)} of "
            "the flow at which laminar flow ends"
        )
    else:
        text += (
            f"{capital(nearest.name)} is nearest to the change, at {number(nearest.share, 2)} "
            "times the flow at which laminar flow ends"
        )
    return text + (": too near to be sure." if NEAR[0] < nearest.share < NEAR[1] else ".")


def regimes_table(margins: Sequence[RegimeMargin], system: str) -> Table:
    """Return for each pipe its regime and where laminar flow ends."""
    flow = unit_label("flow", system)

    def cell(value: float, quantity: str) -> str:
        return number(float(shown(value, quantity, system)))

    rows = tuple(
        (
            one.name,
            one.regime,
            number(one.reynolds),
            number(one.critical_reynolds),
            percent(one.share),
            cell(one.critical_flow, "flow"),
            _span([cell(at, "flow") for at in sorted(at for _, at in one.by_criterion)]),
        )
        for one in margins
    )
    return Table(
        (
            "Pipe",
            "Regime",
            "Reynolds number [-]",
            "Critical Re [-]",
            "Flow over that",
            f"Laminar up to [{flow}]",
            f"By all criteria [{flow}]",
        ),
        rows,
        numeric=tuple(range(2, 7)),
        states=tuple("flagged" if NEAR[0] < one.share < NEAR[1] else "" for one in margins),
    )


def _span(texts: list[str]) -> str:
    if not texts:
        return ""
    return texts[0] if texts[0] == texts[-1] else f"{texts[0]} to {texts[-1]}"
