"""What if: a case with another flow, a thicker product, other temperatures, more solids."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from rheo.case.result import CaseResult
from rheo.case.schema import Case
from rheo.case.solids_state import follows_solids, solids_basis
from rheo.case.storage import case_from_document
from rheo.errors import InputError
from rheo.fitting.scaled_fits import ScaledFits
from rheo.line.thickness import density_with_solids, solids_factor
from rheo.readings.solids import in_words

# Keys of a part that hold a temperature of the product.
_WARM_KEYS = ("temperature", "outlet_temperature")
_ICE_POINT = 273.15


@dataclass(frozen=True)
class SolidsChange:
    """Another content of solids.

    Parameters
    ----------
    before : float or None
        Volume fraction of solids in the readings [-]; not needed where these hold several solids
        fractions, as then the fitted law says what becomes of the flow curve.
    after : float
        What it may become [-]; by volume, or where the law is fitted, as its readings are.
    density : float, optional
        Of the solids [kg/m3]; the density of the product stays when absent.
    """

    before: float | None
    after: float
    density: float | None = None


@dataclass(frozen=True)
class WhatIf:
    """What may be otherwise; the defaults change nothing.

    Parameters
    ----------
    flow : float or str, optional
        Flow [m3/s], or with its unit as a case file has it.
    thicker : float
        Times the stress at every shear rate [-].
    warmer : float
        Added to every temperature of the product along the line [K]; negative for colder.
    solids : SolidsChange, optional
        Another content of solids.
    """

    flow: float | str | None = None
    thicker: float = 1.0
    warmer: float = 0.0
    solids: SolidsChange | None = None

    @property
    def changes_nothing(self) -> bool:
        """Whether all values are the defaults."""
        return self == WhatIf()


def what_if(result: CaseResult, change: WhatIf) -> Case:
    """Return the case of a result with some things otherwise; the result stays as it is.

    Parameters
    ----------
    result : CaseResult
        Of the case as it is.
    change : WhatIf
        What is otherwise.

    Returns
    -------
    Case
        To be run, or kept, as any other case.

    Raises
    ------
    InputError
        If the flow, the thickness, a temperature or the solids cannot be used.
    """
    case = result.case
    document = case.document()
    if change.flow is not None:
        document["duty"]["flow"] = change.flow
    product = document["product"]
    factor = change.thicker
    if change.solids is not None:
        factor *= _with_solids(result, change.solids, product)
    if factor != 1.0:
        already = float(case.product.stress_factor or 1.0)
        product["stress_factor"] = float(f"{already * factor:.6g}")
    if change.warmer:
        product["temperature"] = _celsius(result.product.temperature + change.warmer)
        _warm_parts(document["line"], case, change.warmer)
    return case_from_document(document).in_folder(case.folder, case.allow_outside)


def _with_solids(result: CaseResult, solids: SolidsChange, product: dict[str, Any]) -> float:
    """Change what the case says of the product; return by how much its stresses grow besides."""
    by = solids_basis(result.case, result.fitted)
    law = result.fits if follows_solids(result.fits) else None
    before = result.product.solids_fraction if law is not None else solids.before
    if before is None:
        raise InputError("give the solids of the readings too", "solids")
    factor = 1.0
    if law is None:
        by = "volume"
        factor = float(solids_factor(before, solids.after))
    elif not 0.0 < solids.after < 1.0:
        raise InputError(
            f"the solids fraction is {solids.after:g}; it must be above 0 and below 1", "solids"
        )
    if solids.density is not None:
        now = float(np.asarray(result.product.density))
        new = density_with_solids(now, before, solids.after, solids.density, by or "volume")
        product["density"] = f"{new:.6g} kg/m3"
    if law is not None:
        product["solids_fraction"] = in_words(float(f"{solids.after:.6g}"), by)
        at_rest = result.case.product.static_yield_stress
        if at_rest is not None:
            grown = _growth_at_rest(result, before, solids.after)
            product["static_yield_stress"] = f"{float(at_rest) * grown:.6g} Pa"
    if by != "mass" and result.case.product.solids is not None and solids.after > 0:
        product["solids"]["volume_fraction"] = float(f"{solids.after:.6g}")
    return factor


def _growth_at_rest(result: CaseResult, before: float, after: float) -> float:
    """Return by how much a static yield stress grows: as the yield stress, else the least stress.

    It was given for the product as it is; left as it is, a thicker product would seem to start as
    easily.
    """
    fits, key = result.fits, result.chosen.key
    assert isinstance(fits, ScaledFits)
    old, new = (fits.at(share, key) for share in (before, after))
    if float(old.yield_stress) > 0.0:
        return float(new.yield_stress / old.yield_stress)
    rates = result.product.measured_rates
    slow = 1.0 if rates is None else rates[0]
    return float(new.stress(slow) / old.stress(slow))


def _warm_parts(line: dict[str, Any], case: Case, warmer: float) -> None:
    for side in ("suction", "discharge"):
        for part, block in zip(line.get(side, ()), getattr(case.line, side), strict=True):
            for key in _WARM_KEYS:
                if part.get(key) is not None:
                    part[key] = _celsius(float(getattr(block, key)) + warmer)


def _celsius(kelvin: float) -> str:
    return f"{round(kelvin - _ICE_POINT, 4):g} °C"
