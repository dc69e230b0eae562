"""A make-up as amounts that can be changed: what was weighed and measured, and what that makes."""

from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Final, Literal

import numpy as np

from bufferfolio.composition import Addition, addition, moles, water_mass
from bufferfolio.definitions import Family, Formulation, Ion, Reagent, Titrant
from bufferfolio.speciation import Mixture, fractions
from bufferfolio.temperature import pK_at
from bufferfolio.tolerances import content_doubt
from bufferfolio.water import FloatArray, density

Nature = Literal["acid", "base", "neutral"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Part:
    """One reagent of a recipe, as it is weighed or measured out."""

    key: str  # of the reagent
    label: str
    added: Addition  # what one mole of it brings; its volume is None where it is weighed
    amount: float  # mol
    doubt: float  # of its content, relative, k = 2
    releases: tuple[str, ...]  # gases, and what sets them free: "chlorine with acid"
    nature: Nature  # towards neutral water


@dataclass(frozen=True, slots=True, kw_only=True)
class Recipe:
    """Reagents in an amount of water."""

    parts: tuple[Part, ...]
    water: float  # kg that is measured out, or that the volume of the solution counts as
    counted: bool  # whether the parts' own water comes on top ("water added")
    weighed: bool  # whether the water is weighed; otherwise it is measured by volume


def part_of(
    reagent: Reagent, amount: float, families: Mapping[str, Family], *, weighed: bool = False
) -> Part:
    """Return an amount (mol) of a reagent as it stands on the shelf; liquids may be weighed."""
    undiluted = Titrant(reagent=reagent, direction="upward", molarity=None, label=reagent.label)
    # Of what it brings, only the volume depends on a temperature, and only if diluted.
    added = addition(undiluted, families, 293.15)
    return Part(
        key=reagent.key,
        label=reagent.label,
        added=replace(added, volume=None) if weighed else added,
        amount=amount,
        doubt=content_doubt(reagent),
        releases=reagent.releases,
        nature=nature_of(reagent, families),
    )


def nature_of(reagent: Reagent, families: Mapping[str, Family]) -> Nature:
    """Return what a reagent is to water, by the charge it would carry at pH 7 and 25 °C."""
    pH, kelvin = np.array(7.0), np.array(298.15)
    charge = sum(ion.charge * share for ion, share in reagent.ions.items())
    for key, amount in reagent.families.items():
        family = families[key]
        pK = np.array([pK_at(step, kelvin) for step in family.steps])
        forms = fractions(family.charge, pK, pH, np.array(0.0), None)
        held = zip(family.species, forms, strict=True)
        charge += amount * sum(form.charge * float(share) for form, share in held)
    if abs(charge) < NEUTRAL:
        return "neutral"
    # What is missing in the balance of charge is H+ or OH-.
    return "acid" if charge < 0.0 else "base"


def measure_of(part: Part) -> float:
    """Return what one mole of a part weighs (kg), or measures (m3) where it is a liquid."""
    return part.added.mass if part.added.volume is None else part.added.volume


def recipe_of(formulation: Formulation, families: Mapping[str, Family]) -> Recipe:
    """Return the recipe that a formulation states."""
    make_up = formulation.make_up
    water = water_mass(make_up)
    if make_up.mass is not None:
        measured = make_up.mass
    else:
        measured = float(density(np.array(make_up.temperature))) * (make_up.volume or 0.0)
    return Recipe(
        parts=tuple(
            part_of(portion.reagent, moles(portion, water), families, weighed=portion.weighed)
            for portion in make_up.portions
        ),
        water=measured,
        counted=make_up.basis == "water added",
        weighed=make_up.mass is not None,
    )


def recipe_water(recipe: Recipe) -> float:
    """Return all the water (kg) that a recipe's molalities refer to."""
    if not recipe.counted:
        return recipe.water
    return recipe.water + sum(part.amount * part.added.water for part in recipe.parts)


def with_amounts(recipe: Recipe, amounts: Mapping[int, float]) -> Recipe:
    """Return a recipe with other amounts (mol) of some parts, by their position."""
    parts = [
        replace(part, amount=amounts.get(position, part.amount))
        for position, part in enumerate(recipe.parts)
    ]
    return replace(recipe, parts=tuple(parts))


def listing(mixture: Mixture, *others: Addition) -> Mixture:
    """Return a mixture that also lists families and ions of what is to be added, none of it yet.

    Only for mixtures of one, S = ().
    """
    families = {family.key: family for family in mixture.families}
    ions = dict.fromkeys(mixture.ions)
    for other in others:
        families.update({family.key: family for family in other.families})
        ions.update(dict.fromkeys(other.ions))
    totals = np.zeros(len(families))
    totals[: len(mixture.families)] = mixture.totals
    molalities = np.zeros(len(ions))
    molalities[: len(mixture.ions)] = mixture.molalities
    return Mixture(
        families=tuple(families.values()), totals=totals, ions=tuple(ions), molalities=molalities
    )


def mixture_of(recipe: Recipe, like: Mixture) -> Mixture:
    """Return what one kilogram of the recipe's water holds, families and ions of `like` first."""
    listed = listing(like, *(part.added for part in recipe.parts))
    water = recipe_water(recipe)
    keys = [family.key for family in listed.families]
    totals, strong = np.zeros(len(keys)), np.zeros(len(listed.ions))
    for part in recipe.parts:
        per_family, per_ion = shares(part, keys, listed.ions)
        totals += part.amount / water * per_family
        strong += part.amount / water * per_ion
    return Mixture(families=listed.families, totals=totals, ions=listed.ions, molalities=strong)


def shares(part: Part, keys: list[str], ions: tuple[Ion, ...]) -> tuple[FloatArray, FloatArray]:
    """Return what one mole of a part brings, along lists of families and ions.

    Shapes: results (families,) and (ions,).
    Units: mol per mol.
    Raises: ValueError where a list lacks what the part brings.
    Source: definition.
    """
    per_family, per_ion = np.zeros(len(keys)), np.zeros(len(ions))
    for family, share in zip(part.added.families, part.added.per_family, strict=True):
        per_family[keys.index(family.key)] += share
    for ion, share in zip(part.added.ions, part.added.per_ion, strict=True):
        per_ion[ions.index(ion)] += share
    return per_family, per_ion


NEUTRAL: Final = 0.1  # mol of charge per mol, below which a reagent is neither acid nor base
