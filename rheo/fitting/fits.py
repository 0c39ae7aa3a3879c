"""The ranked models of one set of readings."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from functools import cached_property

from numpy.typing import ArrayLike

from rheo.errors import Caution, InputError, in_percent, merge_cautions
from rheo.fitting.draws import mixed_draws
from rheo.fitting.prediction import Prediction, predict_stress
from rheo.fitting.ranking import CLEAR, TIE, small_sample_term
from rheo.fitting.result import Fit
from rheo.fitting.weighting import Weighting
from rheo.models import Model
from rheo.models.state_curve import ScaledCurve

FlowCurveSource = Model | ScaledCurve
# So many sets of draws are kept; each can hold many flow curves.
_KEPT_DRAWS = 8


@dataclass(frozen=True, eq=False)
class Fits:
    """Models fitted to the same readings with the same weights.

    Parameters
    ----------
    ranking : tuple of Fit
        The model to use first, then the others by rising AICc.
    weighting : Weighting
        The weights.
    skipped : mapping of str to str
        Models that were not fitted, with the reason.
    data_cautions : tuple of Caution
        What the readings themselves gave cause for.
    """

    ranking: tuple[Fit, ...]
    weighting: Weighting
    skipped: Mapping[str, str]
    data_cautions: tuple[Caution, ...] = ()

    @property
    def as_made(self) -> Fits:
        """The fits as they were made, from which flow curves are drawn."""
        return self

    @property
    def best(self) -> Fit:
        """The model to use."""
        return self.ranking[0]

    def __getitem__(self, key: str) -> Fit:
        for fit in self.ranking:
            if fit.key == key:
                return fit
        reason = f" ({self.skipped[key]})" if key in self.skipped else ""
        raise InputError(f"model '{key}' was not fitted{reason}; there are {', '.join(self.keys)}")

    def __iter__(self) -> Iterator[Fit]:
        return iter(self.ranking)

    def __len__(self) -> int:
        return len(self.ranking)

    def __contains__(self, key: object) -> bool:
        return key in self.keys

    @property
    def keys(self) -> tuple[str, ...]:
        """Model keys in order of rank."""
        return tuple(fit.key for fit in self.ranking)

    @property
    def reason(self) -> str:
        """Why the best is the best, in one sentence."""
        best, others = self.best, self.ranking[1:]
        name = best.record.name
        name = name[0].upper() + name[1:]
        error = f"an RMS error of {in_percent(best.rms_relative_error, 2)}"
        if not others:
            return f"{name} is the only model fitted, with {error}."
        lowest = min(others, key=lambda fit: fit.aicc)
        if lowest.aicc < best.aicc:
            return (
                f"{name} lies within {TIE:g} units of AICc of {lowest.record.name} "
                f"({best.aicc - lowest.aicc:.1f} above it) with {best.parameter_count} parameters "
                f"instead of {lowest.parameter_count}, so the simpler model is used; "
                f"it has {error}."
            )
        return (
            f"{name} has the lowest AICc of {len(self.ranking)} models, "
            f"{lowest.aicc - best.aicc:.1f} below {lowest.record.name}, with {error}."
        )

    @cached_property
    def cautions(self) -> tuple[Caution, ...]:
        """What to know of the readings, of the best fit and of the models left out."""
        return merge_cautions(self.data_cautions, self.ranking_cautions, self.best.cautions)

    @property
    def ranking_cautions(self) -> tuple[Caution, ...]:
        """Say where a model fits far better and loses only by the number of readings."""
        best, count = self.best, self.best.relative_errors.size
        plain = {
            fit.key: fit.aicc - small_sample_term(count, fit.parameter_count)
            for fit in self.ranking
            if math.isfinite(fit.aicc)
        }
        closer = [
            fit for fit in self.ranking if plain.get(fit.key, math.inf) < plain.get(best.key, 0.0)
        ]
        closest = min(closer, key=lambda fit: plain[fit.key], default=best)
        if best.key not in plain or not plain[closest.key] < plain[best.key] - CLEAR:
            return ()
        return (
            Caution(
                "too-few-readings-to-rank",
                f"{closest.record.name} comes closer, with an RMS error of "
                f"{in_percent(closest.rms_relative_error, 1)} instead of "
                f"{in_percent(best.rms_relative_error, 1)}, and loses to {best.record.name} only "
                f"because {count} readings are few for {closest.parameter_count} parameters.",
                f"Take more readings, or choose {closest.record.name} where such products are "
                "known to follow it.",
                best.record.name,
            ),
        )

    def source(self, key: str | None = None) -> FlowCurveSource:
        """Return the flow curve of the best model, or of one named, as a line takes it.

        A model; or, from readings at several temperatures, a function of temperature [K].
        """
        return (self.best if key is None else self[key]).model

    def draws(
        self,
        count: int,
        seed: int = 1,
        key: str | None = None,
        progress: Callable[[float], None] | None = None,
    ) -> tuple[FlowCurveSource, ...]:
        """Return flow curves with arrays of drawn parameters, as `source` gives them.

        Parameters
        ----------
        count : int
            Number of draws over all models, which share them by Akaike weight; a model whose share
            is below one draw is left out.
        seed : int
            Of the random numbers.
        key : str, optional
            The only model to draw from.
        progress : callable, optional
            Told the share that is done [-]; what it raises ends the work.

        Returns
        -------
        tuple
            With arrays whose lengths add up to `count`; the same objects when asked for again.
        """
        asked, made = (count, seed, key), self.as_made
        kept = made._drawn
        if asked not in kept:
            while len(kept) >= _KEPT_DRAWS:
                del kept[next(iter(kept))]
            kept[asked] = mixed_draws(made, count, seed, key, progress)
        return kept[asked]

    @cached_property
    def _drawn(self) -> dict[tuple[int, int, str | None], tuple[FlowCurveSource, ...]]:
        return {}

    def predict(
        self,
        rate: ArrayLike,
        count: int = 2000,
        seed: int = 1,
        level: float = 0.95,
        state: float | None = None,
    ) -> Prediction:
        """Return the shear stress at shear rates with a band: see `prediction.predict_stress`."""
        return predict_stress(self, rate, count, seed, level, state)

    def __repr__(self) -> str:
        rows = ", ".join(f"{fit.key} ({fit.weight:.2f})" for fit in self.ranking)
        return f"Fits(best={self.best.key!r}: {rows})"
