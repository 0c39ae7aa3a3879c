"""What if: a case with another flow, a thicker product, other temperatures, more solids."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from rheo.case.result import CaseResult
from rheo.case.schema import Case
from rheo.case.storage import case_from_document
from rheo.line.thickness import density_with_solids, solids_factor

# Keys of a part that hold a temperature of the product.
_WARM_KEYS = ("temperature", "outlet_temperature")
_ICE_POINT = 273.15


@dataclass(frozen=True)
class SolidsChange:
    """Another content of solids.

    Parameters
    ----------
    before, after : float
        Volume fraction of solids in the readings, and what it may become [-].
    density : float, optional
        Of the solids [kg/m3]; the density of the product stays when absent.
    """

    before: float
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
        solids = change.solids
        factor *= float(solids_factor(solids.before, solids.after))
        if solids.density is not None:
            now = float(np.asarray(result.product.density))
            new = density_with_solids(now, solids.before, solids.after, solids.density)
            product["density"] = f"{new:.6g} kg/m3"
        if case.product.solids is not None and solids.after > 0:
            product["solids"]["volume_fraction"] = float(f"{solids.after:.6g}")
    if factor != 1.0:
        already = float(case.product.stress_factor or 1.0)
        product["stress_factor"] = float(f"{already * factor:.6g}")
    if change.warmer:
        product["temperature"] = _celsius(result.product.temperature + change.warmer)
        _warm_parts(document["line"], case, change.warmer)
    return case_from_document(document).in_folder(case.folder, case.allow_outside)


def _warm_parts(line: dict[str, Any], case: Case, warmer: float) -> None:
    for side in ("suction", "discharge"):
        for part, block in zip(line.get(side, ()), getattr(case.line, side), strict=True):
            for key in _WARM_KEYS:
                if part.get(key) is not None:
                    part[key] = _celsius(float(getattr(block, key)) + warmer)


def _celsius(kelvin: float) -> str:
    return f"{round(kelvin - _ICE_POINT, 4):g} °C"
