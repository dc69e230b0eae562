"""The make-up of a formulation as its sheet shows it: batch, amounts and hazard statements."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from typing import Final

import numpy as np

from bufferfolio.composition import moles
from bufferfolio.definitions import Formulation, Library, MakeUp, Portion, Reagent
from bufferfolio.engine_data import Data
from bufferfolio.formatting import chemical, mass, plain, volume
from bufferfolio.hazards import statement
from bufferfolio.make_up_words import adjustment_words, order_words, way_labels
from bufferfolio.page_parts import Cited, cited
from bufferfolio.recipes import measure_of
from bufferfolio.routes import Route
from bufferfolio.subjects import Subject
from bufferfolio.water import density
from bufferfolio.weighing import adjustment_of


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
class Step:
    """What a balance can tell apart, or the marks of a cylinder."""

    value: str
    label: str
    factor: float  # to kg or m³
    chosen: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Bench:
    """What the weigh-out of a sheet starts with, and its advice."""

    balances: tuple[Step, ...]
    cylinders: tuple[Step, ...]
    ways: tuple[str, ...]  # the recipe first
    rows: int  # reagents of the way that has most
    forms: int  # of the reagent that has most
    order: tuple[tuple[str, str], ...]
    advice: tuple[str, ...]
    shelf: Data  # what the page says of the reagents of all ways


@dataclass(frozen=True, slots=True, kw_only=True)
class HazardRow:
    """A hazard statement and who carries it."""

    code: str
    words: str
    reagents: tuple[str, ...]


def batch_of(make_up: MakeUp) -> Batch:
    """Return how much a recipe makes, in the unit that reads best."""
    if make_up.mass is not None:
        heavy = float(density(np.array(make_up.temperature)))
        others = tuple(replace(each, factor=heavy * each.factor) for each in VOLUME_UNITS)
        return _batch("mass", make_up.mass, make_up.basis, others)
    return _batch("volume", make_up.volume or 0.0, make_up.basis, (US_GALLON,))


def correct_context(formulation: Formulation, batch: Batch) -> CorrectContext:
    """Return what the section that corrects a batch starts with: the recipe's own volume."""
    amount = batch.amount if batch.quantity == "volume" else batch.amount / WATER
    titrants = enumerate(formulation.titrants)
    return CorrectContext(
        volume=_batch("volume", amount, batch.basis, (US_GALLON,)),
        choices=(
            ("", "the one that fits"),
            *((str(at), titrant.label) for at, titrant in titrants),
        ),
    )


def _batch(quantity: str, amount: float, basis: str, others: tuple[Unit, ...]) -> Batch:
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
        units=(*units, *others),
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


def bench_of(subject: Subject, library: Library, routes: Sequence[Route]) -> Bench:
    """Return what the weigh-out starts with, and the advice for the recipe as it is written."""
    recipe, formulation = subject.recipe, subject.formulation
    drops = [part.amount * measure_of(part) for part in recipe.parts if part.added.volume]
    fine = (
        [step for step in CYLINDERS if step.factor / 2.0 <= subject.care.volume * min(drops)]
        if drops
        else []
    )
    cylinder = fine[-1] if fine else CYLINDERS[USUAL_CYLINDER]
    expected = formulation.expected
    return Bench(
        balances=BALANCES,
        cylinders=tuple(replace(step, chosen=step == cylinder) for step in CYLINDERS),
        ways=way_labels([route.recipe for route in routes]),
        rows=max(len(route.recipe.parts) for route in routes),
        forms=1 + max((len(each) for route in routes for each in route.instead), default=0),
        order=order_words(recipe),
        advice=adjustment_words(
            adjustment_of(subject),
            None if expected is None else expected.tolerance,
            can_be_set=bool(formulation.titrants),
        ),
        shelf={
            **shelf_data(routes, library),
            "stated": [portion.stated for portion in formulation.make_up.portions],
        },
    )


def shelf_data(routes: Sequence[Route], library: Library) -> Data:
    """Return what the page says of every reagent that a way may take, its hazards spelled out."""
    keys: dict[str, None] = {}
    ions: dict[str, str] = {}
    for route in routes:
        for part in (*route.recipe.parts, *(each for one in route.instead for each in one)):
            keys[part.key] = None
        ions.update((name, chemical(name)) for name, _ in route.differences)
    reagents = {key: library.reagents[key] for key in keys}
    codes = sorted({code for reagent in reagents.values() for code in reagent.hazards})
    return {
        "reagents": {
            key: {
                "formula": chemical(reagent.formula),
                "grade": grade_of(reagent),
                "hazards": list(reagent.hazards),
                "handling": reagent.handling,
            }
            for key, reagent in reagents.items()
        },
        "statements": {code: statement(code) for code in codes},
        "ions": ions,
    }


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
# Exact by definition: 231 cubic inches.
US_GALLON: Final = Unit(value="gal", label="US gal", factor=3.785411784e-3)


def _steps(chosen: str, *steps: tuple[str, float]) -> tuple[Step, ...]:
    return tuple(
        Step(value=value, label=value, factor=factor, chosen=value == chosen)
        for value, factor in steps
    )


# Powers of ten only: the page writes as many decimals as the display has.
BALANCES: Final = _steps(
    "0.01 g",
    ("0.1 mg", 1e-7),
    ("0.001 g", 1e-6),
    ("0.01 g", 1e-5),
    ("0.1 g", 1e-4),
    ("1 g", 1e-3),
    ("10 g", 1e-2),
    ("100 g", 1e-1),
)
CYLINDERS: Final = _steps(
    "",
    ("1 µL", 1e-9),
    ("0.01 mL", 1e-8),
    ("0.1 mL", 1e-7),
    ("1 mL", 1e-6),
    ("10 mL", 1e-5),
    ("100 mL", 1e-4),
)
USUAL_CYLINDER: Final = 2  # where the recipe has no liquid
