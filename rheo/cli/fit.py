"""`rheo fit`: ranked flow-curve models for one file of readings."""

from __future__ import annotations

from typing import TYPE_CHECKING, Annotated

import typer

from rheo.cli import terminal
from rheo.cli.options import Json, UnitsOption, one_of, optional_quantity, solids_option
from rheo.cli.readings_options import (
    Columns,
    Dimensions,
    GeometryKind,
    ReadingsFile,
    columns_of,
    full_scale_of,
    geometry_text,
    sweep_of,
)
from rheo.cli.show_fits import show_fits, show_readings
from rheo.cli.terminal import Units
from rheo.errors import Caution, InputError, merge_cautions

if TYPE_CHECKING:
    from rheo.readings import Readings


def fit(
    readings: ReadingsFile,
    models: Annotated[
        list[str] | None,
        typer.Option(
            "--model",
            "-m",
            metavar="KEY",
            help="Only this model; may be repeated. All when absent.",
        ),
    ] = None,
    weighting: Annotated[
        str, typer.Option("--weighting", "-w", help="relative, absolute or instrument.")
    ] = "relative",
    percent_of_reading: Annotated[
        float | None, typer.Option(help="For --weighting instrument, from its data sheet.")
    ] = None,
    percent_of_full_scale: Annotated[
        float | None, typer.Option(help="For --weighting instrument, from its data sheet.")
    ] = None,
    geometry: GeometryKind = None,
    dimensions: Dimensions = None,
    columns: Columns = None,
    sheet: Annotated[str | None, typer.Option("--sheet", help="Sheet of a workbook.")] = None,
    sweep: Annotated[
        str, typer.Option("--sweep", help="Branch to fit: up, down or both.")
    ] = "both",
    full_scale: Annotated[
        str | None, typer.Option("--full-scale", help="Torque at full scale: '10 mN.m'.")
    ] = None,
    temperature: Annotated[
        str | None,
        typer.Option(
            "--temperature", help="Where readings have several: give the values at '40 °C'."
        ),
    ] = None,
    solids: Annotated[
        str | None,
        typer.Option(
            "--solids", help="Where readings have several solids fractions: values at '25 %'."
        ),
    ] = None,
    solids_form: Annotated[
        str,
        typer.Option(
            "--solids-form", help="How the curve follows the solids: exponential or power."
        ),
    ] = "exponential",
    entrance: Annotated[
        bool, typer.Option("--entrance", help="Fit the entrance loss of the tubes too.")
    ] = False,
    slip: Annotated[
        bool, typer.Option("--slip", help="Fit the slip coefficient of the tubes too.")
    ] = False,
    exclude: Annotated[
        list[int] | None,
        typer.Option(
            "--exclude",
            "-x",
            min=1,
            metavar="NUMBER",
            help="Leave out a reading, counted from 1.",
        ),
    ] = None,
    compare: Annotated[
        bool, typer.Option("--compare", help="Say what weighting and branch do to the fit.")
    ] = False,
    units: UnitsOption = Units.metric,
    as_json: Json = False,
) -> None:
    """Ranked flow-curve models for one file of readings.

    With a geometry, in the file or by --geometry, the models are fitted to what the instrument
    measured; without one, to shear rate and stress.
    """
    from rheo.case.as_data import cautions_data, fits_data, readings_data
    from rheo.case.load_readings import branch_of, can_be_weighted, weighting_of
    from rheo.case.schema import INSTRUMENT
    from rheo.cli.show_choices import choices_data, show_sweeps, show_weightings
    from rheo.fitting import Instrument
    from rheo.fitting import fit as fitted
    from rheo.fitting.any_state import fit_readings, refuse_several
    from rheo.fitting.compare_weightings import compare_weightings
    from rheo.fitting.concentration import FORMS
    from rheo.fitting.sweeps import compare_sweeps
    from rheo.readings import read_readings, screen

    sweep = sweep_of(sweep)
    _check_weighting(weighting, percent_of_reading, percent_of_full_scale)
    if solids_form not in FORMS:
        raise InputError(f"found '{solids_form[:60]}'; it must be {one_of(FORMS)}", "--solids-form")
    at = optional_quantity(temperature, "K", "--temperature")
    if at is not None and not at > 0:
        raise InputError(f"found '{temperature}'; it must be above absolute zero", "--temperature")
    found = read_readings(
        readings,
        columns=columns_of(columns),
        geometry=geometry_text(geometry, dimensions),
        sheet=sheet,
        full_scale_torque=full_scale_of(full_scale),
    )
    if exclude:
        if max(exclude) > len(found):
            raise InputError(
                f"there is no reading {max(exclude)}; they are numbered 1 to {len(found)}",
                "--exclude",
            )
        found = found.with_excluded([number - 1 for number in exclude])
    chosen = branch_of(found, sweep)
    if weighting == INSTRUMENT and not can_be_weighted(chosen):
        raise InputError(
            f"'{INSTRUMENT}' needs a geometry, here or in the file, and the torque at full scale, "
            "such as --full-scale '10 mN.m'",
            "--weighting",
        )
    weights = weighting_of(
        weighting, percent_of_reading or 0.0, percent_of_full_scale or 0.0, chosen
    )
    share = solids_option(solids, found.solids_basis)
    unused = _unused(chosen, temperature, solids)
    if entrance or slip:
        refuse_several(chosen, "--entrance" if entrance else "--slip")
        fits = fitted(chosen, models or None, weights, entrance=entrance, slip=slip)
    else:
        fits = fit_readings(chosen, models or None, weights, at, share, solids_form)
    cautions = merge_cautions(found.cautions, screen(found), fits.cautions, unused)
    weightings = sweeps = None
    if compare:
        instrument = weights if isinstance(weights, Instrument) else None
        weightings = compare_weightings(chosen, models or None, instrument, at, share, solids_form)
        if found.branch is not None and {"up", "down"} <= set(found.branch.tolist()):
            sweeps = compare_sweeps(found, models or None, weights, at, share, solids_form)
    if as_json:
        printed = {"readings": readings_data(found), **fits_data(fits)}
        if weightings is not None:
            printed |= choices_data(weightings, sweeps)
        terminal.print_json({**printed, "cautions": cautions_data(cautions)})
        return
    out = terminal.console()
    show_readings(out, found, units.value)
    show_fits(out, fits, fits.best)
    if weightings is not None:
        show_weightings(out, weightings)
    if sweeps is not None:
        show_sweeps(out, sweeps)
    terminal.cautions(out, cautions, units.value)


def _check_weighting(name: str, of_reading: float | None, of_full_scale: float | None) -> None:
    from rheo.case.schema import INSTRUMENT
    from rheo.fitting.weighting import WEIGHTINGS

    allowed = (*WEIGHTINGS, INSTRUMENT)
    if name not in allowed:
        raise InputError(f"found '{name[:60]}'; it must be {one_of(allowed)}", "--weighting")
    shares = {"--percent-of-reading": of_reading, "--percent-of-full-scale": of_full_scale}
    for option, share in shares.items():
        if share is not None and name != INSTRUMENT:
            raise InputError(f"it belongs to --weighting {INSTRUMENT}; found '{name}'", option)
        if share is not None and not 0.0 <= share <= 100.0:
            raise InputError(f"found {share:g}; it must be 0 or more and at most 100 %", option)
    if name == INSTRUMENT and not any(shares.values()):
        raise InputError(
            f"'{INSTRUMENT}' needs {' or '.join(shares)} above 0, from the instrument's data sheet",
            "--weighting",
        )


def _unused(data: Readings, temperature: str | None, solids: str | None) -> tuple[Caution, ...]:
    """Return a Caution for each option that the readings have no use for."""
    from rheo.fitting.any_state import at_several_solids, at_several_temperatures

    asked = (
        ("temperature", temperature, at_several_temperatures(data)),
        ("solids", solids, at_several_solids(data)),
    )
    return tuple(
        Caution(
            "option-not-used",
            f"--{name} was given, and the readings are not at several; it changes nothing.",
            "Leave it out.",
            f"--{name}",
        )
        for name, given, several in asked
        if given is not None and not several
    )
