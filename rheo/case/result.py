"""What a case comes to: `run_case` returns it; costly parts are worked out when asked for."""

from __future__ import annotations

from copy import copy
from dataclasses import dataclass, replace
from functools import cached_property
from typing import Any

import numpy as np

from rheo.case import as_data
from rheo.case.schema import JUDGES, WORDS, Case
from rheo.errors import CaseError, Caution, InputError
from rheo.fitting import Fit, Fits
from rheo.hydraulics import PipeFlow, pipe_flow
from rheo.line import (
    CentrifugalPump,
    DisplacementPump,
    LineResult,
    PipeSize,
    Product,
    catalogue,
    cleaning,
    doubt_budget,
    holding_tube,
    measure_next,
    system_curve,
)
from rheo.line.cleaning import Cleaning
from rheo.line.doubt import DoubtBudget
from rheo.line.draw_blocks import Progress
from rheo.line.holding import HoldingTube
from rheo.line.limits import Limits
from rheo.line.measure_next import NextReadings
from rheo.line.operating import OperatingPoint
from rheo.line.product import FlowCurveSource
from rheo.line.result import plain
from rheo.line.size_survey import SizeSurvey, in_order
from rheo.line.sizing import Sizing, judge_sizes
from rheo.line.system import SystemCurve
from rheo.models import Model
from rheo.models.state_curve import ScaledCurve
from rheo.readings import Readings

_FLOW_SPAN = np.geomspace(0.2, 2.0, 41)
# Enough flow curves for a band to be drawn; the interval at the duty takes all of them.
_BAND_DRAWS = 200
# Up to so many draws, what each size gives is kept for the next limits.
_DRAWS_KEPT = 5_000
_SURVEY = "_survey_kept"


@dataclass(frozen=True, eq=False)
class CaseResult:
    """From readings to a duty.

    Parameters
    ----------
    case : Case
        What it started from.
    readings : tuple of Readings
        Each set as read, with the points left out that the case excludes.
    fitted : Readings
        What was fitted: the sets joined, the branch chosen.
    fits : Fits
        The ranked models.
    chosen : Fit
        The model that is used: the best, or the one that the case names.
    product : Product
        Flow curve, draws and properties, as the line uses them.
    line : LineResult
        Duty of the line.
    pump : CentrifugalPump, DisplacementPump or None
        The pump, where its curve is known.
    efficiency : float or None
        Of the pump at the duty [-], as corrected for viscosity where that was due.
    operating : OperatingPoint or None
        Where pump and line meet; None when the pump's curve is not known.
    cautions : tuple of Caution
        Of readings, fit, line and pump, in that order.
    """

    case: Case
    readings: tuple[Readings, ...]
    fitted: Readings
    fits: Fits
    chosen: Fit
    product: Product
    line: LineResult
    pump: CentrifugalPump | DisplacementPump | None
    efficiency: float | None
    operating: OperatingPoint | None
    cautions: tuple[Caution, ...]

    @property
    def model(self) -> Model:
        """The flow curve at the temperature of the product."""
        return self.product.model_at(self.product.temperature)

    @property
    def flow(self) -> float:
        """Flow of the duty [m3/s]."""
        return float(self.case.duty.flow)

    @property
    def pipes(self) -> tuple[PipeFlow, ...]:
        """Flow in each pipe of the line, in order, at the temperature at which it arrives."""
        return tuple(
            pipe_flow(
                self.product.model_at(float(part.temperature)),
                float(part.diameter),
                float(part.velocity),
                self.product.density,
                float(np.asarray(pipe.roughness)),
                method=self.case.line.friction_method,
            )
            for part, pipe in zip(
                (one for one in self.line.parts if one.kind == "pipe"),
                self.line.line.pipes(),
                strict=True,
            )
        )

    @property
    def wall_rates(self) -> tuple[float, float] | None:
        """Smallest and largest wall shear rate [1/s] in the pipes; None without a pipe."""
        rates = [float(part.wall_rate) for part in self.line.parts if part.kind == "pipe"]
        return (min(rates), max(rates)) if rates else None

    @property
    def inside_measured_range(self) -> bool | None:
        """Whether all wall shear rates lie in the measured range; None without a pipe."""
        measured, rates = self.product.measured_rates, self.wall_rates
        if measured is None or rates is None:
            return None
        return measured[0] <= rates[0] and rates[1] <= measured[1]

    @cached_property
    def system_curve(self) -> SystemCurve:
        """Pressure against flow from a fifth of the duty to twice the duty."""
        method = self.case.line.friction_method
        fewer = replace(self.product, draws=_thinned(self.product.draws, self.product.draw_count))
        return system_curve(self.line.line, fewer, self.flow * _FLOW_SPAN, method)

    @cached_property
    def doubt(self) -> DoubtBudget:
        """What makes the pressure uncertain."""
        tolerance = self.case.duty.flow_tolerance
        return doubt_budget(
            self.line.line,
            self.product,
            self.flow,
            self.case.doubt.build(None if tolerance is None else float(tolerance)),
            self.case.line.friction_method,
            self.line.draws,
        )

    @cached_property
    def sizing(self) -> Sizing:
        """Every size against the limits.

        Raises
        ------
        InputError
            If the case names no sizes and its pipes belong to no standard.
        """
        return self.compare_sizes()

    def compare_sizes(self, progress: Progress | None = None) -> Sizing:
        """Compare sizes, telling on the way how far it is; `sizing` keeps what comes of it.

        Parameters
        ----------
        progress : callable, optional
            Told the share that is done [-]; what it raises ends the comparison.

        Returns
        -------
        Sizing
            That of `sizing`.

        Raises
        ------
        InputError
            As for `sizing`.
        """
        if "sizing" in self.__dict__:
            return self.sizing
        case = self.case
        sizes = case.sizes
        spread = {} if sizes is None else sizes.spread()
        costs = None
        if case.cost is not None and case.duty.hours_a_year is not None:
            if self.efficiency is None:
                raise CaseError(
                    "the pump's efficiency is not known at the flow of the duty; give points "
                    "around that flow, or efficiency",
                    "pump",
                )
            costs = case.cost.build(float(case.duty.hours_a_year), self.efficiency)
        found = judge_sizes(
            self._survey(), limits=self.limits, costs=costs, progress=progress, **spread
        )
        # As a cached property keeps its value: not worked out again when it is asked for.
        self.__dict__["sizing"] = found
        return found

    def _survey(self) -> SizeSurvey:
        """Return what the case's sizes give: that of the result judged before, if they are its."""
        sizes = in_order(sizes_to_compare(self.case))
        known: SizeSurvey | None = self.__dict__.get(_SURVEY)
        if known is None or known.sizes != sizes:
            method = self.case.line.friction_method
            known = SizeSurvey(self.line.line, self.product, self.flow, sizes, method)
            if self.product.draw_count <= _DRAWS_KEPT:
                self.__dict__[_SURVEY] = known
        return known

    def judged_by(self, case: Case, cautions: tuple[Caution, ...]) -> CaseResult:
        """Return this result for a case that differs in what `JUDGES` names only.

        What has been worked out of it already is not worked out again, but for the sizes where
        more than words differ.

        Parameters
        ----------
        case : Case
            With other words, limits, sizes to compare or costs.
        cautions : tuple of Caution
            By these.
        """
        found = copy(self)
        object.__setattr__(found, "case", case)
        object.__setattr__(found, "cautions", cautions)
        if any(getattr(case, name) != getattr(self.case, name) for name in JUDGES - set(WORDS)):
            found.__dict__.pop("sizing", None)
        return found

    @property
    def limits(self) -> Limits:
        """Limits of the case; where it leaves a pressure or the NPSH open, the pump's own."""
        limits = self.case.limits.build()
        pump = self.pump
        at_hand = self.line.start_up.rating
        required = None
        if isinstance(pump, DisplacementPump):
            required = pump.required_npsh_value
        elif isinstance(pump, CentrifugalPump):
            needed = pump.required_npsh(self.flow)
            required = None if needed is None or not np.isfinite(needed) else float(needed)
        return replace(
            limits,
            pressure=limits.pressure if limits.pressure is not None else at_hand,
            start_up_pressure=limits.start_up_pressure
            if limits.start_up_pressure is not None
            else at_hand,
            min_npsh=limits.min_npsh if limits.min_npsh is not None else required,
        )

    @cached_property
    def holding(self) -> HoldingTube | None:
        """The holding tube that the case asks for."""
        block = self.case.holding_tube
        if block is None:
            return None
        warm = None if block.temperature is None else float(block.temperature)
        return holding_tube(self.product, block.diameter, self.flow, float(block.hold_time), warm)

    @cached_property
    def cleaning(self) -> Cleaning | None:
        """Cleaning in place, where the case asks for it."""
        block = self.case.cleaning
        if block is None:
            return None
        return cleaning(self.line.line, float(block.velocity), float(block.temperature))

    @cached_property
    def next_readings(self) -> NextReadings | None:
        """Which readings to take next; None where nothing can be said."""
        geometry = self.fitted.geometry
        if geometry is not None and geometry.shape != ():
            geometry = None
        try:
            return measure_next(
                self.fits,
                self.line.line,
                self.product,
                self.flow,
                geometry=geometry,
                state=self.product.solids_fraction,
                thickness=float(self.case.product.stress_factor or 1.0),
                method=self.case.line.friction_method,
            )
        except InputError:
            return None

    def as_dict(self) -> dict[str, Any]:
        """Return everything as plain data for JSON, in SI under the names of the program."""
        line = self.line
        found: dict[str, Any] = {
            "title": self.case.title,
            "product": self.case.product.name,
            "model": as_data.model_data(self.model),
            "solids_fraction": self.product.solids_fraction,
            "flow": self.flow,
            "pressure_drop": plain(line.friction_pressure),
            "pressure_drop_interval": plain(line.friction_pressure_interval),
            "differential_pressure": plain(line.differential_pressure),
            "differential_pressure_interval": plain(line.differential_pressure_interval),
            "differential_pressure_total_interval": plain(self.doubt.interval),
            "wall_rate": None if self.wall_rates is None else self.wall_rates[1],
            "wall_rates": plain(self.wall_rates),
            "measured_rates": plain(self.product.measured_rates),
            "inside_measured_range": self.inside_measured_range,
            "regime": [str(pipe.regime) for pipe in self.pipes],
            "hydraulic_power": plain(line.hydraulic_power),
            "shaft_power": plain(line.shaft_power),
            "start_up_pressure": plain(line.start_up.pressure),
            "readings": [as_data.readings_data(one) for one in self.readings],
            "fits": as_data.fits_data(self.fits),
            "chosen": self.chosen.key,
            "line": line.as_dict(),
            "pipes": [as_data.pipe_data(pipe) for pipe in self.pipes],
            "doubt": as_data.data(self.doubt),
        }
        for name in ("operating", "holding", "cleaning"):
            value = getattr(self, name)
            if value is not None:
                found[name] = as_data.data(value)
        return {
            **found,
            "cautions": as_data.cautions_data(self.cautions),
            "safety": [*line.safety, line.start_up.safety],
        }


def _thinned(draws: tuple[FlowCurveSource, ...], count: int) -> tuple[FlowCurveSource, ...]:
    """Return about `_BAND_DRAWS` of the draws, every so many of each model's."""
    step = max(1, count // _BAND_DRAWS)
    return tuple(
        source.map(lambda value: value[::step] if value.ndim else value)
        if isinstance(source, Model | ScaledCurve)
        else source
        for source in draws
    )


def sizes_to_compare(case: Case) -> tuple[PipeSize, ...]:
    """Return the sizes that a case compares.

    Those that it names; else those of the standard (and steel schedule) of its first pipe whose
    size is not fixed.

    Raises
    ------
    InputError
        If there are none.
    """
    if case.sizes is not None:
        return case.sizes.build()
    for pipe in case.line.build().pipes():
        if not pipe.fixed_size and isinstance(pipe.size, PipeSize):
            schedule = pipe.size.label.partition(" schedule ")[2]
            return catalogue(pipe.size.standard, schedule or None)
    raise CaseError(
        "no sizes are given to compare, and no pipe names a catalogue size; "
        "add a table [sizes], such as standard = 'ISO 2037'",
        "sizes",
    )
