"""Results in a few words: the walk's states, values with their intervals, sizes."""

from __future__ import annotations

from typing import Any

from rheo.case import Case, CaseResult
from rheo.case.load_readings import screened
from rheo.line.catalogue import PipeSize
from rheo.line.parts import Pipe
from rheo.readings import Readings
from rheo.report import display
from rheo.report.numbers import exact, number


def with_interval(value: Any, interval: Any, quantity: str, system: str) -> str:
    """Return an SI value in the unit shown, with the digits that its 95 % interval allows."""
    if interval is None:
        return display.text(float(value), quantity, system)
    return display.text(float(value), quantity, system, float(interval[0]), float(interval[1]))


def pressure_in_doubt(result: CaseResult, system: str) -> str:
    """Return the pressure that the pump adds with its 95 % interval by all causes."""
    budget = result.doubt
    return with_interval(budget.pressure, budget.interval, "pressure", system)


def count(number: int, one: str, many: str = "") -> str:
    """Return ``1 reading`` or ``3 readings``."""
    return f"{number} {one if number == 1 else many or one + 's'}"


def size_name(pipe: Pipe) -> str:
    """Return the shortest name of a pipe's size."""
    if not isinstance(pipe.size, PipeSize):
        return pipe.size_name
    label = pipe.size.label
    return label.split(" (")[0] if label.startswith("DN") else f"{label} mm"


def line_sizes(result: CaseResult) -> tuple[str, ...]:
    """Return the sizes of the pipes that may change size; of all pipes where none may."""
    pipes = tuple(result.line.line.pipes())
    free = [pipe for pipe in pipes if not pipe.fixed_size] or pipes
    return tuple(dict.fromkeys(size_name(pipe) for pipe in free))


def flow_text(result: CaseResult, system: str) -> str:
    """Return the flow of the duty as the user gave it, in the unit shown."""
    shown = float(display.shown(result.flow, "flow", system))
    return f"{exact(shown)} {display.unit_label('flow', system)}"


def velocity_note(result: CaseResult, system: str) -> str:
    """Return the largest mean velocity of the pipes that may change size."""
    names = [pipe.name for pipe in result.line.line.pipes() if not pipe.fixed_size]
    speeds = [
        float(part.velocity)
        for part in result.line.parts
        if part.kind == "pipe" and (part.name in names or not names)
    ]
    return f"{display.text(max(speeds), 'velocity', system, digits=2)}" if speeds else ""


def flagged_points(case: Case, readings: Readings) -> tuple[int, ...]:
    """Return the readings of a case that screening doubts, counted from 0."""
    found = screened(case, readings)
    return tuple(sorted({point for caution in found for point in caution.points}))


def readings_state(case: Case, sets: tuple[Readings, ...] | None) -> str:
    """Return such as ``24 readings, 2 flagged``."""
    if sets is None:
        return "need your attention"
    total = sum(len(one) for one in sets)
    flagged = sum(len(flagged_points(case, one)) for one in sets)
    left_out = sum(int(one.excluded.sum()) for one in sets if one.excluded is not None)
    more = f", {flagged} flagged" if flagged else ""
    more += f", {left_out} left out" if left_out else ""
    return count(total, "reading") + more


def walk_states(
    case: Case, sets: tuple[Readings, ...] | None, result: CaseResult | None, system: str
) -> dict[str, str]:
    """Return a few words for each stop, by its key."""
    states = {"readings": readings_state(case, sets)}
    if result is None:
        return states
    line = result.line
    pipes = [part for part in line.parts if part.kind == "pipe"]
    metres = sum(float(part.length) for part in pipes)
    inside = result.inside_measured_range
    states["flow_curve"] = _capital(result.chosen.record.name)
    states["shear_rates"] = (
        "" if inside is None else "inside the measured range" if inside else "outside the range"
    )
    states["route"] = (
        f"{count(len(line.parts), 'part')}, "
        f"{display.text(metres, 'length', system, digits=2)} of pipe"
    )
    states["pressure"] = pressure_in_doubt(result, system)
    states["sizes"] = ", ".join(line_sizes(result))
    cautions = len(result.cautions)
    states["note"] = count(cautions, "caution") if cautions else "no cautions"
    return states


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]


def fluid_words(result: CaseResult, system: str) -> str:
    """Return what kind of fluid it is, as the pipes see it."""
    model = result.model
    yield_stress = float(model.yield_stress)
    at_rest = (
        f"yields at {display.text(yield_stress, 'stress', system)}" if yield_stress > 0 else ""
    )
    indices = [float(pipe.local_flow_index) for pipe in result.pipes]
    if not indices:
        return f"{_capital(at_rest)}." if at_rest else "It flows at any stress."
    index = min(indices, key=lambda one: -abs(one - 1.0))
    kind = "thins" if index < 0.97 else "thickens" if index > 1.03 else "keeps its viscosity"
    shear = f"{kind} with shear (local flow index n′ {number(index, 2)} in the pipes)"
    viscosities = [
        float(pipe.wall_stress / pipe.wall_rate) for pipe in result.pipes if pipe.wall_rate > 0
    ]
    seen = ""
    if viscosities:
        low, high = (
            number(float(display.shown(value, "viscosity", system)), 2)
            for value in (min(viscosities), max(viscosities))
        )
        span = low if low == high else f"{low} to {high}"
        seen = f"; its viscosity at the wall is {span} {display.unit_label('viscosity', system)}"
    return f"The product {f'{at_rest} and ' if at_rest else ''}{shear}{seen}."
