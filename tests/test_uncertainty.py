"""The band against a Monte Carlo that solves every draw anew, and its parts against arithmetic."""

from dataclasses import replace

import numpy as np
import pytest
from recipes import shipped

from bufferfolio.activity import MODELS, ActivityModel
from bufferfolio.composition import water_mass
from bufferfolio.definitions import Tolerances
from bufferfolio.equilibrium import solve
from bufferfolio.recipes import recipe_water, shares
from bufferfolio.speciation import Mixture
from bufferfolio.subjects import Subject, reference_temperature, subject_of
from bufferfolio.temperature import constants_at
from bufferfolio.tolerances import ASSUMED, content_doubt, pK_doubt
from bufferfolio.uncertainty import activity_doubt, band_of

DRAWS_A_BLOCK, BLOCKS = 1250, 80
FORMULATIONS = sorted(shipped().formulations)


def subject(key: str) -> Subject:
    return subject_of(shipped().formulations[key], shipped())


def shifted(model: ActivityModel, share: float) -> ActivityModel:
    """Return a model whose D is off by `share` of its allowance at every ionic strength."""

    def long_range(coefficient, ionic_strength):
        term, slope = model.long_range(coefficient, ionic_strength)
        pairs = zip(coefficient, ionic_strength, strict=True)
        allowance = np.array([activity_doubt(model, a, i) for a, i in pairs])
        # The slope only speeds Newton's method; a thousandth of a step gives it well enough.
        more = np.array(
            [
                activity_doubt(model, a, i * 1.001)
                for a, i in zip(coefficient, ionic_strength, strict=True)
            ]
        )
        return term + share * allowance, slope + share * (more - allowance) / 0.001

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
        constants = replace(
            constants, pK=tuple(pK), pKw=constants.pKw + draw(ASSUMED["pKw"].value)
        )
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
        readings.append(solved.pH + draw(care.meter))
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
