"""Damaged files through the page's own way in: what it takes, the session can go on with."""

from __future__ import annotations

import numpy as np
import pytest
from damage import SAMPLES, bytes_changed, number_changed
from streamlit.testing.v1 import AppTest


def take_all(files: list[tuple[str, bytes]]) -> None:
    """Upload one file after the other, as a script of the page would."""
    import streamlit as st

    from rheo.errors import InputError
    from ui import opening, state
    from ui.readings import source

    if state.is_empty():
        opening.open_sample("sauce")
    taken = refused = 0
    for number, (name, data) in enumerate(files):
        before, said = state.case(), ""
        try:
            if name.endswith(".toml"):
                opening.open_case({name: data})
            else:
                source.take(name, data, add=number % 5 == 4 and len(before.readings) < 20)
        except InputError as error:
            said = str(error)
        if said:
            # A file that is refused changes nothing.
            assert state.case() == before
            assert "\n" not in said
            refused += 1
        else:
            state.readings()
            taken += 1
    st.write(f"{taken} taken, {refused} refused")


def damaged(name: str, count: int) -> list[tuple[str, bytes]]:
    """Return damaged copies of a sample."""
    random = np.random.default_rng(len(name))
    data = (SAMPLES / name).read_bytes()
    if name.endswith(".xlsx"):
        return [(name, bytes_changed(data, random)) for _ in range(count)]
    text = data.decode("utf-8")
    return [
        (
            name,
            bytes_changed(data, random)
            if number % 2
            else number_changed(text, random, 2).encode("utf-8"),
        )
        for number in range(count)
    ]


@pytest.mark.parametrize(
    ("name", "count"),
    [
        ("sauce_readings.csv", 60),
        ("thickener_readings.csv", 60),
        ("gum_readings.xlsx", 15),
        ("sauce.toml", 60),
    ],
)
def test_damaged_uploads(name, count):
    app = AppTest.from_function(take_all, default_timeout=120, args=(damaged(name, count),)).run()
    assert [one.value for one in app.exception] == []
    said = app.markdown[0].value
    assert "taken" in said


def test_names_that_lead_elsewhere():
    names = [
        "../../x.csv",
        "/etc/passwd",
        "",
        ".",
        "a" * 300 + ".csv",
        "x\0.csv",
        "CON",
        "\u202e.csv",
    ]
    data = (SAMPLES / "sauce_readings.csv").read_bytes()
    app = AppTest.from_function(take_all, default_timeout=60, args=([(n, data) for n in names],))
    app.run()
    assert [one.value for one in app.exception] == []
    assert app.markdown[0].value == f"{len(names)} taken, 0 refused"
