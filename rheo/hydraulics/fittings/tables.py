"""The published fittings, from the tables beside this file.

The constants are those that the `fluids` library carries for the sources named here; a test holds
the two together. Where that library has put a 180° bend among the 45° ones, the row is left out.
"""

from __future__ import annotations

import csv
import difflib
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import cache
from importlib import resources

from rheo.errors import InputError
from rheo.hydraulics.fittings.record import Loss, ThreeK, TwoK

DEFAULT_TABLE = "darby-3k"


@dataclass(frozen=True)
class Table:
    """One published table of fittings.

    Parameters
    ----------
    key, name : str
        Registry key and the field's name.
    file : str
        Table beside this file.
    row : callable
        From a row of the table to the fitting.
    source, validity : str
        Where it was published; where it may be used.
    """

    key: str
    name: str
    file: str
    row: Callable[[Mapping[str, str]], Loss]
    source: str
    validity: str

    @property
    def fittings(self) -> Mapping[str, Loss]:
        """The fittings by key."""
        return _fittings(self.key)


_TABLES = {
    table.key: table
    for table in (
        Table(
            "darby-3k",
            "3-K method (Darby)",
            "darby_3k.csv",
            lambda row: ThreeK(
                row["key"], row["name"], float(row["k1"]), float(row["ki"]), float(row["kd"])
            ),
            "R. Darby, Chem. Eng. 106(7) (1999) 101 and 108(4) (2001) 127, with the Metzner-Reed "
            "Reynolds number",
            "Newtonian data; for other fluids the Metzner-Reed number stands in (common practice).",
        ),
        Table(
            "hooper-2k",
            "2-K method (Hooper)",
            "hooper_2k.csv",
            lambda row: TwoK(row["key"], row["name"], float(row["k1"]), float(row["k_infinity"])),
            "W. B. Hooper, Chem. Eng. 88(17) (1981) 96, with the Metzner-Reed Reynolds number",
            "Newtonian data; for other fluids the Metzner-Reed number stands in (common practice).",
        ),
    )
}


@cache
def _fittings(key: str) -> Mapping[str, Loss]:
    table = _TABLES[key]
    text = resources.files(__package__).joinpath(table.file).read_text(encoding="utf-8")
    found = (table.row(row) for row in csv.DictReader(text.splitlines()))
    return {fitting.key: fitting for fitting in found}


def fitting_tables() -> Mapping[str, Table]:
    """Return the published tables by key."""
    return _TABLES


def fitting(kind: str, table: str = DEFAULT_TABLE) -> Loss:
    """Return a published fitting.

    Parameters
    ----------
    kind : str
        Its key, such as ``elbow-90-long`` or ``valve-ball``.
    table : str
        ``darby-3k`` or ``hooper-2k``.

    Raises
    ------
    InputError
        If there is no such table or no such fitting in it; the sentence names those there are.
    """
    if table not in _TABLES:
        raise InputError(f"unknown table '{table}'; there are {', '.join(_TABLES)}", "fittings")
    known = _TABLES[table].fittings
    if kind not in known:
        near = difflib.get_close_matches(str(kind), known, n=1, cutoff=0.5)
        hint = f" (did you mean '{near[0]}'?)" if near else ""
        raise InputError(
            f"unknown fitting '{str(kind)[:60]}'{hint}; {table} has {', '.join(known)}", "fittings"
        )
    return known[kind]
