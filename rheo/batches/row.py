"""What is kept of one file: plain data, so that it goes through processes and JSON unchanged."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import asdict, dataclass, field, replace
from typing import Any, Self

from rheo.errors import Caution


@dataclass(frozen=True)
class Drift:
    """A lot against the reference lot at one shear rate.

    Parameters
    ----------
    rate : float
        Shear rate [1/s].
    ratio : float or None
        Stress of the lot over that of the reference [-]; None where one of them was not measured
        at this rate.
    low, high : float or None
        95 % interval of the ratio from the scatter of both fits; None where they leave it unknown.
    """

    rate: float
    ratio: float | None
    low: float | None = None
    high: float | None = None

    @property
    def beyond_doubt(self) -> bool | None:
        """Whether the interval leaves 1 out; None where it is not known."""
        if self.low is None or self.high is None:
            return None
        return not self.low <= 1.0 <= self.high


@dataclass(frozen=True)
class Row:
    """One file: its best fit and what to know of it, or why there is none.

    Parameters
    ----------
    file : str
        Its name.
    digest : str
        SHA-256 of its content; empty where it could not be read.
    reason : str
        Why it was not fitted; empty when it was.
    points : int
        Readings in it.
    geometry : str
        Key of the instrument's geometry; empty without one.
    temperature : float or None
        Mean of the readings [K].
    lowest_rate, highest_rate : float or None
        Shear rates that the best fit belongs to [1/s].
    best : str
        Key of the best model.
    values, errors : mapping of str to float or None
        Parameters of the best fit and their standard errors, in SI; None where not known.
    aicc : mapping of str to float or None
        Akaike's criterion of each model fitted [-]; None where there are too few readings for it.
    weight : float or None
        Akaike weight of the best model [-].
    rms_relative_error, worst_relative_error : float or None
        Of the best fit [-].
    drift : tuple of Drift
        Against the reference lot.
    cautions : tuple of Caution
        From reading, screening, fitting and the comparison.
    """

    file: str
    digest: str
    reason: str = ""
    points: int = 0
    geometry: str = ""
    temperature: float | None = None
    lowest_rate: float | None = None
    highest_rate: float | None = None
    best: str = ""
    values: Mapping[str, float | None] = field(default_factory=dict)
    errors: Mapping[str, float | None] = field(default_factory=dict)
    aicc: Mapping[str, float | None] = field(default_factory=dict)
    weight: float | None = None
    rms_relative_error: float | None = None
    worst_relative_error: float | None = None
    drift: tuple[Drift, ...] = ()
    cautions: tuple[Caution, ...] = ()

    @property
    def fitted(self) -> bool:
        """Whether there is a fit."""
        return not self.reason

    @property
    def drifted(self) -> bool | None:
        """Whether the lot differs from the reference beyond the doubt; None where not known."""
        known = [one.beyond_doubt for one in self.drift if one.beyond_doubt is not None]
        return any(known) if known else None

    def named(self, file: str) -> Row:
        """Return the same under another name of the file."""
        return replace(self, file=file)

    def as_dict(self) -> dict[str, Any]:
        """Return the row as plain data for JSON."""
        return asdict(self)

    @classmethod
    def from_dict(cls, data: Mapping[str, Any]) -> Self:
        """Return the row that `as_dict` wrote.

        Raises
        ------
        TypeError, KeyError
            If the data is of another kind.
        """
        drift = tuple(Drift(**one) for one in data["drift"])
        cautions = tuple(
            Caution(**{**one, "points": tuple(one["points"])}) for one in data["cautions"]
        )
        return cls(**{**data, "drift": drift, "cautions": cautions})
