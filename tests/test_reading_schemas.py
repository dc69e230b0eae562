"""The shipped JSON Schemas are those of the models, and agree with the reader about files."""

import json
from pathlib import Path

import jsonschema
import pytest
import yaml

from bufferfolio.reading.schemas import schema_texts

SYSTEMS = Path(__file__).parents[1] / "systems"
BROKEN = Path(__file__).parent / "broken"
HOMES = {"family": "families", "reagent": "reagents", "formulation": "formulations"}

# Broken files that an editor has to mark while they are typed: their shape is wrong, not their
# chemistry and not their references.
SHAPELESS = [
    "family-bad-number",
    "family-quoted-number",
    "family-unknown-unit",
    "family-unknown-how-known",
    "family-uncertainty-word",
    "family-pk-out-of-bounds",
    "formulation-empty-value",
    "formulation-list-at-top",
    "formulation-list-for-mapping",
    "formulation-mapping-for-text",
    "formulation-missing-key",
    "formulation-no-unit",
    "formulation-unknown-key",
    "formulation-unknown-model",
    "formulation-unknown-unit",
    "formulation-use-one-end",
    "formulation-yaml-truth",
    "reagent-bad-danger",
    "reagent-bad-hazard",
    "reagent-negative-count",
]


def validator(kind: str) -> jsonschema.Draft202012Validator:
    schema = json.loads(schema_texts()[f"{kind}.schema.json"])
    jsonschema.Draft202012Validator.check_schema(schema)
    return jsonschema.Draft202012Validator(schema)


def data(path: Path) -> object:
    return yaml.safe_load(path.read_text(encoding="utf-8"))


@pytest.mark.parametrize("name", sorted(schema_texts()))
def test_shipped_schema_is_the_generated_one(name: str) -> None:
    """After a change of the models, write them anew with `schemas.write_schemas`."""
    assert (SYSTEMS / name).read_text(encoding="utf-8") == schema_texts()[name]


@pytest.mark.parametrize("kind", HOMES)
def test_schema_accepts_every_shipped_file(kind: str) -> None:
    check = validator(kind)
    paths = sorted((SYSTEMS / HOMES[kind]).glob("*.yaml"))
    assert paths
    for path in paths:
        assert [error.message for error in check.iter_errors(data(path))] == [], path.name


@pytest.mark.parametrize("case", SHAPELESS)
def test_schema_refuses_what_the_reader_refuses(case: str) -> None:
    check = validator(case.split("-")[0])
    assert not check.is_valid(data(BROKEN / f"{case}.yaml"))


@pytest.mark.parametrize("kind", HOMES)
def test_every_key_is_described(kind: str) -> None:
    schema = json.loads(schema_texts()[f"{kind}.schema.json"])
    for part in (schema, *schema.get("$defs", {}).values()):
        for key, field in part["properties"].items():
            assert field.get("description"), key
