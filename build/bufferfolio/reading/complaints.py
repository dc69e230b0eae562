"""What pydantic found wrong, in the project's own words and at its place in the file."""

import re
from collections.abc import Callable, Mapping
from types import UnionType
from typing import Annotated, Any, Final, TypeVar, Union, get_args, get_origin

from pydantic import BaseModel, RootModel, ValidationError
from pydantic_core import ErrorDetails

from bufferfolio.errors import DefinitionError, DefinitionErrors
from bufferfolio.reading.fields import COMPLAINT
from bufferfolio.reading.nodes import Document, Location
from bufferfolio.reading.quantities import closest, suggestion

Model = TypeVar("Model", bound=BaseModel)


def validate(document: Document, model: type[Model]) -> Model:
    """Return the file as a model; raises DefinitionErrors with everything that does not fit."""
    errors = list(document.repeated)
    try:
        result = model.model_validate(document.root.data())
    except ValidationError as problem:
        found = problem.errors(include_url=False)
        misspelt = _misspelt(model, found[:MOST])
        errors += [
            _translated(document, model, details)
            for details in found[:MOST]
            if details["type"] != "missing" or details["loc"] not in misspelt
        ]
        errors = _shortened(document, errors, len(found[MOST:]))
        raise DefinitionErrors(errors) from None
    if errors:
        raise DefinitionErrors(_shortened(document, errors, 0))
    return result


def _shortened(
    document: Document, errors: list[DefinitionError], more: int
) -> list[DefinitionError]:
    """Return the first errors, and how many there are beside them."""
    more += len(errors[MOST:])
    if more:
        place = document.root.place
        problem = f"{more} more errors in this file are not shown"
        last = DefinitionError(place, problem, accepted="a file of the kind that belongs here")
        return [*errors[:MOST], last]
    return errors


def _translated(
    document: Document, model: type[BaseModel], details: ErrorDetails
) -> DefinitionError:
    location: Location = tuple(part for part in details["loc"] if part != "[key]")
    at_key = "[key]" in details["loc"]
    words = WORDS.get(details["type"], _unforeseen)
    problem, accepted = words(details, model, location)
    if details["type"] == "missing":
        place = document.place(location[:-1])
    elif at_key or details["type"] == "extra_forbidden":
        place = document.key_place(location)
    else:
        place = document.place(location)
    return document.error(place, problem, accepted)


def _misspelt(model: type[BaseModel], found: list[ErrorDetails]) -> set[Location]:
    """Return the keys that unknown keys come close to: those are not missing as well."""
    meant = set()
    for details in found:
        if details["type"] == "extra_forbidden":
            *holder, name = details["loc"]
            close = closest(str(name), list(_shape_at(model, tuple(holder))))
            meant.add((*holder, close or name))
    return meant


def subject(location: Location) -> str:
    """Return what a complaint calls the value: its key, or for `value` and items what holds it."""
    if location and isinstance(location[-1], int):
        holder = f" of {location[-2]}" if len(location) > 1 else ""
        return f"entry {location[-1] + 1}{holder}"
    names = [part for part in location if isinstance(part, str)]
    while len(names) > 1 and names[-1] == "value":
        names.pop()
    return names[-1] if names else "the file"


def _own_words(details: ErrorDetails, _: type[BaseModel], location: Location) -> tuple[str, str]:
    context = details["ctx"]
    name = "the key" if "[key]" in details["loc"] else subject(location)
    return f"{name} {context['problem']}", str(context["accepted"])


def _missing(_: ErrorDetails, model: type[BaseModel], location: Location) -> tuple[str, str]:
    owner = _shape_at(model, location[:-1])
    description = owner[str(location[-1])] if owner else ""
    holder = subject(location[:-1])
    return f"{holder} lacks the key {location[-1]!r}", f"{location[-1]}: {description}"


def _unknown(_: ErrorDetails, model: type[BaseModel], location: Location) -> tuple[str, str]:
    known = list(_shape_at(model, location[:-1]))
    if NUMBER_END.fullmatch(str(location[-1])):
        return f"a comma splits a number before {location[-1]!r}", "a decimal point"
    close = suggestion(str(location[-1]), known)
    return f"unknown key {location[-1]!r}{close}", ", ".join(known)


def _mapping_needed(
    details: ErrorDetails, model: type[BaseModel], location: Location
) -> tuple[str, str]:
    known = ", ".join(_shape_at(model, location))
    accepted = f"a mapping with the keys {known}" if known else "a mapping: keys with values"
    return f"{subject(location)} should be a mapping, not {_kind(details['input'])}", accepted


def _list_needed(details: ErrorDetails, _: type[BaseModel], location: Location) -> tuple[str, str]:
    found = _kind(details["input"])
    return f"{subject(location)} should be a list, not {found}", "a list: [first, second]"


def _choice(details: ErrorDetails, model: type[BaseModel], location: Location) -> tuple[str, str]:
    choices = _choices(_annotation_at(model, location))
    given = details["input"]
    if not isinstance(given, str):
        return f"{subject(location)} should be a single value, not {_kind(given)}", choices
    if not given:
        return f"{subject(location)} is empty", choices
    close = suggestion(given, choices.split(", "))
    return f"{subject(location)} has the unknown value {str(given)!r}{close}", choices


def _unforeseen(details: ErrorDetails, _: type[BaseModel], location: Location) -> tuple[str, str]:
    return f"{subject(location)} does not fit", details["msg"]


def _kind(value: object) -> str:
    if isinstance(value, dict):
        return "a mapping"
    if isinstance(value, list):
        return "a list"
    return "a single value" if value else "empty"


def _choices(annotation: Any) -> str:
    inner = getattr(annotation, "__value__", annotation)
    return ", ".join(str(choice) for choice in get_args(inner))


def _annotation_at(model: Any, location: Location) -> Any:
    """Follow a location through the models' annotations to what may stand there."""
    annotation: Any = model
    for part in location:
        annotation = _bare(annotation)
        if isinstance(annotation, type) and issubclass(annotation, RootModel):
            annotation = annotation.model_fields["root"].annotation
        annotation = _inner(_bare(annotation), part)
    return _bare(annotation)


def _inner(annotation: Any, part: int | str) -> Any:
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        for name, field in annotation.model_fields.items():
            if part == (field.alias or name):
                return field.annotation
        return None
    arguments = get_args(annotation)
    return arguments[-1] if arguments else None


def _bare(annotation: Any) -> Any:
    while True:
        origin = get_origin(annotation)
        if origin is Annotated:
            annotation = get_args(annotation)[0]
        elif origin in (Union, UnionType):
            annotation = next(part for part in get_args(annotation) if part is not type(None))
        else:
            return annotation


def _shape_at(model: type[BaseModel], location: Location) -> dict[str, str]:
    """Return the keys of the mapping at a location, with their descriptions."""
    shape = _annotation_at(model, location)
    if not isinstance(shape, type) or not issubclass(shape, BaseModel):
        return {}
    if issubclass(shape, RootModel):
        return {}
    return {
        field.alias or name: field.description or "" for name, field in shape.model_fields.items()
    }


MOST: Final = 100  # errors of one file that are shown
NUMBER_END: Final = re.compile(r"[0-9]+( .*)?")
Words = Callable[[ErrorDetails, type[BaseModel], Location], tuple[str, str]]

# What pydantic calls a finding, and who words it. Our own validators word theirs themselves.
WORDS: Final[Mapping[str, Words]] = {
    COMPLAINT: _own_words,
    "missing": _missing,
    "extra_forbidden": _unknown,
    "model_type": _mapping_needed,
    "dict_type": _mapping_needed,
    "list_type": _list_needed,
    "literal_error": _choice,
}
