"""Older schemas are brought up step by step; unknown ones are refused plainly."""

import pytest

from rheo.case.upgrade import SCHEMA_VERSION, UPGRADES, upgraded
from rheo.errors import CaseError


def test_the_current_schema_is_left_as_it_is():
    document = {"schema": SCHEMA_VERSION, "title": "x"}
    assert upgraded(document) is document


def test_steps_follow_one_another_and_the_document_given_is_not_changed():
    def rename(document):
        document["line"] = document.pop("pipeline")
        return document

    def name(document):
        return {**document, "title": f"{document['title']} (from 2)"}

    old = {"schema": 1, "title": "x", "pipeline": {}}
    new = upgraded(old, current=3, upgrades={1: rename, 2: name})
    assert new == {"schema": 3, "title": "x (from 2)", "line": {}}
    assert old == {"schema": 1, "title": "x", "pipeline": {}}
    assert upgraded({"schema": 2, "title": "y"}, 3, {1: rename, 2: name})["title"] == "y (from 2)"


def test_every_step_of_this_program_leads_to_the_current_schema():
    assert sorted(UPGRADES) == list(range(SCHEMA_VERSION - len(UPGRADES), SCHEMA_VERSION))


@pytest.mark.parametrize(
    ("document", "sentence"),
    [
        ({}, "key 'schema' is missing; write 'schema = 1' at the top"),
        ({"schema": 0}, "schema is 0; this program reads 1"),
        ({"schema": 2}, "reads 1; the file was made by a newer version of this program"),
        ({"schema": True}, "schema is true; this program reads 1"),
        ({"schema": 1.0}, "schema is 1.0; this program reads 1"),
        ({"schema": "one"}, "schema is 'one'; this program reads 1"),
        ({"schema": [1]}, "schema is a list; this program reads 1"),
    ],
)
def test_unknown_schemas(document, sentence):
    with pytest.raises(CaseError) as caught:
        upgraded(document)
    assert sentence in str(caught.value)
