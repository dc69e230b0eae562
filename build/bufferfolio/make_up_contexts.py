"""The make-up of a formulation as its sheet shows it: batch, amounts and hazard statements."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Final

from bufferfolio.composition import moles
from bufferfolio.definitions import Formulation, MakeUp, Portion, Reagent
from bufferfolio.formatting import chemical, mass, plain, volume
from bufferfolio.hazards import statement
from bufferfolio.page_parts import Cited, cited
from bufferfolio.subjects import Subject


@dataclass(frozen=True, slots=True, kw_only=True)
class PortionRow:
    """One line of the make-up table."""

    reagent: Reagent
    formula: str
    grade: str  # purity, or concentration and density; "" for a pure solid
    stated: str
    amount: str  # in g or mL, for the recipe's own batch
    source: Cited


@dataclass(frozen=True, slots=True, kw_only=True)
class Unit:
    """A unit in which a batch may be given."""

    value: str
    label: str
    factor: float  # to m³ or kg


@dataclass(frozen=True, slots=True, kw_only=True)
class Batch:
    """How much the recipe makes, as the batch field starts with it."""

    quantity: str  # "volume" or "mass"
    amount: float  # m³, or kg of water
    basis: str  # "made up to" or "water added"
    typed: str
    unit: Unit
    units: tuple[Unit, ...]
    text: str  # with its unit


@dataclass(frozen=True, slots=True, kw_only=True)
class CorrectContext:
    """What the section that corrects a batch starts with."""

    volume: Batch  # in units of volume, whatever the recipe is stated in
    choices: tuple[tuple[str, str], ...]  # of a titrant: (value, words)


@dataclass(frozen=True, slots=True, kw_only=True)
class HazardRow:
    """A hazard statement and who carries it."""

    code: str
    words: str
    reagents: tuple[str, ...]


def batch_of(make_up: MakeUp) -> Batch:
    """Return how much a recipe makes, in the unit that reads best."""
    if make_up.mass is not None:
        return _batch("mass", make_up.mass, make_up.basis)
    return _batch("volume", make_up.volume or 0.0, make_up.basis)


def correct_context(formulation: Formulation, batch: Batch) -> CorrectContext:
    """Return what the section that corrects a batch starts with: the recipe's own volume."""
    amount = batch.amount if batch.quantity == "volume" else batch.amount / WATER
    titrants = enumerate(formulation.titrants)
    return CorrectContext(
        volume=_batch("volume", amount, batch.basis),
        choices=(("", "what fits"), *((str(at), titrant.label) for at, titrant in titrants)),
    )


def _batch(quantity: str, amount: float, basis: str) -> Batch:
    units, text = (
        (MASS_UNITS, mass(amount)) if quantity == "mass" else (VOLUME_UNITS, volume(amount))
    )
    fitting = [unit for unit in units if unit.factor <= amount]
    unit = fitting[-1] if fitting else units[0]
    return Batch(
        quantity=quantity,
        amount=amount,
        basis=basis,
        typed=plain(amount / unit.factor, 6),
        unit=unit,
        units=units,
        text=text,
    )


def portion_rows(subject: Subject, numbers: Mapping[str, int]) -> tuple[PortionRow, ...]:
    """Return the make-up table, weighed or measured for the recipe's own batch."""
    return tuple(
        PortionRow(
            reagent=portion.reagent,
            formula=chemical(portion.reagent.formula),
            grade=grade_of(portion.reagent),
            stated=portion.stated,
            amount=_amount(portion, subject.water),
            source=cited(portion.reagent.citation, "reagent", numbers),
        )
        for portion in subject.formulation.make_up.portions
    )


def grade_of(reagent: Reagent) -> str:
    """Return purity, or concentration and density; nothing for a pure solid."""
    stock = reagent.stock
    if stock is not None:
        share, density = 100.0 * stock.mass_fraction, stock.density / 1000.0
        return f"{plain(share, 3)} % by mass, {plain(density)} g/mL"
    return f"{plain(100.0 * reagent.purity)} % pure" if reagent.purity < 1.0 else ""


def _amount(portion: Portion, water: float) -> str:
    reagent = portion.reagent
    share = reagent.stock.mass_fraction if reagent.stock else reagent.purity
    kilograms = moles(portion, water) * reagent.molar_mass / share
    if portion.weighed or reagent.stock is None:
        return mass(kilograms)
    return volume(kilograms / reagent.stock.density)


def reagents_of(formulation: Formulation) -> tuple[Reagent, ...]:
    """Return the reagents of make-up and titrants, each once, in the order of use."""
    used = [portion.reagent for portion in formulation.make_up.portions]
    used += [titrant.reagent for titrant in formulation.titrants]
    return tuple({reagent.key: reagent for reagent in used}.values())


def hazard_rows(reagents: Sequence[Reagent]) -> tuple[HazardRow, ...]:
    """Return every hazard statement of some reagents, spelled out."""
    codes = sorted({code for reagent in reagents for code in reagent.hazards})
    return tuple(
        HazardRow(
            code=code,
            words=statement(code),
            reagents=tuple(item.label for item in reagents if code in item.hazards),
        )
        for code in codes
    )


WATER: Final = 1000.0  # kg/m3, for a volume to start with
VOLUME_UNITS: Final[tuple[Unit, ...]] = (
    Unit(value="mL", label="mL", factor=1e-6),
    Unit(value="L", label="L", factor=1e-3),
    Unit(value="m3", label="m³", factor=1.0),
)
MASS_UNITS: Final[tuple[Unit, ...]] = (
    Unit(value="g", label="g", factor=1e-3),
    Unit(value="kg", label="kg", factor=1.0),
)
