"""What a sentence for users must look like."""

from __future__ import annotations

import re

from rheo.errors import Caution

_SPELT_IN_CAPITALS = {"ISO", "API", "NPSH"}


def odd_words(text: str) -> list[str]:
    """Return the words of three letters or more with capitals where running text has none."""
    words = re.findall(r"[A-Za-z]{3,}", text)
    return [
        word
        for word in words
        if word not in _SPELT_IN_CAPITALS and not re.fullmatch("[A-Z]?[a-z]+", word)
    ]


def check_caution(caution: Caution, place: str) -> None:
    """Require whole sentences in plain spelling, and the place that the advice refers to."""
    assert caution.place == place
    assert re.fullmatch("[a-z]+(-[a-z]+)*", caution.code)
    for text in (caution.sentence, caution.advice):
        assert re.match("[A-Z0-9]", text), text
        assert text.endswith("."), text
        assert odd_words(text) == [], text
