"""The base of every table of a case: no unknown key passes, nothing changes once it is read."""

from __future__ import annotations

import difflib
from typing import Any

from pydantic import BaseModel, ConfigDict, model_validator

from rheo.case.quantity import Quantity, describe
from rheo.errors import CaseError


class KeyedError(CaseError):
    """Something wrong with one key of a table.

    Parameters
    ----------
    sentence : str
        What was found and what is allowed.
    key : str
        The key.
    """

    def __init__(self, sentence: str, key: str) -> None:
        self.key = key
        super().__init__(sentence)


def refuse_unknown_keys(found: dict[str, Any], allowed: list[str]) -> None:
    """Raise KeyedError for the first key that is not allowed, with the nearest one that is."""
    for key in found:
        if key not in allowed:
            near = difflib.get_close_matches(str(key).lower(), allowed, n=1, cutoff=0.5)
            hint = f" (did you mean '{near[0]}'?)" if near else ""
            keys = ", ".join(allowed)
            raise KeyedError(f"unknown key '{str(key)[:60]}'{hint}; allowed are {keys}", key)


class Block(BaseModel):
    """One table of the case file."""

    model_config = ConfigDict(
        extra="forbid", frozen=True, strict=False, validate_default=False, hide_input_in_errors=True
    )

    @model_validator(mode="before")
    @classmethod
    def _refuse_unknown_keys(cls, data: Any) -> Any:
        if isinstance(data, cls):
            return data
        if not isinstance(data, dict):
            raise CaseError(f"found {describe(data)}; it must be a table of keys")
        refuse_unknown_keys(data, list(cls.model_fields))
        return data

    def given(self, *left_out: str) -> dict[str, Any]:
        """Return the values that the file gives, in SI, for the dataclass of the engine.

        What it does not give is left to the defaults of that dataclass.

        Parameters
        ----------
        *left_out : str
            Fields that the dataclass does not have.
        """
        values = {
            name: getattr(self, name)
            for name in type(self).model_fields
            if name in self.model_fields_set and name not in left_out
        }
        return {
            name: float(value) if isinstance(value, Quantity) else value
            for name, value in values.items()
            if value is not None
        }
