"""The parts of the route as they stand in a case file; each makes its part of `rheo.line`."""

from __future__ import annotations

import math
from abc import ABC, abstractmethod
from typing import Annotated, Literal, Self

from pydantic import Field, StrictBool, StrictInt, field_validator, model_validator

from rheo.case.block import Block
from rheo.case.fields import (
    Angle,
    Diameter,
    Flow,
    GaugePressure,
    HeatTransfer,
    Height,
    Length,
    NotNegative,
    NotNegativeLength,
    NotNegativePressure,
    Pressure,
    Temperature,
    Text,
    Volume,
)
from rheo.case.quantity import Quantity
from rheo.errors import CaseError
from rheo.hydraulics.registry import turbulent_methods
from rheo.line.catalogue import pipe_size
from rheo.line.parts import (
    STANDARD_ATMOSPHERE,
    Entrance,
    Equipment,
    Exit,
    Fitting,
    Line,
    Part,
    Pipe,
    Reducer,
    Vessel,
)


class PartBlock(Block, ABC):
    """What every part of the route has; `part` says which it is.

    The fields of a part are those of its dataclass in `rheo.line`, with units as text.
    """

    @abstractmethod
    def build(self) -> Part:
        """Return the part for the engine."""

    @model_validator(mode="after")
    def _makes_a_part(self) -> Self:
        self.build()
        return self


class VesselBlock(PartBlock):
    """A tank or connection at an end of the line."""

    part: Literal["vessel"]
    name: Text = "vessel"
    level: Height = Quantity(0.0)
    gauge_pressure: GaugePressure = Quantity(0.0)

    def build(self) -> Vessel:
        """Return the vessel for the engine."""
        return Vessel(**self.given("part"))


class PipeBlock(PartBlock):
    """A straight run of pipe."""

    part: Literal["pipe"]
    name: Text = "pipe"
    length: Length
    size: Text | None = None
    inside_diameter: Diameter | None = None
    rise: Height = Quantity(0.0)
    roughness: NotNegativeLength = Quantity(0.0)
    temperature: Temperature | None = None
    ambient_temperature: Temperature | None = None
    heat_transfer_coefficient: HeatTransfer | None = None
    fixed_size: StrictBool = False

    @field_validator("size")
    @classmethod
    def _size_is_listed(cls, size: str | None) -> str | None:
        if size is not None:
            pipe_size(size)
        return size

    def build(self) -> Pipe:
        """Return the pipe for the engine."""
        return Pipe(**self.given("part"))


class FittingBlock(PartBlock):
    """One or more like fittings."""

    part: Literal["fitting"]
    name: Text = ""
    kind: Text = "fitting"
    count: Annotated[StrictInt, Field(ge=1, le=10_000)] = 1
    loss_coefficient: NotNegative | None = None
    diameter: Diameter | None = None
    table: Text | None = None

    def build(self) -> Fitting:
        """Return the fitting for the engine."""
        return Fitting(**self.given("part"))


class ReducerBlock(PartBlock):
    """A change of diameter, either way."""

    part: Literal["reducer"]
    name: Text = "reducer"
    angle: Angle = Quantity(math.pi)
    loss_coefficient: NotNegative | None = None

    def build(self) -> Reducer:
        """Return the reducer for the engine."""
        return Reducer(**self.given("part"))


class EntranceBlock(PartBlock):
    """From a vessel into the pipe after it."""

    part: Literal["entrance"]
    name: Text = "entrance"
    kind: Text = "entrance"
    loss_coefficient: NotNegative | None = None

    def build(self) -> Entrance:
        """Return the entrance for the engine."""
        return Entrance(**self.given("part"))


class ExitBlock(PartBlock):
    """From the pipe before it into a vessel."""

    part: Literal["exit"]
    name: Text = "exit"
    loss_coefficient: NotNegative | None = None

    def build(self) -> Exit:
        """Return the exit for the engine."""
        return Exit(**self.given("part"))


class EquipmentBlock(PartBlock):
    """A heat exchanger, filter, meter or valve with its own loss curve."""

    part: Literal["equipment"]
    name: Text = "equipment"
    loss: NotNegativePressure
    at_flow: Flow
    exponent: NotNegative = Quantity(2.0)
    rise: Height = Quantity(0.0)
    volume: Volume = Quantity(0.0)
    outlet_temperature: Temperature | None = None
    passage_length: Length | None = None
    passage_diameter: Diameter | None = None

    def build(self) -> Equipment:
        """Return the equipment for the engine."""
        return Equipment(**self.given("part"))


PartChoice = Annotated[
    VesselBlock
    | PipeBlock
    | FittingBlock
    | ReducerBlock
    | EntranceBlock
    | ExitBlock
    | EquipmentBlock,
    Field(discriminator="part"),
]

PART_TAGS = ("vessel", "pipe", "fitting", "reducer", "entrance", "exit", "equipment")


class LineBlock(Block):
    """The route: what lies before the pump and what lies after it."""

    name: Text = "line"
    friction_method: Text | None = None
    atmospheric_pressure: Pressure = Quantity(STANDARD_ATMOSPHERE)
    suction: tuple[PartChoice, ...] = ()
    discharge: tuple[PartChoice, ...] = ()

    @field_validator("friction_method")
    @classmethod
    def _known_method(cls, key: str | None) -> str | None:
        methods = turbulent_methods()
        if key is not None and key not in methods:
            raise CaseError(f"unknown method '{key[:60]}'; there are {', '.join(methods)}")
        return key

    @model_validator(mode="after")
    def _makes_a_line(self) -> Self:
        self.build()
        return self

    def build(self) -> Line:
        """Return the line for the engine.

        Raises
        ------
        InputError
            If the parts do not make a line.
        """
        return Line(
            suction=tuple(part.build() for part in self.suction),
            discharge=tuple(part.build() for part in self.discharge),
            atmospheric_pressure=float(self.atmospheric_pressure),
            name=self.name,
        )
