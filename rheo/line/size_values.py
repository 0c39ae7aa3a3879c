"""What every size gives, worked out for all sizes and draws in one call."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cached_property, reduce

import numpy as np
from numpy.typing import ArrayLike

from rheo.errors import InputError
from rheo.hydraulics import PipeFlow
from rheo.line.catalogue import PipeSize
from rheo.line.holding import fastest_velocity_ratio
from rheo.line.limits import Check, Limits, make_check
from rheo.line.parts import FloatArray, Line, Part, Pipe
from rheo.line.product import FlowCurveSource, Product
from rheo.line.solve import npsh_available
from rheo.line.start_up import start_up
from rheo.line.walk import StepResult, Walk, total, walk

REGIMES = np.array(["laminar", "transition", "turbulent"])

# Limit, value, whether it is a largest value, words, unit for display and factor to it.
_NUMERIC = (
    ("pressure", "pressure", True, "pressure", "bar", 1e-5),
    ("start_up_pressure", "start_up_pressure", True, "start-up pressure", "bar", 1e-5),
    ("min_velocity", "lowest_velocity", False, "velocity", "m/s", 1.0),
    ("max_velocity", "velocity", True, "velocity", "m/s", 1.0),
    ("max_wall_rate", "wall_rate", True, "wall shear rate", "1/s", 1.0),
    ("min_hold_time", "hold_time", False, "shortest hold time", "s", 1.0),
    ("max_residence_time", "residence_time", True, "time in the line", "s", 1.0),
    ("min_npsh", "npsh", False, "NPSH available", "m", 1.0),
)


def with_diameters(line: Line, diameters: FloatArray) -> Line:
    """Return a line whose pipes, but those of fixed size, have other inside diameters [m].

    Raises
    ------
    InputError
        If the size of every pipe is fixed.
    """
    if all(pipe.fixed_size for pipe in line.pipes()):
        raise InputError("every pipe has a fixed size; leave at least one to be sized", line.name)

    def sized(part: Part) -> Part:
        if not isinstance(part, Pipe) or part.fixed_size:
            return part
        return replace(part, size=None, inside_diameter=diameters)

    return replace(
        line,
        suction=tuple(sized(part) for part in line.suction),
        discharge=tuple(sized(part) for part in line.discharge),
    )


def sized_length(line: Line) -> float:
    """Return the length of the pipes that are sized [m]."""
    return float(total(pipe.length for pipe in line.pipes() if not pipe.fixed_size))


@dataclass(frozen=True, eq=False)
class SizeValues:
    """What every size gives, one column a draw (or a flow); each worked out when asked for.

    Parameters
    ----------
    walk : Walk
        The line with its sizes as an array of shape ``(count, 1)``.
    product : Product
        What is pumped.
    count : int
        Number of sizes.
    """

    walk: Walk
    product: Product
    count: int

    def of(self, name: str) -> FloatArray:
        """Return a quantity by its name, such as ``pressure``; shape (count, columns)."""
        found: FloatArray = getattr(self, name)
        return found

    def _table(self, values: ArrayLike) -> FloatArray:
        array = np.asarray(values)
        return np.broadcast_to(array, (self.count, array.shape[-1] if array.ndim else 1))

    @cached_property
    def _flows(self) -> tuple[PipeFlow, ...]:
        return tuple(step.flow for step in self._steps if step.flow is not None)

    @cached_property
    def _steps(self) -> tuple[StepResult, ...]:
        return tuple(
            step
            for step in self.walk.steps
            if isinstance(step.step.part, Pipe) and not step.step.part.fixed_size
        )

    @cached_property
    def pressure(self) -> FloatArray:
        """Differential pressure [Pa]."""
        return self._table(self.walk.differential_pressure)

    @cached_property
    def velocity(self) -> FloatArray:
        """Largest mean velocity in the pipes that are sized [m/s]."""
        return self._table(reduce(np.maximum, (flow.velocity for flow in self._flows)))

    @cached_property
    def lowest_velocity(self) -> FloatArray:
        """Smallest mean velocity in the pipes that are sized [m/s]."""
        return self._table(reduce(np.minimum, (flow.velocity for flow in self._flows)))

    @cached_property
    def wall_rate(self) -> FloatArray:
        """Largest wall shear rate of the pipes that are sized [1/s]."""
        return self._table(reduce(np.maximum, (flow.wall_rate for flow in self._flows)))

    @cached_property
    def lowest_wall_rate(self) -> FloatArray:
        """Smallest wall shear rate of the pipes that are sized [1/s]."""
        return self._table(reduce(np.minimum, (flow.wall_rate for flow in self._flows)))

    @cached_property
    def hold_time(self) -> FloatArray:
        """Time of the fastest particle in the pipes that are sized [s]."""
        return self._table(
            total(
                step.length / (fastest_velocity_ratio(step.flow) * step.flow.velocity)
                for step in self._steps
                if step.flow is not None
            )
        )

    @cached_property
    def residence_time(self) -> FloatArray:
        """Mean time in the whole line [s]."""
        return self._table(total(step.volume for step in self.walk.steps) / self.walk.flow)

    @cached_property
    def start_up_pressure(self) -> FloatArray:
        """Pressure that restarts the full line [Pa]."""
        return self._table(start_up(self.walk.line, self.product).pressure)

    @cached_property
    def npsh(self) -> FloatArray:
        """NPSH available [m]; NaN without a vapour pressure."""
        found = npsh_available(self.walk, self.product)
        return self._table(np.nan if found is None else found)

    @cached_property
    def regime(self) -> FloatArray:
        """Index into `REGIMES` of the pipe that is furthest from laminar."""
        found = (np.searchsorted(REGIMES, np.asarray(flow.regime)) for flow in self._flows)
        return self._table(reduce(np.maximum, found))


def size_values(
    line: Line,
    product: Product,
    flow: ArrayLike,
    sizes: tuple[PipeSize, ...],
    source: FlowCurveSource | None = None,
    method: str | None = None,
) -> SizeValues:
    """Work out every size.

    Parameters
    ----------
    line : Line
        The line.
    product : Product
        What is pumped.
    flow : array_like
        [m3/s]; a scalar, or 1-D for several flows.
    sizes : tuple of PipeSize
        To be compared.
    source : Model or callable, optional
        One of the product's draws.
    method : str, optional
        Turbulent friction method.

    Returns
    -------
    SizeValues
        Without a loop over sizes, draws or flows.
    """
    diameters = np.array([[size.inside_diameter] for size in sizes])
    found = walk(with_diameters(line, diameters), product, flow, source=source, method=method)
    return SizeValues(found, product, len(sizes))


def limits_missed(
    line: Line, product: Product, flow: float, limits: Limits, method: str | None = None
) -> tuple[str, ...]:
    """Return which limits a line does not keep with the sizes that it has.

    Parameters
    ----------
    line : Line
        The line as it is.
    product : Product
        What is pumped.
    flow : float
        [m3/s].
    limits : Limits
        What it should keep to.
    method : str, optional
        Turbulent friction method.

    Returns
    -------
    tuple of str
        For each limit that is not kept, what was found and what is allowed. As when sizes are
        compared, velocities, rates and regimes count in the pipes whose size is not fixed.
    """
    if all(pipe.fixed_size for pipe in line.pipes()):
        return ()
    values = SizeValues(walk(line, product, flow, method=method), product, 1)
    found = checks(values.of, product, limits)
    return tuple(one.sentences[0] for one in found if not one.passes[0, 0])


def quantities(limits: Limits) -> tuple[str, ...]:
    """Return the names of what `checks` asks for."""
    found = [name for key, name, *_ in _NUMERIC if getattr(limits, key) is not None]
    if limits.keep_to_measured_rates:
        found += ["lowest_wall_rate", "wall_rate"]
    if limits.regime is not None:
        found.append("regime")
    return tuple(dict.fromkeys(found))


def checks(of: Callable[[str], FloatArray], product: Product, limits: Limits) -> tuple[Check, ...]:
    """Return every limit that is set, against every size.

    Parameters
    ----------
    of : callable
        ``of(name)``: a quantity of `SizeValues`, shape (sizes, columns).
    product : Product
        What is pumped.
    limits : Limits
        What is to be kept.
    """
    found = []
    if limits.min_npsh is not None and product.vapour_pressure is None:
        raise InputError("a limit on NPSH needs the product's vapour_pressure [Pa]", product.name)
    for key, name, upper, what, unit, factor in _NUMERIC:
        limit = getattr(limits, key)
        if limit is not None:
            found.append(make_check(key, of(name), limit, upper, what, unit, factor))
    if limits.keep_to_measured_rates:
        found.append(_measured(of("lowest_wall_rate"), of("wall_rate"), product))
    if limits.regime is not None:
        regime = of("regime")
        passes = regime == REGIMES.tolist().index(limits.regime)
        sentences = tuple(
            f"flow is {REGIMES[int(index)]} ({limits.regime} wanted)" for index in regime[:, 0]
        )
        found.append(Check("regime", regime, passes, sentences))
    return tuple(found)


def _measured(lowest: FloatArray, highest: FloatArray, product: Product) -> Check:
    if product.measured_rates is None:
        raise InputError(
            "keeping to the measured range needs the product's measured_rates [1/s]", product.name
        )
    low, high = product.measured_rates
    passes = (lowest >= low) & (highest <= high)
    sentences = tuple(
        f"wall shear rate {_span(float(least), float(most))} 1/s (measured {low:.3g} to {high:.3g})"
        for least, most in zip(lowest[:, 0], highest[:, 0], strict=True)
    )
    return Check("keep_to_measured_rates", highest, passes, sentences)


def _span(low: float, high: float) -> str:
    return f"{low:.3g}" if low == high else f"{low:.3g} to {high:.3g}"
