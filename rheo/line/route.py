"""The parts of a line with the pipe that each of them belongs to."""

from __future__ import annotations

from dataclasses import dataclass

from rheo.errors import InputError
from rheo.line.parts import Entrance, Exit, Fitting, Line, Part, Pipe, Reducer, Vessel


@dataclass(frozen=True, eq=False)
class Step:
    """One part where it stands.

    Parameters
    ----------
    part : part of a line
        Never a Vessel.
    side : str
        ``suction`` or ``discharge``.
    before, after : Pipe or None
        The pipe next to it, upstream and downstream; for a Pipe both are itself.
    """

    part: Part
    side: str
    before: Pipe | None
    after: Pipe | None

    @property
    def pipe(self) -> Pipe | None:
        """The pipe whose velocity counts."""
        if isinstance(self.part, Entrance):
            return self.after or self.before
        return self.before or self.after


def route(line: Line) -> tuple[Step, ...]:
    """Return the steps from the source to the end, suction side first.

    An exit into the end vessel is added where the user gave a vessel and no Exit, since the
    stream's kinetic energy is lost there in any case.

    Raises
    ------
    InputError
        If a part needs a pipe beside it and there is none.
    """
    steps: list[Step] = []
    sides: tuple[tuple[str, tuple[Part, ...]], ...] = (
        ("suction", line.suction),
        ("discharge", _with_exit(line.discharge)),
    )
    pipes = list(line.pipes())
    for side, parts in sides:
        own = [part for part in parts if isinstance(part, Pipe)]
        for index, part in enumerate(parts):
            if isinstance(part, Vessel):
                continue
            before = _nearest(parts[: index + 1][::-1])
            after = _nearest(parts[index:])
            if isinstance(part, Reducer):
                # A reducer at the pump joins the pipes on both sides of it.
                other = _other_side(line, side)
                before = before or (other if side == "discharge" else None)
                after = after or (other if side == "suction" else None)
            elif not own and pipes:
                before = _other_side(line, side)
            step = Step(part, side, before, after)
            _check(step, line.name)
            steps.append(step)
    return tuple(steps)


def _with_exit(parts: tuple[Part, ...]) -> tuple[Part, ...]:
    has_vessel = bool(parts) and isinstance(parts[-1], Vessel)
    has_exit = any(isinstance(part, Exit) for part in parts)
    if not has_vessel or has_exit or not _nearest(parts):
        return parts
    return (*parts[:-1], Exit(name=f"exit into {parts[-1].name}"), parts[-1])


def _nearest(parts: tuple[Part, ...]) -> Pipe | None:
    return next((part for part in parts if isinstance(part, Pipe)), None)


def _other_side(line: Line, side: str) -> Pipe | None:
    return _nearest(line.discharge) if side == "suction" else _nearest(line.suction[::-1])


def _check(step: Step, name: str) -> None:
    part = step.part
    if isinstance(part, Reducer) and (step.before is None or step.after is None):
        raise InputError(
            f"reducer '{part.name}' needs a pipe before it and a pipe after it on its side", name
        )
    needs_pipe = isinstance(part, Entrance | Exit) or (
        isinstance(part, Fitting) and part.diameter is None
    )
    if needs_pipe and step.pipe is None:
        raise InputError(f"'{part.name}' has no pipe beside it; give it a diameter", name)


def starts_at_rest(line: Line) -> bool:
    """Whether the line begins in a vessel; else it begins at a flange, its product moving."""
    return isinstance((*line.suction, *line.discharge)[0], Vessel | Entrance)


def ends_at_rest(line: Line) -> bool:
    """Whether the line ends in a vessel; else it ends at a flange, its product moving."""
    return isinstance((*line.suction, *line.discharge)[-1], Vessel | Exit)
