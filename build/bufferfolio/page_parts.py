"""Parts that several pages show: plots with their tables, constants with their sources."""

import json
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np
from markupsafe import Markup

from bufferfolio.definitions import (
    Citation,
    Family,
    Interval,
    PublishedEquation,
    ReferenceConstants,
    Source,
    Step,
)
from bufferfolio.figure_tables import NumbersTable, numbers_table
from bufferfolio.figures import Band, Entry, Figure, bands, legend
from bufferfolio.formatting import celsius, plain
from bufferfolio.svg_figures import svg
from bufferfolio.temperature import pK_at


@dataclass(frozen=True, slots=True, kw_only=True)
class Plot:
    """A figure as a page shows it before any script runs."""

    key: str
    title: str
    picture: Markup  # SVG
    legend: tuple[Entry, ...]
    bands: tuple[Band, ...]
    summary: str
    table: NumbersTable
    corner: str  # what the columns of a map's table stand for; "" for lines


@dataclass(frozen=True, slots=True, kw_only=True)
class Cited:
    """A citation with the number that its source has throughout the folio."""

    number: int
    source: Source
    what: str  # which of the cited numbers: "pK", "ΔH°"
    where: str
    how_known: str


@dataclass(frozen=True, slots=True, kw_only=True)
class ConstantRow:
    """One ionisation step, as tables of constants show it."""

    family: str  # key
    family_label: str
    step: int  # from zero
    acid: str
    base: str
    pK: float  # at the page's temperature
    law: tuple[str, ...]  # one text a line
    valid: Interval  # K
    uncertainty: float | None
    cited: tuple[Cited, ...]
    alternative: str | None


def plot_of(figure: Figure) -> Plot:
    """Return a figure with everything that stands around it."""
    return Plot(
        key=figure.key,
        title=figure.title,
        picture=Markup(svg(figure)),
        legend=legend(figure),
        bands=bands(figure),
        summary=figure.summary,
        table=numbers_table(figure),
        corner="" if figure.cells is None else figure.x.title,
    )


def numbering(sources: Mapping[str, Source]) -> Mapping[str, int]:
    """Return the number of every source, in the order in which the page of sources lists them."""
    ordered = sorted(sources.values(), key=lambda source: (source.cite.casefold(), source.key))
    return {source.key: number for number, source in enumerate(ordered, start=1)}


def cited(citation: Citation, what: str, numbers: Mapping[str, int]) -> Cited:
    """Return a citation with its number."""
    return Cited(
        number=numbers[citation.source.key],
        source=citation.source,
        what=what,
        where=citation.where,
        how_known=citation.how_known,
    )


def constant_rows(
    families: Sequence[Family], temperature: float, numbers: Mapping[str, int]
) -> tuple[ConstantRow, ...]:
    """Return the constants of families at a temperature (K), step by step."""
    return tuple(
        ConstantRow(
            family=family.key,
            family_label=family.label,
            step=index,
            acid=family.species[index].label,
            base=family.species[index + 1].label,
            pK=float(pK_at(step, np.array(temperature))),
            law=_law(step),
            valid=step.valid_temperature,
            uncertainty=step.uncertainty,
            cited=_cited_of(step, numbers),
            alternative=step.alternative,
        )
        for family in families
        for index, step in enumerate(family.steps)
    )


def _cited_of(step: Step, numbers: Mapping[str, int]) -> tuple[Cited, ...]:
    equation = isinstance(step.law, PublishedEquation)
    found = [cited(step.citation, "equation" if equation else "pK", numbers)]
    if step.enthalpy_citation is not None:
        found.append(cited(step.enthalpy_citation, "ΔH°", numbers))
    if step.heat_capacity_citation is not None:
        found.append(cited(step.heat_capacity_citation, "ΔCp°", numbers))
    return tuple(found)


def _law(step: Step) -> tuple[str, ...]:
    if isinstance(step.law, PublishedEquation):
        return (step.law.name, _equation(step.law))
    return _reference(step.law)


def _reference(law: ReferenceConstants) -> tuple[str, ...]:
    enthalpy, heat_capacity = law.enthalpy, law.heat_capacity
    return (
        f"pK {plain(law.pK, 6)} at {celsius(law.temperature)} °C",
        "ΔH° " + ("not stated" if enthalpy is None else f"{plain(enthalpy / 1000.0, 6)} kJ/mol"),
        "ΔCp° "
        + ("not stated" if heat_capacity is None else f"{plain(heat_capacity, 6)} J/(mol K)"),
    )


def _equation(law: PublishedEquation) -> str:
    terms = [
        (law.constant, ""),
        (law.inverse, "/T"),
        (law.linear, " T"),
        (law.logarithm, " ln T"),
        (law.inverse_square, "/T²"),
    ]
    text = ""
    for value, factor in terms:
        if value != 0.0:
            sign = ("−" if value < 0.0 else "") if not text else (" − " if value < 0.0 else " + ")
            text += f"{sign}{plain(abs(value), LAW_FIGURES)}{factor}"
    return f"pK = {text}"


def json_text(data: object) -> Markup:
    """Return data as JSON that may stand inside a script element."""
    text = json.dumps(
        data, sort_keys=True, separators=(",", ":"), ensure_ascii=False, allow_nan=False
    )
    return Markup(text.replace("<", "\\u003c"))


LAW_FIGURES: Final = 9  # of a published equation's coefficients, converted ones included
