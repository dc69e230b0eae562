"""What a sheet says of making a batch up: amounts, steps, words, and what stands on the shelf."""

import math
from functools import cache

import numpy as np
import pytest

from bufferfolio.field_data import ways_to
from bufferfolio.make_up_contexts import (
    BALANCES,
    CYLINDERS,
    US_GALLON,
    Bench,
    batch_of,
    bench_of,
)
from bufferfolio.make_up_words import adjustment_words, order_words, way_labels
from bufferfolio.recipes import measure_of
from bufferfolio.routes import Route
from bufferfolio.subjects import Subject, subject_of
from bufferfolio.water import density
from bufferfolio.weighing import Adjustment, adjustment_of, order_of, times, weighings
from recipes import shipped

FORMULATIONS = sorted(shipped().formulations)


def subject(key: str) -> Subject:
    return subject_of(shipped().formulations[key], shipped())


@cache
def ways_of(key: str) -> tuple[Route, ...]:
    return ways_to(subject(key), shipped())


def bench(key: str) -> Bench:
    return bench_of(subject(key), shipped(), ways_of(key))


# Grams in a litre of the primary standards, weighed in air; R. G. Bates, Determination of pH, 2nd
# ed., Wiley, New York 1973, table of the NBS standards; recalled.
STANDARDS = {
    "meter-check-phthalate": (10.12,),
    "meter-check-phosphate": (3.388, 3.533),
    "meter-check-blood": (1.179, 4.302),
    "meter-check-borax": (3.80,),
    "meter-check-carbonate": (2.092, 2.640),
    "meter-check-citrate": (11.41,),
}


@pytest.mark.parametrize("key", STANDARDS)
def test_the_weigh_out_of_the_primary_standards(key: str) -> None:
    """A litre holds a little less water than it has room for; ratios do not know of that."""
    recipe = subject(key).recipe
    pure = [
        1e3 * part.amount * measure_of(part) * shipped().reagents[part.key].purity
        for part in recipe.parts
    ]
    published = STANDARDS[key]
    water = float(density(np.array(298.15))) / 1e3  # kg in a litre, nothing dissolved
    for computed, stated in zip(pure, published, strict=True):
        assert computed / recipe.water * water == pytest.approx(stated, rel=0.01)
        assert computed / pure[0] == pytest.approx(stated / published[0], rel=1.5e-3)


def test_a_weigh_out_for_twenty_litres() -> None:
    """Twenty times 6.06 g, on three balances."""
    batch = times(subject("tris-assay").recipe, 20.0)
    for step, rounded in ((1e-5, 0.1212), (1e-3, 0.121), (1e-2, 0.12)):
        assert weighings(batch, step, 1e-7)[0].rounded == pytest.approx(rounded, rel=1e-12)


@pytest.mark.parametrize("key", FORMULATIONS)
def test_the_cylinder_that_a_sheet_starts_with_will_do(key: str) -> None:
    this, found = subject(key), bench(key)
    assert [step.value for step in found.balances if step.chosen] == ["0.01 g"]
    (chosen,) = (step for step in found.cylinders if step.chosen)
    for part in this.recipe.parts:
        if part.added.volume is not None:
            wanted = part.amount * measure_of(part)
            assert chosen.factor / 2.0 <= this.care.volume * wanted


def test_steps_are_powers_of_ten_from_fine_to_coarse() -> None:
    for steps in (BALANCES, CYLINDERS):
        powers = [math.log10(step.factor) for step in steps]
        assert powers == sorted(powers)
        assert powers == pytest.approx([round(power) for power in powers], abs=1e-12)


def test_units_of_a_batch() -> None:
    """A gallon is 231 cubic inches; a litre of water weighs what its density says."""
    assert US_GALLON.factor == pytest.approx(231 * 0.0254**3, rel=1e-12)
    units = {unit.label: unit for unit in batch_of(subject("tris-assay").formulation.make_up).units}
    assert list(units) == ["mL", "L", "m³", "US gal"]
    made = subject("meter-check-borax").formulation.make_up
    units = {unit.label: unit for unit in batch_of(made).units}
    assert list(units) == ["g", "kg", "mL", "L", "m³"]
    assert units["L"].factor == pytest.approx(0.998204, abs=2e-6)
    assert batch_of(made).unit.label == "kg"


@pytest.mark.parametrize("key", FORMULATIONS)
def test_what_stands_on_the_shelf_is_told(key: str) -> None:
    """Of every reagent of every way: formula, hazards spelled out, handling; no key is missing."""
    this = subject(key)
    ways = ways_of(key)
    found = bench_of(this, shipped(), ways)
    shelf = found.shelf
    assert len(found.ways) == len(set(found.ways)) == len(ways)
    for way in ways:
        for part in (*way.recipe.parts, *(each for one in way.instead for each in one)):
            about = shelf["reagents"][part.key]
            assert about["hazards"] == list(shipped().reagents[part.key].hazards)
            assert set(about["hazards"]) <= set(shelf["statements"])
        assert {name for name, _ in way.differences} <= set(shelf["ions"])
        assert len(way.recipe.parts) <= found.rows
        assert all(len(one) < found.forms for one in way.instead)


def test_ways_are_told_apart_by_what_they_do_not_share() -> None:
    ways = ways_of("tris-assay")
    assert way_labels([way.recipe for way in ways]) == (
        "Tris + hydrochloric acid, 37 %",
        "Tris + Tris hydrochloride",
        "Tris hydrochloride + sodium hydroxide, 1 mol/L",
    )
    alone = [ways_of("plain-water")[0].recipe]
    assert way_labels(alone) == ("",)


def test_order_in_words() -> None:
    steps = order_words(subject("tris-assay").recipe)
    assert steps[0] == ("", "Begin with about four fifths of the water.")
    assert steps[3][0] == "hydrochloric acid, 37 %"
    assert steps[3][1].startswith("add it slowly")


def test_a_liquid_acid_or_base_goes_in_slowly_whatever_family_it_brings() -> None:
    """Sulfuric acid brings a family, and boils water as the strongest acid does."""
    ways = ways_of("activation-dip")
    recipes = [way.recipe for way in ways]
    with_acid = [
        one for one in recipes if any(part.key == "sulfuric-acid-96" for part in one.parts)
    ]
    assert with_acid
    for recipe in with_acid:
        action = {recipe.parts[at].key: action for at, action in order_of(recipe) if at >= 0}
        assert action["sulfuric-acid-96"] == "slowly"


def test_advice_in_words() -> None:
    this = subject("tris-assay")
    lines = adjustment_words(adjustment_of(this), 0.05, can_be_set=True)
    plain = [line.replace("\N{NO-BREAK SPACE}", " ") for line in lines]
    assert plain == [
        "At 20 °C set it to pH 8.30: at 25 °C it then reads 8.16.",
        "Its pH falls by 0.028 for each °C that it is warmer.",
        "A batch that reads 8.16 at 20 °C reads 8.02 at 25 °C, outside the tolerance of ± 0.05.",
        "Let it come to 25 °C, or set it to the value for the temperature that it has.",
    ]


@pytest.mark.parametrize(
    ("made", "slope", "mistaken", "matters", "words"),
    [
        (298.15, 0.0, 7.0, False, ["for which its pH is stated", "hardly changes"]),
        (288.15, 0.004, 7.04, False, ["it should read pH 6.96", "rises by 0.004", "inside ±"]),
        (288.15, -0.01, 6.9, True, ["it should read", "falls by 0.010", "outside ± 0.05 (no"]),
    ],
)
def test_advice_in_other_cases(
    made: float, slope: float, mistaken: float, *, matters: bool, words: list[str]
) -> None:
    """Made up where it is used; hardly drifting; nothing to set it with, and no tolerance."""
    advice = Adjustment(
        temperature=made,
        slope=slope,
        pH=6.96,
        reference_temperature=298.15,
        reference_pH=7.0,
        mistaken=mistaken,
        matters=matters,
    )
    lines = adjustment_words(advice, None, can_be_set=False)
    assert len(lines) == len(words)
    for line, said in zip(lines, words, strict=True):
        assert said in line.replace("\N{NO-BREAK SPACE}", " ")
