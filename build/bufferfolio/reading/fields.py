"""The kinds of field that the models of definition files are made of."""

import re
from collections.abc import Callable, Sequence
from typing import Annotated, Final, TypeAlias, TypeVar

from pydantic import AfterValidator, BeforeValidator, PlainValidator, WithJsonSchema
from pydantic_core import PydanticCustomError

from bufferfolio.reading import quantities
from bufferfolio.reading.nodes import Glued, Quoted, other_meaning
from bufferfolio.reading.quantities import Dimension, Measured, Unfit, parse_quantity

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
    if isinstance(text, Glued) and STRICT_TEXT:
        accepted = "a blank after each comma, or quotation marks around text that holds one"
        raise Unfit(f"was split off by a comma: {str(text)!r}", accepted)
    meaning = None if isinstance(text, Quoted) else other_meaning(text)
    if meaning is not None and STRICT_TEXT:
        quoted = f'the same in quotation marks: "{text}"'
        raise Unfit(f"is {meaning} to YAML, not text: {text!r}", quoted)
    return _one_line(text)


def _number(text: str) -> float:
    if isinstance(text, Quoted) and not quantities.DECIMAL_COMMA.match(text):
        accepted = "a number without quotation marks"
        raise Unfit(f"is text in quotation marks: {str(text)!r}", accepted)
    return quantities.parse_number(text)


def _bounded(low: float, high: float, limits: str) -> Callable[[float], float]:
    def check(value: float) -> float:
        if not low <= value <= high:
            raise unfit(f"is out of bounds: {value:g}", limits)
        return value

    return check


def _quantity(dimension: Dimension) -> Callable[[str], float]:
    return lambda text: parse_quantity(text, dimension).value


def _amount(text: str) -> Measured:
    measured = parse_quantity(text, *quantities.AMOUNTS)
    return _positive(measured, text)


def _volume_or_mass(text: str) -> Measured:
    return _positive(parse_quantity(text, quantities.VOLUME, quantities.MASS), text)


def _volume(text: str) -> Measured:
    return _positive(parse_quantity(text, quantities.VOLUME), text)


def _molarity(text: str) -> Measured:
    return _positive(parse_quantity(text, quantities.MOLARITY), text)


def _strength(text: str) -> Measured:
    return _positive(parse_quantity(text, quantities.PERCENT, quantities.MOLARITY), text)


def _positive(measured: Measured, text: str) -> Measured:
    if measured.value < 0:
        raise Unfit(f"is negative: {text!r}", "an amount above zero")
    if measured.value == 0:
        raise Unfit(f"is zero: {text!r}", "an amount above zero")
    return measured


def _share(text: str) -> float:
    value = parse_quantity(text, quantities.PERCENT).value
    if not 0 < value <= 1:
        raise Unfit(f"is out of bounds: {text!r}", "more than 0 % and at most 100 %")
    return value


def none_if_not_stated(value: object) -> object:
    """Turn the words `not stated` into None, and refuse an empty value."""
    if isinstance(value, str) and value == NOT_STATED:
        return None
    if isinstance(value, str) and not value.strip():
        raise unfit("is empty", f"a value, or the words `{NOT_STATED}`")
    return value


def _or_not_stated(text: str) -> float | None:
    if text == NOT_STATED:
        return None
    try:
        value = _number(text)
    except Unfit as problem:
        raise Unfit(problem.problem, f"{problem.accepted}, or `{NOT_STATED}`") from None
    if value < 0:
        raise Unfit(f"is negative: {text!r}", f"a number of zero or more, or `{NOT_STATED}`")
    return value


def _ascending(ends: Sequence[float]) -> tuple[float, float]:
    if len(ends) != 2:
        count = "1 end" if len(ends) == 1 else f"{len(ends)} ends"
        raise unfit(f"has {count}", "two: [lowest, highest]; decimal points, no decimal commas")
    low, high = ends
    if low >= high:
        raise unfit("is upside down: its first end is not below its second", "[lowest, highest]")
    return low, high


def _quantity_schema(*dimensions: Dimension) -> dict[str, object]:
    return {
        "type": "string",
        "pattern": quantities.pattern(*dimensions),
        "examples": [dimension.example for dimension in dimensions],
    }


def _pair_schema(item: dict[str, object]) -> dict[str, object]:
    return {"type": "array", "items": item, "minItems": 2, "maxItems": 2}


def _text_schema(**more: object) -> dict[str, object]:
    return {"type": "string", "minLength": 1, **more}


STRICT_TEXT = True  # TEMPORARY, see the end of the work
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
Number: TypeAlias = Annotated[
    float, PlainValidator(checked(_number)), WithJsonSchema({"type": "number"})
]
Positive: TypeAlias = Annotated[
    float,
    PlainValidator(checked(_number)),
    AfterValidator(_bounded(1e-9, 1e6, "a number above zero")),
    WithJsonSchema({"type": "number", "exclusiveMinimum": 0}),
]
PKValue: TypeAlias = Annotated[
    float,
    PlainValidator(checked(_number)),
    AfterValidator(_bounded(-30.0, 50.0, "a pK from -30 to 50")),
    WithJsonSchema({"type": "number", "minimum": -30, "maximum": 50}),
]
PHValue: TypeAlias = Annotated[
    float,
    PlainValidator(checked(_number)),
    AfterValidator(_bounded(-2.0, 16.0, "a pH from -2 to 16")),
    WithJsonSchema({"type": "number", "minimum": -2, "maximum": 16}),
]
Uncertainty: TypeAlias = Annotated[
    float | None,
    PlainValidator(checked(_or_not_stated)),
    WithJsonSchema({"anyOf": [{"type": "number", "minimum": 0}, {"const": NOT_STATED}]}),
]
Temperature: TypeAlias = Annotated[
    float,
    PlainValidator(checked(_quantity(quantities.TEMPERATURE))),
    WithJsonSchema(_quantity_schema(quantities.TEMPERATURE)),
]
WaterTemperature: TypeAlias = Annotated[
    float,
    PlainValidator(checked(_quantity(quantities.WATER_TEMPERATURE))),
    WithJsonSchema(_quantity_schema(quantities.WATER_TEMPERATURE)),
]
Enthalpy: TypeAlias = Annotated[
    float,
    PlainValidator(checked(_quantity(quantities.ENTHALPY))),
    WithJsonSchema(_quantity_schema(quantities.ENTHALPY)),
]
HeatCapacity: TypeAlias = Annotated[
    float,
    PlainValidator(checked(_quantity(quantities.HEAT_CAPACITY))),
    WithJsonSchema(_quantity_schema(quantities.HEAT_CAPACITY)),
]
Density: TypeAlias = Annotated[
    float,
    PlainValidator(checked(_quantity(quantities.DENSITY))),
    WithJsonSchema(_quantity_schema(quantities.DENSITY)),
]
Epsilon: TypeAlias = Annotated[
    float,
    PlainValidator(checked(_quantity(quantities.INTERACTION))),
    WithJsonSchema(_quantity_schema(quantities.INTERACTION)),
]
Share: TypeAlias = Annotated[
    float,
    PlainValidator(checked(_share)),
    WithJsonSchema(_quantity_schema(quantities.PERCENT)),
]
Strength: TypeAlias = Annotated[
    Measured,
    PlainValidator(checked(_strength)),
    WithJsonSchema(_quantity_schema(quantities.PERCENT, quantities.MOLARITY)),
]
Molarity: TypeAlias = Annotated[
    Measured,
    PlainValidator(checked(_molarity)),
    WithJsonSchema(_quantity_schema(quantities.MOLARITY)),
]
Amount: TypeAlias = Annotated[
    Measured,
    PlainValidator(checked(_amount)),
    WithJsonSchema(_quantity_schema(*quantities.AMOUNTS)),
]
Volume: TypeAlias = Annotated[
    Measured,
    PlainValidator(checked(_volume)),
    WithJsonSchema(_quantity_schema(quantities.VOLUME)),
]
VolumeOrMass: TypeAlias = Annotated[
    Measured,
    PlainValidator(checked(_volume_or_mass)),
    WithJsonSchema(_quantity_schema(quantities.VOLUME, quantities.MASS)),
]
TemperatureRange: TypeAlias = Annotated[
    list[Temperature],
    AfterValidator(_ascending),
    WithJsonSchema(_pair_schema(_quantity_schema(quantities.TEMPERATURE))),
]
WaterTemperatureRange: TypeAlias = Annotated[
    list[WaterTemperature],
    AfterValidator(_ascending),
    WithJsonSchema(_pair_schema(_quantity_schema(quantities.WATER_TEMPERATURE))),
]
PHRange: TypeAlias = Annotated[
    list[PHValue],
    AfterValidator(_ascending),
    WithJsonSchema(_pair_schema({"type": "number", "minimum": -2, "maximum": 16})),
]
NotStatedOr = BeforeValidator(none_if_not_stated)
