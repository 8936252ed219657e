"""review.json against its schema and against the review."""

from __future__ import annotations

import json
from datetime import datetime
from typing import Any

import jsonschema
import pytest

from panelview.assess.review import Review
from panelview.output.document import chunks
from panelview.output.rows import STEP_COLUMNS
from panelview.output.text import CAUTION
from panelview.resource_files import resources

Document = dict[str, Any]


def _text(review: Review, when: datetime | None) -> str:
    return "".join(chunks(review, when=when, files=["review.json"]))


def _refuse(constant: str) -> None:
    raise AssertionError(f"{constant} is no JSON")


@pytest.fixture(scope="session")
def document(red_cells: Review, when: datetime) -> Document:
    return dict(json.loads(_text(red_cells, when), parse_constant=_refuse))


@pytest.fixture(scope="session")
def schema() -> Document:
    text = (resources() / "schemas" / "review.schema.json").read_text(encoding="utf-8")
    return dict(json.loads(text))


def test_the_schema_is_a_schema(schema: Document) -> None:
    jsonschema.Draft202012Validator.check_schema(schema)


def test_the_document_meets_its_schema(document: Document, schema: Document) -> None:
    jsonschema.Draft202012Validator(schema).validate(document)


def test_a_review_without_controls_meets_the_schema(plasma: Review, schema: Document) -> None:
    document = json.loads(_text(plasma, None), parse_constant=_refuse)
    jsonschema.Draft202012Validator(schema).validate(document)
    assert document["written"] is None


@pytest.mark.parametrize("key", ["caution", "steps", "inputs", "reference"])
def test_the_schema_refuses_a_document_that_lacks_a_key(
    document: Document, schema: Document, key: str
) -> None:
    lacking = {k: v for k, v in document.items() if k != key}
    assert not jsonschema.Draft202012Validator(schema).is_valid(lacking)


def test_the_schema_names_every_column_of_the_steps(document: Document, schema: Document) -> None:
    described = schema["properties"]["steps"]["items"]["properties"]
    assert list(described) == list(document["steps"][0])
    assert list(described)[: len(STEP_COLUMNS)] == list(STEP_COLUMNS)


def test_versions_and_hashes_are_in_it(document: Document, red_cells: Review) -> None:
    assert document["program"]["version"] == red_cells.program_version
    assert document["catalogue"]["sha256"] == red_cells.catalogue.sha256
    assert document["constants"]["version"] == red_cells.catalogue.constants.version
    assert document["inputs"][0]["sha256"] == red_cells.panel.sources[0].sha256
    assert document["caution"] == CAUTION


def test_every_condition_has_its_origin(document: Document) -> None:
    for specimen in document["specimens"]:
        for condition in specimen["conditions"].values():
            assert condition["origin"] == "default of the matrix"
            assert condition["sd"] > 0


def test_an_open_side_is_told_in_words_and_the_unknown_is_null(document: Document) -> None:
    row = next(
        r for r in document["steps"] if r["specimen"] == "P3 <ß & µ>" and r["step"] == "pyruvate_kinase"
    )
    assert row["delta_g_kj_per_mol"] is None
    assert row["delta_g_lower95"] == "-inf"


def test_the_same_review_gives_the_same_text(red_cells: Review, when: datetime) -> None:
    assert _text(red_cells, when) == _text(red_cells, when)


def test_the_document_is_one_row_a_line(red_cells: Review, when: datetime) -> None:
    lines = _text(red_cells, when).splitlines()
    assert sum(line.startswith('{"specimen": "P1-a", "step"') for line in lines) >= len(
        red_cells.catalogue.steps
    )
