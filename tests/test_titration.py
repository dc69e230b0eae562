"""Titrations: amounts and curves both ways, and which equivalence points show."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from bufferfolio.activity import MODELS
from bufferfolio.composition import Addition, pure_water
from bufferfolio.equilibrium import Status
from bufferfolio.speciation import Mixture
from bufferfolio.titration import amount_to_reach, equivalences, titrate
from recipes import shipped
from solutions import (
    CHLORIDE,
    SODIUM,
    made_up_family,
    mixture_of,
    pH_of,
    strong_titrant,
)

KELVIN = 298.15
PHOSPHORIC = made_up_family("phosphoric", 0, [2.148, 7.198, 12.35])
ACETIC = made_up_family("acetic", 0, [4.756])
CARBONIC = made_up_family("carbonic", 0, [6.352, 10.329])
CITRIC = made_up_family("citric", 0, [3.128, 4.761, 6.396])
SULFURIC = made_up_family("sulfuric", 0, [-3.0, 1.99])
GLYCINE = made_up_family("glycine", 1, [2.351, 9.780])
AMMONIUM = made_up_family("ammonium", 1, [9.245])
BASE, ACID = strong_titrant(SODIUM, 0.1), strong_titrant(CHLORIDE, 0.1)
BUFFER = mixture_of([(PHOSPHORIC, 0.05)], [(SODIUM, 0.075), (CHLORIDE, 0.0)])


@pytest.mark.parametrize("model", MODELS)
@pytest.mark.parametrize("molality", [None, 0.1, 1.0])
@pytest.mark.parametrize("target", [2.5, 4.0, 6.5, 7.5, 9.0, 11.5, 12.0])
def test_the_amount_for_a_pH_brings_that_pH(
    target: float, molality: float | None, model: str
) -> None:
    """By acid below the buffer's own pH, by base above; the other one never does."""
    own = float(pH_of(BUFFER, MODELS[model]))
    right, wrong = (CHLORIDE, SODIUM) if target < own else (SODIUM, CHLORIDE)
    titrant = strong_titrant(right, molality)
    amount = amount_to_reach(BUFFER, titrant, target, KELVIN, MODELS[model])
    assert amount > 0.0
    curve = titrate(BUFFER, titrant, np.array(amount), np.array(KELVIN), MODELS[model])
    assert float(curve.state.pH) == pytest.approx(target, abs=1e-9)
    # More of the wrong one would lead away; water alone moves a buffer a little either way.
    other = amount_to_reach(BUFFER, strong_titrant(wrong), target, KELVIN, MODELS[model])
    assert np.isnan(other)


@settings(derandomize=True, deadline=None, max_examples=40)
@given(
    st.floats(1e-4, 0.3),
    st.floats(0.1, 2.9),
    st.floats(1e-3, 0.5),
    st.floats(273.15, 333.15),
    st.sampled_from(sorted(MODELS)),
)
def test_a_point_of_the_curve_gives_its_amount_back(
    total: float, sodium: float, share: float, kelvin: float, model: str
) -> None:
    mixture = mixture_of([(PHOSPHORIC, total)], [(SODIUM, sodium * total), (CHLORIDE, 0.0)])
    for titrant in (strong_titrant(SODIUM, 2.0), strong_titrant(CHLORIDE, 2.0)):
        amount = share * total
        curve = titrate(mixture, titrant, np.array(amount), np.array(kelvin), MODELS[model])
        target = float(curve.state.pH)
        back = amount_to_reach(mixture, titrant, target, kelvin, MODELS[model])
        # A pH is known to about 1e-13; the capacity says what that is in amount.
        assert back == pytest.approx(amount, abs=1e-9 * total + 1e-10 * float(curve.capacity))


def test_no_amount_reaches_a_pH_beyond_the_titrant() -> None:
    """0.1 mol/kg of sodium hydroxide has pH 12.9 itself."""
    assert amount_to_reach(BUFFER, BASE, 12.5, KELVIN, MODELS["davies"]) > 0.0
    assert np.isnan(amount_to_reach(BUFFER, BASE, 13.2, KELVIN, MODELS["davies"]))


def test_pair_terms_take_part_in_an_amount() -> None:
    library = shipped()
    mixture = mixture_of([(library.families["phosphate"], 0.2)], [(SODIUM, 0.3), (CHLORIDE, 0.0)])
    rest = (MODELS["specific-ion"], library.interactions)
    amount = amount_to_reach(mixture, ACID, 6.0, KELVIN, *rest)
    curve = titrate(mixture, ACID, np.array(amount), np.array(KELVIN), *rest)
    assert float(curve.state.pH) == pytest.approx(6.0, abs=1e-9)


def test_a_family_can_be_the_titrant() -> None:
    """Sodium carbonate raises the pH of bicarbonate water, to its own pH and no further."""
    soda = Addition(
        families=(CARBONIC,),
        per_family=(1.0,),
        ions=(SODIUM,),
        per_ion=(2.0,),
        water=2.0,
        volume=None,
        mass=2.1,
    )
    mixture = mixture_of([(CARBONIC, 2e-3)], [(SODIUM, 2e-3)])
    amount = amount_to_reach(mixture, soda, 9.5, KELVIN, MODELS["davies"])
    curve = titrate(mixture, soda, np.array(amount), np.array(KELVIN), MODELS["davies"])
    assert float(curve.state.pH) == pytest.approx(9.5, abs=1e-9)
    assert np.isnan(amount_to_reach(mixture, soda, 12.5, KELVIN, MODELS["davies"]))
    assert equivalences(mixture, soda, KELVIN, MODELS["davies"]) == ()


def test_a_titration_takes_dilution_strength_and_temperature_into_account() -> None:
    """Over temperatures and amounts at once; each cell is the mixture made by hand."""
    amounts, kelvin = np.array([0.0, 0.01, 0.03]), np.array([[278.15], [310.15]])
    curve = titrate(BUFFER, ACID, amounts, kelvin, MODELS["davies"])
    assert curve.state.pH.shape == (2, 3)
    for column, amount in enumerate(amounts):
        water = 1.0 + 10.0 * amount
        by_hand = mixture_of(
            [(PHOSPHORIC, 0.05 / water)],
            [(SODIUM, 0.075 / water), (CHLORIDE, amount / water)],
        )
        for row in range(2):
            expected = float(pH_of(by_hand, MODELS["davies"], float(kelvin[row, 0])))
            assert float(curve.state.pH[row, column]) == pytest.approx(expected, abs=1e-12)


@pytest.mark.parametrize("model", MODELS)
def test_the_capacity_along_a_curve_is_its_slope_but_for_dilution(model: str) -> None:
    """With base that brings no water the slope of the curve and the capacity are one."""
    amount = 0.01 + 1e-5 * np.array([-2.0, -1.0, 0.0, 1.0, 2.0])
    curve = titrate(BUFFER, strong_titrant(SODIUM), amount, np.array(KELVIN), MODELS[model])
    pH = curve.state.pH
    slope = (pH[0] - 8.0 * pH[1] + 8.0 * pH[3] - pH[4]) / (12.0 * 1e-5)
    assert float(curve.capacity[2]) == pytest.approx(1.0 / slope, rel=1e-7)


def seen(mixture: Mixture, titrant: Addition, model: str = "davies") -> list[tuple[float, bool]]:
    """Return amount and visibility of each equivalence, as textbooks list them."""
    found = equivalences(mixture, titrant, KELVIN, MODELS[model])
    return [(round(float(point.amount), 9), point.visible) for point in found]


# What textbooks of analytical chemistry say of each titration (common practice, no single source).
TITRATIONS = {
    # Two steps to be seen; the third acid is about as weak as water.
    "phosphoric acid": (
        mixture_of([(PHOSPHORIC, 0.1)], [(SODIUM, 0.0)]),
        BASE,
        [(0.1, True), (0.2, True), (0.3, False)],
    ),
    "strong acid": (
        mixture_of([], [(SODIUM, 0.0), (CHLORIDE, 0.1)]),
        BASE,
        [(0.1, True)],
    ),
    "strong base": (
        mixture_of([], [(SODIUM, 0.1), (CHLORIDE, 0.0)]),
        ACID,
        [(0.1, True)],
    ),
    "acetic acid": (mixture_of([(ACETIC, 0.1)], [(SODIUM, 0.0)]), BASE, [(0.1, True)]),
    # Water's own ions blur the end of so thin an acid.
    "acetic acid, 1e-6 mol/kg": (
        mixture_of([(ACETIC, 1e-6)], [(SODIUM, 0.0)]),
        strong_titrant(SODIUM, 1e-4),
        [(1e-6, False)],
    ),
    # pK 3.1, 4.8 and 6.4 are too near each other: one step for all three.
    "citric acid": (
        mixture_of([(CITRIC, 0.1)], [(SODIUM, 0.0)]),
        BASE,
        [(0.1, False), (0.2, False), (0.3, True)],
    ),
    "sulfuric acid": (
        mixture_of([(SULFURIC, 0.1)], [(SODIUM, 0.0)]),
        BASE,
        [(0.1, False), (0.2, True)],
    ),
    "sodium carbonate": (
        mixture_of([(CARBONIC, 0.1)], [(SODIUM, 0.2), (CHLORIDE, 0.0)]),
        ACID,
        [(0.1, True), (0.2, True)],
    ),
    "carbonate with bicarbonate": (
        mixture_of([(CARBONIC, 0.1)], [(SODIUM, 0.15), (CHLORIDE, 0.0)]),
        ACID,
        [(0.05, True), (0.15, True)],
    ),
    "ammonia": (mixture_of([(AMMONIUM, 0.1)], [(CHLORIDE, 0.0)]), ACID, [(0.1, True)]),
    # A strong acid beside a weak one: each has its own.
    "hydrochloric with acetic acid": (
        mixture_of([(ACETIC, 0.1)], [(SODIUM, 0.0), (CHLORIDE, 0.1)]),
        BASE,
        [(0.1, True), (0.2, True)],
    ),
    "plain water": (mixture_of([], [(SODIUM, 0.0)]), BASE, []),
}


@pytest.mark.parametrize("name", TITRATIONS)
def test_equivalence_points_are_those_of_the_textbooks(name: str) -> None:
    mixture, titrant, expected = TITRATIONS[name]
    assert seen(mixture, titrant) == expected
    assert seen(mixture, titrant, "ideal") == expected


def test_an_equivalence_names_what_ends_there() -> None:
    first, second, _ = equivalences(
        TITRATIONS["phosphoric acid"][0], BASE, KELVIN, MODELS["davies"]
    )
    assert (first.family, first.step) == ("phosphoric", 1)
    assert (second.family, second.step) == ("phosphoric", 2)
    # Nominal end points of phosphoric acid are 4.7 and 9.6 (colour changes, 0.1 to 0.3).
    assert first.pH == pytest.approx(4.7, abs=0.3)
    assert second.pH == pytest.approx(9.6, abs=0.35)
    curve = titrate(
        TITRATIONS["phosphoric acid"][0],
        BASE,
        np.array([first.amount, second.amount]),
        np.array(KELVIN),
        MODELS["davies"],
    )
    np.testing.assert_allclose(curve.state.pH, [first.pH, second.pH], rtol=1e-12)


def test_carbonate_buffered_water_hardly_moves_where_plain_water_falls_to_4() -> None:
    """Common practice, no source: 1e-4 mol/kg of strong acid near pH 8.4, and two end points.

    Some hundredths to a tenth holds for 0.02 to 0.1 mol/kg of bicarbonate. At the alkalinity of a
    natural water, 0.002, closed bicarbonate water at this pH is at its poorest and moves by 0.7.
    """
    carbonate = shipped().families["carbonate"]
    model, added = MODELS["davies"], np.array([0.0, 1e-4])
    for total in (0.022, 0.05, 0.1):
        water = mixture_of([(carbonate, total)], [(SODIUM, 1.01 * total), (CHLORIDE, added)])
        before, after = pH_of(water, model)
        assert before == pytest.approx(8.4, abs=0.2)
        assert 0.01 < before - after < 0.11
    thin = mixture_of([(carbonate, 0.002)], [(SODIUM, 0.002), (CHLORIDE, added)])
    before, after = pH_of(thin, model)
    assert before - after == pytest.approx(0.69, abs=0.05)
    plain = pH_of(mixture_of([], [(SODIUM, 0.0), (CHLORIDE, added)]), model)
    assert plain == pytest.approx([7.0, 4.0], abs=0.01)
    buffered = mixture_of([(carbonate, 0.05)], [(SODIUM, 0.051), (CHLORIDE, 0.0)])
    points = equivalences(buffered, ACID, KELVIN, model)
    assert [round(point.amount, 9) for point in points] == [0.001, 0.051]


def test_unbuffered_water_is_the_contrast() -> None:
    """The same portion moves plain water by units and the buffer by hundredths."""
    amount = np.array([0.0, 5e-4])
    for titrant in (BASE, ACID):
        buffered = titrate(BUFFER, titrant, amount, np.array(KELVIN), MODELS["davies"])
        plain = titrate(pure_water(BUFFER), titrant, amount, np.array(KELVIN), MODELS["davies"])
        assert abs(float(np.diff(buffered.state.pH)[0])) < 0.03
        assert abs(float(np.diff(plain.state.pH)[0])) > 3.0
        assert (plain.state.status == Status.SOLVED).all()
