"""One file a figure: plain SI arrays in, a `Picture` out.

A picture is drawn by ``picture.plotly(dark=False)`` and by ``picture.svg()``.
"""

from rheo.report.figures.doubt import doubt_budget
from rheo.report.figures.flow_curve import Curve, flow_curve
from rheo.report.figures.line_drawing import SYMBOLS, DrawnPart, line_drawing
from rheo.report.figures.pressure_line import pressure_line
from rheo.report.figures.residuals import residuals
from rheo.report.figures.shear_rates import PLANT_DUTIES, shear_rates
from rheo.report.figures.sizes import sizes
from rheo.report.figures.system_curve import PumpCurve, system_curve
from rheo.report.figures.velocity_profile import shear_layer, velocity_profile

__all__ = [
    "PLANT_DUTIES",
    "SYMBOLS",
    "Curve",
    "DrawnPart",
    "PumpCurve",
    "doubt_budget",
    "flow_curve",
    "line_drawing",
    "pressure_line",
    "residuals",
    "shear_layer",
    "shear_rates",
    "sizes",
    "system_curve",
    "velocity_profile",
]
