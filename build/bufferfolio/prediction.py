"""The numbers of a sheet for any temperature, with or without something added to the batch."""

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from bufferfolio.activity import ActivityModel
from bufferfolio.composition import addition, contents, mixed
from bufferfolio.definitions import Formulation, Library, Reagent, Titrant
from bufferfolio.subjects import State, Subject, state_at, subject_of


@dataclass(frozen=True, slots=True, kw_only=True)
class Dose:
    """An amount of a reagent that goes into the whole make-up."""

    reagent: Reagent
    amount: float  # mol


@dataclass(frozen=True, slots=True, kw_only=True)
class SpeciesAmount:
    """How much there is of one species."""

    name: str  # plain text: H2PO4-
    label: str | None  # for people, where the family's file has one
    family: str | None  # key; None: water's own ions and those that keep their charge
    charge: int
    molality: float  # mol/kg
    fraction: float | None  # of its family


@dataclass(frozen=True, slots=True, kw_only=True)
class Prediction:
    """A formulation at one temperature, after every dose. NaN where there is no solution."""

    model: ActivityModel
    state: State
    species: tuple[SpeciesAmount, ...]  # H+, OH-, each family's forms, other ions


def predictions(
    formulation: Formulation,
    library: Library,
    temperatures: Sequence[float],
    doses: Sequence[Dose] = (),
) -> tuple[Prediction, ...]:
    """Return a formulation at each temperature (K), after all doses went in."""
    subject = _dosed(subject_of(formulation, library), library, doses)
    states = [state_at(subject, kelvin) for kelvin in temperatures]
    return tuple(
        Prediction(model=subject.model, state=state, species=_species(subject, state))
        for state in states
    )


def _dosed(subject: Subject, library: Library, doses: Sequence[Dose]) -> Subject:
    formulation, water = subject.formulation, subject.water
    mixture = contents(formulation, library.families, tuple(dose.reagent for dose in doses))
    for dose in doses:
        # Which way it moves the pH plays no part in what a titrant brings.
        titrant = Titrant(reagent=dose.reagent, direction="upward", molarity=None, label="")
        added = addition(titrant, library.families, formulation.make_up.temperature)
        mixture = mixed(mixture, added, np.array(dose.amount / water))
        water += dose.amount * added.water
    # A dose may bring pairs of ions that were not there before.
    return replace(subject, mixture=mixture, water=water, interactions=library.interactions)


def _species(subject: Subject, state: State) -> tuple[SpeciesAmount, ...]:
    mixture, forms = subject.mixture, state.forms
    own = [
        _unbound("H+", 1, float(forms.hydrogen)),
        _unbound("OH-", -1, float(forms.hydroxide)),
    ]
    bound = [
        SpeciesAmount(
            name=form.name,
            label=form.label,
            family=family.key,
            charge=form.charge,
            molality=float(molality),
            fraction=None if math.isnan(share) else float(share),
        )
        for family, molalities, shares in zip(
            mixture.families, forms.families, forms.fractions, strict=True
        )
        for form, molality, share in zip(family.species, molalities, shares, strict=True)
    ]
    ions = [
        _unbound(ion.name, ion.charge, float(molality))
        for ion, molality in zip(mixture.ions, mixture.molalities, strict=True)
    ]
    return (*own, *bound, *ions)


def _unbound(name: str, charge: int, molality: float) -> SpeciesAmount:
    return SpeciesAmount(
        name=name, label=None, family=None, charge=charge, molality=molality, fraction=None
    )
