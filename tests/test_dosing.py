"""Corrections: they lead where they say, they follow published titrations, and they are refused."""

import math
from dataclasses import replace

import numpy as np
import pytest

from bufferfolio.activity import MODELS
from bufferfolio.composition import mixed
from bufferfolio.definitions import Interval, Titrant
from bufferfolio.dose_tables import dose_rows
from bufferfolio.dosing import (
    LEAST_VOLUME,
    REFUSALS,
    Batch,
    corrected,
    dangers_of,
    titrant_for,
)
from bufferfolio.measurements import measured, target_at
from bufferfolio.subjects import Subject, reference_temperature, solved_at, subject_of
from bufferfolio.titration import amount_to_reach
from bufferfolio.water import density
from recipes import shipped
from solutions import CHLORIDE, SODIUM, made_up_family, mixture_of, strong_titrant

ROOM = 298.15
FORMULATIONS = sorted(shipped().formulations)


def subject(key: str, **changed: object) -> Subject:
    return subject_of(replace(shipped().formulations[key], **changed), shipped())


def batch(pH: float, volume: float = 1e-3, **more: object) -> Batch:
    return Batch(temperature=ROOM, pH=pH, volume=volume, **more)


TRIS = subject("tris-assay")


@pytest.mark.parametrize("key", FORMULATIONS)
def test_a_correction_leads_to_its_target(key: str) -> None:
    """Both ways, from readings inside the limits of use; what is refused says why."""
    this = subject(key, never_corrected=False)
    kelvin, use = reference_temperature(this.formulation), this.formulation.use_pH
    target = target_at(this, kelvin)
    for pH in (0.6 * target + 0.4 * use.low, 0.6 * target + 0.4 * use.high):
        found = corrected(this, Batch(temperature=kelvin, pH=pH, volume=0.05, dilution=1.1))
        if found.refusal:
            assert key == "plain-water"
            assert found.refusal == "dilute"
            continue
        assert found.pH_after == pytest.approx(target, abs=1e-8)
        assert min(pH, target) < found.pH_first < max(pH, target)
        assert found.first.moles == pytest.approx(0.8 * found.whole.moles, rel=1e-12)
        whole = found.first.moles + found.rest.moles
        assert whole == pytest.approx(found.whole.moles, rel=1e-12)
        assert found.growth >= 0.0


def test_the_dose_is_what_the_batch_takes_when_it_is_made_and_titrated() -> None:
    """By hand: the measured state, the moles in 20 L, and the state after them."""
    found = corrected(TRIS, batch(7.9, volume=0.02))
    there = measured(TRIS, ROOM, 7.9)
    water = 0.02 * float(density(np.array(ROOM)))
    added = TRIS.additions[found.titrant]
    assert TRIS.formulation.titrants[found.titrant].direction == "upward"
    after = mixed(there.mixture, added, np.array(found.whole.moles / water))
    assert float(solved_at(TRIS, ROOM, after).pH) == pytest.approx(8.16, abs=1e-9)
    assert found.whole.volume == pytest.approx(found.whole.moles * 1e-3, rel=1e-9)  # 1 mol/L
    first = mixed(there.mixture, added, np.array(found.first.moles / water))
    assert float(solved_at(TRIS, ROOM, first).pH) == pytest.approx(found.pH_first, abs=1e-12)


def test_doses_grow_with_the_volume_from_a_millilitre_to_a_hundred_cubic_metres() -> None:
    one = corrected(TRIS, batch(7.9))
    for volume in (1e-6 * 2.0, 1.0, 100.0):
        other = corrected(TRIS, batch(7.9, volume=volume))
        assert other.whole.moles == pytest.approx(one.whole.moles * volume / 1e-3, rel=1e-9)
        assert other.pH_first == one.pH_first


def test_a_solid_is_weighed() -> None:
    """A titrant without a strength is weighed: here sodium carbonate, in grams."""
    solid = Titrant(
        reagent=shipped().reagents["sodium-carbonate"],
        direction="upward",
        molarity=None,
        label="sodium carbonate",
    )
    found = corrected(subject("tris-assay", titrants=(solid,)), batch(7.9, volume=0.1))
    assert found.refusal == ""
    assert found.whole.volume is None
    assert found.whole.mass == pytest.approx(found.whole.moles * 0.10599 / 0.995, rel=1e-4)
    assert found.growth == 0.0


def test_reserves_before_and_after() -> None:
    """Base of unknown origin costs reserve upwards; neutralised, it is there again but for salt."""
    found = corrected(TRIS, batch(8.4))
    downward, upward = found.reserves
    assert (downward.direction, upward.direction) == ("downward", "upward")
    assert upward.before < 0.8 * upward.right
    assert downward.before > 1.2 * downward.right
    assert upward.after == pytest.approx(upward.right, rel=0.02)
    assert found.ionic_strength[1] > 0.0


def test_a_reserve_is_what_leads_to_the_limit() -> None:
    found = corrected(TRIS, batch(8.4))
    there = measured(TRIS, ROOM, 8.4)
    for reserve, limit in zip(found.reserves, (7.4, 9.0), strict=True):
        end = mixed(there.mixture, TRIS.additions[reserve.titrant], np.array(reserve.before))
        assert float(solved_at(TRIS, ROOM, end).pH) == pytest.approx(limit, abs=1e-8)
    beyond = corrected(TRIS, batch(9.4))
    assert beyond.refusal == "reserve"
    assert beyond.reserves[1].before == 0.0


def weak(**changed: object) -> Subject:
    """Return tris assay buffer with wide limits and a titrant a thousand times thinner."""
    acid = shipped().reagents["hydrochloric-acid-37"]
    thin = Titrant(reagent=acid, direction="downward", molarity=0.001, label="thin acid")
    return subject("tris-assay", titrants=(thin,), **changed)


@pytest.mark.parametrize(
    ("this", "there", "options", "refusal"),
    [
        (TRIS, batch(-1.0), {}, "reading"),
        (TRIS, replace(batch(8.0), temperature=330.0), {}, "temperature"),
        (TRIS, batch(0.1), {}, "impossible"),
        (TRIS, batch(8.3), {"target": 9.5}, "target"),
        (TRIS, batch(8.163), {}, "reached"),
        (subject("tris-assay", titrants=()), batch(8.4), {}, "no titrant"),
        (TRIS, batch(8.4), {"titrant": 0}, "direction"),
        (TRIS, batch(7.2), {}, "reserve"),
        (subject("plain-water"), batch(6.5), {}, "dilute"),
        (weak(), batch(8.9), {}, "doubles"),
        (TRIS, batch(8.2, volume=1e-7), {}, "little"),
    ],
)
def test_refusals(this: Subject, there: Batch, options: dict[str, object], refusal: str) -> None:
    found = corrected(this, there, **options)
    assert found.refusal == refusal
    assert math.isnan(found.pH_after)
    assert math.isnan(found.whole.moles)


def test_a_titrant_that_never_arrives_is_refused() -> None:
    """Hydrogen carbonate brings a bath towards pH 8.3, and no farther."""
    salt = Titrant(
        reagent=shipped().reagents["sodium-hydrogen-carbonate"],
        direction="upward",
        molarity=None,
        label="sodium hydrogen carbonate",
    )
    this = subject(
        "tris-assay", titrants=(salt,), expected=None, use_pH=Interval(low=7.4, high=10.0)
    )
    assert corrected(this, batch(8.4), target=9.9).refusal == "never"


def test_what_is_never_corrected_keeps_its_reserve() -> None:
    """Meter-check buffers: common practice, no source."""
    this = subject("meter-check-phosphate")
    found = corrected(this, Batch(temperature=ROOM, pH=6.82, volume=1e-3))
    assert found.refusal == "forbidden"
    assert math.isnan(found.whole.moles)
    assert [each.direction for each in found.reserves] == ["downward", "upward"]
    assert all(each.before > 0.0 for each in found.reserves)
    reached = corrected(this, Batch(temperature=ROOM, pH=6.865, volume=1e-3))
    assert reached.refusal == "reached"


def test_every_refusal_has_words() -> None:
    expected = {"impossible", "target", "reached", "no titrant", "direction", "dangers", "reserve"}
    assert set(REFUSALS) == expected | {"forbidden", "dilute", "never", "doubles", "little"}
    assert all(words.endswith(".") for words in REFUSALS.values())


def test_gases() -> None:
    """Acid on bleach gives chlorine: told where the file explains it, refused where it does not."""
    bath = subject("sanitising-bath")
    acid = titrant_for(bath, 7.2, 6.94)
    assert dangers_of(bath, acid) == ("chlorine with acid",)
    told = corrected(bath, Batch(temperature=288.15, pH=7.2, volume=0.05))
    assert told.refusal == ""
    assert told.dangers == ("chlorine with acid",)
    silent = subject("sanitising-bath", accepted_dangers=())
    refused = corrected(silent, Batch(temperature=288.15, pH=7.2, volume=0.05))
    assert refused.refusal == "dangers"
    assert dangers_of(bath, titrant_for(bath, 6.8, 6.94)) == ()
    ammonia = subject("ammonia-buffer")
    assert dangers_of(ammonia, titrant_for(ammonia, 9.8, 10.06)) == ("ammonia with base",)


def test_so_little_is_measured_in_microlitres() -> None:
    found = corrected(TRIS, batch(8.4, volume=1e-6))
    assert found.refusal == ""
    assert LEAST_VOLUME < found.whole.volume < 1e-7


# End points and answers of titration_examples: (mL of sample, mol/L of acid, mL to pH 8.3, mL to
# pH 4.5, mmol/L of CO3-2 and of HCO3-). The volumes are those of the published examples.
ALKALINITY = {
    # Harvey, Analytical Chemistry 2.1, sources of alkalinity: 315 mg/L CO3-2 and 185 mg/L HCO3-.
    "harvey": (100.0, 0.02812, 18.67, 48.12, 315.0 / 60.009, 185.0 / 61.017),
    # Skoog, West, Holler & Crouch, carbonate mixtures: 0.0442 and 0.0084 mol/L.
    "skoog": (50.0, 0.100, 22.1, 48.4, 44.2, 8.4),
    # An answered question on a question site: carbonate only, 0.172 mol/L.
    "question": (35.0, 0.200, 30.1, 60.2, 172.0, 0.0),
}


@pytest.mark.parametrize("name", sorted(ALKALINITY))
def test_acid_to_the_end_points_of_published_alkalinities(name: str) -> None:
    """The published volumes are stoichiometry; a pH of 8.3 and of 4.5 is nominal.

    To pH 4.5 a little acid more is free in the water, and of carbonate a little is not yet
    carbon dioxide: 2 % of the volume at these strengths. At pH 8.3 the second step has begun.
    """
    sample, strength, first, second, carbonate, hydrogen_carbonate = ALKALINITY[name]
    family = made_up_family("carbonate", 0, [6.35, 10.33])
    total = (carbonate + hydrogen_carbonate) / 1000.0
    sodium = (2.0 * carbonate + hydrogen_carbonate) / 1000.0
    water = mixture_of([(family, total)], [(SODIUM, sodium), (CHLORIDE, 0.0)])
    acid = strong_titrant(CHLORIDE, strength)
    for pH, published in ((8.3, first), (4.5, second)):
        amount = amount_to_reach(water, acid, pH, ROOM, MODELS["ideal"])
        assert amount * sample / strength == pytest.approx(published, rel=0.025)


@pytest.mark.parametrize("key", FORMULATIONS)
def test_a_table_of_doses_holds_what_single_doses_are(key: str) -> None:
    this = subject(key)
    kelvin, use = reference_temperature(this.formulation), this.formulation.use_pH
    readings = [*np.linspace(use.low - 0.1, use.high + 0.1, 4), target_at(this, kelvin)]
    for row in dose_rows(this, kelvin, readings):
        single = corrected(this, Batch(temperature=kelvin, pH=row.pH, volume=1.0))
        assert (row.refusal, row.titrant) == (single.refusal, single.titrant)
        if not row.refusal:
            assert row.moles == pytest.approx(single.whole.moles, rel=1e-8)
            assert row.mass == pytest.approx(single.whole.mass, rel=1e-8)
            assert row.volume == pytest.approx(single.whole.volume, rel=1e-8)
