"""Limits, costs, sizes and doubts as they stand in a case file."""

from __future__ import annotations

from typing import Annotated, Literal, Self

from pydantic import Field, StrictBool, StrictInt, field_validator, model_validator

from rheo.case.block import Block, KeyedError
from rheo.case.fields import (
    Diameter,
    Duration,
    NotNegative,
    NotNegativeLength,
    Positive,
    PositiveShare,
    Pressure,
    Rate,
    Share,
    Temperature,
    TemperatureStep,
    Text,
    Velocity,
)
from rheo.case.quantity import Quantity
from rheo.errors import CaseError, InputError
from rheo.line.catalogue import PipeSize, catalogue, pipe_size
from rheo.line.cleaning import CLEANING_VELOCITY
from rheo.line.cost import CapitalLaw, Costs
from rheo.line.doubt import Doubts
from rheo.line.limits import Limits


class LimitsBlock(Block):
    """What the line must keep to; what is left out is not checked."""

    pressure: Pressure | None = None
    start_up_pressure: Pressure | None = None
    min_velocity: Velocity | None = None
    max_velocity: Velocity | None = None
    max_wall_rate: Rate | None = None
    keep_to_measured_rates: StrictBool = False
    regime: Literal["laminar", "turbulent"] | None = None
    min_hold_time: Duration | None = None
    max_residence_time: Duration | None = None
    min_npsh: NotNegativeLength | None = None

    def build(self) -> Limits:
        """Return the limits for the engine."""
        return Limits(**self.given())


class CostBlock(Block):
    """How costs are counted; hours a year stand in [duty], the efficiency in [pump]."""

    currency: Text = "currency units"
    energy_price: NotNegative
    annual_charge: PositiveShare = Quantity(0.2)
    capital_price: Positive | None = None
    capital_at_diameter: Diameter | None = None
    capital_exponent: Positive | None = None
    capital_by_size: dict[str, Positive] = Field(default_factory=dict)

    @field_validator("capital_by_size")
    @classmethod
    def _sizes_are_listed(cls, prices: dict[str, Quantity]) -> dict[str, Quantity]:
        for name in prices:
            try:
                pipe_size(name)
            except InputError as error:
                raise KeyedError(error.sentence, name) from None
        return prices

    @model_validator(mode="after")
    def _law_is_whole(self) -> Self:
        if (self.capital_price is None) != (self.capital_at_diameter is None):
            raise CaseError("give capital_price and capital_at_diameter together, or neither")
        return self

    def build(self, hours: float, efficiency: float) -> Costs:
        """Return the costs for the engine.

        Parameters
        ----------
        hours : float
            Running hours a year [h].
        efficiency : float
            Hydraulic power over electrical power [-].
        """
        law = CapitalLaw()
        price, at = self.capital_price, self.capital_at_diameter
        exponent = law.exponent if self.capital_exponent is None else float(self.capital_exponent)
        return Costs(
            hours=hours,
            energy_price=float(self.energy_price),
            efficiency=efficiency,
            annual_charge=float(self.annual_charge),
            capital_by_size={
                pipe_size(name).name: float(value) for name, value in self.capital_by_size.items()
            },
            law=CapitalLaw(
                law.price if price is None else float(price),
                law.at_diameter if at is None else float(at),
                exponent,
            ),
            currency=self.currency,
        )


class OwnSize(Block):
    """A size that no standard lists."""

    label: Text
    inside_diameter: Diameter

    def build(self) -> PipeSize:
        """Return the size for the engine."""
        return PipeSize("own", self.label, float(self.inside_diameter))


class SizesBlock(Block):
    """Sizes to compare: those of a standard, some by name, or the user's own."""

    standard: Text | None = None
    schedule: Text | None = None
    names: Annotated[tuple[Text, ...], Field(max_length=500)] = ()
    own: Annotated[tuple[OwnSize, ...], Field(max_length=500)] = ()
    smallest: Diameter | None = None
    largest: Diameter | None = None
    confidence: PositiveShare = Quantity(0.9)
    flow_spread: Share = Quantity(0.2)

    @model_validator(mode="after")
    def _some_are_left(self) -> Self:
        if not self.build():
            raise CaseError(
                "no size is left to compare; name a standard, names or own sizes, "
                "and leave room between smallest and largest"
            )
        return self

    def build(self) -> tuple[PipeSize, ...]:
        """Return the sizes for the engine, each once."""
        listed: tuple[PipeSize, ...] = ()
        if self.standard is not None or self.schedule is not None:
            listed = catalogue(self.standard, self.schedule)
        every = (*listed, *map(pipe_size, self.names), *(one.build() for one in self.own))
        low = 0.0 if self.smallest is None else float(self.smallest)
        high = float("inf") if self.largest is None else float(self.largest)
        return tuple(size for size in dict.fromkeys(every) if low <= size.inside_diameter <= high)

    def spread(self) -> dict[str, float]:
        """Return the confidence wanted and the spread of the flow [-], by name."""
        return {"confidence": float(self.confidence), "flow_spread": float(self.flow_spread)}


class DoubtBlock(Block):
    """How well the inputs are known, and how the doubt is worked out."""

    density: Share | None = None
    diameter_tolerance: Share | None = None
    roughness: Share | None = None
    temperature: TemperatureStep | None = None
    draws: Annotated[StrictInt, Field(ge=100, le=100_000)] = 1000
    seed: Annotated[StrictInt, Field(ge=0, le=2**32 - 1)] = 1

    def build(self, flow_tolerance: float | None) -> Doubts:
        """Return the doubts for the engine.

        Parameters
        ----------
        flow_tolerance : float or None
            Largest deviation of the flow over its value [-], evenly likely in between.
        """
        given = self.given("draws", "seed")
        if flow_tolerance is not None:
            given["flow"] = flow_tolerance / 3**0.5
        return Doubts(**given)


class HoldingBlock(Block):
    """A holding tube to be found."""

    hold_time: Duration
    size: Text | None = None
    inside_diameter: Diameter | None = None
    temperature: Temperature | None = None

    @model_validator(mode="after")
    def _has_a_diameter(self) -> Self:
        if (self.size is None) == (self.inside_diameter is None):
            found = "neither" if self.size is None else "both"
            raise CaseError(f"found {found} of 'size' and 'inside_diameter'; give one of them")
        if self.size is not None:
            pipe_size(self.size)
        return self

    @property
    def diameter(self) -> float:
        """Inside diameter [m]."""
        if self.inside_diameter is not None:
            return float(self.inside_diameter)
        return pipe_size(self.size or "").inside_diameter


class CleaningBlock(Block):
    """Cleaning in place."""

    velocity: Velocity = Quantity(CLEANING_VELOCITY)
    temperature: Temperature = Quantity(333.15)
