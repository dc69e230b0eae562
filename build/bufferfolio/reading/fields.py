"""How a field is checked, and the kinds of field that hold text."""

import re
from collections.abc import Callable
from typing import Annotated, Final, TypeAlias, TypeVar

from pydantic import BeforeValidator, PlainValidator, WithJsonSchema
from pydantic_core import PydanticCustomError

from bufferfolio.reading.nodes import Glued, Quoted, other_meaning
from bufferfolio.reading.quantities import Unfit

Result = TypeVar("Result")


def unfit(problem: str, accepted: str) -> PydanticCustomError:
    """Return the exception that makes pydantic report a problem at the field's place."""
    # The texts travel as context, so that braces in them are not taken for a template.
    return PydanticCustomError(COMPLAINT, "{problem}", {"problem": problem, "accepted": accepted})


def checked(parse: Callable[[str], Result]) -> Callable[[object], Result]:
    """Return a validator that hands text to `parse` and reports what it finds unfit."""

    def validate(value: object) -> Result:
        if not isinstance(value, str):
            kind = "a list" if isinstance(value, list) else "a mapping"
            raise unfit(f"should be a single value, not {kind}", "one value")
        if not value.strip():
            raise unfit("is empty", "a value, or no such key where it is optional")
        try:
            return parse(value)
        except Unfit as problem:
            raise unfit(problem.problem, problem.accepted) from None

    return validate


def matching(expression: str, accepted: str) -> Callable[[str], str]:
    """Return a parser of text that fits a regular expression."""
    compiled = re.compile(expression)

    def parse(text: str) -> str:
        if not compiled.fullmatch(text):
            raise Unfit(f"is not of the accepted form: {text!r}", accepted)
        return text

    return parse


def _one_line(text: str) -> str:
    return " ".join(text.split())


def _text(text: str) -> str:
    if isinstance(text, Glued):
        accepted = "a blank after each comma, or quotation marks around text that holds one"
        raise Unfit(f"was split off by a comma: {str(text)!r}", accepted)
    meaning = None if isinstance(text, Quoted) else other_meaning(text)
    if meaning is not None:
        quoted = f'the same in quotation marks: "{text}"'
        raise Unfit(f"is {meaning} to YAML, not text: {text!r}", quoted)
    return _one_line(text)


def none_if_not_stated(value: object) -> object:
    """Turn the words `not stated` into None, and refuse an empty value."""
    if isinstance(value, str) and value == NOT_STATED:
        return None
    if isinstance(value, str) and not value.strip():
        raise unfit("is empty", f"a value, or the words `{NOT_STATED}`")
    return value


def _text_schema(**more: object) -> dict[str, object]:
    return {"type": "string", "minLength": 1, **more}


COMPLAINT: Final = "definition"  # the type of pydantic error that carries our own words
NOT_STATED: Final = "not stated"
KEY: Final = r"[a-z0-9]+(?:-[a-z0-9]+)*"
KEY_RULE: Final = "lower-case letters, digits and single hyphens, such as sodium-chloride"
HAZARD: Final = r"(?:EUH\d{3}[A-Z]?|H[234]\d{2}[A-Za-z]{0,2}(?:\+H[234]\d{2}[A-Za-z]{0,2})*)"
HAZARD_RULE: Final = "a GHS hazard statement such as H314 or EUH031"
DANGER: Final = r"[a-z][a-z -]* with [a-z0-9-]+"
DANGER_RULE: Final = "what it gives off and with what: 'chlorine with acid', 'ammonia with base'"
DOI: Final = r"10\.\d{4,9}/\S+"
CAS: Final = r"\d{2,7}-\d{2}-\d"

Text: TypeAlias = Annotated[str, PlainValidator(checked(_text)), WithJsonSchema(_text_schema())]
# Plain YAML makes 3 a number in an editor's eyes; a revision may be written so.
Revision: TypeAlias = Annotated[
    str,
    PlainValidator(checked(_one_line)),
    WithJsonSchema({"anyOf": [_text_schema(), {"type": "number"}]}),
]
Key: TypeAlias = Annotated[
    str,
    PlainValidator(checked(matching(KEY, KEY_RULE))),
    WithJsonSchema(_text_schema(pattern=f"^{KEY}$")),
]
Doi: TypeAlias = Annotated[
    str,
    PlainValidator(checked(matching(DOI, "a DOI without https://doi.org/: 10.1063/1.1416902"))),
    WithJsonSchema(_text_schema(pattern=f"^{DOI}$")),
]
CasNumber: TypeAlias = Annotated[
    str,
    PlainValidator(checked(matching(CAS, "a CAS number such as 7647-14-5"))),
    WithJsonSchema(_text_schema(pattern=f"^{CAS}$")),
]
Hazard: TypeAlias = Annotated[
    str,
    PlainValidator(checked(matching(HAZARD, HAZARD_RULE))),
    WithJsonSchema(_text_schema(pattern=f"^{HAZARD}$")),
]
Danger: TypeAlias = Annotated[
    str,
    PlainValidator(checked(matching(DANGER, DANGER_RULE))),
    WithJsonSchema(_text_schema(pattern=f"^{DANGER}$")),
]
NotStatedOr = BeforeValidator(none_if_not_stated)
