"""What holds for every line: the energy balance closes, and parts can be cut and swapped."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

import rheo
from rheo.line import Entrance, Equipment, Fitting, Line, Part, Pipe, Product, Vessel
from rheo.line.walk import walk

COMMON = settings(deadline=None, max_examples=40, derandomize=True)
G = 9.80665

models = st.builds(
    lambda tau, k, n: rheo.model("herschel-bulkley", yield_stress=tau, consistency=k, flow_index=n),
    st.floats(0.0, 100.0),
    st.floats(0.01, 20.0),
    st.floats(0.2, 1.2),
)
products = st.builds(lambda m, rho: Product(m, rho), models, st.floats(800.0, 1800.0))
diameters = st.floats(0.02, 0.3)
pipes = st.builds(
    lambda length, d, slope, rough: Pipe(
        length, d, rise=slope * length, roughness=rough * d, name="run"
    ),
    st.floats(0.5, 200.0),
    diameters,
    st.floats(-1.0, 1.0),
    st.floats(0.0, 0.02),
)
fittings = st.builds(
    lambda count, k: Fitting("any", count=count, loss_coefficient=k),
    st.integers(1, 6),
    st.floats(0.0, 20.0),
)
equipment = st.builds(
    lambda loss, n: Equipment(loss, 1e-3, n), st.floats(0.0, 2e5), st.floats(0.0, 2.0)
)
parts = st.lists(st.one_of(pipes, fittings, equipment), min_size=1, max_size=6).filter(
    lambda found: any(isinstance(part, Pipe) for part in found)
)
vessels = st.builds(Vessel, st.floats(-2.0, 10.0), st.floats(-2e4, 3e5))
flows = st.floats(1e-5, 0.05)


@COMMON
@given(products, st.lists(fittings, max_size=2), parts, vessels, vessels, flows)
def test_parts_and_heights_add_up_to_the_pump(
    product: Product,
    suction: list[Part],
    discharge: list[Part],
    source: Vessel,
    end: Vessel,
    flow: float,
) -> None:
    line = Line(
        (source, Entrance(), Pipe(2.0, 0.1, rise=0.5), *suction), (*discharge, end), name="any"
    )
    found = rheo.solve_line(line, product, flow)
    parts_sum = sum(part.pressure_loss + part.elevation_pressure for part in found.parts)
    vessel_sum = (
        end.gauge_pressure
        - source.gauge_pressure
        + float(product.density) * G * (end.level - source.level)
    )
    scale = float(found.friction_pressure) + abs(vessel_sum) + 1.0
    assert abs(float(parts_sum + vessel_sum - found.differential_pressure)) < 1e-12 * 10 * scale
    profile = found.profile
    assert profile is not None
    last = end.gauge_pressure + float(product.density) * G * end.level
    assert abs(profile.pressure[-1] - last) < 1e-10 * (scale + np.abs(profile.pressure).max())


@COMMON
@given(products, pipes, flows, st.floats(0.05, 0.95))
def test_a_pipe_cut_in_two_needs_the_same(
    product: Product, pipe: Pipe, flow: float, share: float
) -> None:
    first = replace(pipe, length=pipe.length * share, rise=pipe.rise * share)
    second = replace(pipe, length=pipe.length * (1 - share), rise=pipe.rise * (1 - share))
    whole = walk(Line(discharge=(pipe,)), product, flow)
    cut = walk(Line(discharge=(first, second)), product, flow)
    scale = float(whole.friction_pressure) + abs(float(whole.static_pressure))
    difference = float(whole.differential_pressure - cut.differential_pressure)
    assert abs(difference) < 1e-12 * scale


@COMMON
@given(products, st.lists(fittings, min_size=2, max_size=6), st.randoms(), flows)
def test_the_order_of_fittings_does_not_matter(
    product: Product, some: list[Fitting], random: object, flow: float
) -> None:
    shuffled = list(some)
    random.shuffle(shuffled)
    pipe = Pipe(10.0, 0.05)
    one = walk(Line(discharge=(pipe, *some)), product, flow).differential_pressure
    other = walk(Line(discharge=(pipe, *shuffled)), product, flow).differential_pressure
    assert abs(float(one - other)) <= 1e-13 * float(one)


@COMMON
@given(products, pipes, flows, st.integers(1, 5), st.floats(0.1, 5.0))
def test_counted_fittings_are_that_many_single_ones(
    product: Product, pipe: Pipe, flow: float, count: int, k: float
) -> None:
    together = Line(discharge=(pipe, Fitting("bend", count=count, loss_coefficient=k)))
    apart = Line(discharge=(pipe, *(Fitting("bend", loss_coefficient=k),) * count))
    one = walk(together, product, flow).friction_pressure
    other = walk(apart, product, flow).friction_pressure
    assert abs(float(one - other)) <= 1e-13 * float(one)


@COMMON
@given(products, parts, st.floats(1e-5, 0.02), st.floats(1.01, 3.0))
def test_more_flow_needs_more_pressure(
    product: Product, some: list[Part], flow: float, factor: float
) -> None:
    line = Line(discharge=tuple(some))
    low, high = walk(line, product, np.array([flow, factor * flow])).friction_pressure
    assert high > low


@COMMON
@given(products, st.integers(0, 2**32 - 1), flows)
def test_arrays_of_draws_give_what_each_draw_gives(
    product: Product, seed: int, flow: float
) -> None:
    rng = np.random.default_rng(seed)
    consistency = rng.uniform(0.5, 5.0, 4)
    draws = rheo.model("power-law", consistency=consistency, flow_index=0.5)
    line = Line((Vessel(1.0), Entrance()), (Pipe(20.0, 0.05, rise=2.0), Vessel()))
    together = walk(line, product, np.full(1, flow), source=draws).differential_pressure
    apart = [
        float(
            walk(
                line,
                product,
                flow,
                source=rheo.model("power-law", consistency=value, flow_index=0.5),
            ).differential_pressure
        )
        for value in consistency
    ]
    np.testing.assert_allclose(together, apart, rtol=1e-12)
