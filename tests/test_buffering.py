"""Buffer capacity and sweeps: analytical results against differences of the solved curve."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from bufferfolio.activity import MODELS
from bufferfolio.buffering import buffer_capacity, henderson_hasselbalch, sweep
from bufferfolio.composition import scaled
from bufferfolio.equilibrium import solve
from bufferfolio.speciation import Mixture
from recipes import shipped
from solutions import (
    CHLORIDE,
    MAGNESIUM,
    POTASSIUM,
    SODIUM,
    constants_of,
    made_up_family,
    mixture_of,
)

ACETIC = made_up_family("acetic", 0, [4.756])
PHOSPHORIC = made_up_family("phosphoric", 0, [2.148, 7.198, 12.35])
CITRIC = made_up_family("citric", 0, [3.128, 4.761, 6.396])
AMMONIUM = made_up_family("ammonium", 1, [9.245])
GLYCINE = made_up_family("glycine", 1, [2.351, 9.780])

MIXTURES = {
    "water": mixture_of([], [(SODIUM, 0.0), (CHLORIDE, 0.0)]),
    "strong acid": mixture_of([], [(SODIUM, 0.0), (CHLORIDE, 0.1)]),
    "salt": mixture_of([], [(SODIUM, 0.1), (CHLORIDE, 0.1)]),
    "acetate": mixture_of([(ACETIC, 0.1)], [(SODIUM, 0.05), (CHLORIDE, 0.0)]),
    "thin acetate": mixture_of([(ACETIC, 1e-5)], [(SODIUM, 5e-6), (CHLORIDE, 0.0)]),
    "phosphate": mixture_of([(PHOSPHORIC, 0.05)], [(SODIUM, 0.075), (CHLORIDE, 0.0)]),
    "phosphate, basic": mixture_of([(PHOSPHORIC, 0.05)], [(SODIUM, 0.14), (CHLORIDE, 0.0)]),
    "two families": mixture_of(
        [(CITRIC, 0.05), (PHOSPHORIC, 0.1)], [(SODIUM, 0.2), (CHLORIDE, 0.0)]
    ),
    "ampholyte with magnesium": mixture_of(
        [(GLYCINE, 0.1), (AMMONIUM, 0.02)],
        [(SODIUM, 0.05), (CHLORIDE, 0.04), (MAGNESIUM, 0.05)],
    ),
}


def with_base(mixture: Mixture, base: np.ndarray) -> Mixture:
    """Add strong base without water: sodium where it is positive, chloride where it is not."""
    base = np.asarray(base, dtype=float)
    many = scaled(mixture, np.ones_like(base))
    rows = [ion.name for ion in mixture.ions]
    more = np.zeros_like(many.molalities)
    more[rows.index("Na+")] = np.maximum(base, 0.0)
    more[rows.index("Cl-")] = np.maximum(-base, 0.0)
    return mixture_of(
        list(zip(many.families, many.totals, strict=True)),
        list(zip(many.ions, many.molalities + more, strict=True)),
    )


def capacity_of(mixture: Mixture, model: str) -> np.ndarray:
    constants = constants_of(mixture)
    return buffer_capacity(
        mixture, constants, MODELS[model], solve(mixture, constants, MODELS[model])
    )


@pytest.mark.parametrize("model", MODELS)
@pytest.mark.parametrize("name", MIXTURES)
def test_capacity_is_the_slope_of_the_titration_curve(name: str, model: str) -> None:
    """Base against pH by central differences about a point that sodium hydroxide already reached.

    Fourth-order differences: their own error is below 1e-7 of the slope for these steps.
    """
    mixture = MIXTURES[name]
    capacity = float(capacity_of(with_base(mixture, np.array(1e-7)), model))
    step = 1e-3 * capacity
    # A mixture that holds little sodium of its own is stepped about 1e-7 mol/kg of added base.
    step = min(step, 2e-8) if name in ("water", "salt") else step
    start = 1e-7 if name in ("water", "salt") else 3.0 * step
    base = start + step * np.array([-2.0, -1.0, 0.0, 1.0, 2.0])
    many = with_base(mixture, base)
    pH = solve(many, constants_of(many), MODELS[model]).pH
    slope = (pH[0] - 8.0 * pH[1] + 8.0 * pH[3] - pH[4]) / (12.0 * step)
    at = capacity_of(many, model)[2]
    assert 1.0 / slope == pytest.approx(at, rel=2e-5 if name in ("water", "salt") else 1e-6)


@pytest.mark.parametrize("model", MODELS)
@pytest.mark.parametrize("name", MIXTURES)
def test_a_sweep_and_the_solver_agree_both_ways(name: str, model: str) -> None:
    """The base that a sweep asks for a pH, given to the solver, brings that pH; and back."""
    pH = np.linspace(1.5, 12.5, 45)
    mixture = scaled(MIXTURES[name], np.ones_like(pH))
    swept = sweep(mixture, constants_of(mixture), MODELS[model], pH)
    many = with_base(MIXTURES[name], swept.base)
    state = solve(many, constants_of(many), MODELS[model])
    # Where a millionth of a pH costs 1e-16 mol/kg beside 0.1 of salt, no one could tell.
    rounding = 1e-15 * (many.molalities.sum(axis=0) + many.totals.sum(axis=0)) / swept.capacity
    assert (np.abs(state.pH - pH) < 1e-10 + rounding).all()
    np.testing.assert_allclose(state.ionic_strength, swept.ionic_strength, rtol=1e-10)
    np.testing.assert_allclose(
        buffer_capacity(many, constants_of(many), MODELS[model], state)[swept.base > 0.0],
        swept.capacity[swept.base > 0.0],
        rtol=1e-7,
    )


@pytest.mark.parametrize("model", MODELS)
def test_the_capacity_of_a_sweep_is_the_slope_of_its_base(model: str) -> None:
    pH = np.linspace(1.0, 13.0, 241)
    for name in ("phosphate", "two families", "ampholyte with magnesium"):
        mixture = scaled(MIXTURES[name], np.ones_like(pH))
        constants = constants_of(mixture)
        step = 1e-4
        at = sweep(mixture, constants, MODELS[model], pH)
        low = sweep(mixture, constants, MODELS[model], pH - step)
        high = sweep(mixture, constants, MODELS[model], pH + step)
        same_side = np.sign(low.base) == np.sign(high.base)  # the added ion changes at zero
        slope = (high.base - low.base) / (2.0 * step)
        np.testing.assert_allclose(at.capacity[same_side], slope[same_side], rtol=1e-6)


def test_a_held_ionic_strength_is_held() -> None:
    pH = np.linspace(0.0, 14.0, 29)
    mixture = mixture_of([(PHOSPHORIC, np.full_like(pH, 0.05))])
    held = sweep(
        mixture,
        constants_of(mixture),
        MODELS["davies"],
        pH,
        ionic_strength=np.full_like(pH, 0.1),
    )
    np.testing.assert_allclose(held.ionic_strength, 0.1, rtol=1e-12)
    step = 1e-4
    rest = (constants_of(mixture), MODELS["davies"])
    low, high = (
        sweep(mixture, *rest, pH + d, ionic_strength=np.full_like(pH, 0.1)).base
        for d in (-step, step)
    )
    np.testing.assert_allclose(held.capacity, (high - low) / (2.0 * step), rtol=1e-6)


def test_capacity_has_its_highest_point_at_the_pK() -> None:
    """0.25 ln 10 C for one pair (Van Slyke 1922), less nothing: 0.0576 for 0.1 mol/kg."""
    pH = np.linspace(3.0, 7.0, 4001)
    mixture = mixture_of([(ACETIC, np.full_like(pH, 0.1))])
    swept = sweep(mixture, constants_of(mixture), MODELS["ideal"], pH)
    assert pH[np.argmax(swept.capacity)] == pytest.approx(4.756, abs=0.002)
    assert swept.capacity.max() == pytest.approx(0.25 * np.log(10.0) * 0.1, rel=1e-3)


def test_pair_terms_held_change_a_capacity_by_little() -> None:
    """The capacity holds Σ ε m; the curve moves it. In 0.1 mol/kg of phosphate: under 2 %."""
    family = shipped().families["phosphate"]
    pairs, model = shipped().interactions, MODELS["specific-ion"]
    sodium = 0.15 + 1e-4 * np.array([-1.0, 0.0, 1.0])
    mixture = mixture_of([(family, np.full(3, 0.1))], [(SODIUM, sodium), (POTASSIUM, 0.01)])
    constants = constants_of(mixture)
    state = solve(mixture, constants, model, pairs)
    held = float(buffer_capacity(mixture, constants, model, state)[1])
    assert held == pytest.approx(2e-4 / float(state.pH[2] - state.pH[0]), rel=0.02)


@settings(derandomize=True, deadline=None, max_examples=60)
@given(
    st.lists(st.floats(0.0, 13.0), min_size=1, max_size=4).map(sorted),
    st.integers(0, 3),
    st.floats(-6.0, 0.0),
    st.floats(0.0, 14.0),
)
def test_capacity_is_positive_in_ideal_solutions(
    pK: list[float], charge: int, log_total: float, pH: float
) -> None:
    mixture = mixture_of([(made_up_family("any", charge, pK), np.array([10.0**log_total]))])
    swept = sweep(mixture, constants_of(mixture), MODELS["ideal"], np.array([pH]))
    assert float(swept.capacity[0]) > 0.0


def estimate_of(mixture: Mixture):
    return henderson_hasselbalch(mixture, constants_of(mixture).pK)


def test_the_estimate_of_a_pair() -> None:
    """pH = pK + log10 of base over acid, from the recipe alone."""
    buffer = estimate_of(mixture_of([(ACETIC, 0.3)], [(SODIUM, 0.2)]))
    assert (buffer.kind, buffer.family, buffer.step) == ("pair", "acetic", 0)
    assert buffer.ratio == pytest.approx(2.0)
    assert buffer.pH == pytest.approx(4.756 + np.log10(2.0))
    second = estimate_of(mixture_of([(PHOSPHORIC, 0.05)], [(SODIUM, 0.075)]))
    assert (second.family, second.step) == ("phosphoric", 1)
    assert second.pH == pytest.approx(7.198)


def test_the_estimate_of_a_base_with_acid() -> None:
    buffer = estimate_of(mixture_of([(AMMONIUM, 0.2)], [(CHLORIDE, 0.05)]))
    assert buffer.kind == "pair"
    assert buffer.pH == pytest.approx(9.245 + np.log10(3.0))


def test_the_estimate_of_an_ampholyte() -> None:
    """Half of the sum of both pK: 4.673 for NaH2PO4, 6.07 for glycine."""
    salt = estimate_of(mixture_of([(PHOSPHORIC, 0.1)], [(SODIUM, 0.1)]))
    assert salt.kind == "ampholyte"
    assert salt.pH == pytest.approx(4.673)
    glycine = estimate_of(mixture_of([(GLYCINE, 0.1)], [(SODIUM, 0.0)]))
    assert glycine.pH == pytest.approx(6.0655)


@pytest.mark.parametrize(
    "mixture",
    [
        mixture_of([], [(SODIUM, 0.1), (CHLORIDE, 0.1)]),
        mixture_of([(ACETIC, 0.1)], [(SODIUM, 0.2)]),
        mixture_of([(ACETIC, 0.1)], [(CHLORIDE, 0.1)]),
    ],
    ids=["no family", "more base than acid", "only acids"],
)
def test_no_estimate_where_a_textbook_has_none(mixture: Mixture) -> None:
    nothing = estimate_of(mixture)
    assert nothing.kind == "none"
    assert np.isnan(nothing.pH)
