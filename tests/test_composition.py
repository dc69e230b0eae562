"""What a make-up puts into the water: masses, waters of hydrates and liquids, titrants."""

import numpy as np
import pytest

from bufferfolio.composition import (
    addition,
    brought_water,
    contents,
    mixed,
    moles,
    pure_water,
    scaled,
    water_mass,
)
from bufferfolio.definitions import Formulation, Interval, MakeUp, Portion, Titrant
from recipes import shipped
from solutions import CHLORIDE, NOWHERE, SODIUM, mixture_of, strong_titrant

WATER = 0.018015268  # kg/mol


def portion(key: str, amount: float, basis: str = "mol") -> Portion:
    reagent = shipped().reagents[key]
    return Portion(
        reagent=reagent,
        amount=amount,
        basis=basis,
        stated="",
        weighed=reagent.stock is None,
        place=NOWHERE,
    )


def make_up(
    *portions: Portion,
    basis: str = "made up to",
    volume: float | None = 1e-3,
    mass: float | None = None,
    celsius: float = 20.0,
) -> MakeUp:
    return MakeUp(
        basis=basis,
        volume=volume,
        mass=mass,
        temperature=273.15 + celsius,
        portions=portions,
    )


def formulation(recipe: MakeUp) -> Formulation:
    return Formulation(
        key="made-up",
        title="made up",
        revision="1",
        purpose="a test",
        make_up=recipe,
        expected=None,
        use_temperature=Interval(low=278.15, high=313.15),
        use_pH=Interval(low=4.0, high=10.0),
        titrants=(),
        medium="dilute",
        model="ideal",
        cautions=(),
        accepted_dangers=(),
        place=NOWHERE,
    )


def titrant(key: str, molarity: float | None = None) -> Titrant:
    return Titrant(
        reagent=shipped().reagents[key], direction="upward", molarity=molarity, label=key
    )


def test_a_volume_counts_as_that_much_water() -> None:
    """One litre at 20 °C: 0.9982 kg; the same flask filled at 4 °C holds more."""
    assert water_mass(make_up()) == pytest.approx(0.998204, abs=2e-6)
    assert water_mass(make_up(celsius=4.0)) == pytest.approx(0.999972, abs=2e-6)


def test_hydrates_and_liquids_bring_their_water() -> None:
    heptahydrate = shipped().reagents["disodium-hydrogen-phosphate-heptahydrate"]
    assert brought_water(heptahydrate) == pytest.approx(7.0 * WATER, rel=1e-12)
    acid = shipped().reagents["hydrochloric-acid-37"]
    assert brought_water(acid) == pytest.approx(0.03646 * 63.0 / 37.0, rel=1e-3)
    assert brought_water(shipped().reagents["tris"]) == 0.0


def test_added_water_grows_by_what_the_reagents_bring() -> None:
    recipe = make_up(
        portion("disodium-hydrogen-phosphate-heptahydrate", 0.1),
        basis="water added",
        volume=None,
        mass=1.0,
    )
    assert water_mass(recipe) == pytest.approx(1.0 + 0.7 * WATER, rel=1e-12)


def test_amounts_per_kilogram_refer_to_all_the_water() -> None:
    """The water of a hydrate counts among the kilograms that its own amount refers to."""
    key = "disodium-hydrogen-phosphate-heptahydrate"
    recipe = make_up(portion(key, 0.5, "mol/kg"), basis="water added", volume=None, mass=1.0)
    water = water_mass(recipe)
    amount = moles(recipe.portions[0], water)
    assert amount / water == pytest.approx(0.5, rel=1e-12)
    assert water == pytest.approx(1.0 + amount * 7.0 * WATER, rel=1e-12)
    inside = contents(formulation(recipe), shipped().families)
    assert float(inside.totals[0]) == pytest.approx(0.5, rel=1e-12)


def test_contents_add_up_by_family_and_ion() -> None:
    recipe = make_up(
        portion("potassium-dihydrogen-phosphate", 0.02),
        portion("disodium-hydrogen-phosphate", 0.03),
        portion("sodium-chloride", 0.1),
    )
    inside = contents(formulation(recipe), shipped().families)
    kg = water_mass(recipe)
    assert [family.key for family in inside.families] == ["phosphate"]
    np.testing.assert_allclose(inside.totals * kg, [0.05], rtol=1e-12)
    ions = {ion.name: m * kg for ion, m in zip(inside.ions, inside.molalities, strict=True)}
    assert ions == pytest.approx({"K+": 0.02, "Na+": 0.16, "Cl-": 0.1})


def test_extra_reagents_are_listed_with_nothing_of_them() -> None:
    recipe = make_up(portion("tris", 0.05))
    extra = (shipped().reagents["hydrochloric-acid-37"], shipped().reagents["sodium-carbonate"])
    inside = contents(formulation(recipe), shipped().families, extra)
    assert [family.key for family in inside.families] == ["tris", "carbonate"]
    assert {ion.name for ion in inside.ions} == {"Cl-", "Na+"}
    assert float(inside.totals[1]) == 0.0
    assert not inside.molalities.any()


def test_a_solution_of_nothing_is_water() -> None:
    inside = contents(formulation(make_up()), shipped().families)
    assert inside.families == ()
    assert inside.ions == ()


def test_a_working_solution_counts_as_its_volume_of_water() -> None:
    """1 mol/L at 20 °C: a mole comes in one litre and 0.9982 kg of water."""
    added = addition(titrant("sodium-hydroxide", 1.0), shipped().families, 293.15)
    assert added.volume == pytest.approx(1e-3)
    assert added.water == pytest.approx(0.998204, abs=2e-6)
    # Technical sodium hydroxide brings some carbonate along: the charge of sodium is what counts.
    assert added.per_ion[0] >= 1.0


def test_a_concentrated_liquid_is_taken_as_it_is() -> None:
    """Hydrochloric acid, 37 % and 1.18 to 1.19 g/mL, holds 12 mol/L."""
    added = addition(titrant("hydrochloric-acid-37"), shipped().families, 293.15)
    assert added.volume is not None
    assert 1e-3 / added.volume == pytest.approx(12.0, abs=0.1)
    assert added.water == pytest.approx(added.mass - 0.036458, rel=1e-4)


def test_a_solid_has_no_volume() -> None:
    added = addition(titrant("sodium-carbonate"), shipped().families, 293.15)
    assert added.volume is None
    assert added.water == 0.0
    assert dict(zip((f.key for f in added.families), added.per_family, strict=True)) == {
        "carbonate": 1.0
    }


MIXTURE = mixture_of([(shipped().families["phosphate"], 0.05)], [(SODIUM, 0.08), (CHLORIDE, 0.0)])


def test_mixing_keeps_every_mole() -> None:
    amounts = np.linspace(0.0, 0.1, 6)
    acid = strong_titrant(CHLORIDE, 0.5)
    after = mixed(MIXTURE, acid, amounts)
    kg = 1.0 + amounts * acid.water
    np.testing.assert_allclose(after.totals[0] * kg, 0.05, rtol=1e-14)
    np.testing.assert_allclose(after.molalities * kg, [0.08 + 0.0 * amounts, amounts], atol=1e-16)


def test_two_portions_are_one_large_portion() -> None:
    acid = strong_titrant(CHLORIDE, 0.5)
    first = mixed(MIXTURE, acid, np.array(0.02))
    # The second portion is per kilogram of what is there after the first.
    second = mixed(first, acid, np.array(0.03 / (1.0 + 0.02 * acid.water)))
    once = mixed(MIXTURE, acid, np.array(0.05))
    np.testing.assert_allclose(second.totals, once.totals, rtol=1e-14)
    np.testing.assert_allclose(second.molalities, once.molalities, rtol=1e-14)


def test_mixing_wants_its_ions_listed() -> None:
    bare = mixture_of([(shipped().families["phosphate"], 0.05)], [(SODIUM, 0.08)])
    with pytest.raises(ValueError, match="not in"):
        mixed(bare, strong_titrant(CHLORIDE), np.array(0.01))


def test_scaling_and_emptying() -> None:
    doubled = scaled(MIXTURE, np.array([1.0, 2.0]))
    np.testing.assert_array_equal(doubled.totals, [[0.05, 0.10]])
    assert not pure_water(MIXTURE).totals.any()
    assert pure_water(MIXTURE).ions == MIXTURE.ions
