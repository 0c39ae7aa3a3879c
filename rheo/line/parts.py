"""What a line is made of, in the order in which the product meets it."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError
from rheo.line.catalogue import PipeSize, pipe_size
from rheo.line.checks import require_number, require_optional, require_positive
from rheo.line.published_losses import published_entrance, published_fitting

FloatArray = NDArray[np.float64]
Number = float | FloatArray

STANDARD_ATMOSPHERE = 101_325.0


@dataclass(frozen=True)
class Vessel:
    """A tank or a connection at one end of the line.

    Parameters
    ----------
    level : float
        Height of the liquid surface above the nozzle [m]; negative when the line ends above it.
    gauge_pressure : float
        Pressure on the surface above the atmosphere's [Pa]; negative for a vacuum.
    name : str
        For display.
    """

    level: Number = 0.0
    gauge_pressure: Number = 0.0
    name: str = "vessel"

    def __post_init__(self) -> None:
        require_number(self.level, "level [m]", self.name)
        require_number(self.gauge_pressure, "gauge_pressure [Pa]", self.name)


@dataclass(frozen=True)
class Pipe:
    """A straight run of pipe.

    Parameters
    ----------
    length : float
        Length along the pipe [m].
    inside_diameter : float, optional
        [m]; taken from `size` when absent.
    size : PipeSize or str, optional
        A catalogue size or its name, such as ``ISO 2037 51``.
    rise : float
        Height gained from its beginning to its end [m]; negative when it falls.
    roughness : float
        Height of the equivalent sand roughness [m].
    temperature : float, optional
        Temperature of the product in it [K]; when absent the temperature at which it arrives
        (at the head of the line, the product's own).
    ambient_temperature, heat_transfer_coefficient : float, optional
        Surroundings [K] and overall coefficient on the inside area [W/(m2 K)]; both, for a
        line that cools or warms on its way.
    fixed_size : bool
        Whether the size stays as it is when sizes are compared.
    name : str
        For display.
    """

    length: Number
    inside_diameter: Number | None = None
    size: PipeSize | str | None = None
    rise: Number = 0.0
    roughness: Number = 0.0
    temperature: float | None = None
    ambient_temperature: float | None = None
    heat_transfer_coefficient: float | None = None
    fixed_size: bool = False
    name: str = "pipe"

    def __post_init__(self) -> None:
        size = pipe_size(self.size) if isinstance(self.size, str) else self.size
        object.__setattr__(self, "size", size)
        if self.inside_diameter is None:
            if size is None:
                raise InputError("give inside_diameter [m] or a catalogue size", self.name)
            object.__setattr__(self, "inside_diameter", size.inside_diameter)
        require_positive(self.length, "length [m]", self.name)
        require_positive(self.diameter, "inside_diameter [m]", self.name)
        require_number(self.rise, "rise [m]", self.name)
        require_number(self.roughness, "roughness [m]", self.name, low=0.0)
        require_optional(self.temperature, "temperature [K]", self.name)
        require_optional(self.ambient_temperature, "ambient_temperature [K]", self.name)
        require_optional(
            self.heat_transfer_coefficient, "heat_transfer_coefficient [W/(m2 K)]", self.name
        )
        if np.any(np.abs(self.rise) > np.asarray(self.length) * (1 + 1e-12)):
            raise InputError("rise [m] is more than the length of the pipe", self.name)
        if np.any(np.asarray(self.roughness) >= 0.25 * np.asarray(self.diameter)):
            raise InputError(
                "roughness [m] must be less than a quarter of the inside diameter", self.name
            )
        if (self.ambient_temperature is None) != (self.heat_transfer_coefficient is None):
            raise InputError(
                "give ambient_temperature and heat_transfer_coefficient together", self.name
            )

    @property
    def diameter(self) -> FloatArray:
        """Inside diameter [m] as an array."""
        return np.asarray(self.inside_diameter, dtype=float)

    @property
    def size_name(self) -> str:
        """Name of the catalogue size, or the inside diameter in words."""
        if isinstance(self.size, PipeSize):
            return self.size.name
        low, high = 1e3 * float(self.diameter.min()), 1e3 * float(self.diameter.max())
        return f"{low:g} mm inside" if low == high else f"{low:g} to {high:g} mm inside"


@dataclass(frozen=True)
class Fitting:
    """One or more like fittings, in the pipe before them (after them, when none is before).

    Parameters
    ----------
    kind : str
        A published fitting, such as ``elbow-90-long`` or ``valve-ball``; any text when
        `loss_coefficient` is given.
    count : int
        How many of them.
    loss_coefficient : float, optional
        The user's own K, in velocity heads of that pipe [-], whatever the Reynolds number.
    diameter : float, optional
        Inside diameter [m] whose velocity counts; that of the pipe before it when absent.
    name : str
        For display; the kind when empty.
    table : str, optional
        ``darby-3k`` or ``hooper-2k``; when absent Darby's, and Hooper's for a kind that only he
        lists.
    """

    kind: str = "fitting"
    count: int = 1
    loss_coefficient: Number | None = None
    diameter: Number | None = None
    name: str = ""
    table: str | None = None

    def __post_init__(self) -> None:
        if not self.name:
            object.__setattr__(self, "name", self.kind)
        if isinstance(self.count, bool) or int(self.count) != self.count or self.count < 1:
            raise InputError(
                f"count is {self.count!r}; it must be a whole number above 0", self.name
            )
        if self.loss_coefficient is None:
            published_fitting(self.kind, self.table, self.name)
        else:
            require_number(self.loss_coefficient, "loss_coefficient [-]", self.name, low=0.0)
        require_optional(self.diameter, "diameter [m]", self.name)


@dataclass(frozen=True)
class Reducer:
    """A change of diameter between the pipe before it and the pipe after it, either way.

    Parameters
    ----------
    angle : float
        Whole angle of the cone [rad]; π for a sudden change.
    loss_coefficient : float, optional
        The user's own K, in velocity heads of the smaller pipe [-].
    name : str
        For display.
    """

    angle: float = float(np.pi)
    loss_coefficient: Number | None = None
    name: str = "reducer"

    def __post_init__(self) -> None:
        if not 0 < self.angle <= np.pi * (1 + 1e-12):
            raise InputError(
                f"angle is {self.angle:g} rad; it must be above 0 and at most π", self.name
            )
        if self.loss_coefficient is not None:
            require_number(self.loss_coefficient, "loss_coefficient [-]", self.name, low=0.0)


@dataclass(frozen=True)
class Entrance:
    """From a vessel into the pipe after it.

    Parameters
    ----------
    loss_coefficient : float, optional
        The user's own K, in velocity heads of that pipe [-]; that of its kind when absent.
    name : str
        For display.
    kind : str
        ``entrance`` (sharp edge), ``entrance-projecting`` or ``entrance-rounded``.
    """

    loss_coefficient: Number | None = None
    name: str = "entrance"
    kind: str = "entrance"

    def __post_init__(self) -> None:
        if self.loss_coefficient is None:
            published_entrance(self.kind, self.name)
        else:
            require_number(self.loss_coefficient, "loss_coefficient [-]", self.name, low=0.0)


@dataclass(frozen=True)
class Exit:
    """From the pipe before it into a vessel.

    Parameters
    ----------
    loss_coefficient : float, optional
        K in velocity heads of that pipe [-]. When absent all of the stream's kinetic energy,
        αρV²/2, is lost (α is 1 for flat flow, 2 for laminar Newtonian flow).
    name : str
        For display.
    """

    loss_coefficient: Number | None = None
    name: str = "exit"

    def __post_init__(self) -> None:
        if self.loss_coefficient is not None:
            require_number(self.loss_coefficient, "loss_coefficient [-]", self.name, low=0.0)


@dataclass(frozen=True)
class Equipment:
    """A heat exchanger, filter, meter or valve with its own loss curve.

    ΔP = loss (Q/at_flow)^exponent.

    Parameters
    ----------
    loss : float
        Pressure loss [Pa] with this product at the flow `at_flow`.
    at_flow : float
        Flow [m3/s] at which the loss was found.
    exponent : float
        Of the flow [-]: about 2 for turbulent flow, the flow index for laminar flow of a
        power-law product; 0 for a constant loss.
    rise : float
        Height gained from its inlet to its outlet [m].
    volume : float
        Product held [m3], for the time in the line.
    outlet_temperature : float, optional
        Temperature of the product as it leaves [K]; unchanged when absent.
    passage_length, passage_diameter : float, optional
        Length and hydraulic diameter of one passage [m], for the pressure that starts it again.
    name : str
        For display.
    """

    loss: Number
    at_flow: Number
    exponent: Number = 2.0
    rise: Number = 0.0
    volume: Number = 0.0
    outlet_temperature: float | None = None
    passage_length: float | None = None
    passage_diameter: float | None = None
    name: str = "equipment"

    def __post_init__(self) -> None:
        require_number(self.loss, "loss [Pa]", self.name, low=0.0)
        require_positive(self.at_flow, "at_flow [m3/s]", self.name)
        require_number(self.exponent, "exponent [-]", self.name, low=0.0)
        require_number(self.rise, "rise [m]", self.name)
        require_number(self.volume, "volume [m3]", self.name, low=0.0)
        require_optional(self.outlet_temperature, "outlet_temperature [K]", self.name)
        require_optional(self.passage_length, "passage_length [m]", self.name)
        require_optional(self.passage_diameter, "passage_diameter [m]", self.name)
        if (self.passage_length is None) != (self.passage_diameter is None):
            raise InputError("give passage_length and passage_diameter together", self.name)


Part = Vessel | Pipe | Fitting | Reducer | Entrance | Exit | Equipment
_PARTS = (Vessel, Pipe, Fitting, Reducer, Entrance, Exit, Equipment)


@dataclass(frozen=True)
class Line:
    """The whole route: what lies before the pump and what lies after it.

    Parameters
    ----------
    suction, discharge : tuple of parts
        In the order in which the product meets them. `suction` may begin with a Vessel and
        `discharge` may end with one. Without it that end is a flange at atmospheric pressure
        where the product arrives or leaves moving; with an Entrance or Exit alone, an open
        vessel whose surface is level with the nozzle.
    atmospheric_pressure : float
        [Pa]; gauge pressures count from it.
    name : str
        For display.

    Raises
    ------
    InputError
        If there is no part with a diameter, or a Vessel stands between other parts.
    """

    suction: tuple[Part, ...] = ()
    discharge: tuple[Part, ...] = ()
    atmospheric_pressure: float = STANDARD_ATMOSPHERE
    name: str = "line"

    def __post_init__(self) -> None:
        object.__setattr__(self, "suction", tuple(self.suction))
        object.__setattr__(self, "discharge", tuple(self.discharge))
        require_positive(self.atmospheric_pressure, "atmospheric_pressure [Pa]", self.name)
        parts: tuple[Any, ...] = (*self.suction, *self.discharge)
        for part in parts:
            if not isinstance(part, _PARTS):
                kinds = ", ".join(kind.__name__ for kind in _PARTS)
                raise InputError(
                    f"{type(part).__name__} is no part of a line; there are {kinds}", self.name
                )
        for side, middle in (("suction", self.suction[1:]), ("discharge", self.discharge[:-1])):
            for part in middle:
                if isinstance(part, Vessel):
                    raise InputError(
                        f"vessel '{part.name}' stands between other parts on the {side} side; "
                        "a vessel may only be the first suction part or the last discharge part",
                        self.name,
                    )
        for part in parts:
            if isinstance(part, Vessel) and np.any(
                np.asarray(part.gauge_pressure) < -self.atmospheric_pressure
            ):
                lowest = float(np.min(part.gauge_pressure))
                raise InputError(
                    f"gauge_pressure is {lowest / 1e5:.4g} bar; a full vacuum is "
                    f"{-self.atmospheric_pressure / 1e5:.4g} bar, and less cannot be",
                    part.name,
                )
        moving = [part for part in parts if not isinstance(part, Vessel)]
        inner: list[Entrance | Exit] = [p for p in moving[1:] if isinstance(p, Entrance)]
        inner += [part for part in moving[:-1] if isinstance(part, Exit)]
        if inner:
            raise InputError(
                f"'{inner[0].name}' stands between other parts; an Entrance may only come first "
                "and an Exit last, beside a vessel",
                self.name,
            )
        if not any(isinstance(part, Pipe | Equipment) for part in parts):
            raise InputError("the line has no pipe; give at least one part of kind Pipe", self.name)

    @property
    def source_vessel(self) -> Vessel:
        """Where the product comes from."""
        first = self.suction[0] if self.suction else None
        return first if isinstance(first, Vessel) else Vessel(name="source")

    @property
    def end_vessel(self) -> Vessel:
        """Where the product goes."""
        last = self.discharge[-1] if self.discharge else None
        return last if isinstance(last, Vessel) else Vessel(name="end")

    def pipes(self) -> Iterator[Pipe]:
        """Pipes of both sides in order."""
        for part in (*self.suction, *self.discharge):
            if isinstance(part, Pipe):
                yield part
