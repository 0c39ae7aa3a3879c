"""Losses of fittings, changes of size, ends and equipment."""

from rheo.hydraulics.fittings.ends import ENDS, end
from rheo.hydraulics.fittings.equipment import PointLoss, PowerLoss
from rheo.hydraulics.fittings.record import Loss, ThreeK, TwoK, UserK
from rheo.hydraulics.fittings.reducer import reducer_loss
from rheo.hydraulics.fittings.tables import DEFAULT_TABLE, fitting, fitting_tables

__all__ = [
    "DEFAULT_TABLE",
    "ENDS",
    "Loss",
    "PointLoss",
    "PowerLoss",
    "ThreeK",
    "TwoK",
    "UserK",
    "end",
    "fitting",
    "fitting_tables",
    "reducer_loss",
]
