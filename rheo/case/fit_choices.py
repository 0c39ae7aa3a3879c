"""What the weighting of the readings, and the branch of a sweep, do to the fit and the pressure."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

from rheo.case.join import joined
from rheo.case.load_readings import weighting_of
from rheo.case.result import CaseResult
from rheo.case.run import run_case
from rheo.case.schema import Case
from rheo.fitting.compare_weightings import WeightingComparison
from rheo.fitting.sweeps import SweepComparison, compare_sweeps
from rheo.fitting.weighting import WEIGHTINGS


@dataclass(frozen=True, eq=False)
class FitChoices:
    """The case under other weightings, and its branches fitted apart.

    Parameters
    ----------
    weightings : mapping of str to CaseResult
        By the name of the weighting; the one in use first.
    sweeps : SweepComparison or None
        None where the readings have no way up and way down, or are fitted with slip or an entrance
        loss.
    """

    weightings: Mapping[str, CaseResult]
    sweeps: SweepComparison | None

    @property
    def sentence(self) -> str:
        """The effect of the weighting in one sentence."""
        return WeightingComparison({key: one.fits for key, one in self.weightings.items()}).sentence


def fit_choices(result: CaseResult, tell: Callable[[float], None] | None = None) -> FitChoices:
    """Work out a case under every weighting, and fit the branches of its sweeps apart.

    Parameters
    ----------
    result : CaseResult
        The case as it is.
    tell : callable, optional
        Told how much is done [-].

    Returns
    -------
    FitChoices

    Raises
    ------
    InputError
        If readings cannot be fitted with another weighting, or a branch has too few of them.
    """
    case = result.case
    found = {case.fit.weighting: result}
    others = [name for name in WEIGHTINGS if name not in found]
    for done, name in enumerate(others):
        found[name] = run_case(_weighted(case, name), result.readings)
        if tell is not None:
            tell((done + 1) / (len(others) + 1))
    return FitChoices(found, _sweeps(result))


def _weighted(case: Case, name: str) -> Case:
    fit = case.fit.model_copy(
        update={"weighting": name, "percent_of_reading": None, "percent_of_full_scale": None}
    )
    return case.model_copy(update={"fit": fit})


def _sweeps(result: CaseResult) -> SweepComparison | None:
    fit = result.case.fit
    readings = joined(result.readings)
    if readings.branch is None or not {"up", "down"} <= set(readings.branch.tolist()):
        return None
    if fit.entrance or fit.slip:
        return None
    weighting = weighting_of(
        fit.weighting,
        float(fit.percent_of_reading or 0.0),
        float(fit.percent_of_full_scale or 0.0),
        readings,
    )
    product = result.product
    return compare_sweeps(
        readings,
        fit.models,
        weighting,
        product.temperature,
        product.solids_fraction,
        fit.solids_form,
    )
