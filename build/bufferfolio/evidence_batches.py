"""The mixtures of a published table, gathered into batches that are solved together."""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from typing import Final, Literal

import numpy as np

from bufferfolio.activity import MODELS, ActivityModel
from bufferfolio.definitions import (
    Family,
    Interaction,
    Interval,
    Ion,
    Library,
    ModelName,
    ReferenceConstants,
    Species,
    Step,
)
from bufferfolio.equilibrium import Equilibrium, solve
from bufferfolio.published import OWN, PublishedTable, PublishedValue, Solution
from bufferfolio.speciation import Mixture
from bufferfolio.temperature import Constants, constants_at
from bufferfolio.water import FloatArray, density

Way = Literal["library", "no pairs", "davies", "no activity"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Setting:
    """How one way reckons activity coefficients."""

    label: str
    model: ModelName
    pairs: bool  # whether the library's interaction coefficients take part


WAYS: Final[Mapping[Way, Setting]] = {
    "library": Setting(label="library", model="specific-ion", pairs=True),
    "no pairs": Setting(label="without pair terms", model="specific-ion", pairs=False),
    "davies": Setting(label="plain Davies", model="davies", pairs=False),
    "no activity": Setting(label="no activity model", model="ideal", pairs=False),
}


@dataclass(frozen=True, slots=True, kw_only=True)
class Batch:
    """Rows of a table that hold the same families and ions: one mixture of the shape (rows,)."""

    rows: tuple[int, ...]
    mixture: Mixture  # mol/kg, titrants mixed in
    temperature: FloatArray  # K
    constants: Constants
    model: ActivityModel
    interactions: Sequence[Interaction]

    def solved(self, dilution: float = 1.0, warmer: float = 0.0) -> Equilibrium:
        """Return the state after dilution with water and a change of temperature."""
        mixture = replace(
            self.mixture,
            totals=self.mixture.totals / dilution,
            molalities=self.mixture.molalities / dilution,
        )
        constants = self.constants
        if warmer:
            constants = constants_at(mixture.families, self.temperature + warmer)
        return solve(mixture, constants, self.model, self.interactions)


def kilograms_a_litre(temperature: FloatArray) -> FloatArray:
    """Return the water in a litre of a published mixture, which counts as a litre of water.

    Shapes: temperature S; result S.
    Units: temperature K; result kg.
    Raises: nothing.
    Source: the project's own approximation, as for a make-up that is "made up to" a volume.
    """
    result: FloatArray = density(temperature) / 1000.0
    return result


def batches(table: PublishedTable, library: Library, way: Way) -> Iterator[Batch]:
    """Yield the rows of a table in batches of the same families, ions and own constants."""
    grouped: dict[tuple[object, ...], list[int]] = {}
    for number, row in enumerate(table.rows):
        families, ions = _contents(row)
        grouped.setdefault((tuple(families), tuple(ions), row.pK), []).append(number)
    setting = WAYS[way] if table.scale != "concentration" else WAYS["no activity"]
    for numbers in grouped.values():
        rows = [table.rows[number] for number in numbers]
        families, ions = _contents(rows[0])
        known = tuple(family_of(key, rows[0], library) for key in families)
        kelvin = np.array([row.temperature for row in rows])
        # Concentrations of a textbook are taken as they are.
        per_litre = table.amounts == "mol/L" and table.scale != "concentration"
        kilograms = kilograms_a_litre(kelvin) if per_litre else np.ones(len(rows))
        amounts = [_contents(row) for row in rows]
        totals = [[there[key] for there, _ in amounts] for key in families]
        strong = [[there[ion] for _, there in amounts] for ion in ions]
        constants = constants_at(known, kelvin)
        if table.pKw is not None:
            constants = replace(constants, pKw=np.full(len(rows), table.pKw))
        yield Batch(
            rows=tuple(numbers),
            mixture=Mixture(
                families=known,
                totals=np.array(totals).reshape(len(known), len(rows)) / kilograms,
                ions=tuple(ions),
                molalities=np.array(strong).reshape(len(ions), len(rows)) / kilograms,
            ),
            temperature=kelvin,
            constants=constants,
            model=MODELS[setting.model],
            interactions=library.interactions if setting.pairs else (),
        )


def _contents(row: PublishedValue) -> tuple[dict[str, float], dict[Ion, float]]:
    """Return what a mixture holds once its titrant is in; volumes add up."""
    families: dict[str, float] = {}
    ions: dict[Ion, float] = {}
    volume, added = row.volume or 1.0, row.added or 0.0
    for solution, share in (
        (row.solution, volume / (volume + added)),
        (row.titrant, added / (volume + added)),
    ):
        if solution is not None:
            _add(families, ions, solution, share)
    return families, ions


def _add(
    families: dict[str, float], ions: dict[Ion, float], solution: Solution, share: float
) -> None:
    for key, amount in solution.families.items():
        families[key] = families.get(key, 0.0) + share * amount
    for ion, amount in solution.ions.items():
        ions[ion] = ions.get(ion, 0.0) + share * amount


def family_of(key: str, row: PublishedValue, library: Library) -> Family:
    """Return a family of the library, or the one of the source's own constants."""
    return _own_family(row) if key == OWN else library.families[key]


def _own_family(row: PublishedValue) -> Family:
    """Return the family that a source's own constants make up, an uncharged acid first."""
    steps = tuple(
        Step(
            law=ReferenceConstants(
                pK=pK, temperature=row.temperature, enthalpy=None, heat_capacity=None
            ),
            valid_temperature=ALWAYS,
            uncertainty=None,
            citation=row.citation,
            enthalpy_citation=None,
            alternative=None,
            place=row.place,
        )
        for pK in row.pK
    )
    species = tuple(
        Species(name=f"{OWN} {lost}", label=f"{OWN} {lost}", charge=-lost)
        for lost in range(len(row.pK) + 1)
    )
    return Family(
        key=OWN, label=OWN, synonyms=(), species=species, steps=steps, note=None, place=row.place
    )


ALWAYS: Final = Interval(low=0.0, high=1000.0)  # K
