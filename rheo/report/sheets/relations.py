"""The key relations as spreadsheet formulas: flow curves and laminar flow in a tube.

They are written from the published closed forms, not from the program's own solution, so that the
workbook checks the program. All in SI.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

from rheo.report.sheets.terms import Term, as_term, exp, ln, sqrt

Cells = Mapping[str, Term]


@dataclass(frozen=True)
class Relation:
    """Formulas of one model.

    Parameters
    ----------
    stress : callable
        ``stress(rate, parameters)``: the flow curve.
    log_slope : callable or None
        ``log_slope(rate, parameters)``: d ln(stress)/d ln(rate).
    nominal_rate : callable or None
        ``nominal_rate(wall_rate, parameters)``: 8V/D of laminar tube flow; None without a closed
        form.
    source : str
        Of the closed form.
    """

    stress: Callable[[Term, Cells], Term]
    log_slope: Callable[[Term, Cells], Term] | None = None
    nominal_rate: Callable[[Term, Cells], Term] | None = None
    source: str = ""


def _by_parts(wall_rate: Term, wall_stress: Term, cube: Term) -> Term:
    """8V/D = (4/3)(γ̇w − τw⁻³∫τ³dγ̇) (Rabinowitsch 1929, integrated by parts)."""
    return (wall_rate - cube / wall_stress**3) * 4.0 / 3.0


def _herschel_bulkley_rate(rate: Term, yield_stress: Term, flowing: Term, index: Term) -> Term:
    """8V/D of a Herschel-Bulkley fluid, with τw = τ_y + flowing; all terms are positive."""
    whole = yield_stress + flowing
    s, p, m = flowing / whole, yield_stress / whole, 1.0 / index
    series = s**2 / (m + 3.0) + 2.0 * p * s / (m + 2.0) + p**2 / (m + 1.0)
    return 4.0 * rate * s * series


def _newtonian(rate: Term, p: Cells) -> Term:
    return p["viscosity"] * rate


def _newtonian_slope(_: Term, __: Cells) -> Term:
    return as_term(1.0)


def _newtonian_rate(rate: Term, _: Cells) -> Term:
    return rate


def _power_law(rate: Term, p: Cells) -> Term:
    return p["consistency"] * rate ** p["flow_index"]


def _power_law_slope(_: Term, p: Cells) -> Term:
    return p["flow_index"]


def _power_law_rate(rate: Term, p: Cells) -> Term:
    return rate * 4.0 * p["flow_index"] / (3.0 * p["flow_index"] + 1.0)


def _bingham(rate: Term, p: Cells) -> Term:
    return p["yield_stress"] + p["plastic_viscosity"] * rate


def _bingham_slope(rate: Term, p: Cells) -> Term:
    return p["plastic_viscosity"] * rate / _bingham(rate, p)


def _bingham_rate(rate: Term, p: Cells) -> Term:
    wall = _bingham(rate, p)
    x = p["yield_stress"] / wall
    return wall / p["plastic_viscosity"] * (1.0 - 4.0 / 3.0 * x + x**4 / 3.0)


def _herschel_bulkley(rate: Term, p: Cells) -> Term:
    return p["yield_stress"] + p["consistency"] * rate ** p["flow_index"]


def _herschel_bulkley_slope(rate: Term, p: Cells) -> Term:
    n = p["flow_index"]
    return n * p["consistency"] * rate**n / _herschel_bulkley(rate, p)


def _herschel_bulkley_nominal(rate: Term, p: Cells) -> Term:
    flowing = p["consistency"] * rate ** p["flow_index"]
    return _herschel_bulkley_rate(rate, p["yield_stress"], flowing, p["flow_index"])


def _casson(rate: Term, p: Cells) -> Term:
    return (sqrt(p["yield_stress"]) + sqrt(p["casson_viscosity"] * rate)) ** 2


def _casson_slope(rate: Term, p: Cells) -> Term:
    moving = sqrt(p["casson_viscosity"] * rate)
    return moving / (sqrt(p["yield_stress"]) + moving)


def _casson_rate(rate: Term, p: Cells) -> Term:
    wall = _casson(rate, p)
    x = p["yield_stress"] / wall
    series = 1.0 - 16.0 / 7.0 * sqrt(x) + 4.0 / 3.0 * x - x**4 / 21.0
    return wall / p["casson_viscosity"] * series


def _sisko(rate: Term, p: Cells) -> Term:
    return p["infinite_shear_viscosity"] * rate + p["consistency"] * rate ** p["flow_index"]


def _sisko_slope(rate: Term, p: Cells) -> Term:
    n = p["flow_index"]
    high = p["infinite_shear_viscosity"] * rate
    return (high + n * p["consistency"] * rate**n) / _sisko(rate, p)


def _sisko_rate(rate: Term, p: Cells) -> Term:
    a, k, n = p["infinite_shear_viscosity"], p["consistency"], p["flow_index"]
    cube = (
        a**3 * rate**4 / 4.0
        + 3.0 * a**2 * k * rate ** (n + 3.0) / (n + 3.0)
        + 3.0 * a * k**2 * rate ** (2.0 * n + 2.0) / (2.0 * n + 2.0)
        + k**3 * rate ** (3.0 * n + 1.0) / (3.0 * n + 1.0)
    )
    return _by_parts(rate, _sisko(rate, p), cube)


def _robertson_stiff(rate: Term, p: Cells) -> Term:
    return p["consistency"] * (rate + p["rate_offset"]) ** p["flow_index"]


def _robertson_stiff_slope(rate: Term, p: Cells) -> Term:
    return p["flow_index"] * rate / (rate + p["rate_offset"])


def _robertson_stiff_rate(rate: Term, p: Cells) -> Term:
    k, offset, n = p["consistency"], p["rate_offset"], p["flow_index"]
    power = 3.0 * n + 1.0
    cube = k**3 * ((rate + offset) ** power - offset**power) / power
    return _by_parts(rate, _robertson_stiff(rate, p), cube)


def _carreau_shape(rate: Term, p: Cells, exponent: Term | float) -> Term:
    low, high = p["zero_shear_viscosity"], p["infinite_shear_viscosity"]
    bend = 1.0 + (p["time_constant"] * rate) ** exponent
    return (high + (low - high) * bend ** ((p["flow_index"] - 1.0) / exponent)) * rate


def _carreau(rate: Term, p: Cells) -> Term:
    return _carreau_shape(rate, p, 2.0)


def _carreau_yasuda(rate: Term, p: Cells) -> Term:
    return _carreau_shape(rate, p, p["yasuda_exponent"])


def _cross(rate: Term, p: Cells) -> Term:
    low, high = p["zero_shear_viscosity"], p["infinite_shear_viscosity"]
    return (high + (low - high) / (1.0 + (p["time_constant"] * rate) ** p["rate_index"])) * rate


RELATIONS: dict[str, Relation] = {
    "newtonian": Relation(_newtonian, _newtonian_slope, _newtonian_rate, "Hagen-Poiseuille"),
    "power-law": Relation(
        _power_law, _power_law_slope, _power_law_rate, "8V/D = γ̇w 4n/(3n + 1), Rabinowitsch 1929"
    ),
    "bingham": Relation(_bingham, _bingham_slope, _bingham_rate, "Buckingham 1921, Reiner 1926"),
    "herschel-bulkley": Relation(
        _herschel_bulkley,
        _herschel_bulkley_slope,
        _herschel_bulkley_nominal,
        "Rabinowitsch's integral of the Herschel-Bulkley curve, closed form",
    ),
    "casson": Relation(
        _casson, _casson_slope, _casson_rate, "Rabinowitsch's integral of Casson's curve"
    ),
    "sisko": Relation(_sisko, _sisko_slope, _sisko_rate, "Rabinowitsch 1929, by parts"),
    "robertson-stiff": Relation(
        _robertson_stiff,
        _robertson_stiff_slope,
        _robertson_stiff_rate,
        "Rabinowitsch 1929, by parts",
    ),
    "carreau": Relation(_carreau),
    "carreau-yasuda": Relation(_carreau_yasuda),
    "cross": Relation(_cross),
}

# Newton's method in logarithms gains digits fast: the slope changes little along the way.
STEPS = 6


def next_wall_rate(wall_rate: Term, nominal_here: Term, slope: Term, wanted: Term) -> Term:
    """Return the next wall shear rate of Newton's method in logarithms.

    d ln(8V/D)/d ln γ̇w = s (4γ̇w/(8V/D) − 3) with s = d ln τ/d ln γ̇ on the flow curve, from
    8V/D = (4/τw³)∫τ²γ̇dτ.
    """
    gain = slope * (4.0 * wall_rate / nominal_here - 3.0)
    return wall_rate * exp((ln(wanted) - ln(nominal_here)) / gain)
