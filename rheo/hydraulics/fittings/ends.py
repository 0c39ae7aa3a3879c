"""Entrances from a vessel and exits into one."""

from __future__ import annotations

from rheo.errors import InputError
from rheo.hydraulics.fittings.record import UserK

# W. B. Hooper, Chem. Eng. 88(17) (1981) 96, from memory: K = 160/Re + K for entrances, 1 for every
# exit. An exit loses the kinetic energy of the stream; K = 1 takes it as flat, laminar flow has α.
ENDS = {
    loss.key: loss
    for loss in (
        UserK(0.5, 160.0, "entrance", "entrance with a sharp edge"),
        UserK(1.0, 160.0, "entrance-projecting", "entrance of a pipe that reaches into the vessel"),
        UserK(0.04, 160.0, "entrance-rounded", "entrance rounded by 0.15 diameters or more"),
        UserK(1.0, 0.0, "exit", "exit into a vessel"),
    )
}


def end(kind: str) -> UserK:
    """Return an entrance or exit.

    Parameters
    ----------
    kind : str
        ``entrance``, ``entrance-projecting``, ``entrance-rounded`` or ``exit``.

    Raises
    ------
    InputError
        If there is no such end.
    """
    if kind not in ENDS:
        raise InputError(f"unknown end '{str(kind)[:60]}'; there are {', '.join(ENDS)}", "fittings")
    return ENDS[kind]
