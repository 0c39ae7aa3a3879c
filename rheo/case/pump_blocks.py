"""The pump as it stands in a case file."""

from __future__ import annotations

from typing import Annotated, Any, Literal, Self

from pydantic import Discriminator, Field, StrictBool, StrictInt, Tag, model_validator

from rheo.case.block import Block
from rheo.case.fields import (
    AngularSpeed,
    NotNegativeFlow,
    NotNegativeLength,
    Positive,
    PositiveShare,
    PositiveVolume,
    Pressure,
    Share,
    Text,
)
from rheo.case.quantity import Quantity
from rheo.errors import CaseError
from rheo.line.pumps import CentrifugalPump, DisplacementPump, Pump


class PumpBlock(Block):
    """What every pump has."""

    efficiency: PositiveShare | None = None

    @property
    def has_efficiency(self) -> bool:
        """Whether the pump's efficiency is given."""
        return self.efficiency is not None


class DutyPumpBlock(PumpBlock):
    """A pump of which no curve is known: it is taken to give the duty."""

    kind: Literal["duty"] = "duty"
    name: Text = "pump"
    rated_pressure: Pressure | None = None

    def build(self) -> Pump | None:
        """Return None: there is no curve to cross the system curve with."""
        return None


class CurvePoint(Block):
    """One point of a centrifugal pump's curve."""

    flow: NotNegativeFlow
    head: NotNegativeLength
    efficiency: Share | None = None
    npsh_required: NotNegativeLength | None = None


class CentrifugalPumpBlock(PumpBlock):
    """A centrifugal pump by the points of its curve."""

    kind: Literal["centrifugal"]
    name: Text = "centrifugal pump"
    points: Annotated[tuple[CurvePoint, ...], Field(min_length=2, max_length=200)]
    for_water: StrictBool = True
    speed: AngularSpeed | None = None
    stages: Annotated[StrictInt, Field(ge=1, le=1000)] = 1
    rated_pressure: Pressure | None = None

    @model_validator(mode="after")
    def _makes_a_pump(self) -> Self:
        for what in ("efficiency", "npsh_required"):
            given = [getattr(point, what) is not None for point in self.points]
            if any(given) and not all(given):
                raise CaseError(
                    f"{what} is given at {sum(given)} of {len(given)} points; "
                    "give it at every point or at none"
                )
        self.build()
        return self

    @property
    def has_efficiency(self) -> bool:
        """Whether the efficiency is given, at the points or as one value."""
        return self.efficiency is not None or self.points[0].efficiency is not None

    def build(self) -> CentrifugalPump:
        """Return the pump for the engine."""
        return CentrifugalPump(
            flows=tuple(float(point.flow) for point in self.points),
            heads=tuple(float(point.head) for point in self.points),
            efficiencies=self._column("efficiency"),
            npsh_required=self._column("npsh_required"),
            for_water=self.for_water,
            speed=_plain(self.speed),
            stages=self.stages,
            rated_pressure=_plain(self.rated_pressure),
            name=self.name,
        )

    def _column(self, what: str) -> tuple[float, ...] | None:
        values = [getattr(point, what) for point in self.points]
        return None if values[0] is None else tuple(float(value) for value in values)


class DisplacementPumpBlock(PumpBlock):
    """A positive-displacement pump: lobe, progressing cavity, gear, piston."""

    kind: Literal["positive-displacement"]
    name: Text = "positive-displacement pump"
    displacement: PositiveVolume
    speed: AngularSpeed
    rated_pressure: Pressure
    slip_flow: NotNegativeFlow = Quantity(0.0)
    slip_pressure: Pressure | None = None
    slip_exponent: Positive = Quantity(1.0)
    npsh_required: NotNegativeLength | None = None

    @model_validator(mode="after")
    def _makes_a_pump(self) -> Self:
        self.build()
        return self

    def build(self) -> DisplacementPump:
        """Return the pump for the engine."""
        return DisplacementPump(
            displacement=float(self.displacement),
            speed=float(self.speed),
            rated_pressure=float(self.rated_pressure),
            slip_flow=float(self.slip_flow),
            slip_pressure=_plain(self.slip_pressure),
            slip_exponent=float(self.slip_exponent),
            overall_efficiency=_plain(self.efficiency),
            required_npsh_value=_plain(self.npsh_required),
            name=self.name,
        )


def _plain(value: Quantity | None) -> float | None:
    return None if value is None else float(value)


def _kind(data: Any) -> Any:
    return data.get("kind", "duty") if isinstance(data, dict) else getattr(data, "kind", None)


PUMP_TAGS = ("duty", "centrifugal", "positive-displacement")
PumpChoice = Annotated[
    Annotated[DutyPumpBlock, Tag("duty")]
    | Annotated[CentrifugalPumpBlock, Tag("centrifugal")]
    | Annotated[DisplacementPumpBlock, Tag("positive-displacement")],
    Discriminator(_kind),
]
