"""One fit over several temperatures: shared indices, Arrhenius's law for the rest."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError
from rheo.fitting.scaled_fits import ScaledFits, fit_scaled
from rheo.fitting.weighting import Instrument, Weighting
from rheo.models import Parameter
from rheo.models.state_curve import ScalingLaw
from rheo.readings import FlowCurve, Readings

FloatArray = NDArray[np.float64]

GAS_CONSTANT = 8.314462618
_LARGEST = 5e5


def arrhenius(reference: float) -> ScalingLaw:
    """Return Arrhenius's law about a reference temperature [K].

    Notes
    -----
    exp[(E/R)(1/T - 1/T_ref)]: S. Arrhenius (1889) for rates; for the viscosity of liquids
    E. N. da C. Andrade, Nature 125 (1930) 309, J. de Guzmán (1913). The same form with an energy of
    its own keeps a yield stress above 0 at every temperature, which a straight line would not.
    """
    return ScalingLaw(
        state="temperature",
        unit="K",
        reference=reference,
        exponent=lambda temperature, at: (1.0 / temperature - 1.0 / at) / GAS_CONSTANT,
        slope=Parameter(
            "activation_energy", "E_η", "J/mol", "activation energy of flow", -_LARGEST, _LARGEST
        ),
        yield_slope=Parameter(
            "yield_activation_energy",
            "E_y",
            "J/mol",
            "activation energy of the yield stress",
            -_LARGEST,
            _LARGEST,
        ),
        equation="K(T) = K(T_ref) exp[(E/R)(1/T - 1/T_ref)]",
        source="S. Arrhenius, Z. Phys. Chem. 4 (1889) 226; E. N. da C. Andrade, Nature 125 (1930) "
        "309",
    )


def fit_temperatures(
    data: FlowCurve | Readings,
    models: str | Sequence[str] | None = None,
    weighting: str | Instrument | Weighting = "relative",
    reference: float | None = None,
) -> ScaledFits:
    """Fit models over readings at several temperatures and rank them.

    Indices are shared; viscosities, consistency and time constants follow Arrhenius's law with one
    energy, the yield stress with one of its own.

    Parameters
    ----------
    data : FlowCurve or Readings
        With a temperature [K] for every reading.
    models, weighting
        As for `rheo.fit`.
    reference : float, optional
        Temperature [K] at which the parameters are given; must lie inside the data. The middle
        one of the readings when absent.

    Returns
    -------
    ScaledFits
        ``.at(temperature)`` is the flow curve at a temperature [K].

    Raises
    ------
    InputError
        If temperatures are missing or all the same, or the reference lies outside them.
    FitError
        If there are too few readings.
    """
    taken = data.temperature
    if taken is None:
        raise InputError("the readings have no temperatures; give one for each", "temperature")
    temperature = np.asarray(taken, dtype=float)
    if temperature.size and not (np.isfinite(temperature).all() and (temperature > 0).all()):
        raise InputError("a temperature is missing or not above 0 K", "temperature")
    low, high = float(temperature.min()), float(temperature.max())
    middle = float(np.median(temperature))
    at = middle if reference is None else float(reference)
    if not low <= at <= high:
        raise InputError(
            f"the reference temperature is {at - 273.15:.1f} °C; it must lie between "
            f"{low - 273.15:.1f} and {high - 273.15:.1f} °C, inside the readings",
            "reference",
        )
    # Fitted about the middle: only the parameters that are shown follow the reference.
    return fit_scaled(data, temperature, arrhenius(middle), models, weighting).about(at)
