"""What the page of reagents, and the list of them on the index, are given."""

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Final

import numpy as np

from bufferfolio.definitions import Family, Formulation, Library, Reagent
from bufferfolio.formatting import chemical, fixed, plain
from bufferfolio.make_up_contexts import grade_of, reagents_of
from bufferfolio.page_parts import Cited, cited
from bufferfolio.search_words import reagent_words, searchable
from bufferfolio.temperature import pK_at


@dataclass(frozen=True, slots=True, kw_only=True)
class Brought:
    """What one mole of a reagent brings of one thing."""

    count: str  # "2 " before the name; "" for one
    name: str
    family: str  # key; "" for an ion that keeps its charge


@dataclass(frozen=True, slots=True, kw_only=True)
class ReagentRow:
    """One reagent."""

    reagent: Reagent
    formula: str
    grade: str
    molar_mass: str  # g/mol
    brings: tuple[Brought, ...]
    used: tuple[Formulation, ...]  # made up or corrected with it
    source: Cited
    words: str  # that the index looks through
    pK: str  # at 25 °C, of the families it brings, for the filter of the index


def reagent_rows(library: Library, numbers: Mapping[str, int]) -> tuple[ReagentRow, ...]:
    """Return every reagent by its name."""
    used: dict[str, list[Formulation]] = {key: [] for key in library.reagents}
    for formulation in library.formulations.values():
        for reagent in reagents_of(formulation):
            used.setdefault(reagent.key, []).append(formulation)
    return tuple(
        ReagentRow(
            reagent=reagent,
            formula=chemical(reagent.formula),
            grade=grade_of(reagent),
            molar_mass=fixed(1000.0 * reagent.molar_mass, 2),
            brings=_brings(reagent, library.families),
            used=tuple(sorted(used[reagent.key], key=lambda item: item.title.casefold())),
            source=cited(reagent.citation, "reagent", numbers),
            words=searchable(reagent_words(reagent)),
            pK=" ".join(pK_words(library.families[key]) for key in reagent.families),
        )
        for reagent in sorted(library.reagents.values(), key=lambda item: item.label.casefold())
    )


def pK_words(family: Family) -> str:
    """Return the pK of a family at 25 °C, for the filter of the index."""
    every = (float(pK_at(step, np.array(FILTER_TEMPERATURE))) for step in family.steps)
    return " ".join(f"{pK:.1f}" for pK in every)


def _brings(reagent: Reagent, families: Mapping[str, Family]) -> tuple[Brought, ...]:
    of_families = [
        Brought(count=_count(number), name=families[key].label, family=key)
        for key, number in reagent.families.items()
    ]
    ions = [
        Brought(count=_count(number), name=chemical(ion.name), family="")
        for ion, number in reagent.ions.items()
    ]
    return (*of_families, *ions)


def _count(number: float) -> str:
    return "" if number == 1.0 else f"{plain(number)} "


FILTER_TEMPERATURE: Final = 298.15  # K
