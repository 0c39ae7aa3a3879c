"""What to know about the pump of a case beside its duty."""

from __future__ import annotations

from rheo.case.pump_blocks import DutyPumpBlock
from rheo.case.schema import Case
from rheo.errors import Caution
from rheo.line import LineResult
from rheo.line.operating import OperatingPoint

# A pump that misses the duty by less than this share [-] does it, as far as curves can be read.
_CLOSE = 0.01


def pump_cautions(
    case: Case, line: LineResult, operating: OperatingPoint | None
) -> tuple[Caution, ...]:
    """Return the Cautions of a pump on a line.

    Parameters
    ----------
    case : Case
        With its pump.
    line : LineResult
        Duty of the line.
    operating : OperatingPoint or None
        Where pump and line meet; None when the pump's curve is not known.

    Returns
    -------
    tuple of Caution
        Those of the operating point too.
    """
    if operating is not None:
        return (*_against_duty(float(case.duty.flow), operating), *operating.cautions)
    pump = case.pump
    if not isinstance(pump, DutyPumpBlock) or pump.rated_pressure is None:
        return ()
    rated, needed = float(pump.rated_pressure), float(line.differential_pressure)
    if needed <= rated:
        return ()
    return (
        Caution(
            "above-pump-rating",
            f"The line needs {needed / 1e5:.3g} bar, more than the {rated / 1e5:.3g} bar for "
            f"which {pump.name} is rated.",
            "Choose larger pipes or a pump with a higher rating.",
            pump.name,
        ),
    )


def _against_duty(duty: float, point: OperatingPoint) -> tuple[Caution, ...]:
    name = point.pump.name
    if not point.found or point.flow is None:
        return (
            Caution(
                "no-operating-point",
                point.sentence,
                "Choose another pump, speed or pipe size for this line.",
                name,
            ),
        )
    if point.flow >= (1.0 - _CLOSE) * duty:
        return ()
    return (
        Caution(
            "pump-below-duty",
            f"{name} moves {3600 * point.flow:.3g} m3/h on this line, less than the "
            f"{3600 * duty:.3g} m3/h of the duty.",
            "Run it faster, or choose a stronger pump or larger pipes.",
            name,
        ),
    )
