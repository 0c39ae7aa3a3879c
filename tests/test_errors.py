"""Sentences of errors and Cautions hold numbers as one reads them."""

import json

import pytest

import rheo
from rheo.case import load_case
from rheo.errors import Caution, InputError, without_exponents


@pytest.mark.parametrize(
    ("before", "after"),
    [
        ("up to 1.33e+03 1/s", "up to 1330 1/s"),
        ("between 0.1 and 1e+04.", "between 0.1 and 10\u202f000."),
        ("from -8.69e+03 to 3.89e+04 J/mol", "from -8690 to 38\u202f900 J/mol"),
        ("(chance 2.4e-04)", "(chance 0.00024)"),
        ("(chance 1.7e-05)", "(chance 1.7 × 10⁻⁵)"),
        ("between 1e-09 and 1e+09", "between 10⁻⁹ and 10⁹"),
        ("1e-3 to 2e5", "0.001 to 200\u202f000"),
        # What stands in quotes is the user's, and a word is no number.
        ("found '1e400' in lot1e+03", "found '1e400' in lot1e+03"),
        ("1.2.3e+03", "1.2.3e+03"),
    ],
)
def test_numbers_are_written_out(before, after):
    assert without_exponents(before) == after
    assert without_exponents(after) == after
    assert InputError(before, "there").sentence == after
    assert str(InputError(before, "there")) == f"there: {after}"
    caution = Caution("code", before, before, "there")
    assert (caution.sentence, caution.advice) == (after, after)


def sentences(value, key=""):
    if isinstance(value, dict):
        return [one for name, inner in value.items() for one in sentences(inner, name)]
    if isinstance(value, list):
        return [one for inner in value for one in sentences(inner, key)]
    return [value] if isinstance(value, str) and key in {"sentence", "advice", "reason"} else []


@pytest.mark.parametrize("name", ["sauce", "gum", "thickener"])
def test_no_sentence_of_a_result_has_an_exponent(name, request):
    folder = request.config.rootpath / "sample_data"
    result = rheo.run_case(load_case(folder / f"{name}.toml"))
    found = sentences(json.loads(json.dumps(result.as_dict())))
    assert len(found) > 10
    assert [one for one in found if without_exponents(one) != one] == []
