"""What the template of a formulation's sheet is given: nothing is left to compute."""

import hashlib
import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from typing import Final

import numpy as np
from markupsafe import Markup

from bufferfolio.activity import ActivityModel
from bufferfolio.composition import pure_water
from bufferfolio.definitions import Family, Formulation, Library, Reagent
from bufferfolio.engine_data import Data, sheet_data
from bufferfolio.equilibrium import Status
from bufferfolio.estimate_words import EstimateWords, estimate_words
from bufferfolio.fault_contexts import FaultContext, fault_context
from bufferfolio.field_data import field_data, ways_to
from bufferfolio.figures import Figure, as_data
from bufferfolio.formatting import chemical, mass, volume
from bufferfolio.make_up_contexts import (
    Batch,
    Bench,
    CorrectContext,
    HazardRow,
    PortionRow,
    batch_of,
    bench_of,
    correct_context,
    hazard_rows,
    portion_rows,
    reagents_of,
)
from bufferfolio.page_parts import (
    Cited,
    ConstantRow,
    Plot,
    cited,
    constant_rows,
    json_text,
    plot_of,
)
from bufferfolio.plots import SHEET_FIGURES
from bufferfolio.reading_contexts import ReadingContext, reading_context
from bufferfolio.routes import Route
from bufferfolio.search_words import reagent_words, searchable
from bufferfolio.sheets import Sheet, Side
from bufferfolio.speciation import Mixture
from bufferfolio.subjects import state_at
from bufferfolio.titration_contexts import TitrationForm, titration_form


@dataclass(frozen=True, slots=True, kw_only=True)
class SpeciesRow:
    """One line of the table of species."""

    name: str
    label: str
    molality: float  # mol/kg
    fraction: float  # of its family; NaN where it has none


@dataclass(frozen=True, slots=True, kw_only=True)
class SpeciesGroup:
    """Species that belong together: of water, of one family, ions that keep their charge."""

    label: str
    rows: tuple[SpeciesRow, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class SideRow:
    """The reserve towards one side."""

    direction: str
    titrant: str
    reagent: Reagent
    limit: float  # pH
    reserve: float  # mol/kg; NaN: never reached
    dose: str  # with its unit; of titrant per kg of water
    contrast: float  # pH of plain water after the same amount


@dataclass(frozen=True, slots=True, kw_only=True)
class PairRow:
    """One interaction coefficient of the specific-ion model."""

    cation: str
    anion: str
    epsilon: float  # kg/mol
    cited: Cited


@dataclass(frozen=True, slots=True, kw_only=True)
class SheetContext:
    """Everything on the page of one formulation."""

    formulation: Formulation
    sheet: Sheet
    status: str
    status_state: str
    estimate: EstimateWords
    reading: ReadingContext
    model: ActivityModel
    batch: Batch
    correct: CorrectContext
    portions: tuple[PortionRow, ...]
    bench: Bench
    species: tuple[SpeciesGroup, ...]
    plots: tuple[Plot, ...]
    sides: tuple[SideRow, ...]
    faults: FaultContext
    constants: tuple[ConstantRow, ...]
    pairs: tuple[PairRow, ...]
    pairs_possible: int  # of a cation and an anion, titrants included
    hazards: tuple[HazardRow, ...]
    releases: tuple[tuple[str, tuple[str, ...]], ...]  # reagent, what it may release
    sources: tuple[Cited, ...]  # that this page cites, by number
    fingerprint: str
    words: str  # that the index looks through
    lowest_pH: float  # over the temperatures of use
    highest_pH: float
    page_data: Markup

    @property
    def titration(self) -> TitrationForm:
        """What a reader may choose for a titration of one's own."""
        return titration_form(self.sheet.subject)


def sheet_context(sheet: Sheet, library: Library, numbers: Mapping[str, int]) -> SheetContext:
    """Return everything on the page of one formulation."""
    subject, reference = sheet.subject, sheet.reference
    formulation = subject.formulation
    figures = _figures(sheet)
    present = _present(subject.mixture)
    constants = constant_rows(present, reference.temperature, numbers)
    pairs = _pairs(sheet, numbers)
    portions = portion_rows(subject, numbers)
    batch = batch_of(formulation.make_up)
    ways = ways_to(subject, library)
    bench = bench_of(subject, library, ways)
    data = _engine_data(sheet, batch, ways, library)
    identity = _identity(formulation, json_text(data))
    drawn = {figure.key: as_data(figure) for figure in figures}
    data |= {**identity, "shelf": bench.shelf, "figures": drawn}
    reagents = reagents_of(formulation)
    return SheetContext(
        formulation=formulation,
        sheet=sheet,
        status=STATUS_WORDS[reference.status],
        status_state=reference.status.name.lower().replace("_", "-"),
        estimate=estimate_words(sheet),
        reading=reading_context(subject, reference.temperature),
        model=subject.model,
        batch=batch,
        correct=correct_context(formulation, batch),
        portions=portions,
        bench=bench,
        species=_species(sheet),
        plots=tuple(plot_of(figure) for figure in figures),
        sides=tuple(_side(sheet, side) for side in sheet.sides),
        faults=fault_context(subject, library),
        constants=constants,
        pairs=pairs,
        pairs_possible=_possible_pairs(subject.mixture),
        hazards=hazard_rows(reagents),
        releases=tuple((item.label, item.releases) for item in reagents if item.releases),
        sources=_sources(constants, pairs, portions),
        fingerprint=identity["fingerprint"],
        words=_words(formulation, present, reagents),
        lowest_pH=float(np.nanmin(sheet.drift.state.pH)),
        highest_pH=float(np.nanmax(sheet.drift.state.pH)),
        page_data=json_text(data),
    )


def _figures(sheet: Sheet) -> list[Figure]:
    # Plain water has no forms of a family to draw, and a solution without titrants no titration.
    drawn = [draw(sheet) for draw in SHEET_FIGURES.values()]
    return [figure for figure in drawn if figure and (figure.series or figure.cells)]


def _engine_data(sheet: Sheet, batch: Batch, ways: Sequence[Route], library: Library) -> Data:
    """Return what the page reckons with; the fingerprint is taken of it."""
    data = sheet_data(sheet)
    data["batch"] = {"quantity": batch.quantity, "amount": batch.amount, "basis": batch.basis}
    data["field"] = field_data(sheet.subject, library, ways)
    return data


def _present(mixture: Mixture) -> list[Family]:
    totals = zip(mixture.families, mixture.totals, strict=True)
    return [family for family, total in totals if total > 0.0]


def _identity(formulation: Formulation, computed_from: str) -> dict[str, str]:
    """Return by what a sheet is known, wherever its numbers are taken."""
    return {
        "key": formulation.key,
        "title": formulation.title,
        "revision": formulation.revision,
        "fingerprint": hashlib.sha256(computed_from.encode("utf-8")).hexdigest()[:12],
    }


def _species(sheet: Sheet) -> tuple[SpeciesGroup, ...]:
    mixture, forms = sheet.subject.mixture, sheet.reference.forms
    water = (_unbound("H+", float(forms.hydrogen)), _unbound("OH-", float(forms.hydroxide)))
    groups = [SpeciesGroup(label="water", rows=water)]
    for family, total, molalities, shares in zip(
        mixture.families, mixture.totals, forms.families, forms.fractions, strict=True
    ):
        if total > 0.0:
            rows = tuple(
                SpeciesRow(
                    name=form.name,
                    label=form.label,
                    molality=float(molality),
                    fraction=float(share),
                )
                for form, molality, share in zip(family.species, molalities, shares, strict=True)
            )
            groups.append(SpeciesGroup(label=family.label, rows=rows))
    strong = tuple(
        _unbound(ion.name, float(molality))
        for ion, molality in zip(mixture.ions, mixture.molalities, strict=True)
        if molality > 0.0
    )
    if strong:
        groups.append(SpeciesGroup(label="ions that keep their charge", rows=strong))
    return tuple(groups)


def _unbound(name: str, molality: float) -> SpeciesRow:
    return SpeciesRow(name=name, label=chemical(name), molality=molality, fraction=math.nan)


def _side(sheet: Sheet, side: Side) -> SideRow:
    subject, added = sheet.subject, side.added
    limits = subject.formulation.use_pH
    reached = side.reserve > 0.0
    contrast, dose = math.nan, ""
    if reached:
        nothing = replace(subject, mixture=pure_water(subject.mixture))
        after = state_at(nothing, sheet.reference.temperature, additions=[(added, side.reserve)])
        contrast = after.pH
        dose = (
            mass(side.reserve * added.mass, 3)
            if added.volume is None
            else volume(side.reserve * added.volume, 3)
        )
    return SideRow(
        direction=side.titrant.direction,
        titrant=side.titrant.label,
        reagent=side.titrant.reagent,
        limit=limits.high if side.titrant.direction == "upward" else limits.low,
        reserve=side.reserve if reached else math.nan,
        dose=dose,
        contrast=contrast,
    )


def _pairs(sheet: Sheet, numbers: Mapping[str, int]) -> tuple[PairRow, ...]:
    if not sheet.subject.model.uses_interactions:
        return ()
    return tuple(
        PairRow(
            cation=chemical(pair.cation),
            anion=chemical(pair.anion),
            epsilon=pair.epsilon,
            cited=cited(pair.citation, "ε", numbers),
        )
        for pair in sheet.subject.interactions
    )


def _possible_pairs(mixture: Mixture) -> int:
    charges = [1, -1]  # of water's own ions
    charges += [form.charge for family in mixture.families for form in family.species]
    charges += [ion.charge for ion in mixture.ions]
    return sum(charge > 0 for charge in charges) * sum(charge < 0 for charge in charges)


def _words(
    formulation: Formulation, families: Sequence[Family], reagents: Sequence[Reagent]
) -> str:
    words = [formulation.title, formulation.purpose, formulation.key]
    for family in families:
        words += [family.label, family.key, *family.synonyms]
    for reagent in reagents:
        words += reagent_words(reagent)
    return searchable(words)


def _sources(
    constants: Sequence[ConstantRow], pairs: Sequence[PairRow], portions: Sequence[PortionRow]
) -> tuple[Cited, ...]:
    every = [one for row in constants for one in row.cited]
    every += [row.cited for row in pairs] + [row.source for row in portions]
    return tuple({one.number: one for one in sorted(every, key=lambda one: one.number)}.values())


STATUS_WORDS: Final = {
    Status.SOLVED: "within the range of every constant and of the activity model",
    Status.OUT_OF_RANGE: "a constant is used outside its source's temperatures",
    Status.BEYOND_MODEL: "the ionic strength is above what the activity model is trusted to",
    Status.NO_SOLUTION: "the equations have no solution here",
}
