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
from rheo.line.product import Product, water
from rheo.line.pumps import CentrifugalPump, DisplacementPump
from rheo.line.result import LineResult
from rheo.line.solve import solve_line

__all__ = [
    "STANDARDS",
    "CentrifugalPump",
    "DisplacementPump",
    "Entrance",
    "Equipment",
    "Exit",
    "Fitting",
    "Line",
    "LineResult",
    "Part",
    "Pipe",
    "PipeSize",
    "Product",
    "Reducer",
    "Vessel",
    "catalogue",
    "pipe_size",
    "solve_line",
    "water",
]
