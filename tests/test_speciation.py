"""Forms of families at a given pH: sums, ratios, limits, and what a mixture says of itself."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from bufferfolio.activity import MODELS
from bufferfolio.definitions import Interaction
from bufferfolio.speciation import forms_at, interaction_matrix, stacked
from solutions import (
    CALCIUM,
    CHLORIDE,
    MADE_UP,
    SODIUM,
    SULFATE,
    constants_of,
    made_up_family,
    mixture_of,
)

QUICK = settings(derandomize=True, deadline=None, max_examples=100)
PHOSPHORIC = made_up_family("phosphoric", 0, [2.148, 7.198, 12.35])


def forms_of(mixture, model, pH, strength, offsets=None):
    constants = constants_of(mixture)
    return forms_at(mixture, constants, MODELS[model], np.array(pH), np.array(strength), offsets)


@QUICK
@given(
    st.integers(0, 3),
    st.lists(st.floats(-3.0, 16.0), min_size=1, max_size=4),
    st.floats(-3.0, 18.0),
    st.floats(1e-9, 10.0),
    st.sampled_from(sorted(MODELS)),
)
def test_fractions_are_shares_of_one(
    charge: int, pK: list[float], pH: float, strength: float, model: str
) -> None:
    """At any pH, even where a form is 1e-60 of the whole."""
    mixture = mixture_of([(made_up_family("any", charge, pK), 0.7)])
    forms = forms_of(mixture, model, pH, strength)
    share = forms.fractions[0]
    assert ((share >= 0.0) & (share <= 1.0)).all()
    assert float(share.sum()) == pytest.approx(1.0, abs=1e-14)
    assert float(forms.families[0].sum()) == pytest.approx(0.7, rel=1e-14)


@pytest.mark.parametrize("model", MODELS)
def test_each_step_obeys_mass_action(model: str) -> None:
    """γ a(H+) m(base) / m(acid) = K at any ionic strength, checked from the logarithms."""
    strength = 0.3
    forms = forms_of(mixture_of([(PHOSPHORIC, 0.1)]), model, 7.0, strength)
    term, _ = MODELS[model].long_range(
        constants_of(mixture_of([(PHOSPHORIC, 0.1)])).debye_huckel, np.array(strength)
    )
    log_activity = np.log10(forms.families[0]) - np.array([0, 1, 4, 9]) * float(term)
    np.testing.assert_allclose(np.diff(log_activity) - 7.0, [-2.148, -7.198, -12.35], atol=1e-12)


@pytest.mark.parametrize("model", MODELS)
def test_water_obeys_its_ionic_product(model: str) -> None:
    mixture = mixture_of([], [(SODIUM, 0.1)])
    forms = forms_of(mixture, model, 9.0, 0.1)
    constants = constants_of(mixture)
    term, _ = MODELS[model].long_range(constants.debye_huckel, np.array(0.1))
    product = np.log10(forms.hydrogen * forms.hydroxide) - 2.0 * term
    assert float(product) == pytest.approx(-float(constants.pKw), abs=1e-12)
    assert float(np.log10(forms.hydrogen) - term) == pytest.approx(-9.0, abs=1e-12)


def test_half_and_half_at_the_pK_of_an_ideal_solution() -> None:
    forms = forms_of(mixture_of([(PHOSPHORIC, 1.0)]), "ideal", 7.198, 0.0)
    assert float(forms.fractions[0][1]) == pytest.approx(0.5, abs=1e-5)
    assert float(forms.fractions[0][2]) == pytest.approx(0.5, abs=1e-5)


def test_offsets_move_one_form_alone() -> None:
    """Σ ε m of −0.3 on the second form doubles its molality against its neighbours."""
    mixture = mixture_of([(PHOSPHORIC, 1.0)], [(SODIUM, 0.1)])
    offsets = np.zeros(len(mixture.species))
    offsets[3] = -float(np.log10(2.0))
    before = forms_of(mixture, "specific-ion", 4.0, 0.1).families[0]
    after = forms_of(mixture, "specific-ion", 4.0, 0.1, offsets).families[0]
    ratio = (after[1] / after[0]) / (before[1] / before[0])
    assert float(ratio) == pytest.approx(2.0, rel=1e-12)
    assert float(after[2] / after[0]) == pytest.approx(float(before[2] / before[0]), rel=1e-12)


def test_a_mixture_knows_its_strong_charge_and_strength() -> None:
    mixture = mixture_of([], [(SODIUM, 0.2), (CALCIUM, 0.1), (CHLORIDE, 0.15), (SULFATE, 0.05)])
    assert float(mixture.strong_charge) == pytest.approx(0.2 + 0.2 - 0.15 - 0.1, abs=1e-15)
    assert float(mixture.strong_strength) == pytest.approx(0.2 + 0.4 + 0.15 + 0.2, abs=1e-15)


def test_species_and_molalities_come_in_one_order() -> None:
    mixture = mixture_of([(PHOSPHORIC, 0.1)], [(SODIUM, 0.2)])
    names = ("H+", "OH-", *(form.name for form in PHOSPHORIC.species), "Na+")
    assert mixture.species == names
    there = stacked(forms_of(mixture, "ideal", 7.0, 0.1), mixture)
    assert there.shape == (len(names),)
    assert float(there[-1]) == 0.2


def test_pair_coefficients_are_symmetric_and_only_of_what_is_there() -> None:
    def pair(cation: str, anion: str) -> Interaction:
        return Interaction(cation=cation, anion=anion, epsilon=0.03, citation=MADE_UP)

    mixture = mixture_of([], [(SODIUM, 0.1), (CHLORIDE, 0.1)])
    assert interaction_matrix(mixture, [pair("K+", "Cl-"), pair("Na+", "NO3-")]) is None
    matrix = interaction_matrix(mixture, [pair("Na+", "Cl-"), pair("K+", "Cl-")])
    assert matrix is not None
    np.testing.assert_array_equal(matrix, matrix.T)
    assert matrix[2, 3] == 0.03
    assert np.count_nonzero(matrix) == 2
