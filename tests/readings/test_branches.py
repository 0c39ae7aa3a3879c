"""Ways up, ways down and holds, told from the order of the settings."""

from __future__ import annotations

import numpy as np
import pytest

from rheo.readings.branches import branch_of_word, branches_by_order

LETTERS = {"u": "up", "d": "down", "h": "hold", "-": ""}


@pytest.mark.parametrize(
    ("setting", "expected"),
    [
        ([1, 2, 3], "uuu"),
        ([3, 2, 1], "ddd"),
        ([1, 2, 3, 2, 1], "uuudd"),
        ([1, 2, 3, 3, 2, 1], "uuuddd"),
        ([3, 2, 1, 2, 3], "ddduu"),
        ([1, 2, 3, 3, 3, 3, 2, 1], "uuhhhhdd"),
        ([5, 5, 5, 5], "hhhh"),
        ([5, 5.001, 4.999], "hhh"),
        ([1, 2, 3, 1, 2, 3], "uuuuuu"),
        ([1, 2, 3, 2, 1, 1, 2, 3, 2, 1], "uuudduuudd"),
        ([1, 1, 1, 2, 2, 2, 3, 3, 3, 2, 2, 2, 1, 1, 1], "uuuuuuuuudddddd"),
        ([3, 1, 2, 9, 4, 7, 1, 8, 2], "---------"),
        ([0.01, 1, 100], "uuu"),
        ([7], "-"),
        ([], ""),
    ],
)
def test_order_of_settings(setting: list[float], expected: str) -> None:
    assert branches_by_order(setting).tolist() == [LETTERS[letter] for letter in expected]


def test_a_fine_ramp_with_jitter_and_a_hold() -> None:
    ramp = np.linspace(0.5, 100.0, 100)
    noise = 1.0 + 1e-4 * np.random.default_rng(3).normal(size=220)
    branch = branches_by_order(np.r_[ramp, np.full(20, 100.0), ramp[::-1]] * noise)
    assert (branch[:98] == "up").all()
    assert (branch[101:119] == "hold").all()
    assert (branch[122:] == "down").all()


def test_groups_are_looked_at_apart() -> None:
    setting = [1, 2, 3, 2, 1, 0.5]
    assert branches_by_order(setting).tolist() == ["up"] * 3 + ["down"] * 3
    apart = branches_by_order(setting, [0, 0, 0, 1, 1, 1])
    assert apart.tolist() == ["up"] * 3 + ["down"] * 3
    tubes = branches_by_order([1, 2, 4, 5, 6, 8], [0, 0, 0, 1, 1, 1])
    assert tubes.tolist() == ["up"] * 6


def test_words() -> None:
    assert branch_of_word(" Up ") == "up"
    assert branch_of_word("abwärts") == "down"
    assert branch_of_word("palier") == "hold"
    assert branch_of_word("") == ""
    assert branch_of_word("sideways") is None
