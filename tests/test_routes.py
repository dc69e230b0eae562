"""Routes to the same solution, the shelf they come from, and recipes on the balance."""

import numpy as np
import pytest

from bufferfolio.recipes import mixture_of, part_of, recipe_of, recipe_water, with_amounts
from bufferfolio.routes import KINDS, Route, routes_of
from bufferfolio.shelves import shelf_of
from bufferfolio.subjects import Subject, reference_temperature, subject_of
from bufferfolio.uncertainty import band_of
from bufferfolio.weighing import (
    ACTIONS,
    adjustment_of,
    as_weighed,
    order_of,
    times,
    weighings,
)
from recipes import shipped

FORMULATIONS = sorted(shipped().formulations)


def subject(key: str) -> Subject:
    return subject_of(shipped().formulations[key], shipped())


def routes(key: str) -> tuple[Route, ...]:
    this = subject(key)
    return routes_of(this, shelf_of(this, shipped()), reference_temperature(this.formulation))


@pytest.mark.parametrize("key", FORMULATIONS)
def test_a_recipe_holds_what_the_formulation_does(key: str) -> None:
    this = subject(key)
    recipe = recipe_of(this.formulation, shipped().families)
    made = mixture_of(recipe, this.mixture)
    np.testing.assert_allclose(made.totals, this.mixture.totals, rtol=1e-13)
    np.testing.assert_allclose(made.molalities, this.mixture.molalities, rtol=1e-13)
    assert recipe_water(recipe) == pytest.approx(this.water, rel=1e-13)


@pytest.mark.parametrize("key", FORMULATIONS)
def test_every_route_leads_to_the_same_solution(key: str) -> None:
    """Totals and charge are the same; ions are named where they differ; hardness stays."""
    this = subject(key)
    found = routes(key)
    assert found[0].kind == "written"
    assert found[0].recipe == this.recipe
    for route in found:
        assert route.kind in KINDS
        assert all(part.amount > 0.0 for part in route.recipe.parts)
        mixture = mixture_of(route.recipe, this.mixture)
        np.testing.assert_allclose(mixture.totals, this.mixture.totals, rtol=1e-9, atol=1e-15)
        charge = float(mixture.strong_charge)
        scale = float(mixture.molalities.sum()) + 1e-12
        assert charge == pytest.approx(float(this.mixture.strong_charge), abs=1e-9 * scale)
        changed = dict(route.differences)
        for ion, molality in zip(mixture.ions, mixture.molalities, strict=True):
            own = dict(zip(this.mixture.ions, this.mixture.molalities, strict=True)).get(ion, 0.0)
            assert molality - own == pytest.approx(changed.get(ion.name, 0.0), abs=1e-9 * scale)
            assert abs(ion.charge) == 1 or ion.name not in changed
        # The same but for inert ions: some per cent more of salt move activities a little.
        assert route.pH == pytest.approx(found[0].pH, abs=0.05 if changed else 1e-7)
        assert len(route.instead) == len(route.recipe.parts)
        for part, others in zip(route.recipe.parts, route.instead, strict=True):
            assert all(each.amount == part.amount and each.key != part.key for each in others)


def test_the_routes_of_a_tris_buffer() -> None:
    """From Tris and acid, from both forms, from the hydrochloride and base; amounts by hand."""
    base, pair, alkaline = routes("tris-assay")
    assert [each.kind for each in (base, pair, alkaline)] == ["written", "pair", "base"]
    tris, acid = (part.amount for part in base.recipe.parts[:2])
    amounts = {part.key: part.amount for part in pair.recipe.parts}
    assert amounts["tris-hydrochloride"] == pytest.approx(acid, rel=1e-9)
    assert amounts["tris"] == pytest.approx(tris - acid, rel=1e-9)
    assert pair.differences == ()
    amounts = {part.key: part.amount for part in alkaline.recipe.parts}
    assert amounts["tris-hydrochloride"] == pytest.approx(tris, rel=1e-9)
    assert amounts["sodium-hydroxide-1-molar"] == pytest.approx(tris - acid, rel=1e-9)
    more = dict(alkaline.differences)
    assert more["Na+"] == pytest.approx(more["Cl-"], rel=1e-9)
    assert more["Na+"] > 0.0


def test_no_route_adds_a_danger() -> None:
    """Bleach is never offered with another acid, ammonium never with a base it did not meet."""
    assert [route.kind for route in routes("sanitising-bath")] == ["written"]
    for route in routes("ammonia-buffer"):
        assert "sodium-hydroxide" not in " ".join(part.key for part in route.recipe.parts)


def test_hardness_is_not_traded() -> None:
    for route in routes("holding-water"):
        keys = {part.key for part in route.recipe.parts}
        assert {"calcium-chloride-dihydrate", "magnesium-sulfate-heptahydrate"} <= keys


@pytest.mark.parametrize(
    ("key", "nature"),
    [
        ("hydrochloric-acid-37", "acid"),
        ("sodium-hydroxide", "base"),
        ("sodium-chloride", "neutral"),
        ("phosphoric-acid-85", "acid"),
        ("trisodium-phosphate-dodecahydrate", "base"),
        ("ammonia-25", "base"),
        ("ammonium-chloride", "neutral"),
        ("tris", "base"),
        ("glycine", "neutral"),
    ],
)
def test_what_a_reagent_is_to_water(key: str, nature: str) -> None:
    assert part_of(shipped().reagents[key], 1.0, shipped().families).nature == nature


def test_rounding_to_the_balance() -> None:
    """6.06 g on a balance that reads to 0.1 g, 2.15 mL in a cylinder that reads to 0.5 mL."""
    tris, acid, salt = weighings(subject("tris-assay").recipe, 1e-4, 5e-7)
    assert tris.wanted == pytest.approx(6.06e-3, rel=1e-9)
    assert tris.rounded == pytest.approx(6.1e-3, rel=1e-9)
    assert tris.error == pytest.approx(0.04 / 6.06, rel=1e-6)
    assert acid.rounded == pytest.approx(2.0e-6, rel=1e-9)
    assert salt.rounded == pytest.approx(5.8e-3, rel=1e-9)


def test_as_weighed_nothing_changes_where_nothing_differs() -> None:
    this = subject("tris-assay")
    measures = {at: each.wanted for at, each in enumerate(weighings(this.recipe, 1e-4, 1e-7))}
    made = band_of(this, 298.15, as_weighed(this.recipe, measures))
    assert made.pH == pytest.approx(band_of(this, 298.15).pH, abs=1e-12)


def test_as_weighed_a_fifth_more_acid_lowers_the_reading() -> None:
    this = subject("tris-assay")
    acid = weighings(this.recipe, 1e-4, 1e-7)[1].wanted
    made = as_weighed(this.recipe, {1: 1.2 * acid})
    assert made == with_amounts(this.recipe, {1: 1.2 * this.recipe.parts[1].amount})
    assert band_of(this, 298.15, made).pH < band_of(this, 298.15).pH - 0.1
    more_water = as_weighed(this.recipe, {}, 2.0 * this.recipe.water)
    thin = band_of(this, 298.15, more_water)
    assert thin.pH == pytest.approx(band_of(this, 298.15, dilution=2.0).pH, abs=1e-12)


def test_a_larger_batch_is_the_same_solution() -> None:
    this = subject("meter-check-borax")
    large = times(this.recipe, 250.0)
    assert recipe_water(large) == pytest.approx(250.0 * recipe_water(this.recipe), rel=1e-12)
    np.testing.assert_allclose(
        mixture_of(large, this.mixture).totals, this.mixture.totals, rtol=1e-12
    )


def test_the_order_of_addition() -> None:
    """Bleach last; strong acid after what buffers; water first, and to the mark at the end."""
    bath = order_of(subject("sanitising-bath").recipe)
    assert bath == (
        (-1, "most of the water"),
        (0, "dissolve"),
        (1, "last"),
        (-1, "fill up"),
        (-1, "set"),
    )
    tris = order_of(subject("tris-assay").recipe)
    assert [at for at, _ in tris] == [-1, 0, 2, 1, -1, -1]
    assert dict(tris)[1] == "slowly"
    borax = order_of(subject("meter-check-borax").recipe)
    assert borax[0] == (-1, "all the water")
    assert (-1, "fill up") not in borax
    for key in FORMULATIONS:
        assert {action for _, action in order_of(subject(key).recipe)} <= set(ACTIONS)


def test_advice_from_the_drift() -> None:
    """Tris falls by 0.028 a degree: five degrees are worth 0.14; phosphate hardly moves."""
    tris = adjustment_of(subject("tris-assay"))
    assert tris.slope == pytest.approx(-0.0277, abs=0.0005)
    assert tris.pH == pytest.approx(8.16 + 5.0 * 0.028, abs=0.005)
    assert tris.mistaken == pytest.approx(8.16 - 5.0 * 0.028, abs=0.005)
    assert tris.matters
    phosphate = adjustment_of(subject("fixative-buffer"))
    assert not phosphate.matters


def test_a_liquid_that_is_stated_as_a_mass_is_weighed() -> None:
    acid = shipped().reagents["hydrochloric-acid-37"]
    poured = part_of(acid, 1.0, shipped().families)
    weighed = part_of(acid, 1.0, shipped().families, weighed=True)
    assert poured.added.volume == pytest.approx(0.03646 / 0.37 / 1184.0, rel=1e-3)
    assert weighed.added.volume is None
    assert weighed.added.water == poured.added.water
