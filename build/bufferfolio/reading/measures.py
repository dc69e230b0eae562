"""The kinds of field that hold numbers and quantities."""

from collections.abc import Callable, Sequence
from typing import Annotated, TypeAlias

from pydantic import AfterValidator, PlainValidator, WithJsonSchema

from bufferfolio.reading import quantities
from bufferfolio.reading.fields import NOT_STATED, checked, unfit
from bufferfolio.reading.nodes import Quoted
from bufferfolio.reading.quantities import Dimension, Measured, Unfit, parse_quantity


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


def _more_than_nothing(*dimensions: Dimension) -> Callable[[str], Measured]:
    def parse(text: str) -> Measured:
        measured = parse_quantity(text, *dimensions)
        if measured.value <= 0:
            kind = "negative" if measured.value < 0 else "zero"
            raise Unfit(f"is {kind}: {text!r}", "an amount above zero")
        return measured

    return parse


def _share(text: str) -> float:
    value = parse_quantity(text, quantities.PERCENT).value
    if not 0 < value <= 1:
        raise Unfit(f"is out of bounds: {text!r}", "more than 0 % and at most 100 %")
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
TemperatureDifference: TypeAlias = Annotated[
    float,
    PlainValidator(checked(_quantity(quantities.TEMPERATURE_DIFFERENCE))),
    WithJsonSchema(_quantity_schema(quantities.TEMPERATURE_DIFFERENCE)),
]
PHDifference: TypeAlias = Annotated[
    float,
    PlainValidator(checked(_number)),
    AfterValidator(_bounded(0.0001, 2.0, "a difference of pH from 0.0001 to 2")),
    WithJsonSchema({"type": "number", "minimum": 0.0001, "maximum": 2}),
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
    PlainValidator(checked(_more_than_nothing(quantities.PERCENT, quantities.MOLARITY))),
    WithJsonSchema(_quantity_schema(quantities.PERCENT, quantities.MOLARITY)),
]
Molarity: TypeAlias = Annotated[
    Measured,
    PlainValidator(checked(_more_than_nothing(quantities.MOLARITY))),
    WithJsonSchema(_quantity_schema(quantities.MOLARITY)),
]
Amount: TypeAlias = Annotated[
    Measured,
    PlainValidator(checked(_more_than_nothing(*quantities.AMOUNTS))),
    WithJsonSchema(_quantity_schema(*quantities.AMOUNTS)),
]
Volume: TypeAlias = Annotated[
    Measured,
    PlainValidator(checked(_more_than_nothing(quantities.VOLUME))),
    WithJsonSchema(_quantity_schema(quantities.VOLUME)),
]
VolumeOrMass: TypeAlias = Annotated[
    Measured,
    PlainValidator(checked(_more_than_nothing(quantities.VOLUME, quantities.MASS))),
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
