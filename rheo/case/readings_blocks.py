"""Readings as they stand in a case file: a file beside it, or a table of text inside it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Annotated, Any, Literal, Self

from pydantic import Field, StrictInt, field_validator, model_validator
from pydantic_core import core_schema

from rheo.case.block import Block, KeyedError, refuse_unknown_keys
from rheo.case.fields import Length, PositiveStress, SolidsShare, Temperature, Text, Torque
from rheo.case.quantity import Quantity, Unit, describe
from rheo.errors import CaseError, InputError
from rheo.geometry import GeometryRecord, geometry_record
from rheo.readings.quantities import BY_KEY

Sweep = Literal["up", "down", "both"]


@dataclass(frozen=True)
class GeometryInput:
    """The geometry of an instrument as the case gives it.

    Parameters
    ----------
    kind : str
        A key of the registry of geometries.
    dimensions : mapping of str to Quantity
        Those that the case gives; others may stand in the readings file.
    """

    kind: str
    dimensions: Mapping[str, Quantity] = field(default_factory=dict)

    @classmethod
    def read(cls, value: Any) -> GeometryInput:
        """Return the geometry of a table such as ``{kind = "tube", diameter = "8 mm"}``.

        Raises
        ------
        CaseError
            For an unknown geometry or dimension, or a value that is not allowed.
        """
        if isinstance(value, GeometryInput):
            return value
        if not isinstance(value, dict):
            raise CaseError(
                f"found {describe(value)}; it must be a table with 'kind' and the dimensions"
            )
        if "kind" not in value:
            raise CaseError("key 'kind' is missing; it names the geometry, such as 'tube'")
        kind = value["kind"]
        try:
            record = geometry_record(kind if isinstance(kind, str) else describe(kind))
        except InputError as error:
            raise KeyedError(error.sentence, "kind") from None
        refuse_unknown_keys(value, ["kind", *record.dimension_keys])
        given = {key: dimension for key, dimension in value.items() if key != "kind"}
        return cls(record.key, {key: _dimension(record, key, given[key]) for key in given})

    def write(self) -> dict[str, Any]:
        """Return the table for the file."""
        units = _units(geometry_record(self.kind))
        return {
            "kind": self.kind,
            **{key: units[key].write(value) for key, value in self.dimensions.items()},
        }

    def as_stated(self) -> str:
        """Return the geometry as a readings file would state it, in SI.

        Dimensions that are missing may then come from columns of the file.
        """
        record = geometry_record(self.kind)
        units = {dimension.key: dimension.unit for dimension in record.dimensions}
        parts = [
            f"{key} {float(value)!r} {'' if units[key] == '-' else units[key]}".strip()
            for key, value in self.dimensions.items()
        ]
        return ", ".join((self.kind, *parts))

    @classmethod
    def __get_pydantic_core_schema__(cls, _source: Any, _handler: Any) -> core_schema.CoreSchema:
        """Tell pydantic how to read and write the field."""
        return core_schema.no_info_plain_validator_function(
            cls.read,
            serialization=core_schema.plain_serializer_function_ser_schema(cls.write),
        )


def _units(record: GeometryRecord) -> dict[str, Unit]:
    return {
        dimension.key: Unit(
            "dimensionless" if dimension.unit == "-" else dimension.unit,
            at_least=dimension.lower,
            at_most=dimension.upper,
        )
        for dimension in record.dimensions
    }


def _dimension(record: GeometryRecord, key: str, value: Any) -> Quantity:
    try:
        return _units(record)[key].read(value)
    except InputError as error:
        raise KeyedError(error.sentence, key) from None


class ReadingsBlock(Block):
    """One set of readings, and the user's word on what the file does not say."""

    file: Text | None = None
    text: Annotated[str, Field(max_length=20_000_000)] | None = None
    sheet: Text | None = None
    block: Text | tuple[Text, ...] | None = None
    columns: dict[str, Text] = Field(default_factory=dict)
    units: dict[str, Text] = Field(default_factory=dict)
    decimal: Literal[".", ","] | None = None
    geometry: GeometryInput | None = None
    nominal_form: Text | None = None
    full_scale_torque: Torque | None = None
    stress_per_degree: PositiveStress | None = None
    particle_diameter: Length | None = None
    temperature: Temperature | None = None
    solids_fraction: SolidsShare | None = None
    exclude: tuple[Annotated[StrictInt, Field(ge=1)], ...] = ()
    sweep: Sweep = "both"

    @field_validator("columns", "units")
    @classmethod
    def _keys_are_quantities(cls, columns: dict[str, str]) -> dict[str, str]:
        refuse_unknown_keys(columns, list(BY_KEY))
        return columns

    @field_validator("text", mode="before")
    @classmethod
    def _plain_line_ends(cls, text: Any) -> Any:
        return text.replace("\r\n", "\n").replace("\r", "\n") if isinstance(text, str) else text

    @model_validator(mode="after")
    def _one_source(self) -> Self:
        if (self.file is None) == (self.text is None):
            found = "neither" if self.file is None else "both"
            raise CaseError(f"found {found} of 'file' and 'text'; give one of them")
        return self
