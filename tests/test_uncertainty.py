"""The band against a Monte Carlo that solves every draw anew, and its parts against arithmetic."""

from dataclasses import replace

import numpy as np
import pytest

from bufferfolio.activity import MODELS, ActivityModel
from bufferfolio.composition import water_mass
from bufferfolio.definitions import Tolerances
from bufferfolio.equilibrium import solve
from bufferfolio.reading_contexts import reading_context
from bufferfolio.recipes import recipe_water, shares
from bufferfolio.speciation import Mixture
from bufferfolio.subjects import Subject, reference_temperature, subject_of
from bufferfolio.temperature import constants_at
from bufferfolio.tolerances import ASSUMED, content_doubt, pK_doubt
from bufferfolio.uncertainty import activity_doubt, band_of
from recipes import shipped

DRAWS_A_BLOCK, BLOCKS = 1250, 80
FORMULATIONS = sorted(shipped().formulations)


def subject(key: str) -> Subject:
    return subject_of(shipped().formulations[key], shipped())


def shifted(model: ActivityModel, share: float) -> ActivityModel:
    """Return a model whose D is off by `share` of its allowance at every ionic strength."""

    def long_range(coefficient, ionic_strength):
        term, slope = model.long_range(coefficient, ionic_strength)
        allowance = activity_doubt(model, coefficient, ionic_strength)
        # Straight in the ionic strength but for ideal solutions, so its slope by ln I is itself.
        return term + share * allowance, slope + share * allowance

    return replace(model, long_range=long_range)


def standard_normal(random: np.random.Generator, size: int) -> np.ndarray:
    """Return draws whose mean and variance are exactly those of the distribution."""
    draws = random.standard_normal(size)
    return (draws - draws.mean()) / draws.std()


def drawn_readings(subject: Subject, temperature: float, random: np.random.Generator) -> np.ndarray:
    """Return readings of batches whose every number is drawn from its tolerance."""
    recipe, care, size = subject.recipe, subject.care, DRAWS_A_BLOCK
    keys = [family.key for family in subject.mixture.families]
    readings = []
    for off in standard_normal(random, BLOCKS):

        def draw(tolerance: float) -> np.ndarray:
            return 0.5 * tolerance * random.standard_normal(size)

        kelvin = temperature + draw(care.temperature)
        constants = constants_at(subject.mixture.families, kelvin)
        pK = [
            own + np.array([draw(pK_doubt(step, temperature)) for step in family.steps])
            for family, own in zip(subject.mixture.families, constants.pK, strict=True)
        ]
        constants = replace(constants, pK=tuple(pK), pKw=constants.pKw + draw(ASSUMED["pKw"].value))
        water = recipe.water * (1.0 + draw(care.weighing if recipe.weighed else care.volume))
        totals = np.zeros((len(keys), size))
        ions = np.zeros((len(subject.mixture.ions), size))
        for part in recipe.parts:
            measure = care.weighing if part.added.volume is None else care.volume
            amount = part.amount * (1.0 + draw(measure)) * (1.0 + draw(part.doubt))
            per_family, per_ion = shares(part, keys, subject.mixture.ions)
            totals += per_family[:, np.newaxis] * amount
            ions += per_ion[:, np.newaxis] * amount
            water = water + (amount * part.added.water if recipe.counted else 0.0)
        mixture = Mixture(
            families=subject.mixture.families,
            totals=totals / water,
            ions=subject.mixture.ions,
            molalities=ions / water,
        )
        model = shifted(subject.model, 0.5 * off)
        solved = solve(mixture, constants, model, subject.interactions)
        readings.append(solved.pH + draw(care.meter) + draw(care.model))
    return np.concatenate(readings)


@pytest.mark.parametrize("key", FORMULATIONS)
def test_the_band_agrees_with_a_monte_carlo_of_a_hundred_thousand_draws(key: str) -> None:
    """Half the band is the standard deviation of the draws; 95.45 % of them lie within it.

    The standard deviation of a hundred thousand draws is itself good to 0.2 %, the quantile to 0.5.
    """
    this = subject(key)
    temperature = reference_temperature(this.formulation)
    band = band_of(this, temperature)
    readings = drawn_readings(this, temperature, np.random.default_rng(4))
    assert readings.size >= 100_000
    assert np.isfinite(readings).all()
    assert 2.0 * readings.std() == pytest.approx(band.half_width, rel=0.05)
    away = np.quantile(np.abs(readings - band.pH), 0.9545)
    assert away == pytest.approx(band.half_width, rel=0.05)


def stated(key: str, **tolerances: float) -> Subject:
    formulation = shipped().formulations[key]
    return subject_of(replace(formulation, tolerances=Tolerances(**tolerances)), shipped())


def effect(subject: Subject, kind: str, name: str = "") -> float:
    found = [
        item.effect
        for item in band_of(subject, 298.15).contributions
        if item.kind == kind and item.name.startswith(name)
    ]
    assert len(found) == 1
    return abs(found[0])


def test_tolerances_of_a_file_take_the_place_of_the_usual_ones() -> None:
    usual = subject("tris-assay")
    careful = stated("tris-assay", weighing=0.001, meter=0.005)
    assert effect(careful, "meter") == 0.005
    assert effect(careful, "weighing", "Tris") == pytest.approx(
        0.2 * effect(usual, "weighing", "Tris"), rel=1e-9
    )
    # What is measured by volume stays as it was.
    assert effect(careful, "weighing", "hydro") == effect(usual, "weighing", "hydro")
    named = {
        item.kind: item.stated for item in band_of(careful, 298.15).contributions if not item.name
    }
    assert named["meter"]
    assert not named["temperature"]
    assert band_of(careful, 298.15).half_width < band_of(usual, 298.15).half_width


def test_what_a_file_says_is_not_modelled_widens_the_band_and_nothing_is_assumed() -> None:
    usual, honest = stated("tris-assay"), stated("tris-assay", model=0.3)
    without, with_it = band_of(usual, 298.15), band_of(honest, 298.15)
    assert "model" not in {item.kind for item in without.contributions}
    assert effect(honest, "model") == 0.3
    assert with_it.ranked[0].kind == "model"
    assert with_it.ranked[0].stated
    assert with_it.pH == without.pH
    assert with_it.half_width == pytest.approx(np.hypot(without.half_width, 0.3), rel=1e-12)


def test_the_sheet_has_a_line_for_what_is_not_modelled_only_where_it_is_stated() -> None:
    def lines(this: Subject) -> list[tuple[str, str, str]]:
        rows = reading_context(this, 298.15).tolerances
        return [(row.of, row.value, row.whence) for row in rows if "modelled" in row.of]

    assert lines(stated("tris-assay", meter=0.05)) == []
    assert lines(stated("tris-assay", model=0.3)) == [
        ("the prediction, for what is not modelled here", "± 0.3 in pH", "stated in its file")
    ]


def test_the_gel_buffer_read_where_it_usually_reads_is_within_its_band() -> None:
    band = band_of(subject("gel-tris-borate"), 298.15)
    assert band.low < 8.4 < band.high


def test_the_band_is_the_root_of_the_sum_of_squares_largest_first() -> None:
    band = band_of(subject("tris-assay"), 298.15)
    squares = sum(item.effect**2 for item in band.contributions)
    assert band.half_width == pytest.approx(np.sqrt(squares), rel=1e-12)
    effects = [abs(item.effect) for item in band.ranked]
    assert effects == sorted(effects, reverse=True)
    assert (band.low, band.high) == (band.pH - band.half_width, band.pH + band.half_width)


def test_a_pK_is_the_less_certain_the_farther_it_is_carried() -> None:
    """1 kJ/mol from 25 to 2 °C is 1000 (1/275.15 − 1/298.15) / (R ln 10) = 0.0146."""
    step = shipped().families["tris"].steps[0]
    assert pK_doubt(step, 298.15) == ASSUMED["pK"].value
    carried = 1000.0 * (1.0 / 275.15 - 1.0 / 298.15) / (8.314462618 * np.log(10.0))
    assert carried == pytest.approx(0.0146, abs=1e-4)
    assert pK_doubt(step, 275.15) == pytest.approx(np.hypot(0.02, carried), rel=1e-9)


@pytest.mark.parametrize(
    ("key", "expected"),
    [
        ("sodium-hydroxide", 0.02),  # 98 %: the label leaves 2 % open
        ("tris", 0.002),  # 99.8 %
        ("potassium-hydrogen-phthalate", 0.002),  # 99.9 %, but moisture
        ("hydrochloric-acid-decimolar", 0.005),
        ("hydrochloric-acid-37", 0.02),
    ],
)
def test_doubt_about_a_bottle(key: str, expected: float) -> None:
    assert content_doubt(shipped().reagents[key]) == pytest.approx(expected, rel=1e-9)


def test_an_ideal_solution_is_in_doubt_by_all_that_it_leaves_out() -> None:
    found = activity_doubt(MODELS["ideal"], 0.51, 0.1)
    assert found == pytest.approx(0.51 * (np.sqrt(0.1) / (1.0 + np.sqrt(0.1)) - 0.03), rel=1e-12)
    assert activity_doubt(MODELS["davies"], 0.5, 0.1) == pytest.approx(0.01, rel=1e-12)


def test_a_pair_made_of_two_salts_does_not_care_for_its_volume() -> None:
    """Ideally pH of a pair depends on the ratio alone; dilution only moves activities."""
    this = subject("meter-check-phosphate")
    assert effect(this, "make-up") < 0.001
    assert recipe_water(this.recipe) == pytest.approx(
        water_mass(this.formulation.make_up), rel=1e-12
    )
