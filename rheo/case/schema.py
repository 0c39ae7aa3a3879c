"""The case: everything that a calculation starts from, as one document.

Each class is a table of the TOML file and each field a key. Quantities are texts with units there
and SI numbers here; a number without a unit is read in the SI unit of its field.
"""

from __future__ import annotations

import json
from pathlib import Path
from typing import Annotated, Any, Self

from pydantic import Field, PrivateAttr, StrictBool, field_validator, model_validator

from rheo.case.block import Block, KeyedError
from rheo.case.design_blocks import (
    CleaningBlock,
    CostBlock,
    DoubtBlock,
    HoldingBlock,
    LimitsBlock,
    SizesBlock,
)
from rheo.case.fields import (
    Density,
    Flow,
    HeatCapacity,
    Hours,
    Length,
    NotNegativePressure,
    Percent,
    Positive,
    Share,
    SolidsShare,
    Stress,
    Temperature,
    Text,
    Viscosity,
    VolumeFraction,
)
from rheo.case.line_blocks import LineBlock
from rheo.case.pump_blocks import PumpChoice
from rheo.case.quantity import describe
from rheo.case.readings_blocks import ReadingsBlock
from rheo.case.upgrade import SCHEMA_VERSION
from rheo.errors import CaseError, InputError
from rheo.fitting.concentration import EXPONENTIAL, FORMS
from rheo.fitting.weighting import WEIGHTINGS
from rheo.models import model_record

AUTO = "auto"
INSTRUMENT = "instrument"


class SolidsBlock(Block):
    """Coarse particles carried by the product."""

    diameter: Length
    density: Density
    volume_fraction: VolumeFraction
    carrier_viscosity: Viscosity | None = None
    carrier_density: Density | None = None


class ProductBlock(Block):
    """What is pumped.

    `stress_factor` makes it thicker or thinner than its readings, alike at every shear rate.
    `solids_fraction` says at which of several shares of solids the flow curve is taken, by volume
    or by mass as those of the readings are.
    """

    name: Text = "product"
    density: Density
    temperature: Temperature | None = None
    heat_capacity: HeatCapacity | None = None
    vapour_pressure: NotNegativePressure | None = None
    static_yield_stress: Stress | None = None
    stress_factor: Positive | None = None
    solids_fraction: SolidsShare | None = None
    solids: SolidsBlock | None = None

    @field_validator("solids", mode="before")
    @classmethod
    def _coarse_particles(cls, solids: Any) -> Any:
        if isinstance(solids, str | int | float) and not isinstance(solids, bool):
            raise CaseError(
                f"found {describe(solids)}; it is the table of coarse particles, with diameter, "
                "density and volume_fraction; for how much solids the product holds write "
                "solids_fraction, such as '25 %'"
            )
        return solids


class FitBlock(Block):
    """How the flow curve is fitted."""

    models: tuple[Text, ...] | None = None
    model: Text = AUTO
    weighting: Text = "relative"
    percent_of_reading: Percent | None = None
    percent_of_full_scale: Percent | None = None
    entrance: StrictBool = False
    slip: StrictBool = False
    solids_form: Text = EXPONENTIAL

    @field_validator("models")
    @classmethod
    def _known_models(cls, models: tuple[str, ...] | None) -> tuple[str, ...] | None:
        if models is not None and not models:
            raise CaseError("the list is empty; name at least one model or leave the key out")
        for key in models or ():
            model_record(key)
        return models

    @field_validator("model")
    @classmethod
    def _known_model(cls, key: str) -> str:
        if key != AUTO:
            try:
                model_record(key)
            except InputError as error:
                raise CaseError(f"{error.sentence}; or '{AUTO}'") from None
        return key

    @field_validator("weighting")
    @classmethod
    def _known_weighting(cls, weighting: str) -> str:
        allowed = (*WEIGHTINGS, INSTRUMENT)
        if weighting not in allowed:
            raise CaseError(f"unknown weighting '{weighting[:60]}'; there are {', '.join(allowed)}")
        return weighting

    @field_validator("solids_form")
    @classmethod
    def _known_form(cls, form: str) -> str:
        if form not in FORMS:
            raise CaseError(f"unknown form '{form[:60]}'; there are {', '.join(FORMS)}")
        return form

    @model_validator(mode="after")
    def _fits_together(self) -> Self:
        if self.models is not None and self.model not in (AUTO, *self.models):
            raise KeyedError(
                f"model '{self.model}' is not among the models to fit, {', '.join(self.models)}",
                "model",
            )
        shares = (self.percent_of_reading, self.percent_of_full_scale)
        if self.weighting == INSTRUMENT:
            if None in shares:
                raise KeyedError(
                    "weighting 'instrument' needs percent_of_reading and percent_of_full_scale, "
                    "from the instrument's data sheet",
                    "weighting",
                )
        elif shares != (None, None):
            raise KeyedError(
                f"percent_of_reading and percent_of_full_scale belong to weighting 'instrument'; "
                f"found '{self.weighting}'",
                "weighting",
            )
        return self


class DutyBlock(Block):
    """What the line must do."""

    flow: Flow
    flow_tolerance: Share | None = None
    hours_a_year: Hours | None = None


# The keys of a case that no calculation takes up.
WORDS = ("title", "notes", "prepared_by", "checked_by")
# Those, and the keys by which a line is judged that is worked out without them.
JUDGES = {*WORDS, "limits", "sizes", "cost"}


class Case(Block):
    """A design case.

    The folder of the file is kept beside the document: relative paths are resolved from it.
    """

    title: Text = ""
    notes: Text = ""
    prepared_by: Text = ""
    checked_by: Text = ""
    product: ProductBlock
    readings: Annotated[tuple[ReadingsBlock, ...], Field(min_length=1, max_length=100)]
    fit: FitBlock = FitBlock()
    duty: DutyBlock
    line: LineBlock
    pump: PumpChoice | None = None
    limits: LimitsBlock = LimitsBlock()
    sizes: SizesBlock | None = None
    cost: CostBlock | None = None
    doubt: DoubtBlock = DoubtBlock()
    holding_tube: HoldingBlock | None = None
    cleaning: CleaningBlock | None = None

    _folder: Path | None = PrivateAttr(default=None)
    _allow_outside: bool = PrivateAttr(default=False)

    @field_validator("readings", mode="before")
    @classmethod
    def _one_or_more(cls, readings: Any) -> Any:
        return [readings] if isinstance(readings, dict) else readings

    @model_validator(mode="after")
    def _cost_has_what_it_needs(self) -> Self:
        if self.cost is not None:
            if self.duty.hours_a_year is None:
                raise KeyedError("it needs duty.hours_a_year, the running hours a year", "cost")
            if self.pump is None or not self.pump.has_efficiency:
                raise KeyedError("it needs the pump's efficiency, such as '55 %'", "cost")
        return self

    def __eq__(self, other: object) -> bool:
        return isinstance(other, Case) and self.document() == other.document()

    def __hash__(self) -> int:
        return hash(json.dumps(self.document(), ensure_ascii=True))

    @property
    def folder(self) -> Path | None:
        """Folder from which relative paths are resolved; None for a case without a file."""
        return self._folder

    @property
    def allow_outside(self) -> bool:
        """Whether files outside that folder may be read."""
        return self._allow_outside

    def in_folder(self, folder: Path | None, allow_outside: bool = False) -> Case:
        """Return the same case with its relative paths resolved from `folder`."""
        moved = self.model_copy()
        moved._folder = folder
        moved._allow_outside = allow_outside
        return moved

    def document(self) -> dict[str, Any]:
        """Return the case as plain data: what the user gave, as it stands in the file."""
        given = self.model_dump(mode="python", exclude_unset=True, exclude_none=True)
        return {"schema": SCHEMA_VERSION, **_as_lists(given)}


def _as_lists(value: Any) -> Any:
    if isinstance(value, dict):
        return {key: _as_lists(item) for key, item in value.items()}
    if isinstance(value, list | tuple):
        return [_as_lists(item) for item in value]
    return value
