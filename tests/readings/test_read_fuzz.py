"""Damaged and random files: a sentence or sound readings, never anything else, and quickly."""

from __future__ import annotations

import contextlib
import io
import time
from collections.abc import Callable

import numpy as np
import openpyxl
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from xls_file import xls_bytes

from rheo import InputError, read_readings, screen

TEXTS = {
    "cup": "Made-up run\n# geometry: concentric-cylinders, inner_radius 12.5 mm, outer_radius "
    "13.56 mm, length 37.5 mm\n# full_scale_torque: 50 mN.m\n# temperature: 20 °C\n\n"
    "Time [s];Speed [rpm];Torque [%];Branch\n1;1,5;10;up\n2;2,5;20;up\n3;3,25;1.030,5;down\n",
    "blocks": "Interval 1\nPoint\tShear rate\tViscosity\n\t[1/s]\t[mPa·s]\n1\t1\t10\n2\t2\t9\n"
    "3\t3\t8\n\nInterval 2\nPoint\tShear rate\tViscosity\n\t[1/s]\t[mPa·s]\n1\t3\t8\n2\t1\t10\n",
    "tubes": '"Flow [L/h]","Pressure drop [mbar]","D [mm]","L [m]"\n1,10,5,1\n"2,000.5",20,5,1\n'
    "1,5,10,1\n2,7,10,1\n",
    "blanks": "rate stress\n1.5 10\n2e1 20\n0 0\n3E2 30\n",
}
TABLE: list[list[str | float]] = [["rate [1/s]", "stress [Pa]"], [1.0, 2.0], [2, 3], [3, 4], [4, 5]]
TOKENS = [b"", b"\n", b";", b",", b"\t", b'"', b"#", b"-", b"nan", b"1e999", b"1e-999", b"\xff",
          b"\0", b"0", b"-1", b"1.234", b"1,234", b"[foo]", b"\xe2\x80\xaf", b"geometry: tube",
          b"# geometry: tube, diameter 1 mm, length 1e400 m", b"rate [1/s];stress [Pa]", b"\r",
          b"9" * 400, b"(" * 50, b"1e5000 mm", b"2**9**9", b"%"]  # fmt: skip
SLOWEST = 5.0


def read_or_refuse(data: bytes, **arguments: object) -> None:
    """Read, and hold the readings to what is promised of them."""
    start = time.process_time()
    refused, readings = None, None
    try:
        readings = read_readings(data, name="damaged.csv", **arguments)
    except InputError as error:
        refused = str(error)
    if readings is None:
        assert refused
        assert "\n" not in refused
        assert len(refused) < 1500
    else:
        assert len(readings) >= 3
        for key in readings.present:
            column = getattr(readings, key)
            assert column.shape == (len(readings),)
            if column.dtype.kind == "f":
                assert np.isfinite(column).all(), key
                assert key == "time" or (column > 0).all(), key
        for use in (
            readings.flow_curve,
            lambda: readings.setting,
            lambda: screen(readings, 1000.0),
        ):
            with contextlib.suppress(InputError):
                use()
    assert time.process_time() - start < SLOWEST


def damaged(data: bytes, draw: Callable[[st.SearchStrategy[int]], int]) -> bytes:
    """Return the data with a few changes: bytes turned, cut, doubled, swapped, put in."""
    result = bytearray(data)
    for _ in range(draw(st.integers(1, 4))):
        at = draw(st.integers(0, len(result)))
        span = draw(st.integers(0, 12))
        kind = draw(st.integers(0, 4))
        if kind == 0 and at < len(result):
            result[at] ^= 1 << draw(st.integers(0, 7))
        elif kind == 1:
            del result[at : at + span]
        elif kind == 2:
            result[at:at] = result[at : at + span] * draw(st.integers(1, 3))
        elif kind == 3:
            result[at:at] = TOKENS[draw(st.integers(0, len(TOKENS) - 1))]
        else:
            del result[at:]
    return bytes(result)


@given(st.sampled_from(sorted(TEXTS)), st.sampled_from(["utf-8", "utf-16", "latin-1"]), st.data())
@settings(deadline=None, max_examples=1500, derandomize=True)
def test_damaged_text(kind: str, encoding: str, data: st.DataObject) -> None:
    read_or_refuse(damaged(TEXTS[kind].encode(encoding), data.draw))


WORDS = [*"0123456789.,;-+eE \t\n\"'#%:[]()/", "rate", "stress", "viscosity", "speed", "torque",
         "[1/s]", "[Pa]", "rpm", "mN.m", "°C", "1.5", "2,5", "\n\n", "\nrate;stress\n",
         "geometry: ", "tube", "diameter", "\u00a0", "γ̇", "é", "\ufeff", "\u2028"]  # fmt: skip


@given(st.lists(st.sampled_from(WORDS), max_size=60))
@settings(deadline=None, max_examples=600, derandomize=True)
def test_random_words(words: list[str]) -> None:
    read_or_refuse("".join(words).encode())
    read_or_refuse(("rate;stress\n1;2\n2;3\n3;4\n" + "".join(words)).encode())


@given(
    st.binary(max_size=200), st.sampled_from([b"", b"PK\x03\x04", b"\xff\xfe", b"rate;stress\n"])
)
@settings(deadline=None, max_examples=150, derandomize=True)
def test_random_bytes(data: bytes, head: bytes) -> None:
    read_or_refuse(head + data)


@given(st.sampled_from(sorted(TEXTS)), st.data())
@settings(deadline=None, max_examples=200, derandomize=True)
def test_random_words_of_the_user(kind: str, data: st.DataObject) -> None:
    names = st.sampled_from(["rate", "stress", "torque", "foo", "Point", "D [mm]", "time", ""])
    choice = st.one_of(st.none(), st.integers(-1, 6), names)
    read_or_refuse(
        TEXTS[kind].encode(),
        columns=data.draw(st.dictionaries(names, choice, max_size=3)),
        units=data.draw(st.dictionaries(names, st.text(max_size=6), max_size=2)),
        decimal=data.draw(st.sampled_from([None, ".", ","])),
        block=data.draw(st.one_of(st.none(), st.integers(-1, 4), names)),
        geometry=data.draw(st.one_of(st.none(), st.text(max_size=20), st.just("six-speed"))),
    )


def _xlsx() -> bytes:
    book = openpyxl.Workbook()
    for row in TABLE:
        book.active.append(row)
    stream = io.BytesIO()
    book.save(stream)
    return stream.getvalue()


@pytest.mark.parametrize("data", [_xlsx(), xls_bytes(TABLE)], ids=["xlsx", "xls"])
def test_damaged_workbooks(data: bytes) -> None:
    random = np.random.default_rng(5)
    for _ in range(40):
        changed = bytearray(data)
        for _ in range(int(random.integers(1, 6))):
            changed[int(random.integers(4, len(changed)))] = int(random.integers(256))
        cut = len(changed) if random.random() < 0.7 else int(random.integers(len(changed)))
        read_or_refuse(bytes(changed[:cut]))


@pytest.mark.parametrize(
    "text",
    [
        "rate;stress\n" + '"' * 19_000,
        "rate;stress\n" + ',"' * 9_000,
        "rate;stress\n" + '"a""' * 4_000,
        ("rate;stress\n" + '1;"2\n') * 2_000,
        "[" * 110 + ";" + "rate" + "]" * 110 + "\n1;2\n",
        ("rate [" + "m" * 50 + "];stress\n1;2\n2;3\n3;4\n") * 100,
        "rate;stress\n" + "1;2\n" * 20_000,
        "rate stress\n" + "1 " * 9_000 + "\n1 2\n",
        "a;b\n" * 5_000,
        "# geometry: tube, " + "a " * 9_000 + "\nrate;stress\n1;2\n2;3\n3;4\n",
        "rate;stress\n" + "1'234'" * 3_000 + ";1\n",
        "\n".join(f"rate{n} [1/s];stress{n} [Pa]" for n in range(3_000)) + "\n1;2\n",
    ],
    ids=lambda text: text[:24].replace("\n", " "),
)
def test_files_made_to_be_slow(text: str) -> None:
    read_or_refuse(text.encode())
