"""Cautions beside the number that they belong to, and the safety wording below pressures.

``cautions.show(...)`` draws them; call it right under the number, picture or table concerned.
`ui.places` says which of a result's belong where.
``cautions.safety("pressure", "start-up")`` draws the safety sentences; every stop that shows a
pressure, a hold time or a start-up value ends with it. Keys: `rheo.line.safety.SAFETY_SENTENCES`.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import replace

import streamlit as st

from rheo.errors import Caution
from rheo.line.safety import SAFETY_SENTENCES
from rheo.report.restate import restated
from ui import state, style

# Names of parameters as they stand in files, such as time_constant.
_KEYS_IN_CODE = re.compile(r"\b[a-z]+(?:_[a-z]+)+\b")


def show(cautions: Iterable[Caution]) -> None:
    """Draw Cautions: what was found, and what to do about it."""
    drawn = "".join(html(caution) for caution in merged(cautions))
    if drawn:
        st.html(drawn)


def merged(cautions: Iterable[Caution]) -> list[Caution]:
    """Return Cautions with those about several parameters of one model said in one.

    A parameter is named in words, and once: the model alone is left of the place.
    """
    found: dict[tuple[str, ...], Caution] = {}
    for number, one in enumerate(cautions):
        model, _, parameter = one.place.partition(", ")
        if not parameter or not one.sentence.startswith(parameter):
            found[(str(number),)] = one
            continue
        said = one.sentence
        for word in _KEYS_IN_CODE.findall(said):
            said = said.replace(word, word.replace("_", " "))
        key = (one.code, model, one.advice)
        if key in found:
            before = found[key].sentence.rstrip(".")
            found[key] = replace(found[key], sentence=f"{before}; {said}")
        else:
            found[key] = replace(one, sentence=said, place=model)
    return list(found.values())


def html(caution: Caution) -> str:
    """Return one Caution as HTML."""
    # Places in code form are for JSON; the sentence names what it is about.
    coded = "_" in caution.place
    where = f"{style.escape(caution.place, 60)}: " if caution.place and not coded else ""
    sentence, advice = (restated(one, state.system()) for one in (caution.sentence, caution.advice))
    return (
        f'<div class="rheo-caution" role="note">{where}{style.escape(sentence)} '
        f'<span class="advice">{style.escape(advice)}</span></div>'
    )


def complaint(sentence: str) -> None:
    """Draw what is wrong with an entry, under its widget; nothing for an empty text."""
    if sentence:
        st.html(f'<div class="rheo-caution bad-edge" role="alert">{style.escape(sentence)}</div>')


def note(sentence: str) -> None:
    """Draw something to keep in mind that is no Caution of the calculation."""
    st.html(f'<div class="rheo-caution" role="note">{style.escape(sentence)}</div>')


def safety(*keys: str) -> None:
    """Draw safety sentences by their keys, and the general one after them."""
    wanted = dict.fromkeys((*keys, "general"))
    text = " ".join(style.escape(SAFETY_SENTENCES[key]) for key in wanted)
    st.html(f'<div class="rheo-safety"><b>Safety.</b> {text}</div>')
