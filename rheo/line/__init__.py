"""The whole route: parts, duty, system curve, start-up, sizes, cost and doubt."""

from rheo.line.catalogue import STANDARDS, PipeSize, catalogue, pipe_size
from rheo.line.parts import (
    Entrance,
    Equipment,
    Exit,
    Fitting,
    Line,
    Part,
    Pipe,
    Reducer,
    Vessel,
)

__all__ = [
    "STANDARDS",
    "Entrance",
    "Equipment",
    "Exit",
    "Fitting",
    "Line",
    "Part",
    "Pipe",
    "PipeSize",
    "Reducer",
    "Vessel",
    "catalogue",
    "pipe_size",
]
