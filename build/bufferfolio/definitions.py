"""What a definition file says, as frozen records: no chemistry beyond their own fields.

Units are fixed: K, mol/kg (per kg of water), J/mol, J/(mol K), kg/m3, kg, mol.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

from bufferfolio.errors import Place

HowKnown = Literal["seen", "seen-secondary", "recalled", "computed"]
Origin = Literal["computed", "published", "measured", "not stated"]
ModelName = Literal["ideal", "davies", "specific-ion"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Interval:
    """A closed range of one quantity."""

    low: float
    high: float

    def holds(self, value: float) -> bool:
        """Say whether `value` lies in the range, its ends included."""
        return self.low <= value <= self.high


@dataclass(frozen=True, slots=True, kw_only=True)
class Source:
    """A published work."""

    key: str
    cite: str  # authors, title or journal, year, pages, as one line
    doi: str | None
    note: str | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Citation:
    """Which work a number comes from, where in it, and how the number got here."""

    source: Source
    where: str
    how_known: HowKnown


@dataclass(frozen=True, slots=True, kw_only=True)
class Ion:
    """An ion that neither gains nor loses protons: its amount is a total with a charge."""

    name: str  # as chemists write it in plain text: Na+, SO4-2
    charge: int


@dataclass(frozen=True, slots=True, kw_only=True)
class ReferenceConstants:
    """A pK at a reference temperature with what carries it elsewhere; heat capacity constant."""

    pK: float  # molal standard state, zero ionic strength
    temperature: float  # K, where the three hold
    enthalpy: float | None  # J/mol, of losing the proton; None: not stated
    heat_capacity: float | None  # J/(mol K), change on losing the proton; None: not stated


@dataclass(frozen=True, slots=True, kw_only=True)
class PublishedEquation:
    """pK = constant + inverse/T + linear T + logarithm ln T + inverse_square/T^2."""

    name: str  # as a page prints it: "Harned & Ehlers 1933"
    constant: float
    inverse: float  # K
    linear: float  # 1/K
    logarithm: float
    inverse_square: float  # K2


@dataclass(frozen=True, slots=True, kw_only=True)
class Step:
    """One proton lost: how its pK moves with temperature, and who says so."""

    law: ReferenceConstants | PublishedEquation
    valid_temperature: Interval  # K, the range the source vouches for
    uncertainty: float | None  # standard uncertainty of pK; None: not stated
    citation: Citation  # of the pK or the equation
    enthalpy_citation: Citation | None  # of the enthalpy; None: not stated, or an equation
    heat_capacity_citation: Citation | None = None  # of the heat capacity, likewise
    alternative: str | None  # a second published value, in words, where sources disagree
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Species:
    """One form of a family."""

    name: str  # plain text: H2PO4-
    label: str  # for pages: H₂PO₄⁻
    charge: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Family:
    """Species that differ by protons only, the one with most protons first."""

    key: str  # file name without ending: phosphate
    label: str
    synonyms: tuple[str, ...]
    species: tuple[Species, ...]
    steps: tuple[Step, ...]  # one fewer than species
    note: str | None
    place: Place

    @property
    def charge(self) -> int:
        """The charge of the form that holds the most protons."""
        return self.species[0].charge


@dataclass(frozen=True, slots=True, kw_only=True)
class Stock:
    """What makes a reagent a liquid."""

    mass_fraction: float  # kg of solute per kg of liquid
    density: float  # kg/m3
    temperature: float  # K, where the density holds


@dataclass(frozen=True, slots=True, kw_only=True)
class Reagent:
    """What is on the shelf, and what one mole of it brings into water."""

    key: str  # file name without ending: disodium-phosphate-heptahydrate
    label: str
    formula: str  # Na2HPO4·7H2O
    synonyms: tuple[str, ...]
    cas: str | None
    molar_mass: float  # kg/mol, of the formula with its water of crystallisation
    hydrate_water: float  # mol of water per mol
    families: Mapping[str, float]  # mol of each family per mol
    ions: Mapping[Ion, float]  # mol of each strong ion per mol; one liquid may bring several salts
    purity: float  # kg of formula per kg of solid; 1 for a stock
    stock: Stock | None
    hazards: tuple[str, ...]  # GHS statements: H302, H314 ...; empty: none assigned
    releases: tuple[str, ...]  # gases it gives off on meeting acid or base: "chlorine with acid"
    handling: str
    citation: Citation  # of purity, density and hazard statements
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Portion:
    """An amount of one reagent."""

    reagent: Reagent
    amount: float  # of the reagent's formula, in the unit that `basis` names
    basis: Literal["mol", "mol/kg"]  # mol in the make-up, or mol per kg of its water
    stated: str  # as the file wrote it: "10.12 g"
    weighed: bool  # on a balance: every solid, and a liquid whose amount is stated as a mass
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class MakeUp:
    """How a formulation is put together."""

    basis: Literal["made up to", "water added"]
    volume: float | None  # m3: of the solution ("made up to") or of the water ("water added")
    mass: float | None  # kg of water added; exactly one of volume and mass is given
    temperature: float  # K, at which volumes are measured
    portions: tuple[Portion, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Expectation:
    """The pH a formulation is meant to have."""

    pH: float
    temperature: float  # K
    tolerance: float  # in pH, what the chemist accepts
    origin: Origin  # where the pH comes from; a computed one proves nothing about the model


@dataclass(frozen=True, slots=True, kw_only=True)
class Titrant:
    """A reagent that corrects a batch, as it is added."""

    reagent: Reagent
    direction: Literal["upward", "downward"]
    molarity: float | None  # mol/L of a diluted working solution; None: the reagent as it is
    label: str  # "sodium hydroxide, 1 mol/L"


@dataclass(frozen=True, slots=True, kw_only=True)
class Tolerances:
    """How well things are weighed, measured, read and modelled; each is a k = 2 interval."""

    weighing: float | None = None  # relative, of each mass; None: not stated, here and below
    volume: float | None = None  # relative, of each volume
    temperature: float | None = None  # K
    meter: float | None = None  # in pH
    model: float | None = None  # in pH: what the prediction itself may be off by


@dataclass(frozen=True, slots=True, kw_only=True)
class Formulation:
    """Reagents in water, what is expected of them, and how they are used and corrected."""

    key: str
    title: str
    revision: str
    purpose: str
    make_up: MakeUp
    expected: Expectation | None
    use_temperature: Interval  # K
    use_pH: Interval
    titrants: tuple[Titrant, ...]
    medium: Literal["dilute"]
    model: ModelName | None  # None: it follows from the ionic strength
    cautions: tuple[str, ...]
    accepted_dangers: tuple[str, ...]  # dangerous combinations the file explains
    tolerances: Tolerances = Tolerances()
    never_corrected: bool = False  # the titrants then only show its reserve
    place: Place


@dataclass(frozen=True, slots=True, kw_only=True)
class Interaction:
    """A published ion interaction coefficient of the specific-ion model."""

    cation: str  # species or ion name
    anion: str
    epsilon: float  # kg/mol
    citation: Citation


@dataclass(frozen=True, slots=True, kw_only=True)
class Library:
    """Everything that was read, by key."""

    sources: Mapping[str, Source]
    families: Mapping[str, Family]
    reagents: Mapping[str, Reagent]
    formulations: Mapping[str, Formulation]
    interactions: tuple[Interaction, ...]
