"""What a make-up puts into the water, and what one mole of a titrant adds to it."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from bufferfolio.definitions import Family, Formulation, Ion, MakeUp, Portion, Reagent, Titrant
from bufferfolio.speciation import Mixture
from bufferfolio.water import MOLAR_MASS, FloatArray, density

LITRE = 1e-3  # m3


@dataclass(frozen=True, slots=True, kw_only=True)
class Addition:
    """What one mole of a titrant's solute carries along."""

    families: tuple[Family, ...]
    per_family: tuple[float, ...]  # mol
    ions: tuple[Ion, ...]
    per_ion: tuple[float, ...]  # mol
    water: float  # kg
    volume: float | None  # m3 of liquid; None for a solid
    mass: float  # kg of what is weighed or poured


def brought_water(reagent: Reagent) -> float:
    """Return the water that one mole of a reagent brings: of crystallisation and of the liquid.

    Shapes: scalar.
    Units: result kg/mol.
    Raises: nothing.
    Source: definition.
    """
    liquid = 0.0
    if reagent.stock is not None:
        share = reagent.stock.mass_fraction
        liquid = reagent.molar_mass * (1.0 - share) / share
    return reagent.hydrate_water * MOLAR_MASS + liquid


def water_mass(make_up: MakeUp) -> float:
    """Return the mass of water that a make-up's molalities refer to.

    A solution made up to a volume counts as that volume of pure water: at 0.2 mol/kg this is good
    to about one per cent, which moves a buffer's pH by a few thousandths at most.

    Shapes: scalar.
    Units: result kg.
    Raises: nothing.
    Source: definition of molality; the approximation is the project's own, see DEVELOPERS.md.
    """
    if make_up.mass is not None:
        start = make_up.mass
    else:
        start = float(density(np.array(make_up.temperature))) * (make_up.volume or 0.0)
    if make_up.basis == "made up to":
        return start
    fixed = sum(p.amount * brought_water(p.reagent) for p in make_up.portions if p.basis == "mol")
    per_kg = sum(
        p.amount * brought_water(p.reagent) for p in make_up.portions if p.basis == "mol/kg"
    )
    return (start + fixed) / (1.0 - per_kg)


def moles(portion: Portion, water: float) -> float:
    """Return the amount of a portion's reagent in a batch with that much water.

    Shapes: scalar.
    Units: water kg; result mol.
    Raises: nothing.
    Source: definition.
    """
    return portion.amount * (water if portion.basis == "mol/kg" else 1.0)


def contents(
    formulation: Formulation, families: Mapping[str, Family], extra: tuple[Reagent, ...] = ()
) -> Mixture:
    """Return what one kilogram of the formulation's water holds.

    Shapes: totals (families,); molalities (ions,): one mixture, S = ().
    Units: mol/kg.
    Raises: KeyError for a family that was not read; the loader has refused such a file.
    Source: definition. Families and ions of `extra` reagents are listed too, with nothing of them.
    """
    water = water_mass(formulation.make_up)
    totals: dict[str, float] = {}
    strong: dict[Ion, float] = {}
    for portion in formulation.make_up.portions:
        amount = moles(portion, water) / water
        for key, share in portion.reagent.families.items():
            totals[key] = totals.get(key, 0.0) + amount * share
        for ion, share in portion.reagent.ions.items():
            strong[ion] = strong.get(ion, 0.0) + amount * share
    for reagent in extra:
        for key in reagent.families:
            totals.setdefault(key, 0.0)
        for ion in reagent.ions:
            strong.setdefault(ion, 0.0)
    return Mixture(
        families=tuple(families[key] for key in totals),
        totals=np.array(list(totals.values()), dtype=float),
        ions=tuple(strong),
        molalities=np.array(list(strong.values()), dtype=float),
    )


def addition(titrant: Titrant, families: Mapping[str, Family], temperature: float) -> Addition:
    """Return what one mole of a titrant brings, at the temperature at which it is measured.

    Shapes: scalar.
    Units: temperature K; results see `Addition`.
    Raises: KeyError for a family that was not read.
    Source: definition; a diluted working solution counts as its volume of water.
    """
    reagent = titrant.reagent
    water, volume = brought_water(reagent), None
    mass = reagent.molar_mass / reagent.purity
    if titrant.molarity is not None:
        volume = LITRE / titrant.molarity
        water = volume * float(density(np.array(temperature)))
        mass = water + reagent.molar_mass
    elif reagent.stock is not None:
        mass = reagent.molar_mass / reagent.stock.mass_fraction
        volume = mass / reagent.stock.density
    return Addition(
        families=tuple(families[key] for key in reagent.families),
        per_family=tuple(reagent.families.values()),
        ions=tuple(reagent.ions),
        per_ion=tuple(reagent.ions.values()),
        water=water,
        volume=volume,
        mass=mass,
    )


def pure_water(like: Mixture) -> Mixture:
    """Return water that holds nothing, with the same lists of families and ions.

    Shapes: as `like`.
    Units: mol/kg.
    Raises: nothing.
    Source: definition.
    """
    return Mixture(
        families=like.families,
        totals=np.zeros_like(like.totals),
        ions=like.ions,
        molalities=np.zeros_like(like.molalities),
    )


def mixed(mixture: Mixture, added: Addition, amount: FloatArray) -> Mixture:
    """Return a mixture after some of a titrant went in.

    The mixture has to list the titrant's families and ions already (see `contents`, `extra`).

    Shapes: mixture of one, S = (); amount S; result S.
    Units: amount mol of titrant per kg of the mixture's water; result mol/kg of all the water.
    Raises: ValueError where the mixture does not list a family or an ion of the titrant.
    Source: conservation of mass.
    """
    amount = np.asarray(amount, dtype=float)
    dilution = 1.0 + amount * added.water
    ones = np.ones_like(amount)
    totals = [total * ones for total in mixture.totals]
    strong = [molality * ones for molality in mixture.molalities]
    keys = [family.key for family in mixture.families]
    for family, share in zip(added.families, added.per_family, strict=True):
        row = keys.index(family.key)
        totals[row] = totals[row] + share * amount
    for ion, share in zip(added.ions, added.per_ion, strict=True):
        row = mixture.ions.index(ion)
        strong[row] = strong[row] + share * amount
    return Mixture(
        families=mixture.families,
        totals=np.array(totals).reshape(len(totals), *amount.shape) / dilution,
        ions=mixture.ions,
        molalities=np.array(strong).reshape(len(strong), *amount.shape) / dilution,
    )


def scaled(mixture: Mixture, factor: FloatArray) -> Mixture:
    """Return a mixture at another strength: everything but water multiplied.

    Shapes: mixture of one, S = (); factor S; result S.
    Units: factor dimensionless.
    Raises: nothing.
    Source: definition.
    """
    factor = np.asarray(factor, dtype=float)
    return Mixture(
        families=mixture.families,
        totals=np.multiply.outer(mixture.totals, factor),
        ions=mixture.ions,
        molalities=np.multiply.outer(mixture.molalities, factor),
    )
