"""The kinds of field that a case has: unit, range, and an example for messages."""

from __future__ import annotations

import math
from typing import Annotated, Any

from pydantic import BeforeValidator, Field

from rheo.case.quantity import Quantity, SolidsUnit, StepUnit, Unit


def _plain_lines(text: Any) -> Any:
    return text.replace("\r\n", "\n").replace("\r", "\n") if isinstance(text, str) else text


Text = Annotated[str, BeforeValidator(_plain_lines), Field(max_length=20_000)]

# Ends that no plant comes near: a number beyond them is a slip of the pen or of the unit.
NARROWEST = 1e-6
LONGEST, WIDEST, LARGEST_FLOW, FASTEST, HEAVIEST = 1e6, 100.0, 1e3, 1e3, 25_000.0
Length = Annotated[Quantity, Unit("m", above=0.0, at_most=LONGEST, example="'50 mm'")]
Diameter = Annotated[Quantity, Unit("m", above=NARROWEST, at_most=WIDEST, example="'50 mm'")]
NotNegativeLength = Annotated[Quantity, Unit("m", at_least=0.0, example="'0.05 mm'")]
Height = Annotated[Quantity, Unit("m", example="'2.5 m'")]
Angle = Annotated[Quantity, Unit("rad", above=0.0, at_most=math.pi, example="'30 °'")]
PositiveVolume = Annotated[Quantity, Unit("m^3", above=0.0, example="'0.5 L'")]
Volume = Annotated[Quantity, Unit("m^3", at_least=0.0, example="'20 L'")]
Flow = Annotated[Quantity, Unit("m^3/s", above=0.0, at_most=LARGEST_FLOW, example="'5 m3/h'")]
NotNegativeFlow = Annotated[
    Quantity, Unit("m^3/s", at_least=0.0, at_most=LARGEST_FLOW, example="'5 m3/h'")
]
Velocity = Annotated[Quantity, Unit("m/s", above=0.0, at_most=FASTEST, example="'1.5 m/s'")]
Rate = Annotated[Quantity, Unit("1/s", above=0.0, example="'100 1/s'")]
AngularSpeed = Annotated[Quantity, Unit("rad/s", above=0.0, example="'60 rpm'")]
Pressure = Annotated[Quantity, Unit("Pa", above=0.0, example="'6 bar'")]
NotNegativePressure = Annotated[Quantity, Unit("Pa", at_least=0.0, example="'20 kPa'")]
GaugePressure = Annotated[Quantity, Unit("Pa", example="'0.5 bar'")]
Stress = Annotated[Quantity, Unit("Pa", at_least=0.0, example="'25 Pa'")]
PositiveStress = Annotated[Quantity, Unit("Pa", above=0.0, example="'0.511 Pa'")]
Viscosity = Annotated[Quantity, Unit("Pa.s", above=0.0, example="'1 mPa.s'")]
Torque = Annotated[Quantity, Unit("N*m", above=0.0, example="'10 mN.m'")]
Density = Annotated[Quantity, Unit("kg/m^3", above=0.0, at_most=HEAVIEST, example="'1100 kg/m3'")]
HeatCapacity = Annotated[Quantity, Unit("J/(kg*K)", above=0.0, example="'3.8 kJ/kg/K'")]
HeatTransfer = Annotated[Quantity, Unit("W/(m^2*K)", above=0.0, example="'5 W/m2/K'")]
Temperature = Annotated[Quantity, Unit("K", at_least=173.0, at_most=1273.0, example="'40 °C'")]
TemperatureStep = Annotated[Quantity, StepUnit("K", at_least=0.0, example="'2 °C'")]
Duration = Annotated[Quantity, Unit("s", above=0.0, example="'2 min'")]
Share = Annotated[Quantity, Unit("dimensionless", at_least=0.0, at_most=1.0, example="'10 %'")]
PositiveShare = Annotated[Quantity, Unit("dimensionless", above=0.0, at_most=1.0, example="'55 %'")]
NotNegative = Annotated[Quantity, Unit("dimensionless", at_least=0.0, example="0.9")]
VolumeFraction = Annotated[
    Quantity, Unit("dimensionless", above=0.0, at_most=0.69, example="'12 %'")
]
SolidsShare = Annotated[
    Quantity, SolidsUnit("dimensionless", above=0.0, at_most=0.99, example="'25 %' or '46 wt%'")
]
Percent = Annotated[Quantity, Unit("percent", at_least=0.0, at_most=100.0, example="'1 %'")]
Hours = Annotated[Quantity, Unit("dimensionless", above=0.0, at_most=8784.0, example="6000")]
Positive = Annotated[Quantity, Unit("dimensionless", above=0.0, example="6000")]
