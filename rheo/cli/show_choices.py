"""What weighting and branch do to a fit, as tables and as data."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from rheo.cli import terminal

if TYPE_CHECKING:
    from rich.console import Console

    from rheo.fitting.compare_weightings import WeightingComparison
    from rheo.fitting.sweeps import SweepComparison


def show_weightings(out: Console, found: WeightingComparison) -> None:
    """Write which model each weighting leads to and how far its curve moves."""
    terminal.heading(out, "Weightings", "stress at the shear rates of the readings")
    changes = found.changes
    terminal.table(
        out,
        ["weighting", "model", "largest change"],
        [
            [name, fits.best.key, f"{100 * changes[name]:.2g} %"]
            for name, fits in found.fits.items()
        ],
        left=2,
    )
    terminal.sentence(out, found.sentence)


def show_sweeps(out: Console, found: SweepComparison) -> None:
    """Write the model of each branch, how far they lie apart, and the stress at rest."""
    from rheo.report.numbers import number

    terminal.heading(out, "Sweeps")
    terminal.table(
        out,
        ["fitted", "model", "yield stress [Pa]", "RMS error"],
        [
            [
                name,
                fits.best.key,
                number(float(fits.best.model.yield_stress)),
                f"{100 * fits.best.rms_relative_error:.2g} %",
            ]
            for name, fits in (("up", found.up), ("down", found.down), ("both", found.both))
        ],
        left=2,
    )
    terminal.sentence(out, found.sentence)
    static = found.static_yield_stress
    if static is not None:
        terminal.sentence(
            out,
            f"For start-up take at least {number(static.value)} Pa ({static.origin}); a vane after "
            "the longest rest of the line is surer.",
        )


def choices_data(weightings: WeightingComparison, sweeps: SweepComparison | None) -> dict[str, Any]:
    """Return both as plain data for JSON."""
    changes = weightings.changes
    found: dict[str, Any] = {
        "weightings": {
            name: {"best": key, "largest_change": changes[name]}
            for name, key in weightings.best_keys.items()
        }
    }
    if sweeps is not None:
        static = sweeps.static_yield_stress
        found["sweeps"] = {
            "up": sweeps.up.best.key,
            "down": sweeps.down.best.key,
            "both": sweeps.both.best.key,
            "loop_share": sweeps.loop_share,
            "static_yield_stress": None if static is None else static.value,
        }
    return found
