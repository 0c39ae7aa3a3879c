"""A line's duty, its parts, start-up and doubt as tables."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

from rheo.cli import terminal

if TYPE_CHECKING:
    from rich.console import Console
    from rich.text import Text

    from rheo.errors import Caution
    from rheo.line import LineResult
    from rheo.line.doubt import DoubtBudget
    from rheo.line.result import PartResult

_BAR = 24
# Cautions of a flow curve used where it was not measured.
_TEMPERATURES = {"outside-temperature-range", "temperature-of-readings", "temperature-not-in-model"}
_SOLIDS = {"outside-measured-fraction", "solids-of-readings", "solids-not-in-model"}
_DOUBT = "± is the 95 % interval by readings and model choice"


def with_interval(value: Any, interval: Any, quantity: str, units: str) -> str:
    """Return a value with the digits that its 95 % interval allows."""
    from rheo.report.display import text

    if interval is None:
        return text(float(value), quantity, units)
    return text(float(value), quantity, units, float(interval[0]), float(interval[1]))


def show_duty(out: Console, result: LineResult, units: str, efficiency: float | None) -> None:
    """Write what the pump must do."""
    from rheo.readings.solids import in_words
    from rheo.report.display import text

    drop = with_interval(
        result.friction_pressure, result.friction_pressure_interval, "pressure", units
    )
    whole = with_interval(
        result.differential_pressure, result.differential_pressure_interval, "pressure", units
    )
    doubtful = result.differential_pressure_interval is not None
    terminal.heading(out, "Duty", _DOUBT if doubtful else "")
    power = text(result.hydraulic_power, "power", units) + " hydraulic"
    if result.shaft_power is not None and efficiency is not None:
        power += f", {text(result.shaft_power, 'power', units)} shaft at {100 * efficiency:.3g} %"
    npsh = result.npsh_available
    solids = result.product.solids_fraction
    rise = result.temperature_rise
    terminal.values(
        out,
        [
            ("flow", terminal.given(float(result.flow), "flow", units)),
            ("solids of the product", None if solids is None else in_words(solids)),
            ("pressure drop, friction", terminal.text(drop, "bold")),
            ("height, vessels, velocity", _statics(result, units)),
            ("differential pressure", terminal.text(whole, "bold")),
            ("at the pump, suction side", text(result.suction_pressure, "pressure", units)),
            ("at the pump, discharge side", text(result.discharge_pressure, "pressure", units)),
            ("pump power", power),
            ("NPSH available", None if npsh is None else text(npsh, "length", units)),
            ("viscous heating", None if rise is None else text(rise, "temperature_rise", units)),
            ("mean time in the line", text(result.residence_time, "duration", units)),
        ],
    )


def _statics(result: LineResult, units: str) -> str:
    from rheo.report.display import text

    return text(float(result.static_pressure + result.kinetic_pressure), "pressure", units)


def show_answer(
    out: Console,
    result: LineResult,
    budget: DoubtBudget,
    units: str,
    cautions: Sequence[Caution],
) -> None:
    """Write the answer in a sentence, with all its doubt, before all that it rests on."""
    from rheo.report.display import text

    low, high = budget.interval
    flow = terminal.given(float(result.flow), "flow", units)
    if budget.pressure < 0:
        whole = text(-budget.pressure, "pressure", units, -high, -low)
        words = f"Heights and vessels drive the line by {whole} (95 %) more than {flow} takes"
    else:
        whole = text(budget.pressure, "pressure", units, low, high)
        words = f"The line needs {whole} (95 %) at {flow}"
    pipes = [part for part in result.parts if part.kind == "pipe"]
    if pipes:
        words += f"; flow is {', '.join(dict.fromkeys(part.regime for part in pipes))}"
        if all(part.inside_measured_range for part in pipes):
            words += " and inside the measured shear rates"
        elif any(part.inside_measured_range is False for part in pipes):
            words += " and outside the measured shear rates"
    if any(one.code in _TEMPERATURES for one in cautions):
        words += "; the temperature is outside that of the readings"
    if any(one.code in _SOLIDS for one in cautions):
        words += "; the solids are outside those of the readings"
    start = float(result.start_up.pressure)
    if start > 0:
        words += f"; start-up takes up to {text(start, 'pressure', units)}"
    if cautions:
        words += f"; {len(cautions)} Caution{'s' if len(cautions) > 1 else ''} below"
    terminal.sentence(out, f"{words}.", "bold")


def show_rates(out: Console, result: LineResult) -> None:
    """Write the wall shear rates of the pipes against the measured range."""
    from rheo.report.numbers import number

    pipes = [part for part in result.parts if part.kind == "pipe"]
    if not pipes:
        return
    rates = [float(part.wall_rate) for part in pipes]
    regimes = ", ".join(dict.fromkeys(part.regime for part in pipes))
    span = number(min(rates))
    if max(rates) > 1.005 * min(rates):
        span += f" to {number(max(rates))}"
    measured = result.product.measured_rates
    terminal.heading(out, "In the pipes")
    terminal.values(
        out,
        [
            ("regime", regimes),
            ("wall shear rate", terminal.text(f"{span} 1/s", "bold")),
            (
                "measured range",
                None if measured is None else _against(measured, min(rates), max(rates)),
            ),
        ],
    )


def _against(measured: tuple[float, float], low: float, high: float) -> Text:
    from rheo.report.numbers import number

    words = terminal.text(f"{number(measured[0])} to {number(measured[1])} 1/s: ")
    if measured[0] <= low and high <= measured[1]:
        return words.append("the pipes work inside it", "green")
    return words.append("the pipes work outside it", "bold yellow")


def show_parts(out: Console, result: LineResult, units: str) -> None:
    """Write the breakdown by part."""
    from rheo.report.display import unit_label

    pressure = unit_label("pressure", units)
    terminal.heading(out, "Parts of the line")
    terminal.table(
        out,
        (
            "part",
            f"friction\n{pressure}",
            f"height\n{pressure}",
            f"velocity\n{unit_label('velocity', units)}",
            "wall rate\n1/s",
            "regime",
        ),
        _part_rows(result.parts, units),
        least_wanted=(3, 2, 5),
    )


def _part_rows(parts: tuple[PartResult, ...], units: str) -> list[tuple[Any, ...]]:
    from rheo.report.display import shown

    def cells(values: list[float | None], quantity: str) -> list[str]:
        converted = [None if one is None else float(shown(one, quantity, units)) for one in values]
        return terminal.column(converted)

    pipes = [part.kind == "pipe" for part in parts]
    losses = cells([float(part.pressure_loss) for part in parts], "pressure")
    heights = cells([float(part.elevation_pressure) or None for part in parts], "pressure")
    velocities = cells(_of_pipes([float(part.velocity) for part in parts], pipes), "velocity")
    rates = cells(_of_pipes([float(part.wall_rate) for part in parts], pipes), "rate")
    regimes = [_regime(part) for part in parts]
    names = [part.name for part in parts]
    return list(zip(names, losses, heights, velocities, rates, regimes, strict=True))


def _of_pipes(values: list[float], pipes: list[bool]) -> list[float | None]:
    return [value if pipe else None for value, pipe in zip(values, pipes, strict=True)]


def _regime(part: PartResult) -> Text:
    is_pipe = part.kind == "pipe"
    words = terminal.text(part.regime if is_pipe else "")
    if is_pipe and part.inside_measured_range is False:
        words.append(" !", "bold yellow")
    return words


def show_doubt(out: Console, budget: DoubtBudget, units: str) -> None:
    """Write the doubt budget as bars, the largest first."""
    from rheo.report.display import text

    terminal.heading(out, "What makes the pressure uncertain")
    whole = text(budget.pressure, "pressure", units, *budget.interval)
    terminal.sentence(out, f"{budget.sentence} With all of it: {whole} (95 %).", units=units)
    rows = []
    for one in budget.shares:
        if one.share < 0.005:
            continue
        bar = terminal.text("█" * max(1, round(_BAR * one.share)), "cyan")
        rows.append((one.name.lower(), bar.append(f" {100 * one.share:.0f} %", "default")))
    terminal.values(out, rows)
