"""JSON Schemas of the definition files, so that an editor completes and checks them."""

import json
from collections.abc import Mapping
from pathlib import Path
from typing import Any, Final

from pydantic import BaseModel
from pydantic.json_schema import GenerateJsonSchema, JsonSchemaValue
from pydantic_core import core_schema

from bufferfolio.reading.models import FamilyShape, FormulationShape, ReagentShape


class _Schema(GenerateJsonSchema):
    """Leaves out what a file cannot hold: an empty value, and defaults nobody wrote."""

    def nullable_schema(self, schema: core_schema.NullableSchema) -> JsonSchemaValue:
        return self.generate_inner(schema["schema"])

    def default_schema(self, schema: core_schema.WithDefaultSchema) -> JsonSchemaValue:
        return self.generate_inner(schema["schema"])


def schema_texts() -> dict[str, str]:
    """Return the text of each schema by its file name in the folder of definitions."""
    return {f"{kind}.schema.json": _text(kind, model) for kind, model in SCHEMAS.items()}


def write_schemas(folder: Path) -> None:
    """Write the schemas into a folder of definitions, where files there refer to them."""
    for name, text in schema_texts().items():
        (folder / name).write_text(text, encoding="utf-8", newline="\n")


def _text(kind: str, model: type[BaseModel]) -> str:
    schema: dict[str, Any] = model.model_json_schema(by_alias=True, schema_generator=_Schema)
    for part in (schema, *schema.get("$defs", {}).values()):
        part.pop("title", None)
        for field in part["properties"].values():
            field.pop("title", None)
    head = {"$schema": "https://json-schema.org/draft/2020-12/schema", "title": kind}
    return json.dumps({**head, **schema}, indent=2, ensure_ascii=False, sort_keys=True) + "\n"


SCHEMAS: Final[Mapping[str, type[BaseModel]]] = {
    "family": FamilyShape,
    "reagent": ReagentShape,
    "formulation": FormulationShape,
}
