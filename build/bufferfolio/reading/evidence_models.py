"""The shape of systems/evidence/index.yaml: which keys, and what each of them takes."""

from typing import Literal

from pydantic import Field

from bufferfolio.definitions import HowKnown
from bufferfolio.published import Quantity, Scale
from bufferfolio.reading import measures
from bufferfolio.reading.fields import Key, Text
from bufferfolio.reading.measures import Positive
from bufferfolio.reading.models import Shape


class SubstanceShape(Shape):
    """What published mixtures call a salt, an acid or a base, and what one mole of it brings."""

    formula: Text | None = Field(None, description="Its formula, where the name is none.")
    brings: dict[Text, Positive] = Field(
        description="Mol of each family (by key), strong ion (by formula) or `own` per mol."
    )


class GroupShape(Shape):
    """Tables of one kind."""

    title: Text = Field(description="The heading over its tables.")
    about: Text = Field(description="What is compared with what, in a sentence or two.")


class PartShape(Shape):
    """Rows of a table that belong together."""

    title: Text = Field(description="What the rows have in common.")
    cause: Text | None = Field(None, description="Why they miss, as far as known.")


class TargetShape(Shape):
    """How close predictions ought to come."""

    root_mean_square: Positive = Field(description="The r.m.s. difference that is aimed at.")
    largest: Positive | None = Field(None, description="The largest difference, without sign.")


class TableShape(Shape):
    """One published table; its rows stand in the file KEY.csv beside the index."""

    group: Key = Field(description="Key of the group it belongs to.")
    title: Text = Field(description="What the table is called on the page.")
    quantity: Quantity = Field(description="What its numbers are.")
    amounts: Literal["mol/kg", "mol/L"] = Field(
        "mol/kg", description="What the amounts of its mixtures are: mol/kg of water, or mol/L."
    )
    compared_by: Literal["difference", "ratio"] = Field(
        "difference", description="Computed less published, or the two divided."
    )
    scale: Scale = Field(description="The pH scale that its source used.")
    uncertainty: Text = Field(description="What the source states, in words.")
    causes: list[Text] = Field([], description="Why predictions miss it, as far as known.")
    parts: dict[Key, PartShape] = Field({}, description="Rows that belong together, by key.")
    target: TargetShape | None = Field(None, description="How close predictions ought to come.")
    pKw: measures.PKValue | None = Field(None, description="The source's own pKw.")
    source: Key | None = Field(None, description="Key of the work, where a row names none.")
    where: Text | None = Field(None, description="Where in the work, where a row says nothing.")
    how_known: HowKnown | None = Field(None, description="How known, where a row says nothing.")
    at: measures.WaterTemperature | None = Field(
        None, description="The temperature of rows that give none."
    )
    form: Text | None = Field(None, description="The form of rows that give none.")
    constants: Text | None = Field(None, description="The constants of rows that give none.")


class IndexShape(Shape):
    """What the tables are, and what their mixtures are made of."""

    substances: dict[Text, SubstanceShape] = Field({}, description="What mixtures hold, by name.")
    groups: dict[Key, GroupShape] = Field({}, description="Groups, in the order of the page.")
    tables: dict[Key, TableShape] = Field({}, description="Tables, in the order of the page.")
