"""Activity models: their limits, their slopes, and how they relate to each other."""

import numpy as np
import pytest

from bufferfolio.activity import MODELS

STRENGTH = np.geomspace(1e-9, 6.0, 200)
A = np.full_like(STRENGTH, 0.5098)


@pytest.mark.parametrize("name", MODELS)
def test_the_slope_is_the_derivative_by_ln_of_strength(name: str) -> None:
    """Central differences in ln I; their own error is of the third derivative times 1e-8."""
    step = 1e-4
    model = MODELS[name]
    _, slope = model.long_range(A, STRENGTH)
    high, _ = model.long_range(A, STRENGTH * np.exp(step))
    low, _ = model.long_range(A, STRENGTH * np.exp(-step))
    np.testing.assert_allclose(slope, (high - low) / (2.0 * step), rtol=1e-6, atol=1e-9)


@pytest.mark.parametrize("name", ["davies", "specific-ion"])
def test_thin_solutions_obey_the_limiting_law(name: str) -> None:
    term, _ = MODELS[name].long_range(A, STRENGTH)
    thin = STRENGTH < 1e-5
    np.testing.assert_allclose(term[thin], (A * np.sqrt(STRENGTH))[thin], rtol=0.006)


def test_specific_ion_without_pairs_is_the_bates_guggenheim_convention() -> None:
    """log10 γ(Cl-) = −A √I / (1 + 1.5 √I), IUPAC 2002; 0.1094 at I = 0.1 mol/kg, A = 0.5101."""
    term, _ = MODELS["specific-ion"].long_range(np.array(0.5101), np.array(0.1))
    assert float(term) == pytest.approx(0.1094, abs=5e-5)


def test_models_agree_where_both_may_be_trusted() -> None:
    """To 0.003 in log10 γ of a single charge up to I = 0.1 mol/kg; they part above."""
    davies, _ = MODELS["davies"].long_range(A, STRENGTH)
    pairs, _ = MODELS["specific-ion"].long_range(A, STRENGTH)
    thin = STRENGTH <= 0.1
    assert np.abs(davies - pairs)[thin].max() < 0.003
    assert np.abs(davies - pairs)[-1] > 0.5


def test_every_model_says_how_far_it_may_be_trusted() -> None:
    assert {name: model.trusted_to for name, model in MODELS.items()} == {
        "ideal": 0.001,
        "davies": 0.5,
        "specific-ion": 3.5,
    }
    assert all(model.label and model.source for model in MODELS.values())
