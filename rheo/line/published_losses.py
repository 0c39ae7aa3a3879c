"""Published fittings and entrances by the names that a line gives them."""

from __future__ import annotations

from rheo.errors import InputError
from rheo.hydraulics.fittings import DEFAULT_TABLE, ENDS, Loss, fitting, fitting_tables


def published_fitting(kind: str, table: str | None, place: str) -> Loss:
    """Return a published fitting.

    Parameters
    ----------
    kind : str
        Its key, such as ``elbow-90-long``.
    table : str or None
        ``darby-3k`` or ``hooper-2k``; None for Darby's, and Hooper's for what only he lists.
    place : str
        The part that an error names.

    Returns
    -------
    Loss
        With its loss coefficient by Reynolds number and diameter.

    Raises
    ------
    InputError
        If no table has it; the sentence gives the nearest and those that there are.
    """
    tables = fitting_tables()
    if table is None:
        listing = [key for key in tables if kind in tables[key].fittings]
        table = DEFAULT_TABLE if not listing or DEFAULT_TABLE in listing else listing[0]
    try:
        return fitting(kind, table)
    except InputError as error:
        sentence = f"{error.sentence}; or give its loss_coefficient"
        raise InputError(sentence, place) from None


def published_entrance(kind: str, place: str) -> Loss:
    """Return an entrance of Hooper's list.

    Raises
    ------
    InputError
        If there is no such entrance.
    """
    known = [key for key in ENDS if key.startswith("entrance")]
    if kind not in known:
        raise InputError(f"unknown entrance '{kind[:60]}'; there are {', '.join(known)}", place)
    return ENDS[kind]
