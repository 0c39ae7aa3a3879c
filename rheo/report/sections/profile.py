"""The velocity across one pipe, in numbers."""

from __future__ import annotations

from rheo.hydraulics import PipeFlow
from rheo.report.display import text
from rheo.report.document import Facts
from rheo.report.numbers import number


def profile_facts(pipe: PipeFlow, system: str) -> Facts:
    """Return what is known of the velocity across a pipe.

    Parameters
    ----------
    pipe : PipeFlow
        At one flow.
    system : str
        Unit system.

    Returns
    -------
    Facts
        Velocities, plug, wall stress and rate, friction and kinetic-energy factor.
    """
    ratio, velocity = float(pipe.velocity_ratio), float(pipe.velocity)
    plug = float(pipe.plug_radius)
    rows = (
        ("Inside diameter", text(float(pipe.diameter), "diameter", system)),
        ("Mean velocity V", text(velocity, "velocity", system)),
        ("Largest velocity u_max", text(ratio * velocity, "velocity", system)),
        ("Largest over mean, u_max/V", number(ratio)),
        ("Radius of the plug", text(plug, "diameter", system) if plug > 0 else "no plug"),
        ("Wall shear stress", text(float(pipe.wall_stress), "stress", system)),
        ("Wall shear rate", text(float(pipe.wall_rate), "rate", system)),
        ("Friction factor (Fanning)", number(float(pipe.friction_factor))),
        ("Kinetic-energy factor α", number(float(pipe.kinetic_energy_factor))),
    )
    return Facts(rows)
