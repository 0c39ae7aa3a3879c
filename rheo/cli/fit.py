"""`rheo fit`: ranked flow-curve models for one file of readings."""

from __future__ import annotations

from typing import Annotated

import typer

from rheo.cli import terminal
from rheo.cli.options import (
    Json,
    UnitsOption,
    named_values,
    optional_quantity,
    solids_option,
)
from rheo.cli.readings_options import (
    Columns,
    Dimensions,
    GeometryKind,
    ReadingsFile,
    geometry_text,
)
from rheo.cli.show_fits import show_fits, show_readings
from rheo.cli.terminal import Units
from rheo.errors import InputError, merge_cautions


def fit(
    readings: ReadingsFile,
    models: Annotated[
        list[str] | None,
        typer.Option("--model", "-m", help="Only this model; may be repeated. All when absent."),
    ] = None,
    weighting: Annotated[
        str, typer.Option("--weighting", "-w", help="relative, absolute or instrument.")
    ] = "relative",
    percent_of_reading: Annotated[
        float, typer.Option(help="For --weighting instrument, from its data sheet.")
    ] = 0.0,
    percent_of_full_scale: Annotated[
        float, typer.Option(help="For --weighting instrument, from its data sheet.")
    ] = 0.0,
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
        typer.Option("--exclude", "-x", min=1, help="Leave out a reading, counted from 1."),
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
    from rheo.case.load_readings import branch_of, weighting_of
    from rheo.cli.show_choices import choices_data, show_sweeps, show_weightings
    from rheo.fitting import Instrument
    from rheo.fitting import fit as fitted
    from rheo.fitting.any_state import fit_readings
    from rheo.fitting.compare_weightings import compare_weightings
    from rheo.fitting.sweeps import compare_sweeps
    from rheo.readings import read_readings, screen

    found = read_readings(
        readings,
        columns=named_values(columns or [], "--column") or None,
        geometry=geometry_text(geometry, dimensions),
        sheet=sheet,
        full_scale_torque=optional_quantity(full_scale, "N*m", "--full-scale"),
    )
    if exclude:
        if max(exclude) > len(found):
            raise InputError(
                f"there is no reading {max(exclude)}; they are numbered 1 to {len(found)}",
                "--exclude",
            )
        found = found.with_excluded([number - 1 for number in exclude])
    chosen = branch_of(found, sweep)
    weights = weighting_of(weighting, percent_of_reading, percent_of_full_scale, chosen)
    at = optional_quantity(temperature, "K", "--temperature")
    share = solids_option(solids, found.solids_basis)
    if entrance or slip:
        fits = fitted(chosen, models or None, weights, entrance=entrance, slip=slip)
    else:
        fits = fit_readings(chosen, models or None, weights, at, share, solids_form)
    cautions = merge_cautions(found.cautions, screen(found), fits.cautions)
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
