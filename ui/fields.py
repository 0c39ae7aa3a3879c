"""Groups of fields for one table of the case, written and read in the units shown.

``fields.group("pipe", path, (Field("length", "Length", "length"), ...))`` draws them side by side.
What stands in all fields of a group goes into the case together, so that values that belong
together can be given one after the other; until they fit, the case stays and the reason is shown.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

import streamlit as st

from rheo.report import display
from rheo.report.numbers import exact
from rheo.units import from_si
from ui import cautions, state
from ui.units_switch import value_of, with_unit

Path = tuple[str | int, ...]

NUMBER, COUNT, SHARE, TEXT = "number", "count", "share", "text"
# Kinds that every unit system shows alike: SI unit, unit in a field, and as the case file has it.
_FIXED = {
    "heat_transfer": ("W/(m^2*K)", "W/(m²·K)", "W/(m^2*K)"),
    "heat_capacity": ("J/(kg*K)", "kJ/(kg·K)", "kJ/(kg*K)"),
    "angle": ("rad", "°", "°"),
    "temperature_step": ("K", "K", "K"),
}


@dataclass(frozen=True)
class Field:
    """One field.

    Parameters
    ----------
    key, label : str
        Key in the table of the case, and words above the field.
    kind : str
        A key of `rheo.report.display.QUANTITIES` or of `_FIXED`, or one of NUMBER, COUNT, SHARE
        and TEXT.
    help, placeholder : str
        As for ``st.text_input``.
    """

    key: str
    label: str
    kind: str = TEXT
    help: str = ""
    placeholder: str = ""

    def shown(self, value: Any) -> str:
        """Return a value of the case as the field shows it; empty for None."""
        if value is None:
            return ""
        if self.kind in (TEXT, COUNT):
            return str(value)
        if self.kind == NUMBER:
            return exact(float(value))
        if self.kind == SHARE:
            return f"{exact(100.0 * float(value))} %"
        if self.kind in _FIXED:
            si, shown, written = _FIXED[self.kind]
            return f"{tidy(value, float(from_si(float(value), si, written)))} {shown}"
        system = state.system()
        number = float(display.shown(float(value), self.kind, system))
        return f"{tidy(value, number)} {display.unit_label(self.kind, system)}"

    def written(self, typed: str) -> Any:
        """Return what was typed as it stands in the case file."""
        if self.kind in (TEXT, NUMBER):
            return typed
        if self.kind == COUNT:
            return int(typed) if typed.isdecimal() else typed
        if self.kind == SHARE:
            return typed if "%" in typed or not typed else f"{typed} %"
        if self.kind in _FIXED:
            _, shown, written = _FIXED[self.kind]
            bare = typed.removesuffix(shown).strip()
            return f"{bare} {written}" if _is_number(bare) else typed
        return with_unit(typed, self.kind, state.system())


def tidy(value: Any, number_shown: float) -> str:
    """Return a number as a field shows it: as typed, or in another unit with four digits.

    Parameters
    ----------
    value : Quantity or float
        The value of the case, with the text from which it was read.
    number_shown : float
        The same in the unit shown.
    """
    written = str(getattr(value, "written", None) or "")
    first = re.match(r"[-+−]?[\d.]+(?:[eE][-+]?\d+)?", written.strip())
    typed = None if first is None else float(first[0].replace("−", "-"))
    if typed is not None and math.isclose(typed, number_shown, rel_tol=1e-9, abs_tol=1e-12):
        return exact(number_shown)
    return exact(float(f"{number_shown:.4g}"))


def _is_number(text: str) -> bool:
    try:
        float(text.replace("−", "-"))
    except ValueError:
        return False
    return True


def group(
    name: str,
    path: Path,
    fields: Sequence[Field],
    *,
    columns: int | Sequence[float] = 4,
    draft: dict[str, Any] | None = None,
    needs: Sequence[str] = (),
    then: Callable[[], None] | None = None,
) -> None:
    """Draw the fields of one table of the case.

    Parameters
    ----------
    name : str
        Of the group; its complaint goes by it.
    path : tuple of str or int
        Where the table stands in the case.
    fields : sequence of Field
        Fields that belong together.
    columns : int or sequence of float
        How many stand side by side, or the shares of the width that they take.
    draft : dict, optional
        A new table to take the place of what is there, with what it has besides the fields.
    needs : sequence of str
        Keys without which a new table is not put there yet.
    then : callable, optional
        Called after the case was changed.
    """
    before = {
        one.key: "" if draft is not None else one.shown(value_of((*path, one.key)))
        for one in fields
    }
    widgets = {
        one.key: state.key(
            f"field.{name}.{'.'.join(map(str, path))}.{one.key}.{before[one.key]}.{state.system()}"
        )
        for one in fields
    }

    def take() -> None:
        typed = {key: str(st.session_state.get(widgets[key], before[key])) for key in widgets}
        changed = {one: typed[one.key].strip() for one in fields}
        changed = {one: text for one, text in changed.items() if text != before[one.key]}
        if draft is not None and any(not typed[key].strip() for key in needs):
            return

        def edit(document: dict[str, Any]) -> None:
            table = place(document, path, draft)
            for one, text in changed.items():
                if text:
                    table[one.key] = one.written(text)
                else:
                    table.pop(one.key, None)

        def act() -> None:
            state.change_document(edit)
            if changed and then is not None:
                then()

        state.attempt(name, act)

    count = columns if isinstance(columns, int) else len(columns)
    with st.container(key=state.key(f"fields_{name}_{'_'.join(map(str, path))}")):
        for start in range(0, len(fields), count):
            row = fields[start : start + count]
            places = st.columns(columns, vertical_alignment="bottom")
            for column, one in zip(places, row, strict=False):
                column.text_input(
                    one.label,
                    value=before[one.key],
                    key=widgets[one.key],
                    on_change=take,
                    help=one.help or None,
                    placeholder=one.placeholder or None,
                )
    cautions.complaint(state.complaint(name))


def place(document: dict[str, Any], path: Path, draft: dict[str, Any] | None = None) -> Any:
    """Return the table at a path of a case as plain data; tables on the way are made.

    Parameters
    ----------
    document : dict
        The case as plain data; changed in place.
    path : tuple of str or int
        Where the table stands.
    draft : dict, optional
        Put there first, in place of what was there.
    """
    where: Any = document
    if not path:
        return where
    for step in path[:-1]:
        where = where[step] if isinstance(step, int) else where.setdefault(step, {})
    last = path[-1]
    if draft is not None:
        where[last] = dict(draft)
    elif isinstance(last, str) and where.get(last) is None:
        where[last] = {}
    return where[last]


def _change(path: Path, value: Any, then: Callable[[], None] | None) -> None:
    state.change(path, value)
    if then is not None:
        then()


def switch(
    label: str,
    path: Path,
    *,
    help: str | None = None,
    then: Callable[[], None] | None = None,
) -> None:
    """Draw a switch for a value of the case that is true or false."""
    now = bool(value_of(path))
    name = ".".join(map(str, path))
    widget = state.key(f"switch.{name}.{now}")

    def take() -> None:
        state.attempt(name, _change, path, bool(st.session_state[widget]), then)

    st.toggle(label, value=now, key=widget, on_change=take, help=help)
    cautions.complaint(state.complaint(name))


def choice(
    label: str,
    path: Path,
    options: dict[Any, str],
    *,
    help: str | None = None,
    then: Callable[[], None] | None = None,
) -> None:
    """Draw a choice between values of the case; None among the options takes the value out.

    Parameters
    ----------
    label : str
        What is chosen.
    path : tuple of str or int
        Where it stands in the case.
    options : dict
        Value in the case, and its words.
    help : str, optional
        As for ``st.selectbox``.
    then : callable, optional
        Called after the case was changed.
    """
    now = value_of(path)
    keys = list(options) if now in options else [now, *options]
    name = ".".join(map(str, path))
    widget = state.key(f"choice.{name}.{now}")

    def take() -> None:
        state.attempt(name, _change, path, st.session_state[widget], then)

    st.selectbox(
        label,
        keys,
        index=keys.index(now),
        format_func=lambda key: options.get(key, str(key)),
        key=widget,
        on_change=take,
        help=help,
    )
    cautions.complaint(state.complaint(name))
