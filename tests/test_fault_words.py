"""A fault in words: every kind with its extent, its range, and what to check or to do."""

from dataclasses import replace

import pytest

from bufferfolio.fault_contexts import fault_context
from bufferfolio.fault_words import CHECKS, ranged, said
from bufferfolio.faults import forecasts
from bufferfolio.formatting import fixed
from bufferfolio.subjects import reference_temperature, subject_of
from bufferfolio.substitutes import Setting, setting_of
from bufferfolio.suspects import KINDS, Suspect, suspects_of, words_of
from recipes import shipped

ROOM = 298.15
FORMULATIONS = sorted(shipped().formulations)


def setting(key: str) -> Setting:
    return setting_of(subject_of(shipped().formulations[key], shipped()), shipped())


def suspect(key: str, kind: str) -> Suspect:
    return next(each for each in suspects_of(setting(key), ROOM) if each.kind == kind)


@pytest.mark.parametrize(
    ("key", "kind", "extent", "words"),
    [
        ("tris-assay", "evaporation", 0.88, "about 12 % of the water evaporated"),
        ("tris-assay", "evaporation", 1.0, "water evaporated"),
        (
            "tris-assay",
            "carbon dioxide",
            0.4,
            "carbon dioxide was exchanged with air, about 40 % of the way to equilibrium",
        ),
        (
            "tris-assay",
            "carbon dioxide",
            1.0,
            "carbon dioxide was exchanged with air, until equilibrium",
        ),
        ("ammonia-buffer", "ammonia", 0.153, "about 15 % of the ammonia was lost to air"),
        (
            "tris-assay",
            "overshoot",
            0.00414,
            (
                "about 4.1 mmol/kg too much of sodium hydroxide, 1 mol/L was added in adjusting it "
                "(4.1 mL for each kg of water)"
            ),
        ),
        (
            "tris-assay",
            "adjusted",
            303.3,
            "it was adjusted to the same pH, but at about 30 °C",
        ),
        ("tris-assay", "slope", 0.921, "the electrode's slope is 92 % of the right one"),
        ("tris-assay", "slope", 1.001, "the electrode's slope is off"),
        ("tris-assay", "offset", 0.118, "the meter is off by +0.12 everywhere"),
        ("tris-assay", "offset", -0.3, "the meter is off by −0.30 everywhere"),
        ("tris-assay", "offset", 0.001, "the meter is off by the same amount everywhere"),
        ("tris-assay", "compensation", 277.2, "the meter compensates for about 4 °C"),
        ("tris-assay", "doubled", 2.0, "twice as much of Tris"),
        ("tris-assay", "nothing", 0.0, "nothing is wrong"),
    ],
)
def test_an_extent_is_told_with_its_unit(key: str, kind: str, extent: float, words: str) -> None:
    assert said(setting(key).subject, suspect(key, kind), extent) == words


def test_a_solid_titrant_is_told_in_grams() -> None:
    """No shipped one is solid; 0.05 mol of sodium carbonate, 105.99 g/mol, would be 5.3 g."""
    this = setting("tris-assay").subject
    solid = replace(this.additions[0], volume=None, mass=0.10599)
    dry = replace(this, additions=(solid, *this.additions[1:]))
    overshoot = replace(suspect("tris-assay", "overshoot"), name="sodium carbonate")
    assert "(5.3 g for each kg of water)" in said(dry, overshoot, 0.05)


def test_every_kind_that_is_open_says_its_range() -> None:
    told = {}
    for key in ("tris-assay", "ammonia-buffer"):
        for each in suspects_of(setting(key), ROOM):
            if each.fixed:
                assert ranged(each) == words_of(each)
            else:
                told[each.kind] = ranged(each).removeprefix(words_of(each))
    assert told.pop("overshoot").startswith(": up to ")
    assert told.pop("adjusted").endswith(" °C")
    assert told == {
        "evaporation": ": up to 50 %",
        "carbon dioxide": ": until equilibrium",
        "ammonia": ": up to 90 %",
        "slope": ": 80 to 105 % of the right one",
        "offset": ": −0.5 to +0.5",
        "compensation": ": 0 to 50 °C",
    }


def test_every_kind_says_what_to_check_or_do() -> None:
    assert set(CHECKS) == set(KINDS)
    assert all(words.endswith(".") and len(words) < 150 for words in CHECKS.values())


@pytest.mark.parametrize("key", FORMULATIONS)
def test_the_table_of_forecasts_holds_every_suspect_by_reading(key: str) -> None:
    this = setting(key)
    kelvin = reference_temperature(this.subject.formulation)
    context = fault_context(this.subject, shipped())
    suspects = suspects_of(this, kelvin)
    assert context.count == len(suspects) - 1
    listed = [words for row in (*context.sized, *context.ranging) for words in row.faults]
    assert sorted(listed) == sorted(ranged(each) for each in suspects)
    readings = [float(row.reading.replace("−", "-")) for row in context.sized]
    assert readings == sorted(readings)
    assert len(set(readings)) == len(readings)
    right = forecasts(this, kelvin)[0]
    row = next(row for row in context.sized if "nothing is wrong" in row.faults)
    assert row.reading == fixed(right.pH[0], 2)
