"""How results look on a terminal: headings, tables, Cautions, and JSON."""

from __future__ import annotations

import json
import sys
from collections.abc import Iterable, Sequence
from enum import StrEnum
from typing import TYPE_CHECKING, Any, TypeGuard

from rheo.errors import Caution

if TYPE_CHECKING:
    from rich.console import Console
    from rich.text import Text

WIDEST = 110
# Words of a table up to this length are not broken.
SHORT = 26
# To no less than this are columns of words narrowed.
LEAST = 14


class Units(StrEnum):
    """Units of what is shown; files and JSON stay in SI."""

    metric = "metric"
    si = "si"
    us = "us"


def console() -> Console:
    """Return the terminal; no wider than is easy to read, no colours where NO_COLOR is set."""
    from rich.console import Console

    made = Console(highlight=False, emoji=False, soft_wrap=False)
    made.width = min(made.width, WIDEST)
    return made


def text(value: object, style: str = "") -> Text:
    """Return text that is shown as it is: no markup in it acts, no control character either."""
    from rich.text import Text

    from rheo.report.text import clean

    return Text(clean(value), style=style)


def line(value: object, style: str = "") -> Text:
    """Return text on one line, shown as it is."""
    from rheo.report.text import one_line

    return text(one_line(value, 200), style)


def given(value: float, quantity: str, units: str) -> str:
    """Return an SI value that the user gave in the unit shown, with the digits that it has.

    Where it was given in another unit, four digits are enough.
    """
    from rheo.report.display import shown, unit_label
    from rheo.report.numbers import exact, number

    found = float(shown(value, quantity, units))
    words = exact(found)
    if sum(sign.isdigit() for sign in words) > 5:
        words = number(found, 4)
    return f"{words} {unit_label(quantity, units)}"


def column(values: Sequence[float | None]) -> list[str]:
    """Return numbers of one column to one decimal place, which the largest of them sets.

    Parameters
    ----------
    values : sequence of float or None
        None and NaN become empty cells.

    Returns
    -------
    list of str
        The largest has three digits, or four from 1 to 10. A number too small for that place is
        written ``<0.001``, never ``0.000``.
    """
    import math

    from rheo.report.numbers import number

    known = [abs(one) for one in values if one is not None and math.isfinite(one)]
    largest = max(known, default=0.0)
    if largest >= 1e4 or largest < 1e-4:
        return [number(one) if one is not None and math.isfinite(one) else "" for one in values]
    size = math.floor(math.log10(largest))
    places = max(0, 3 - size if size == 0 else 2 - size)
    step = 10.0**-places
    cells = []
    for one in values:
        if one is None or not math.isfinite(one):
            cells.append("")
        elif 0 < abs(one) < step / 2:
            cells.append(f"<{step:.{places}f}")
        else:
            cells.append(f"{one:.{places}f}".replace("-", "\u2212"))
    return cells


def heading(out: Console, words: str, beside: str = "") -> None:
    """Write a heading with an empty line before it."""
    line = text(words, "bold")
    if beside:
        line.append_text(text(f"  {beside}", "dim"))
    out.print()
    out.print(line)


def sentence(
    out: Console, words: str, style: str = "", indent: int = 2, units: str = "metric"
) -> None:
    """Write a sentence, its numbers in the units shown, broken at the width of the terminal."""
    from rich.padding import Padding

    from rheo.report.restate import restated

    out.print(Padding(text(restated(words, units), style), (0, 0, 0, indent)))


def values(out: Console, rows: Iterable[tuple[str, object]]) -> None:
    """Write names and values in two columns; a value of None is left out."""
    from rich.table import Table

    table = Table.grid(padding=(0, 2))
    table.add_column(no_wrap=True)
    table.add_column()
    for name, value in rows:
        if value is not None:
            table.add_row(text(f"  {name}", "dim"), value if _is_text(value) else line(value))
    out.print(table)


def _is_text(value: object) -> TypeGuard[Text]:
    from rich.text import Text

    return isinstance(value, Text)


def table(
    out: Console,
    headings: Sequence[str],
    rows: Iterable[Sequence[object]],
    left: int = 1,
    bold_rows: Sequence[int] = (),
    least_wanted: Sequence[int] = (),
) -> None:
    """Write a table.

    Parameters
    ----------
    out : Console
        Where to.
    headings : sequence of str
        Of the columns; ``\\n`` breaks one in two lines.
    rows : iterable of sequence
        Cells; None is an empty one.
    left : int
        So many columns hold words and are set to the left, the others numbers.
    bold_rows : sequence of int
        Rows to set off, counted from 0.
    least_wanted : sequence of int
        Columns that go, one after the other, where the terminal is too narrow for all.
    """
    from rich import box
    from rich.table import Table

    listed = [tuple(_cell(cell) for cell in row) for row in rows]
    longest = [
        max([len(row[i].plain) for row in listed] + [len(part) for part in words.split("\n")])
        for i, words in enumerate(headings)
    ]
    kept = _columns_that_fit(longest, left, out.width, least_wanted)
    made = Table(box=box.SIMPLE_HEAD, pad_edge=True, header_style="dim", padding=(0, 1))
    for index in kept:
        made.add_column(
            text(headings[index]),
            justify="left" if index < left else "right",
            vertical="bottom",
            # Words are cut before numbers are: a number that lacks digits is another number.
            min_width=min(longest[index], LEAST) if index < left else longest[index],
            no_wrap=index >= left or longest[index] <= SHORT,
            overflow="ellipsis" if longest[index] <= SHORT else "fold",
        )
    for number, row in enumerate(listed):
        made.add_row(*(row[i] for i in kept), style="bold" if number in bold_rows else "")
    out.print(made)


def _cell(cell: object) -> Text:
    return cell if _is_text(cell) else line("" if cell is None else cell)


def _columns_that_fit(
    longest: Sequence[int], left: int, width: int, least_wanted: Sequence[int]
) -> list[int]:
    kept = list(range(len(longest)))
    for index in least_wanted:
        # Columns of words up to SHORT are never broken; each column has a space on either side,
        # and a rule, which is a space too, before it and after the last.
        needed = 1 + sum(min(longest[i], SHORT if i < left else longest[i]) + 3 for i in kept)
        if needed <= width:
            break
        kept.remove(index)
    return kept


def cautions(out: Console, found: Iterable[Caution], units: str = "metric") -> None:
    """Write Cautions: what was found, in the units shown, and what to do about it."""
    from rich.table import Table

    from rheo.report.restate import restated

    listed = list(found)
    if not listed:
        return
    heading(out, "Cautions", f"{len(listed)}")
    made = Table.grid(padding=(0, 1))
    made.add_column(no_wrap=True)
    made.add_column()
    for caution in listed:
        words = line(caution.place, "bold") if caution.place else text("")
        words.append(": " if caution.place else "")
        words.append_text(line(restated(caution.sentence, units))).append(" ")
        words.append_text(line(restated(caution.advice, units), "italic"))
        made.add_row(text(" !", "bold yellow"), words)
    out.print(made)


def safety(out: Console, sentences: Iterable[str]) -> None:
    """Write the safety wording that belongs to the results above it."""
    out.print()
    for words in dict.fromkeys(sentences):
        sentence(out, words, "dim", indent=0)


def print_json(data: Any) -> None:
    """Write JSON and nothing else."""
    sys.stdout.write(json.dumps(data, indent=2, ensure_ascii=False, allow_nan=False) + "\n")
