"""`rheo pipe` and `rheo convert`: numbers as from Python, and plain complaints."""

import json

import pytest

import rheo

HERSCHEL_BULKLEY = (
    *("--model", "herschel-bulkley", "--set", "yield_stress=12 Pa"),
    *("--set", "consistency=4.2", "--set", "flow_index=0.45"),
)
PIPE = ("pipe", *HERSCHEL_BULKLEY, "--diameter", "50mm", "--flow", "5 m^3/h", "--density", "1100")
CONVERT = (
    *("convert", *HERSCHEL_BULKLEY, "--geometry", "tube"),
    *("--dim", "diameter=50mm", "--dim", "length=10 m"),
)
CUP = "concentric-cylinders inner_radius=14mm outer_radius='15 mm' length=42mm"


def test_pipe_prints_what_pipe_flow_returns(command):
    ended = command(*PIPE, "--length", "30 m", "--json")
    assert (ended.status, ended.err) == (0, "")
    printed = json.loads(ended.out)
    model = rheo.model("herschel-bulkley", yield_stress=12, consistency=4.2, flow_index=0.45)
    velocity = 5 / 3600 / (0.25 * 3.141592653589793 * 0.05**2)
    flow = rheo.pipe_flow(model, 0.05, velocity, 1100)
    for name in (
        *("wall_stress", "wall_rate", "nominal_rate", "local_flow_index", "local_consistency"),
        *("reynolds", "critical_reynolds", "friction_factor", "pressure_gradient"),
        *("velocity_ratio", "kinetic_energy_factor", "plug_fraction"),
    ):
        assert printed[name] == pytest.approx(float(getattr(flow, name)), rel=1e-12), name
    assert printed["regime"] == "laminar"
    assert printed["pressure_drop"] == pytest.approx(30 * float(flow.pressure_gradient), rel=1e-12)
    assert any("licensed engineer" in words for words in printed["safety"])


def test_pipe_table_shows_result_and_safety(command):
    ended = command(*PIPE, "--length", "30 m")
    assert ended.status == 0
    assert "1.31 bar over 30 m" in ended.out
    assert "laminar" in ended.out
    assert "licensed" in ended.out


def test_pipe_in_other_units(command):
    assert "psi" in command(*PIPE, "--length", "30 m", "--units", "us").out
    assert "kPa" in command(*PIPE, "--length", "30 m", "--units", "si").out


def test_pipe_by_velocity(command):
    by_flow = json.loads(command(*PIPE, "--json").out)
    other = [*PIPE[:-4], "--velocity", f"{by_flow['velocity']!r} m/s", *PIPE[-2:], "--json"]
    assert json.loads(command(*other).out)["wall_rate"] == pytest.approx(by_flow["wall_rate"])


def replaced(old, new):
    assert old in PIPE
    return [new if word == old else word for word in PIPE]


@pytest.mark.parametrize(
    ("arguments", "sentence"),
    [
        (
            replaced("50mm", "0 mm"),
            "--diameter: found '0 mm'; it must be above 10⁻⁶ m and at",
        ),
        (
            replaced("50mm", "50 parsnips"),
            "--diameter: unknown unit 'parsnips'; use one such as mm",
        ),
        (replaced("50mm", "nan"), "--diameter: 'nan' is not a number with a unit"),
        (replaced("50mm", "wide"), "--diameter: 'wide' is not a number with a unit"),
        (replaced("5 m^3/h", "-5 m3/h"), "--flow: found '-5 m3/h'; it must be above 0"),
        (replaced("5 m^3/h", "5 m"), "--flow: unit 'm' does not measure what is wanted here"),
        (replaced("1100", "0"), "--density: found '0'; it must be above 0 kg/m3 and at most"),
        (
            replaced("herschel-bulkley", "hershel-bulkley"),
            "unknown model 'hershel-bulkley' (did you",
        ),
        (
            replaced("consistency=4.2", "consistancy=4.2"),
            "unknown parameter 'consistancy'; it takes",
        ),
        (replaced("consistency=4.2", "consistency"), "--set: found 'consistency'; write it like"),
        (
            replaced("consistency=4.2", "consistency=thick"),
            "--set consistency: found 'thick'; it must",
        ),
        (replaced("consistency=4.2", "consistency=-1"), "consistency is -1; it must lie between"),
        (replaced("consistency=4.2", "flow_index=1"), "--set: 'flow_index' is given twice"),
        ([*PIPE, "--velocity", "1 m/s"], "found both of --flow and --velocity; give one of them"),
        ([*PIPE[:-4], *PIPE[-2:]], "found neither of --flow and --velocity; give one of them"),
        ([*PIPE, "--length", "-1 m"], "--length: found '-1 m'; it must be above 0 m and at most"),
        ([*PIPE, "--regime", "plug"], "'plug'; it takes laminar or turbulent"),
        ([*PIPE, "--method", "guess"], "unknown"),
        ([*CONVERT], "found neither of --at and --rate; give one of them"),
        ([*CONVERT, "--at", "60 rpm"], "--at (flow): unit 'rpm' does not measure what is wanted"),
        ([*CONVERT, "--at", "4 m3/h", "--to", "jar"], "unknown geometry 'jar'; there are"),
        ([*CONVERT, "--at", "4 m3/h", "--to", "tube 'x"], "--to: found 'tube 'x'; a quote is not"),
        ([*CONVERT, "--at", "4 m3/h", "--to", " "], "--to: found nothing; write it like"),
        (
            [*CONVERT, "--rate", "-1 1/s"],
            "--rate: found '-1 1/s'; it must lie between 0",
        ),
        (
            [*CONVERT, "--dim", "width=1mm", "--at", "1 m3/h"],
            "unknown dimension 'width'; tube takes",
        ),
        ([*CONVERT, "--at", "0 m3/h", "--to", CUP], "the fluid is not sheared at this flow"),
    ],
)
def test_complaints(command, arguments, sentence):
    ended = command(*arguments)
    assert ended.status == 1
    assert ended.out == ""
    assert sentence in ended.err
    assert ended.err.startswith("rheo: ")
    assert ended.err.count("\n") == 1


def test_convert_there_and_back(command):
    there = json.loads(command(*CONVERT, "--at", "4 m3/h", "--to", CUP, "--json").out)
    rate = there["source"]["rate"]
    speed = there["targets"]["concentric-cylinders"]["angular_speed"]
    assert there["targets"]["concentric-cylinders"]["rate"] == pytest.approx(rate, rel=1e-9)
    back = command(
        *("convert", *HERSCHEL_BULKLEY, "--geometry", "concentric-cylinders"),
        *("--dim", "inner_radius=14mm", "--dim", "outer_radius=15mm", "--dim", "length=42mm"),
        *("--at", f"{speed!r} rad/s", "--to", "tube diameter=50mm length=10m", "--json"),
    )
    flow = json.loads(back.out)["targets"]["tube"]["flow"]
    assert flow == pytest.approx(4 / 3600, rel=1e-9)
    by_rate = json.loads(command(*CONVERT, "--rate", f"{rate!r} 1/s", "--json").out)
    assert by_rate["source"]["flow"] == pytest.approx(4 / 3600, rel=1e-9)


def test_convert_says_it_in_a_sentence(command):
    ended = command(*CONVERT, "--at", "4 m3/h", "--to", CUP)
    assert ended.status == 0
    assert "works at" in ended.out
    assert "rpm" in ended.out
