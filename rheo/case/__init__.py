"""The saved design case: schema, load, save, run."""

from __future__ import annotations

from rheo.case.change import changed
from rheo.case.embed import embedded
from rheo.case.quantity import Quantity
from rheo.case.result import CaseResult
from rheo.case.run import run_case
from rheo.case.schema import Case
from rheo.case.storage import (
    case_from_document,
    case_from_text,
    case_text,
    load_case,
    save_case,
)

__all__ = [
    "Case",
    "CaseResult",
    "Quantity",
    "case_from_document",
    "case_from_text",
    "case_text",
    "changed",
    "embedded",
    "load_case",
    "run_case",
    "save_case",
]
