"""Safety sentences: one wording for the page, the note and the command line.

Whatever shows a pressure, a hold time, a temperature or a start-up value shows the sentence that
belongs to it.
"""

from __future__ import annotations

GENERAL = (
    "This is a calculation aid, not a design approval: local codes and a licensed engineer "
    "decide what may be built and run."
)
PRESSURE = (
    "Pressures are estimates from the readings and inputs given. Pressure ratings, relief devices, "
    "blocked-in lines, surge and hydrostatic tests follow the local pressure codes and must be "
    "settled by a licensed engineer."
)
HEAT = (
    "Heating and cooling can leave hot surfaces, trap liquid that expands, or thicken the product "
    "until a line blocks. Local codes and a licensed engineer decide how a heated line is relieved "
    "and guarded."
)
FOOD_SAFETY = (
    "Hold times here are hydraulic only. Whether a heat treatment or a cleaning is safe is for "
    "local codes and food law, the process authority and a licensed engineer to decide, with "
    "measured temperatures and a validated hold."
)
START_UP = (
    "The start-up pressure is an estimate for a full line at rest with an even static yield "
    "stress; products that gel, settle, cool or dry can need far more. Before restarting against "
    "a blocked line, local codes and a licensed engineer decide which limits and relief apply."
)
SAFETY_SENTENCES = {
    "general": GENERAL,
    "pressure": PRESSURE,
    "heat": HEAT,
    "food-safety": FOOD_SAFETY,
    "start-up": START_UP,
}
