"""Where on the page the Cautions of a result stand.

Cautions about readings and about a fit are drawn as they come on the stops Readings and Flow curve.
Of the others each kind has its places here; one that has none stands under the pressure, so that
nothing is lost.
"""

from __future__ import annotations

from rheo.case import CaseResult
from rheo.errors import Caution

_RANGE = ("outside-measured-range", "measured-range-unknown")
_TEMPERATURES = ("temperature-not-in-model", "outside-temperature-range")
_OTHER_STATE = (
    *("temperature-of-readings", "temperature-of-readings-unknown"),
    *("outside-measured-temperature", "outside-measured-fraction"),
    *("solids-of-readings", "solids-not-in-model", "solids-not-given"),
)
_SUCTION = ("below-vapour-pressure", "npsh-negative", "npsh-too-low", "npsh-unknown")
_PUMP = ("above-pump-rating", "no-operating-point", "pump-below-duty")
_CURVE_OF_PUMP = (
    *("operating-point-in-doubt", "pump-best-point", "pump-correction-range"),
    *("pump-correction-viscosity", "pump-curve-not-falling", "water-pump-curve"),
)
_START = (
    *("suction-will-not-start", "start-up-equipment"),
    *("static-below-flowing-yield-stress", "static-yield-stress-missing"),
)

# What stands at each place. `pressure` is right under the answer; its views follow.
CODES: dict[str, tuple[str, ...]] = {
    "flow_curve": _OTHER_STATE,
    "shear_rates": _RANGE,
    "route": (
        *(*_RANGE, *_TEMPERATURES, *_SUCTION, *_PUMP),
        *("viscous-heating", "runs-by-itself", "suction-will-not-start", "start-up-equipment"),
    ),
    "pressure": (
        *(*_RANGE, *_TEMPERATURES, *_OTHER_STATE),
        *("product-not-as-measured", "equipment-loss-as-given", "viscous-heating"),
        *(
            "transition-flow",
            "turbulent-below-laminar",
            "no-turbulent-solution",
            "outside-method-range",
            "forced-regime",
        ),
        *("roughness-rule", "very-rough"),
        *("settles-at-rest", "below-deposition-velocity", "laminar-settling"),
        *("limit-not-kept", "above-pump-rating", "pump-below-duty", "no-operating-point"),
    ),
    "pressure.line": (*_SUCTION, "runs-by-itself"),
    "pressure.system": (*_PUMP, *_CURVE_OF_PUMP, "npsh-too-low"),
    "pressure.start": _START,
    "sizes": ("limit-not-kept",),
}


def at(place: str, result: CaseResult) -> tuple[Caution, ...]:
    """Return the Cautions of a result that stand at a place."""
    wanted = CODES[place]
    found = [one for one in result.cautions if one.code in wanted]
    if place == "pressure":
        placed = {code for codes in CODES.values() for code in codes}
        elsewhere = {*of_readings(result), *of_fit(result)}
        found += [one for one in result.cautions if one.code not in placed and one not in elsewhere]
    return tuple(found)


def of_readings(result: CaseResult) -> tuple[Caution, ...]:
    """Return the Cautions of a result that the stop Readings draws as they come."""
    from rheo.case.load_readings import screened

    return tuple(
        one
        for readings in result.readings
        for one in (*readings.cautions, *screened(result.case, readings))
    )


def of_fit(result: CaseResult) -> tuple[Caution, ...]:
    """Return the Cautions of a result that the stop Flow curve draws as they come."""
    fits, chosen = result.fits, result.chosen
    ranking = fits.ranking_cautions if chosen is fits.best else ()
    return (*result.fitted.cautions, *fits.data_cautions, *ranking, *chosen.cautions)
