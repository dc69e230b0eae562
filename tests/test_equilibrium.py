"""The solver: what must hold at every point that it returns, and what each status means."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from bufferfolio.activity import MODELS
from bufferfolio.definitions import Family, Interval
from bufferfolio.equilibrium import Equilibrium, Status, solve
from bufferfolio.speciation import Mixture, forms_at, stacked
from bufferfolio.temperature import Constants
from solutions import (
    CHLORIDE,
    MAGNESIUM,
    SODIUM,
    SULFATE,
    constants_of,
    made_up_family,
    mixture_of,
    pH_of,
    state_of,
)

CLOSED = 1e-12  # relative; charge, mass and ionic strength
SAME = 1e-12  # in pH; the same equations, added up in another order
IONS = (SODIUM, CHLORIDE, MAGNESIUM, SULFATE)
QUICK = settings(derandomize=True, deadline=None, max_examples=120)
ACETIC = made_up_family("acetic", 0, [4.756])


def families() -> st.SearchStrategy[list[Family]]:
    """Up to ten families, charges from +3 to −4, steps in order or nearly at one pK."""
    first = st.floats(-1.0, 8.0)
    further = st.lists(st.floats(0.05, 4.0), max_size=3)

    def build(parts: list[tuple[int, float, list[float]]]) -> list[Family]:
        return [
            made_up_family(f"family {i}", charge, [float(x) for x in np.cumsum([pK, *gaps])])
            for i, (charge, pK, gaps) in enumerate(parts)
        ]

    return st.lists(st.tuples(st.integers(0, 3), first, further), max_size=10).map(build)


@st.composite
def mixtures(draw: st.DrawFn) -> Mixture:
    """Totals from 1e-9 to 2 mol/kg and strong ions from 1e-9 to 3 mol/kg, or none at all."""
    chosen = draw(families())
    log_total, log_strong = st.floats(-9.0, np.log10(2.0)), st.floats(-9.0, np.log10(3.0))
    strong = st.one_of(st.just(0.0), log_strong.map(lambda x: 10.0**x))
    return mixture_of(
        [(family, 10.0 ** draw(log_total)) for family in chosen],
        [(ion, draw(strong)) for ion in IONS],
    )


temperatures = st.floats(268.15, 373.15)
models = st.sampled_from(sorted(MODELS))


def repeated(mixture: Mixture, count: int, sodium: np.ndarray | float = 0.0) -> Mixture:
    """One mixture many times, with so much sodium added."""
    ones = np.ones(count)
    ions = zip(mixture.ions, mixture.molalities, strict=True)
    return mixture_of(
        [(f, t * ones) for f, t in zip(mixture.families, mixture.totals, strict=True)],
        [(ion, m * ones + (sodium if ion is SODIUM else 0.0)) for ion, m in ions],
    )


def charges_of(mixture: Mixture) -> np.ndarray:
    forms = [form.charge for family in mixture.families for form in family.species]
    return np.array([1, -1, *forms, *(ion.charge for ion in mixture.ions)])


def assert_closed(mixture: Mixture, constants: Constants, model: str, state: Equilibrium) -> None:
    """Charge, mass and ionic strength, put together again from the forms."""
    assert np.isfinite(state.pH).all()
    assert (state.status != Status.NO_SOLUTION).all()
    forms = forms_at(mixture, constants, MODELS[model], state.pH, state.ionic_strength)
    there, z = stacked(forms, mixture), charges_of(mixture)
    z = z.reshape(-1, *([1] * (there.ndim - 1)))
    assert (there >= 0.0).all()
    assert (np.abs((z * there).sum(axis=0)) <= CLOSED * (np.abs(z) * there).sum(axis=0)).all()
    strength = 0.5 * (z * z * there).sum(axis=0)
    np.testing.assert_allclose(strength, state.ionic_strength, rtol=CLOSED, atol=0.0)
    for total, molalities in zip(mixture.totals, forms.families, strict=True):
        np.testing.assert_allclose(molalities.sum(axis=0), total, rtol=CLOSED, atol=0.0)


@QUICK
@given(mixtures(), temperatures)
def test_every_mixture_is_solved_and_closed(mixture: Mixture, temperature: float) -> None:
    for model in MODELS:
        constants = constants_of(mixture, temperature)
        assert_closed(mixture, constants, model, solve(mixture, constants, MODELS[model]))


@pytest.mark.parametrize("model", MODELS)
def test_many_random_mixtures_are_solved_and_closed(model: str) -> None:
    """As above, 60,000 of them in arrays: what is rare shows here."""
    random = np.random.default_rng(list(MODELS).index(model))
    for count in range(1, 11):
        chosen = []
        for i in range(count):
            gaps = random.uniform(0.05, 4.0, random.integers(0, 4))
            pK = np.cumsum([random.uniform(-1.0, 8.0), *gaps])
            chosen.append(made_up_family(f"family {i}", int(random.integers(0, 4)), list(pK)))
        n = 6000
        mixture = mixture_of(
            [(family, 10.0 ** random.uniform(-9.0, np.log10(2.0), n)) for family in chosen],
            [(ion, 10.0 ** random.uniform(-9.0, np.log10(3.0), n)) for ion in IONS],
        )
        constants = constants_of(mixture, random.uniform(268.15, 373.15, n))
        assert_closed(mixture, constants, model, solve(mixture, constants, MODELS[model]))


def test_a_last_step_that_turns_back_is_taken_whole() -> None:
    """Once taken for hopping and halved, which left the charge 2e-9 out of balance."""
    families = [
        (1, [2.575560293289044, 5.276494184732347, 9.129996169972483], 0.028404349754762657),
        (2, [4.809484969267878], 1.6457227814002546e-09),
        (0, [5.943653824217911, 6.6853186529490145, 9.546924282898061], 0.000858661179714393),
        (2, [-0.31058513661882614, 0.3998927622808235, 1.8741294535232853], 2.0962487070031938e-05),
        (0, [3.0091102571485004], 0.00039087132996441196),
        (1, [1.2154174709314338, 3.8800141133045543], 0.25119978584338615),
    ]
    mixture = mixture_of(
        [
            (made_up_family(f"family {i}", z, pK), total)
            for i, (z, pK, total) in enumerate(families)
        ],
        zip(
            IONS,
            [
                3.3240394877714945e-05,
                5.8758056947969215e-09,
                4.8093770165180484e-08,
                0.8845819208766611,
            ],
            strict=True,
        ),
    )
    constants = constants_of(mixture, 338.738168950111)
    assert_closed(mixture, constants, "davies", solve(mixture, constants, MODELS["davies"]))


@QUICK
@given(mixtures(), temperatures, models)
def test_an_array_is_the_loop_over_its_cells(
    mixture: Mixture, temperature: float, model: str
) -> None:
    sodium = np.array([0.0, 1e-9, 1e-5, 0.01, 1.0])
    many = repeated(mixture, sodium.size, sodium)
    together = pH_of(many, MODELS[model], temperature)
    alone = [
        pH_of(
            mixture_of(
                list(zip(many.families, many.totals[:, k], strict=True)),
                list(zip(many.ions, many.molalities[:, k], strict=True)),
            ),
            MODELS[model],
            temperature,
        )
        for k in range(sodium.size)
    ]
    np.testing.assert_allclose(together, alone, rtol=0.0, atol=1e-13)


def test_blocks_and_shapes_do_not_show() -> None:
    """More cells than a block holds, over two axes that broadcast."""
    temperature = np.linspace(273.15, 323.15, 101).reshape(-1, 1)
    sodium = np.linspace(0.0, 0.12, 100)
    mixture = mixture_of([(ACETIC, np.full((101, 100), 0.1))], [(SODIUM, sodium)])
    pH = pH_of(mixture, MODELS["davies"], temperature)
    assert pH.shape == (101, 100)
    corner = mixture_of([(ACETIC, 0.1)], [(SODIUM, 0.12)])
    assert float(pH[-1, -1]) == pytest.approx(
        float(pH_of(corner, MODELS["davies"], 323.15)), abs=1e-13
    )


@QUICK
@given(mixtures(), temperatures, models, st.randoms(use_true_random=False))
def test_the_order_of_families_and_ions_does_not_matter(
    mixture: Mixture, temperature: float, model: str, shuffler: object
) -> None:
    inside = list(zip(mixture.families, mixture.totals, strict=True))
    ions = list(zip(mixture.ions, mixture.molalities, strict=True))
    shuffler.shuffle(inside)
    shuffler.shuffle(ions)
    before = pH_of(mixture, MODELS[model], temperature)
    after = pH_of(mixture_of(inside, ions), MODELS[model], temperature)
    assert abs(float(before - after)) < loosely(mixture, before)


def loosely(mixture: Mixture, pH: np.ndarray) -> float:
    """What rounding may do to a pH: a last digit of what is there against what buffers it."""
    there = float(mixture.totals.sum() * 4.0 + mixture.molalities.sum() * 2.0)
    buffering = 10.0 ** -float(pH) + 10.0 ** (float(pH) - 15.2)
    return SAME + 4e-16 * there / buffering


@QUICK
@given(mixtures(), temperatures)
def test_base_raises_pH(mixture: Mixture, temperature: float) -> None:
    """Strictly in an ideal solution; with activities wherever the model is trusted."""
    sodium = np.concatenate([[0.0], np.geomspace(1e-8, 1.0, 40)])
    many = repeated(mixture, sodium.size, sodium)
    for model in MODELS:
        state = state_of(many, MODELS[model], temperature)
        trusted = state.status != Status.BEYOND_MODEL
        rise = (
            np.diff(state.pH)[trusted[1:] & trusted[:-1]] if model != "ideal" else np.diff(state.pH)
        )
        assert (rise > -1e-12).all()


@QUICK
@given(mixtures(), temperatures, models)
def test_a_family_listed_twice_is_its_sum(mixture: Mixture, temperature: float, model: str) -> None:
    inside = list(zip(mixture.families, mixture.totals, strict=True))
    ions = list(zip(mixture.ions, mixture.molalities, strict=True))
    halves = mixture_of([(f, 0.5 * t) for f, t in inside * 2], ions)
    before = pH_of(mixture, MODELS[model], temperature)
    assert abs(float(before - pH_of(halves, MODELS[model], temperature))) < loosely(mixture, before)


@pytest.mark.parametrize("model", MODELS)
def test_endless_dilution_leaves_water(model: str) -> None:
    inside = mixture_of([(ACETIC, 0.1e-12)], [(SODIUM, 0.05e-12), (CHLORIDE, 1e-12)])
    water = mixture_of()
    for temperature in (273.15, 298.15, 373.15):
        diluted = float(pH_of(inside, MODELS[model], temperature))
        assert diluted == pytest.approx(float(pH_of(water, MODELS[model], temperature)), abs=2e-5)


def test_water_is_neutral_at_half_of_pKw() -> None:
    """Neutral pH 7.473, 6.997 and 6.126 at 0, 25 and 100 °C, IAPWS R11-07."""
    for temperature, neutral in ((273.15, 7.473), (298.15, 6.997), (373.15, 6.126)):
        assert float(pH_of(mixture_of(), MODELS["ideal"], temperature)) == pytest.approx(
            neutral, abs=6e-4
        )


def test_strong_acid_takes_plain_water_from_7_to_4() -> None:
    """Common practice, no source: 1e-4 mol/L, ideal solution, 25 °C."""
    plain, acid = mixture_of(), mixture_of([], [(CHLORIDE, 1e-4)])
    assert float(pH_of(plain, MODELS["ideal"])) == pytest.approx(7.0, abs=0.005)
    assert float(pH_of(acid, MODELS["ideal"])) == pytest.approx(4.0, abs=0.001)


def test_salt_cannot_hide_a_trace_of_acid() -> None:
    """3 mol/kg of sodium chloride round off 4e-16; 1e-9 of acid must show as in plain water."""
    alone = pH_of(mixture_of([], [(CHLORIDE, 1e-9)]), MODELS["ideal"])
    salt = mixture_of([], [(SODIUM, 3.0), (CHLORIDE, 3.0 + 1e-9)])
    trace = (3.0 + 1e-9) - 3.0  # what the sum of two binary numbers really holds
    exact = pH_of(mixture_of([], [(CHLORIDE, trace)]), MODELS["ideal"])
    assert float(pH_of(salt, MODELS["ideal"])) == pytest.approx(float(exact), abs=1e-12)
    assert float(alone) == pytest.approx(float(exact), abs=1e-9)


COLD = made_up_family("cold", 0, [4.756], valid=Interval(low=273.15, high=323.15))
FINE = mixture_of([(COLD, 0.1)], [(SODIUM, 0.05)])
SALTY = mixture_of([(COLD, 0.1)], [(SODIUM, 0.85), (CHLORIDE, 0.8)])
MISSING = mixture_of([(COLD, np.nan)], [(SODIUM, 0.05)])


def status_of(mixture: Mixture, temperature: float, model: str = "davies") -> Status:
    return Status(int(state_of(mixture, MODELS[model], temperature).status))


def test_status_solved() -> None:
    assert status_of(FINE, 298.15) is Status.SOLVED
    # The ends of a range belong to it.
    assert status_of(FINE, 273.15) is Status.SOLVED
    assert status_of(FINE, 323.15) is Status.SOLVED


def test_status_out_of_range() -> None:
    """Solved with an extrapolated constant, and marked."""
    assert status_of(FINE, 323.20) is Status.OUT_OF_RANGE
    assert status_of(FINE, 273.10) is Status.OUT_OF_RANGE
    assert np.isfinite(pH_of(FINE, MODELS["davies"], 323.20))


def test_status_beyond_model() -> None:
    """Solved above the ionic strength that the model is trusted to; marked, out of range too."""
    assert status_of(SALTY, 298.15) is Status.BEYOND_MODEL
    assert status_of(SALTY, 350.0) is Status.BEYOND_MODEL
    assert status_of(SALTY, 298.15, "specific-ion") is Status.SOLVED
    assert np.isfinite(pH_of(SALTY, MODELS["davies"]))


def test_status_no_solution() -> None:
    """An amount that is missing: NaN and a status, never a number."""
    state = state_of(MISSING, MODELS["davies"])
    assert Status(int(state.status)) is Status.NO_SOLUTION
    assert np.isnan(state.pH)


def test_one_grid_shows_every_status() -> None:
    """One hard cell spoils no other."""
    total = np.array([0.1, 0.1, 0.1, np.nan])
    salt = np.array([0.0, 0.0, 0.8, 0.0])
    mixture = mixture_of([(COLD, total)], [(SODIUM, 0.05 + salt), (CHLORIDE, salt)])
    state = state_of(mixture, MODELS["davies"], np.array([298.15, 330.0, 298.15, 298.15]))
    assert [Status(code) for code in state.status.tolist()] == list(Status)
    assert np.isnan(state.pH).tolist() == [False, False, False, True]
    alone = pH_of(FINE, MODELS["davies"])
    assert float(state.pH[0]) == pytest.approx(float(alone), abs=1e-13)
