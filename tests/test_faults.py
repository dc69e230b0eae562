"""Faults: each is found when it is true, none where none fits, and a second reading sharpens."""

import math
from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
from scipy.integrate import quad

from bufferfolio.composition import scaled
from bufferfolio.faults import (
    Diagnosis,
    Explanation,
    Reading,
    _evidence,
    _fit,
    diagnosed,
    forecasts,
)
from bufferfolio.measurements import expected_pH, target_at
from bufferfolio.subjects import reference_temperature, solved_at, subject_of
from bufferfolio.substitutes import Setting, setting_of
from bufferfolio.suspects import (
    KINDS,
    altered,
    extent_at,
    read_as,
    scene_of,
    suspects_of,
    words_of,
)
from recipes import shipped

ROOM = 298.15
FORMULATIONS = sorted(shipped().formulations)


def setting(key: str) -> Setting:
    return setting_of(subject_of(shipped().formulations[key], shipped()), shipped())


def best(found: Diagnosis, kind: str) -> Explanation:
    return max(
        (each for each in found.explanations if each.suspect.kind == kind),
        key=lambda each: each.weight,
    )


@pytest.mark.parametrize("key", FORMULATIONS)
def test_a_fault_that_is_true_is_among_those_that_fit(key: str) -> None:
    """Every third suspect in turn is true and is read exactly; meters show 0 to 14."""
    this = setting(key)
    kelvin = reference_temperature(this.subject.formulation)
    suspects = suspects_of(this, kelvin)
    told = list(zip(forecasts(this, kelvin), suspects, strict=True))
    seen = 0
    for forecast, suspect in told[len(key) % 3 :: 3]:
        pH = forecast.pH[1]
        if not 0.0 <= pH <= 14.0:
            continue
        found = diagnosed(this, (Reading(temperature=kelvin, pH=pH),))
        own = next(each for each in found.explanations if each.suspect == suspect)
        assert own.fits, own
        assert own.misfit == pytest.approx(0.0, abs=0.02)
        if abs(pH - forecast.pH[0]) > 0.1:
            assert own.extent == pytest.approx(suspect.high, rel=0.05)
        seen += 1
    assert seen >= 4


@pytest.mark.parametrize("key", FORMULATIONS)
def test_a_right_batch_has_nothing_wrong(key: str) -> None:
    this = setting(key)
    kelvin = reference_temperature(this.subject.formulation)
    pH = expected_pH(this.subject, kelvin)
    found = diagnosed(this, (Reading(temperature=kelvin, pH=pH),))
    assert found.nothing_wrong
    assert best(found, "nothing").misfit == pytest.approx(0.0, abs=1e-6)
    weights = sum(each.weight for each in found.explanations) + found.unexplained
    assert weights == pytest.approx(1.0, abs=1e-12)


def test_acid_that_was_left_out_is_named_first() -> None:
    """Tris without its acid reads about 10.4: few other things do."""
    found = diagnosed(setting("tris-assay"), (Reading(temperature=ROOM, pH=10.36),))
    assert found.explanations[0].words == "hydrochloric acid, 37 % was left out"
    assert found.explanations[0].weight > 0.9
    assert not found.nothing_wrong
    assert not found.none_fits


def test_none_of_these() -> None:
    """Phthalate can be made to read 9 by nothing that is suspected of it."""
    found = diagnosed(setting("meter-check-phthalate"), (Reading(temperature=ROOM, pH=9.0),))
    assert found.none_fits
    assert not found.nothing_wrong
    assert found.unexplained > 0.99


def test_what_cannot_be_judged_is_refused() -> None:
    tris = setting("tris-assay")
    assert diagnosed(tris, (Reading(temperature=ROOM, pH=15.0),)).refusal == "reading"
    both = (Reading(temperature=ROOM, pH=8.0), Reading(temperature=350.0, pH=8.0))
    assert diagnosed(tris, both).refusal == "temperature"


def test_dilution_tells_carbon_dioxide_from_acid() -> None:
    """Diluted to twice its volume, water with strong acid rises by 0.30, with carbonic by half."""
    water = setting("plain-water")
    one = Reading(temperature=ROOM, pH=5.65)
    before = diagnosed(water, (one,))
    assert best(before, "carbon dioxide").fits
    assert best(before, "overshoot").fits
    gas = diagnosed(water, (one, Reading(temperature=ROOM, pH=5.80, dilution=2.0)))
    assert best(gas, "carbon dioxide").weight > 0.95 > best(before, "carbon dioxide").weight
    assert not best(gas, "overshoot").fits
    acid = diagnosed(water, (one, Reading(temperature=ROOM, pH=5.95, dilution=2.0)))
    assert best(acid, "overshoot").weight > 0.95
    assert not best(acid, "carbon dioxide").fits


def test_another_temperature_tells_an_offset_from_a_compensation() -> None:
    """A meter set for 10 °C is off the more, the warmer the sample; an offset stays."""
    phthalate = setting("meter-check-phthalate")
    readings = [
        Reading(
            temperature=kelvin,
            pH=7.0 + (expected_pH(phthalate.subject, kelvin) - 7.0) * kelvin / 283.15,
        )
        for kelvin in (ROOM, 318.15)
    ]
    before = diagnosed(phthalate, readings[:1])
    assert best(before, "offset").fits
    after = diagnosed(phthalate, readings)
    assert not best(after, "offset").fits
    assert after.explanations[0].suspect.kind == "compensation"
    assert after.explanations[0].extent == pytest.approx(283.15, abs=0.5)


def test_errors_that_both_readings_share_do_not_blur_their_difference() -> None:
    """Constants and weighing err the same way in both; meter and thermometer do not."""
    subject = setting("fixative-buffer").subject
    one = Reading(temperature=293.15, pH=7.2)
    evidence = _evidence(subject, (one, replace(one, dilution=2.0)))
    covariance = np.linalg.inv(evidence.inverse)
    difference = covariance[0, 0] + covariance[1, 1] - 2.0 * covariance[0, 1]
    assert math.sqrt(difference) < 0.6 * math.sqrt(covariance[0, 0])


def test_what_is_not_modelled_errs_the_same_way_in_all_readings() -> None:
    """Half of 0.3, squared, in every element of the covariance, and nothing else changed."""
    formulation = shipped().formulations["gel-tris-borate"]
    silent = replace(formulation, tolerances=replace(formulation.tolerances, model=None))
    two = [Reading(temperature=ROOM, pH=8.4), Reading(temperature=288.15, pH=8.6, dilution=2.0)]
    with_it, without = (
        np.linalg.inv(_evidence(subject_of(each, shipped()), two).inverse)
        for each in (formulation, silent)
    )
    assert with_it - without == pytest.approx(np.full((2, 2), 0.15**2), rel=1e-6)


@pytest.mark.parametrize("readings", [1, 2])
def test_the_mean_likelihood_is_an_integral(readings: int) -> None:
    """Closed form against quadrature, curves being straight between their points."""
    subject = setting("tris-assay").subject
    read = [Reading(temperature=ROOM, pH=8.1), Reading(temperature=ROOM, pH=8.05, dilution=2.0)]
    evidence = _evidence(subject, read[:readings])
    shares = [0.0, 0.25, 0.5, 1.0]
    seen = [(8.16, 8.12), (8.13, 8.11), (8.1300001, 8.1100001), (7.9, 8.02)]
    curve = [(share, pair[:readings]) for share, pair in zip(shares, seen, strict=True)]

    def likelihood(share: float) -> float:
        at = [float(np.interp(share, shares, [pair[k] for pair in seen])) for k in range(readings)]
        away = evidence.read - np.array(at)
        return math.exp(-0.5 * float(away @ evidence.inverse @ away))

    expected = sum(quad(likelihood, low, high, epsabs=1e-13)[0] for low, high in pairwise(shares))
    # A piece that is nearly flat counts by its middle.
    assert _fit(curve, evidence).likelihood == pytest.approx(expected, rel=2e-6)


def test_what_suspects_make_of_a_batch_is_what_they_say() -> None:
    """Three of them by hand."""
    this = setting("tris-assay")
    scene = scene_of(this, ROOM)
    suspects = {(each.kind, each.name): each for each in suspects_of(this, ROOM)}
    doubled = altered(scene, suspects["doubled", "Tris"], 2.0)
    assert doubled.totals[0] == pytest.approx(2.0 * this.subject.mixture.totals[0], rel=1e-12)
    np.testing.assert_allclose(
        doubled.molalities[: len(this.subject.mixture.ions)],
        this.subject.mixture.molalities,
        rtol=1e-12,
    )
    half = altered(scene, suspects["half the water", ""], 0.5)
    twice = scaled(this.subject.mixture, np.array(2.0))
    assert float(solved_at(this.subject, ROOM, half).pH) == pytest.approx(
        float(solved_at(this.subject, ROOM, twice).pH), abs=1e-12
    )
    slope = suspects["slope", ""]
    assert read_as(slope, 0.9, 8.0, ROOM) == pytest.approx(7.9, abs=1e-12)
    assert read_as(suspects["offset", ""], 0.2, 8.0, ROOM) == pytest.approx(8.2, abs=1e-12)


def test_the_same_mass_of_another_hydrate_holds_less() -> None:
    """103 g of the dodecahydrate in place of the heptahydrate: 268.07 / 358.14 of the amount."""
    this = setting("fixative-buffer")
    part = this.subject.recipe.parts[0]
    other = next(each for each in this.substitutes[0] if "dodecahydrate" in each.key)
    purity = 1.0  # both are 99 %
    assert other.amount / part.amount == pytest.approx(268.07 / 358.14 * purity, rel=1e-4)


def test_a_batch_adjusted_cold_reads_low_when_it_is_warm() -> None:
    """Tris set to 8.16 at 4 °C falls by 0.030 for each degree up to 25 °C, more in the cold."""
    this = setting("tris-assay")
    scene = scene_of(this, ROOM)
    adjusted = next(each for each in suspects_of(this, ROOM) if each.kind == "adjusted")
    mixture = altered(scene, adjusted, 277.15)
    assert float(solved_at(this.subject, 277.15, mixture).pH) == pytest.approx(8.16, abs=1e-6)
    warm = float(solved_at(this.subject, ROOM, mixture).pH)
    assert warm == pytest.approx(target_at(this.subject, ROOM) - 21.0 * 0.030, abs=0.02)


def test_every_kind_has_words_and_every_word_is_filled_in() -> None:
    for key in FORMULATIONS:
        this = setting(key)
        for suspect in suspects_of(this, reference_temperature(this.subject.formulation)):
            assert suspect.kind in KINDS
            assert "{" not in words_of(suspect)
            assert extent_at(suspect, 0.0) == suspect.low
            assert extent_at(suspect, 1.0) == pytest.approx(suspect.high, rel=1e-12)
