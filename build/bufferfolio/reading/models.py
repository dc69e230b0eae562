"""The shape of every definition file: which keys, and what each of them takes.

The descriptions are what an editor shows beside a key; the JSON Schemas are generated from here.
"""

from typing import Annotated, Any, Literal

from pydantic import BaseModel, ConfigDict, Field, RootModel

from bufferfolio.definitions import HowKnown, ModelName, Origin
from bufferfolio.reading import fields, measures
from bufferfolio.reading.fields import Key, Text
from bufferfolio.reading.measures import Number, Positive

_SOURCE = "Key of the work in sources.yaml."
_WHERE = "Where in that work the number stands: table, page, equation."
_HOW_KNOWN = "How the number got here: seen, seen-secondary, recalled or computed."


def _or_not_stated(schema: dict[str, Any]) -> None:
    stated = {key: schema.pop(key) for key in ("$ref", "allOf") if key in schema}
    schema["anyOf"] = [stated, {"const": fields.NOT_STATED}]


class Shape(BaseModel):
    """A mapping with known keys only."""

    model_config = ConfigDict(extra="forbid", strict=True, frozen=True)


class Cited(Shape):
    """Where a number comes from."""

    source: Key = Field(description=_SOURCE)
    where: Text = Field(description=_WHERE)
    how_known: HowKnown = Field(description=_HOW_KNOWN)


class SourceShape(Shape):
    """One published work."""

    cite: Text = Field(description="Authors, journal, volume, year and page in one line.")
    doi: fields.Doi | None = Field(None, description="Its DOI, only where it is certain.")
    note: Text | None = Field(None, description="What a reader should know about it.")


class SourcesShape(RootModel[dict[Key, SourceShape]]):
    """Every work, by key."""


class InteractionShape(Cited):
    """One ion interaction coefficient of the specific-ion model."""

    cation: Text = Field(description="The positive ion, such as Na+.")
    anion: Text = Field(description="The negative ion, such as Cl-.")
    epsilon: measures.Epsilon = Field(description="The coefficient at 25 °C, in kg/mol.")


class InteractionsShape(RootModel[list[InteractionShape]]):
    """Every interaction coefficient."""


class PKShape(Cited):
    """The pK of one step at one temperature, at zero ionic strength."""

    value: measures.PKValue = Field(description="The pK; molal standard state.")
    at: measures.Temperature = Field(description="The temperature where it holds.")
    uncertainty: measures.Uncertainty = Field(description="Standard uncertainty, or `not stated`.")


class EnthalpyShape(Cited):
    """The enthalpy of losing the proton."""

    value: measures.Enthalpy = Field(description="The enthalpy, such as -0.41 kJ/mol.")


class HeatCapacityShape(Cited):
    """The change of heat capacity on losing the proton."""

    value: measures.HeatCapacity = Field(description="The change, such as -142 J/(mol K).")


class TermsShape(Shape):
    """The coefficients of a published equation in the temperature T, in kelvin."""

    constant: Number = Field(0.0, description="The term without T.")
    inverse: Number = Field(0.0, description="Times 1/T.")
    linear: Number = Field(0.0, description="Times T.")
    logarithm: Number = Field(0.0, description="Times ln T.")
    log10: Number = Field(0.0, description="Times log10 T.")
    inverse_square: Number = Field(0.0, description="Times 1/T².")


class EquationShape(Cited):
    """A published equation for a constant against temperature."""

    name: Text = Field(description="What the equation is called on a page.")
    gives: Literal["pK", "log10 K", "ln K"] = Field(description="What the equation gives.")
    terms: TermsShape = Field(description="Its coefficients; a term that is left out is zero.")
    uncertainty: measures.Uncertainty = Field(
        description="Standard uncertainty of the pK, or `not stated`."
    )


class StepShape(Shape):
    """One proton lost: either `equation`, or `pK`, `enthalpy` and `heat_capacity`."""

    pK: PKShape | None = Field(None, description="The pK at one temperature.")
    enthalpy: Annotated[EnthalpyShape | None, fields.NotStatedOr] = Field(
        None,
        description="The enthalpy of losing the proton, or `not stated`.",
        json_schema_extra=_or_not_stated,
    )
    heat_capacity: Annotated[HeatCapacityShape | None, fields.NotStatedOr] = Field(
        None,
        description="The change of heat capacity, or `not stated`.",
        json_schema_extra=_or_not_stated,
    )
    equation: EquationShape | None = Field(
        None, description="A published equation, in place of the other three."
    )
    valid: measures.TemperatureRange = Field(
        description="The temperatures the source vouches for: [lowest, highest]."
    )
    alternative: Text | None = Field(
        None, description="Another published value, in words, where works disagree."
    )


class FamilyShape(Shape):
    """Species that differ by protons only."""

    label: Text = Field(description="Name of the acid or base, as a page prints it.")
    synonyms: list[Text] = Field([], description="Other names that people search for.")
    species: list[Text] = Field(
        description="Formulas, most protons first: [H3PO4, H2PO4-, HPO4-2, PO4-3]."
    )
    labels: list[Text] | None = Field(
        None, description="Short names of the species, where the formula is not what people read."
    )
    note: Text | None = Field(None, description="What a reader should know about the family.")
    steps: list[StepShape] = Field(description="One for each proton lost, strongest acid first.")


class StockShape(Shape):
    """What makes a reagent a liquid."""

    concentration: measures.Strength = Field(description="% by mass, or mol/L.")
    density: measures.Density = Field(description="Density of the liquid, such as 1.184 g/mL.")
    at: measures.Temperature = Field(description="The temperature where the density holds.")


class ReagentShape(Cited):
    """What is on the shelf, and what it brings into water."""

    label: Text = Field(description="Name of the reagent, as a page prints it.")
    formula: Text = Field(description="Its formula, with its water: Na2HPO4·7H2O.")
    synonyms: list[Text] = Field([], description="Other names that people search for.")
    cas: fields.CasNumber | None = Field(None, description="Its CAS number.")
    brings: dict[Text, Positive] = Field(
        description="Mol of each family (by key) and strong ion (by formula) per mol."
    )
    accompanied_by: dict[Key, Positive] = Field(
        {}, description="Mol of other reagents that come along per mol, in technical liquids."
    )
    purity: measures.Share | None = Field(
        None, description="Mass of the formula per mass of the solid, in %. Not for liquids."
    )
    stock: StockShape | None = Field(None, description="For a liquid: how strong, how dense.")
    hazards: list[fields.Hazard] = Field(
        description="GHS hazard statements; [] where none is assigned."
    )
    releases: list[fields.Danger] = Field(
        [], description="What it gives off with acid, with base or with a family."
    )
    handling: Text = Field(description="How to keep and handle it, in a sentence.")


class PortionShape(Shape):
    """An amount of one reagent."""

    reagent: Key = Field(description="Key of the reagent: its file name without .yaml.")
    amount: measures.Amount = Field(description="How much, with any of the accepted units.")


class MakeUpShape(Shape):
    """How the formulation is put together: `made_up_to` or `water`, not both."""

    made_up_to: measures.Volume | None = Field(None, description="Volume of the solution.")
    water: measures.VolumeOrMass | None = Field(None, description="Water that is added.")
    at: measures.WaterTemperature = Field(description="Temperature at which volumes are measured.")
    reagents: list[PortionShape] = Field(description="What goes in; [] for plain water.")


class ExpectedShape(Shape):
    """The pH the formulation is meant to have."""

    pH: measures.PHValue = Field(description="The pH that is expected.")
    at: measures.WaterTemperature = Field(description="The temperature where it is expected.")
    tolerance: Positive = Field(description="How far off, in pH, is still accepted.")
    origin: Origin = Field(
        default="not stated",
        description="Where the pH comes from: computed, published, measured or not stated.",
    )


class UseShape(Shape):
    """The limits of use."""

    temperature: measures.WaterTemperatureRange = Field(description="[lowest, highest].")
    pH: measures.PHRange = Field(description="[lowest, highest].")


class TitrantShape(Shape):
    """A reagent that corrects a batch."""

    model_config = ConfigDict(extra="forbid", strict=True, frozen=True, populate_by_name=False)

    reagent: Key = Field(description="Key of the reagent.")
    direction: Literal["upward", "downward"] = Field(description="Where it moves the pH.")
    diluted: measures.Molarity | None = Field(
        None, alias="as", description="Strength of the working solution; without it, undiluted."
    )


class TolerancesShape(Shape):
    """How well things are weighed, measured, read and modelled, each as a k = 2 interval."""

    weighing: measures.Share | None = Field(None, description="Of each mass, such as 0.5 %.")
    volume: measures.Share | None = Field(None, description="Of each volume, such as 1 %.")
    temperature: measures.TemperatureDifference | None = Field(
        None, description="Of the thermometer, such as 0.5 °C."
    )
    meter: measures.PHDifference | None = Field(
        None, description="Of the meter after its calibration, in pH, such as 0.02."
    )
    model: measures.PHDifference | None = Field(
        None,
        description="Of the prediction itself, in pH, where it is known to leave something out; "
        "none without it.",
    )


class FormulationShape(Shape):
    """Reagents in water, what is expected of them, and how they are used and corrected."""

    title: Text = Field(description="What the formulation is called.")
    revision: fields.Revision = Field(description="Issue of the recipe, as people refer to it.")
    purpose: Text = Field(description="What it is for, in one or two sentences.")
    medium: Literal["dilute"] = Field(description="What fixes the constants.")
    model: ModelName | None = Field(
        None, description="The activity model; without it, it follows from the ionic strength."
    )
    make_up: MakeUpShape = Field(description="How it is put together.")
    expected: ExpectedShape | None = Field(None, description="The pH it is meant to have.")
    use: UseShape = Field(description="The temperatures and the pH within which it may be used.")
    correct_with: list[TitrantShape] = Field([], description="What corrects a batch.")
    corrected: Literal["never"] | None = Field(
        default=None,
        description="Whether a batch that is off may be corrected; `never` keeps the titrants to "
        "show its reserve only.",
    )
    tolerances: TolerancesShape | None = Field(
        None, description="How well it is weighed, measured and read; usual values without it."
    )
    cautions: list[Text] = Field([], description="What the people who use it must know.")
    explains: list[fields.Danger] = Field(
        [], description="Dangerous combinations that the cautions explain, as reagents name them."
    )
