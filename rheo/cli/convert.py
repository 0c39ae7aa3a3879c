"""`rheo convert`: shear rate, speed and flow, from one geometry to another."""

from __future__ import annotations

import shlex
from typing import TYPE_CHECKING, Annotated

import typer

from rheo.cli import terminal
from rheo.cli.flow_curve_options import ModelKey, Settings, flow_curve
from rheo.cli.options import Json, UnitsOption, quantity
from rheo.cli.readings_options import Dimensions, GeometryKind, geometry_of
from rheo.cli.terminal import Units
from rheo.errors import InputError, without_exponents

if TYPE_CHECKING:
    from rheo.geometry import Geometry
    from rheo.geometry.convert import Conversion, ShearPoint


# Beyond it nothing is sheared, and products of numbers no longer fit.
LARGEST_RATE = 1e9


def convert(
    model: ModelKey,
    settings: Settings,
    geometry: GeometryKind,
    dimensions: Dimensions = None,
    at: Annotated[
        str | None,
        typer.Option("--at", help="Speed or flow there: '60 rpm', '4 m3/h'. This or --rate."),
    ] = None,
    rate: Annotated[str | None, typer.Option("--rate", help="Shear rate there: '38 1/s'.")] = None,
    to: Annotated[
        list[str] | None,
        typer.Option(
            "--to",
            metavar="'KIND NAME=VALUE ...'",
            help="A geometry in which the same shear rate is wanted; may be repeated.",
        ),
    ] = None,
    units: UnitsOption = Units.metric,
    as_json: Json = False,
) -> None:
    """Shear rate and stress in a geometry at a speed or flow, and back.

    Example: rheo convert -m power-law -s consistency=3 -s flow_index=0.4 -g tube -d diameter=50mm
    -d length=10m --at "4 m3/h" --to "concentric-cylinders inner_radius=14mm outer_radius=15mm
    length=42mm"
    """
    from rheo.geometry.convert import convert as converted
    from rheo.geometry.convert import sentence
    from rheo.geometry.record import SETTINGS

    curve = flow_curve(model, settings)
    source = geometry_of(geometry, dimensions)
    if source is None:
        raise InputError("it is missing; name the geometry, such as --geometry tube", "--geometry")
    if (at is None) == (rate is None):
        found = "neither" if at is None else "both"
        raise InputError(f"found {found} of --at and --rate; give one of them", "--at")
    if at is not None:
        name, _, unit = SETTINGS[source.record.setting]
        setting = quantity(at, unit, f"--at ({name})")
    else:
        wanted = quantity(rate or "", "1/s", "--rate")
        if not 0.0 <= wanted <= LARGEST_RATE:
            raise InputError(
                f"found '{rate}'; it must lie between 0 and {LARGEST_RATE:g} 1/s", "--rate"
            )
        setting = float(source.setting_for_rate(curve, wanted))
    result = converted(curve, source, setting, _targets(to or []))
    if as_json:
        terminal.print_json({**result.as_dict(), "sentence": without_exponents(sentence(result))})
    else:
        _show(result, sentence(result), units.value)


def _targets(texts: list[str]) -> list[Geometry]:
    found = []
    for text in texts:
        try:
            words = shlex.split(text)
        except ValueError:
            raise InputError(f"found '{text[:60]}'; a quote is not closed", "--to") from None
        if not words:
            raise InputError(
                "found nothing; write it like 'cone-plate radius=25mm angle=2°'", "--to"
            )
        made = geometry_of(words[0], words[1:], "--to")
        if made is not None:
            found.append(made)
    return found


def _show(result: Conversion, words: str, units: str) -> None:
    out = terminal.console()
    terminal.heading(out, "Shear rates")
    points = {result.source.geometry.record.key: result.source, **result.targets}
    terminal.table(
        out,
        ("geometry", "setting", "shear rate\n1/s", "stress\nPa", "viscosity\nPa·s", "nominal\n1/s"),
        (_row(name, point, units) for name, point in points.items()),
        least_wanted=(5, 4),
    )
    terminal.sentence(out, words, units=units)
    found = [one for point in points.values() for one in point.cautions]
    terminal.cautions(out, found, units)


def _row(name: str, point: ShearPoint, units: str) -> tuple[str, ...]:
    from rheo.report.display import text
    from rheo.report.numbers import number

    return (
        name,
        text(float(point.setting), point.geometry.record.setting, units),
        number(float(point.rate)),
        number(float(point.stress)),
        number(float(point.viscosity)),
        number(float(point.nominal_rate)),
    )
