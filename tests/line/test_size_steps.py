"""Next size up and down; comparisons in blocks that tell how far they are."""

import numpy as np
import pytest

import rheo
from rheo.line import Costs, Entrance, Line, Pipe, Product, Vessel, catalogue, size_line
from rheo.line.draw_blocks import in_blocks
from rheo.line.size_steps import candidate_in_line, sizes_beside

DRAWS = (
    rheo.model("power-law", consistency=np.linspace(7, 9, 600), flow_index=0.4),
    rheo.model("newtonian", viscosity=np.linspace(1, 1.1, 150)),
)
PRODUCT = Product(
    rheo.model("power-law", consistency=8.0, flow_index=0.4), 1050.0, draws=DRAWS, name="sauce"
)
LINE = Line(
    suction=(Vessel(2.0), Entrance(), Pipe(3.0, 0.08, fixed_size=True)),
    discharge=(Pipe(60.0, size="ISO 2037 51"), Vessel()),
)
SIZES = catalogue("ISO 2037")
COSTS = Costs(hours=5000.0, energy_price=0.2, efficiency=0.5)


@pytest.fixture(scope="module")
def sizing():
    return size_line(LINE, PRODUCT, 1.5e-3, SIZES, costs=COSTS)


def test_the_size_in_the_line_is_found_and_its_neighbours_stand_beside_it(sizing):
    now = candidate_in_line(sizing, LINE)
    assert now is not None
    assert now.size.name == "ISO 2037 51"
    smaller, larger = sizes_beside(sizing, now)
    at = sizing.candidates.index(now)
    for step, other in ((smaller, sizing.candidates[at - 1]), (larger, sizing.candidates[at + 1])):
        assert step is not None
        assert step.candidate is other
        assert step.pressure == pytest.approx(other.pressure - now.pressure)
        assert step.capital == pytest.approx(other.capital - now.capital)
        assert step.annual_cost == pytest.approx(0.2 * step.capital + step.energy)
    assert smaller.pressure > 0 > larger.pressure
    assert smaller.capital < 0 < larger.capital


def test_the_ends_have_no_neighbour_beyond(sizing):
    assert sizes_beside(sizing, sizing.candidates[0])[0] is None
    assert sizes_beside(sizing, sizing.candidates[-1])[1] is None


def test_pipes_of_different_sizes_have_no_size_in_common(sizing):
    mixed = Line(discharge=(Pipe(60.0, size="ISO 2037 51"), Pipe(5.0, size="ISO 2037 38")))
    assert candidate_in_line(sizing, mixed) is None


def test_blocks_hold_the_same_draws_in_the_same_order():
    blocks = in_blocks(PRODUCT, 250)
    assert blocks.draw_sizes == (250, 250, 100, 150)
    whole = PRODUCT.over_draws(lambda source: PRODUCT.model_at(293.15, source).stress(10.0))
    cut = blocks.over_draws(lambda source: blocks.model_at(293.15, source).stress(10.0))
    np.testing.assert_array_equal(cut, whole)


def test_progress_rises_to_one_and_changes_nothing(sizing):
    told: list[float] = []
    found = size_line(LINE, PRODUCT, 1.5e-3, SIZES, costs=COSTS, progress=told.append)
    assert told == sorted(told)
    assert told[-1] == 1.0
    assert len(told) == 4
    assert found == sizing


def test_what_progress_raises_ends_the_comparison():
    class EnoughError(Exception):
        pass

    told: list[float] = []

    def stop(share: float) -> None:
        told.append(share)
        raise EnoughError

    with pytest.raises(EnoughError):
        size_line(LINE, PRODUCT, 1.5e-3, SIZES, progress=stop)
    assert len(told) == 1
