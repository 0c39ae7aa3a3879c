"""What users typed comes out as text."""

from __future__ import annotations

from rheo.report.text import breakable, clean, for_pdf, one_line


def test_controls_are_shown_by_their_code() -> None:
    assert clean("a\x00b\x1bc\ud800d\u202ee\ufffe") == (
        "a[U+0000]b[U+001B]c[U+D800]d[U+202E]e[U+FFFE]"
    )


def test_line_ends_and_tabs_become_plain() -> None:
    assert clean("a\r\nb\rc\td\u2028e") == "a\nb\nc    d\ne"


def test_letters_of_other_scripts_and_emoji_are_kept() -> None:
    text = "שלום مرحبا 日本語 😀 γ̇ 10⁻³"
    assert clean(text) == text


def test_one_line_is_cut_with_a_sign() -> None:
    assert one_line("a\nb   c") == "a b c"
    assert one_line("x" * 50, 10) == "xxxxxxxxx…"


def test_long_words_break_and_keep_every_letter() -> None:
    text = "a short one, then " + "y" * 100
    broken = breakable(text)
    assert broken.replace("\u200b", "") == text
    assert max(len(piece) for piece in broken.replace("\u200b", " ").split()) == 20
    assert breakable("ordinary words stay") == "ordinary words stay"


def test_letters_that_the_pdf_lacks_stand_by_their_code() -> None:
    assert (
        for_pdf("γ̇ [1/s] Δp 10⁻³ 45\u202f000 שלום مرحبا")
        == "γ̇ [1/s] Δp 10⁻³ 45\u202f000 שלום مرحبا"
    )
    assert for_pdf("ok 😀 日") == "ok [U+1F600] [U+65E5]"
