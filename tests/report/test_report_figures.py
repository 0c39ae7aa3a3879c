"""Every figure: axes with units, the marks that were asked for, text that stays text."""

from __future__ import annotations

import re
from xml.etree import ElementTree

import numpy as np
import pytest

import rheo
from rheo.report import figures
from rheo.report.draw_plotly import label
from rheo.report.picture import (
    Axis,
    Band,
    Bars,
    Label,
    Limit,
    Line,
    Panel,
    Picture,
    Points,
    Strip,
    axis_range,
)
from rheo.report.ticks import linear_ticks, log_ticks
from rheo.report.words import without_shared_words

HOSTILE = "<script>alert(1)</script> & %{x} <b>bold</b> =1+1 " + "x" * 10_000 + " \u202e שלום 😀"
MODEL = rheo.model("herschel-bulkley", yield_stress=12.0, consistency=4.2, flow_index=0.45)
RATE = np.geomspace(1.0, 300.0, 12)
STRESS = MODEL.stress(RATE)
GRID = np.geomspace(0.1, 2000.0, 40)


def flow_curve(name: str = "Herschel-Bulkley", **options: object) -> Picture:
    stress = MODEL.stress(GRID)
    chosen = figures.Curve(name, GRID, stress, 0.95 * stress, 1.06 * stress)
    rival = figures.Curve("Power law", GRID, 17.0 * GRID**0.28)
    return figures.flow_curve(
        np.r_[RATE, RATE[::-1]],
        np.r_[MODEL.stress(RATE), 1.02 * MODEL.stress(RATE[::-1])],
        branch=["up"] * 12 + ["down"] * 12,
        excluded=np.arange(24) == 0,
        flagged=np.isin(np.arange(24), [1, 20]),
        chosen=[chosen],
        rivals=[rival],
        in_line=(8.0, 110.0),
        **options,
    )


def every_picture(name: str = "plain name") -> dict[str, Picture]:
    flow = np.linspace(1e-4, 2e-3, 30)
    pressure = 1e5 + 2e7 * flow**0.5
    ratio = np.linspace(0.0, 1.0, 101)
    pictures = [
        flow_curve(name),
        flow_curve(name, viscosity=True),
        flow_curve(name, log=False),
        figures.residuals(RATE, 1.01 * STRESS, STRESS, usual=0.02, name=name),
        figures.shear_rates((1.0, 300.0), [(name, 8.0), ("hose", 820.0)], RATE),
        figures.pressure_line(
            [0.0, 3.0, 3.0, 40.0], [2e4, 1e4, 3e5, 1e5], [0.0, 0.0, 0.0, 5.0],
            low=[2e4, 1e4, 2.8e5, 9e4], high=[2e4, 1e4, 3.3e5, 1.2e5],
            limits=[(name, 6e5)], steps=[(name, 3.0, 5e3)],
        ),
        figures.system_curve(
            flow, pressure, low=0.9 * pressure, high=1.1 * pressure,
            regime=np.where(flow < 1e-3, "laminar", "turbulent"),
            pump=figures.PumpCurve(name, flow, 9e5 - 5e10 * flow**2),
            operating=(1.2e-3, 8e5), duty=(1e-3, 7.3e5), rating=1e6,
        ),
        figures.velocity_profile(ratio, 2.0 * (1.0 - ratio**2), 0.05, 1.0, plug=0.1),
        figures.sizes(
            [name, "DN 40", "DN 50"], [9e6, 8e5, 4e5], [4.0, 1.7, 1.0], [9e3, 2.5e3, 2.1e3],
            reasons=[name, "", ""], recommended=2, pressure_limit=1e6, currency=name,
        ),
        figures.doubt_budget([name, "flow", "roughness"], [0.7, 0.297, 0.003]),
        figures.line_drawing(
            [
                figures.DrawnPart("vessel", name, (0.0, 2.0), (0.0, 2.0)),
                figures.DrawnPart("pipe", name, (0.0, 2.0), (4.0, 0.0), name, 0.08),
                figures.DrawnPart("pump", name, (4.0, 0.0), (4.0, 0.0)),
            ],
            [(4.0, 0.0, 3e5, True)],
        ),
    ]  # fmt: skip
    return {picture.key: picture for picture in pictures}


KEYS = tuple(every_picture())


@pytest.mark.parametrize("key", KEYS)
def test_axes_have_a_quantity_and_a_unit(key: str) -> None:
    picture = every_picture()[key]
    for axis in (picture.x, *(panel.y for panel in picture.panels)):
        assert axis.ticks or re.fullmatch(r"[^\[\]]+ \[[^\[\]]+\]", axis.title)
    assert picture.description.endswith(".")


@pytest.mark.parametrize("dark", [False, True])
@pytest.mark.parametrize("key", KEYS)
def test_plotly_figure(key: str, dark: bool) -> None:
    picture = every_picture()[key]
    figure = picture.plotly(dark)
    assert figure.layout.font.size >= 12
    assert len(figure.data) + len(figure.layout.shapes) >= sum(
        len(panel.marks) for panel in picture.panels
    )
    for number in range(1, len(picture.panels) + 1):
        assert figure.layout["yaxis" if number == 1 else f"yaxis{number}"].range is not None
    shown = [trace.name for trace in figure.data if trace.showlegend]
    assert len(shown) == len(set(shown))


@pytest.mark.parametrize("key", KEYS)
def test_svg_is_the_same_twice_and_well_formed(key: str) -> None:
    text = every_picture()[key].svg()
    assert text == every_picture()[key].svg()
    root = ElementTree.fromstring(text)
    words = [node.text or "" for node in root.iter("{http://www.w3.org/2000/svg}text")]
    picture = every_picture()[key]
    assert picture.x.title in words
    assert all(panel.y.title in words for panel in picture.panels if panel.y.title)
    assert "nan" not in text
    assert "inf" not in text.replace("infinity", "").replace("information", "")


@pytest.mark.parametrize("key", KEYS)
def test_hostile_text_stays_text(key: str) -> None:
    picture = every_picture(HOSTILE)[key]
    svg = picture.svg()
    ElementTree.fromstring(svg)
    assert "<script" not in svg
    assert "\u202e" not in svg
    plot = picture.plotly().to_json()
    for sign in ("<script", "<b>", "%{x} ", "\u202e", "x" * 200):
        assert sign not in plot


def test_labels_for_plotly_show_their_own_signs() -> None:
    assert label("a < b & c\n<i>%{y}") == "a &lt; b &amp; c<br>&lt;i&gt;%\u200b{y}"


def test_excluded_points_are_hollow_and_flagged_ones_ringed() -> None:
    marks = [mark for mark in flow_curve().panels[0].marks if isinstance(mark, Points)]
    hollow = [mark for mark in marks if mark.hollow]
    assert [mark.index for mark in hollow] == [(0,)]
    ringed = {
        i
        for m in marks
        if m.ringed is not None
        for i, r in zip(m.index, m.ringed, strict=True)
        if r
    }
    assert ringed == {1, 20}
    assert {mark.marker for mark in marks} == {0, 1}
    assert "rising, not fitted" in [mark.name for mark in marks]
    names = [trace.name for trace in flow_curve().plotly().data]
    assert names.count("flagged") == 2


def test_readings_of_several_temperatures_have_a_colour_each() -> None:
    picture = figures.flow_curve(
        [1.0, 2.0, 3.0, 4.0], [1.0, 2.0, 3.0, 4.0], temperature=[293.15, 313.2, 293.4, 313.15]
    )
    marks = [mark for mark in picture.panels[0].marks if isinstance(mark, Points)]
    assert [mark.index for mark in marks] == [(0, 2), (1, 3)]
    assert [mark.style for mark in marks] == [0, 1]
    assert [mark.name for mark in marks] == ["20.1 °C", "40.0 °C"]


def test_viscosity_is_stress_over_rate() -> None:
    picture = figures.flow_curve([2.0, 4.0], [10.0, 12.0], viscosity=True)
    (points,) = (mark for mark in picture.panels[0].marks if isinstance(mark, Points))
    assert points.y == pytest.approx([5.0, 3.0])


def test_one_shear_rate_in_the_line_is_still_a_strip_to_be_seen() -> None:
    picture = figures.flow_curve([1.0, 10.0], [1.0, 2.0], in_line=(5.0, 5.0))
    (strip,) = (mark for mark in picture.panels[0].marks if isinstance(mark, Strip))
    assert strip.low < 5.0 < strip.high


def test_parts_outside_the_measured_range_look_different() -> None:
    marks = every_picture()["shear-rates"].panels[0].marks
    inside = [m for m in marks if isinstance(m, Points) and m.size > 10 and 8.0 in m.x]
    outside = [m for m in marks if isinstance(m, Points) and m.size > 10 and 820.0 in m.x]
    assert inside[0].style != outside[0].style
    assert "outside the measured range" in outside[0].hover[0]


def test_regimes_of_the_system_curve_are_joined_and_dashed_differently() -> None:
    marks = every_picture()["system-curve"].panels[0].marks
    laminar, turbulent = (m for m in marks if isinstance(m, Line) and m.name.startswith("line, "))
    assert laminar.dash != turbulent.dash
    assert laminar.x[-1] == turbulent.x[0]


def test_failed_sizes_are_grey_with_their_reason() -> None:
    picture = figures.sizes(
        ["A", "B"], [2e5, 1e5], [2.0, 1.0], reasons=["velocity above 1.5 m/s", ""], recommended=1
    )
    failed, recommended = (m for m in picture.panels[1].marks if isinstance(m, Bars))
    assert failed.muted is not None
    assert failed.muted.all()
    assert failed.hover == ("A\n2 m/s\nfails: velocity above 1.5 m/s",)
    assert recommended.name == "recommended"


def test_the_largest_doubt_comes_first() -> None:
    (bars,) = every_picture()["doubt-budget"].panels[0].marks
    assert isinstance(bars, Bars)
    assert bars.labels == ("70 %", "30 %", "< 1 %")


def test_newtonian_shear_layer() -> None:
    ratio = np.linspace(0.0, 1.0, 4001)
    # u = u_max (1 - (r/R)²): 90 % of the fall happens beyond r/R = sqrt(0.1).
    assert figures.shear_layer(ratio, 1.0 - ratio**2) == pytest.approx(1.0 - 0.1**0.5, abs=1e-6)


def test_units_follow_the_system() -> None:
    picture = figures.pressure_line([0.0, 10.0], [6894.757, 0.0], system="us")
    assert picture.panels[0].y.title == "Gauge pressure [psi]"
    (line,) = picture.panels[0].marks
    assert isinstance(line, Line)
    assert line.y[0] == pytest.approx(1.0, rel=1e-6)
    assert line.x[1] == pytest.approx(32.80839895)


def test_a_line_is_broken_where_a_value_is_missing() -> None:
    line = Line(np.arange(5.0), np.array([1.0, 2.0, np.nan, 3.0, 4.0]))
    text = Picture("k", "t", "d.", Axis("x", "m"), (Panel(Axis("y", "m"), (line,)),)).svg()
    assert text.count("<polyline") == 2


def test_every_kind_of_mark_is_drawn_by_both_writers() -> None:
    one, two = np.array([1.0, 10.0]), np.array([2.0, 3.0])
    marks = (
        Strip(1.0, 2.0, "strip"), Limit(2.5, "limit"), Limit(3.0, "upright", axis="x"),
        Band(one, two, two + 1, "band"), Line(one, two, "line", steps=True),
        Points(one, two, "points"),
        Bars(one, np.zeros(2), two, "bars"), Label(1.0, 2.0, "label"),
    )  # fmt: skip
    picture = Picture("k", "t", "d.", Axis("x", "m", log=True), (Panel(Axis("y", "m"), marks),))
    svg = picture.svg()
    for name in ("strip", "limit", "upright", "band", "line", "points", "bars", "label"):
        assert f">{name}</text>" in svg
    assert len(picture.plotly().data) == 5
    assert len(picture.plotly().layout.shapes) == 3


@pytest.mark.parametrize(
    ("low", "high", "expected"),
    [
        (0.0, 1.0, ["0", "0.2", "0.4", "0.6", "0.8", "1.0"]),
        (-5.0, 5.0, ["\u22124", "\u22122", "0", "2", "4"]),
        (0.0, 12.0, ["0", "2", "4", "6", "8", "10", "12"]),
        (0.0, 9000.0, ["0", "2000", "4000", "6000", "8000"]),
    ],
)
def test_linear_ticks_are_round(low: float, high: float, expected: list[str]) -> None:
    assert [name for _, name in linear_ticks(low, high)] == expected


@pytest.mark.parametrize(
    ("low", "high", "expected"),
    [
        (0.08, 200.0, ["0.1", "1", "10", "100"]),
        (1e-5, 1e2, ["10⁻⁴", "10⁻²", "10⁰", "10²"]),
        (0.9, 12.0, ["1", "2", "5", "10"]),
        (13.0, 900.0, ["20", "50", "100", "200", "500"]),
        (8.0, 300.0, ["10", "20", "50", "100", "200"]),
        (2.5, 8.0, ["3", "4", "5", "6", "7", "8"]),
    ],
)
def test_log_ticks_name_decades(low: float, high: float, expected: list[str]) -> None:
    assert [name for _, name in log_ticks(low, high)[0]] == expected


def test_a_wild_band_does_not_flatten_the_rest() -> None:
    x = np.array([1.0, 10.0])
    marks = (Line(x, np.array([1.0, 2.0])), Band(x, np.array([-1e9, -1e9]), np.array([1e9, 1e9])))
    low, high = axis_range(Axis("y", "m"), marks, "y")
    assert low >= -0.5
    assert high <= 4.0
    low, high = axis_range(Axis("y", "m", log=True), (marks[0], Band(x, x * 1e-9, x)), "y")
    assert low > 0.05


@pytest.mark.parametrize(
    ("names", "shared", "short"),
    [
        (["ISO 2037 38", "ISO 2037 51"], "ISO 2037", ("38", "51")),
        (
            ["B36 DN 50 (2 in) schedule 40", "B36 DN 65 (2 1/2 in) schedule 40"],
            "B36 DN … schedule 40",
            ("50 (2 in)", "65 (2 1/2 in)"),
        ),
        (["one", "two"], "", ("one", "two")),
        (["alone here"], "", ("alone here",)),
        (["same 1", "same 1"], "same", ("1", "1")),
    ],
)
def test_words_in_common_are_said_once(
    names: list[str], shared: str, short: tuple[str, ...]
) -> None:
    assert without_shared_words(names) == (shared, short)
