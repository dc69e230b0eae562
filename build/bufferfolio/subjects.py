"""A formulation ready for questions, and its state under given conditions."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from bufferfolio.activity import MODELS, ActivityModel, for_ionic_strength
from bufferfolio.buffering import buffer_capacity
from bufferfolio.composition import Addition, addition, contents, mixed, scaled, water_mass
from bufferfolio.definitions import Formulation, Interaction, Library, ModelName
from bufferfolio.equilibrium import Equilibrium, Status, solve
from bufferfolio.recipes import Recipe, recipe_of
from bufferfolio.speciation import Forms, Mixture, forms_at
from bufferfolio.temperature import constants_at
from bufferfolio.tolerances import Care, care_of


@dataclass(frozen=True, slots=True, kw_only=True)
class Subject:
    """A formulation ready for questions: what it holds, and by which model it is reckoned."""

    formulation: Formulation
    mixture: Mixture  # of one kg of water; lists the titrants' families and ions too
    water: float  # kg in the make-up
    model: ActivityModel
    interactions: tuple[Interaction, ...]  # among the species present
    additions: tuple[Addition, ...]  # one a titrant, at the make-up temperature
    recipe: Recipe
    care: Care  # how well it is weighed, measured and read


@dataclass(frozen=True, slots=True, kw_only=True)
class State:
    """One solution at one temperature."""

    temperature: float  # K
    pH: float
    ionic_strength: float  # mol/kg
    capacity: float  # mol/kg per pH
    status: Status
    forms: Forms  # arrays of shape (forms,)


def subject_of(formulation: Formulation, library: Library) -> Subject:
    """Return a formulation with its composition and what is needed to reckon with it."""
    reagents = tuple(titrant.reagent for titrant in formulation.titrants)
    mixture = contents(formulation, library.families, reagents)
    present = set(mixture.species)
    return Subject(
        formulation=formulation,
        mixture=mixture,
        water=water_mass(formulation.make_up),
        model=MODELS[formulation.model or _chosen(formulation, mixture)],
        interactions=tuple(
            pair
            for pair in library.interactions
            if pair.cation in present and pair.anion in present
        ),
        additions=tuple(
            addition(titrant, library.families, formulation.make_up.temperature)
            for titrant in formulation.titrants
        ),
        recipe=recipe_of(formulation, library.families),
        care=care_of(formulation),
    )


def _chosen(formulation: Formulation, mixture: Mixture) -> ModelName:
    """Return the model that the ionic strength asks for, at the recipe's own strength."""
    constants = constants_at(mixture.families, np.array(reference_temperature(formulation)))
    solved = solve(mixture, constants, MODELS["davies"])
    return for_ionic_strength(float(solved.ionic_strength))


def reference_temperature(formulation: Formulation) -> float:
    """Return the temperature at which a sheet is drawn: of the expected pH, or of the make-up."""
    if formulation.expected is not None:
        return formulation.expected.temperature
    return formulation.make_up.temperature


def solved_at(subject: Subject, temperature: float, mixture: Mixture | None = None) -> Equilibrium:
    """Return the equilibrium of a formulation, or of another mixture by its model; S = ()."""
    there = subject.mixture if mixture is None else mixture
    constants = constants_at(there.families, np.array(temperature))
    return solve(there, constants, subject.model, subject.interactions)


def state_at(
    subject: Subject,
    temperature: float,
    strength: float = 1.0,
    additions: Sequence[tuple[Addition, float]] = (),
) -> State:
    """Return the state of a formulation at one temperature.

    `strength` multiplies everything in the water; `additions` are mol per kg of its water.
    """
    mixture = scaled(subject.mixture, np.array(strength))
    for added, amount in additions:
        mixture = mixed(mixture, added, np.array(amount))
    constants = constants_at(mixture.families, np.array(temperature))
    solved = solve(mixture, constants, subject.model, subject.interactions)
    capacity = buffer_capacity(mixture, constants, subject.model, solved)
    return State(
        temperature=temperature,
        pH=float(solved.pH),
        ionic_strength=float(solved.ionic_strength),
        capacity=float(capacity),
        status=Status(int(solved.status)),
        forms=forms_at(
            mixture, constants, subject.model, solved.pH, solved.ionic_strength, solved.offsets
        ),
    )
