"""The whole route: parts, duty, system curve, start-up, sizes, cost and doubt."""

from rheo.line.catalogue import STANDARDS, PipeSize, catalogue, pipe_size
from rheo.line.cleaning import cleaning
from rheo.line.cost import CapitalLaw, Costs
from rheo.line.doubt import Doubts, doubt_budget
from rheo.line.holding import holding_tube
from rheo.line.limits import Limits
from rheo.line.measure_next import measure_next
from rheo.line.operating import operating_point
from rheo.line.particles import Solids, deposition_velocity, settling_cautions, suspended_particle
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
from rheo.line.safety import SAFETY_SENTENCES
from rheo.line.sizing import size_line
from rheo.line.solve import solve_line
from rheo.line.start_up import start_up
from rheo.line.system import system_curve
from rheo.line.viscosity_correction import correct_for_viscosity

__all__ = [
    "SAFETY_SENTENCES",
    "STANDARDS",
    "CapitalLaw",
    "CentrifugalPump",
    "Costs",
    "DisplacementPump",
    "Doubts",
    "Entrance",
    "Equipment",
    "Exit",
    "Fitting",
    "Limits",
    "Line",
    "LineResult",
    "Part",
    "Pipe",
    "PipeSize",
    "Product",
    "Reducer",
    "Solids",
    "Vessel",
    "catalogue",
    "cleaning",
    "correct_for_viscosity",
    "deposition_velocity",
    "doubt_budget",
    "holding_tube",
    "measure_next",
    "operating_point",
    "pipe_size",
    "settling_cautions",
    "size_line",
    "solve_line",
    "start_up",
    "suspended_particle",
    "system_curve",
    "water",
]
