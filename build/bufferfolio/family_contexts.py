"""What the template of a family's explorer is given."""

import math
from collections.abc import Mapping
from dataclasses import dataclass

from markupsafe import Markup

from bufferfolio.definitions import Family, Formulation, Library, Reagent
from bufferfolio.engine_data import explorer_data
from bufferfolio.explorations import Exploration
from bufferfolio.explorer_plots import EXPLORER_FIGURES, explorer_fractions
from bufferfolio.figures import as_data
from bufferfolio.page_parts import (
    Cited,
    ConstantRow,
    Plot,
    constant_rows,
    json_text,
    plot_of,
)
from bufferfolio.search_words import family_words, searchable
from bufferfolio.svg_figures import thumbnail


@dataclass(frozen=True, slots=True, kw_only=True)
class FamilyContext:
    """Everything on the page of one family."""

    family: Family
    exploration: Exploration
    log_total: float  # where the sliders stand, log10 of mol/kg
    log_ionic_strength: float
    thumbnail: Markup  # for the index
    plots: tuple[Plot, ...]
    constants: tuple[ConstantRow, ...]
    sources: tuple[Cited, ...]
    reagents: tuple[Reagent, ...]  # that bring it
    formulations: tuple[Formulation, ...]  # that hold it
    words: str  # that the index looks through
    page_data: Markup


def family_context(
    exploration: Exploration, library: Library, numbers: Mapping[str, int]
) -> FamilyContext:
    """Return everything on the page of one family."""
    family = exploration.family
    figures = [draw(exploration) for draw in EXPLORER_FIGURES.values()]
    constants = constant_rows((family,), exploration.temperature, numbers)
    every = sorted((one for row in constants for one in row.cited), key=lambda one: one.number)
    data = explorer_data(exploration)
    data["figures"] = {figure.key: as_data(figure) for figure in figures}
    return FamilyContext(
        family=family,
        exploration=exploration,
        log_total=math.log10(exploration.total),
        log_ionic_strength=math.log10(exploration.ionic_strength),
        thumbnail=Markup(thumbnail(explorer_fractions(exploration))),
        plots=tuple(plot_of(figure) for figure in figures),
        constants=constants,
        sources=tuple({one.number: one for one in every}.values()),
        reagents=tuple(
            reagent
            for _, reagent in sorted(library.reagents.items())
            if family.key in reagent.families
        ),
        formulations=tuple(
            formulation
            for _, formulation in sorted(library.formulations.items())
            if any(family.key in p.reagent.families for p in formulation.make_up.portions)
        ),
        words=searchable(family_words(family)),
        page_data=json_text(data),
    )
