"""The card's tables: readings, first portions, what temperature does to them, and their room."""

import math
from dataclasses import replace

import numpy as np
import pytest

from bufferfolio.card_contexts import card_context
from bufferfolio.card_room import BLOCKS, LEAST_LOG, LEAST_ROWS, lines_of
from bufferfolio.cards import FIRST, batch_volume, card_of, distance_grid, temperature_grid
from bufferfolio.definitions import Expectation, Formulation, Interval, Portion
from bufferfolio.dosing import Batch, corrected
from bufferfolio.measurements import target_at
from bufferfolio.sheets import sheet_of
from bufferfolio.subjects import Subject, reference_temperature, subject_of
from bufferfolio.uncertainty import band_of
from bufferfolio.water import ZERO_CELSIUS
from published_tables import rows_of
from recipes import shipped

FORMULATIONS = sorted(shipped().formulations)
CHECKS = [key for key in FORMULATIONS if key.startswith("meter-check-")]
DOSED = sorted({*FORMULATIONS} - {"plain-water", *CHECKS})


def changed(key: str, **fields: object) -> Formulation:
    return replace(shipped().formulations[key], **fields)


def subject(key: str) -> Subject:
    return subject_of(shipped().formulations[key], shipped())


@pytest.mark.parametrize("key", FORMULATIONS)
def test_readings_are_bands_and_targets_asked_for_one_by_one(key: str) -> None:
    this = subject(key)
    use = this.formulation.use_temperature
    readings = card_of(this, 12, 1).readings
    kelvins = [reading.temperature for reading in readings]
    assert (kelvins[0], kelvins[-1]) == (use.low, use.high)
    assert reference_temperature(this.formulation) in kelvins
    assert kelvins == sorted(set(kelvins))
    for reading in readings:
        band = band_of(this, reading.temperature)
        assert (reading.pH, reading.low, reading.high) == (band.pH, band.low, band.high)
        assert reading.low < reading.pH < reading.high
        assert reading.target == pytest.approx(target_at(this, reading.temperature), abs=1e-9)


@pytest.mark.parametrize("key", FORMULATIONS)
def test_doses_are_corrections_and_grow_with_the_distance(key: str) -> None:
    this = subject(key)
    card = card_of(this, 2, 3)
    held = batch_volume(this.formulation.make_up, card.temperature)
    assert card.corrections
    for each in card.corrections:
        pH = card.target + each.distance
        assert this.formulation.use_pH.holds(pH)
        single = corrected(this, Batch(temperature=card.temperature, pH=pH, volume=held))
        assert (each.dose.refusal, each.dose.titrant) == (single.refusal, single.titrant)
        if single.refusal:
            assert math.isnan(each.first)
            continue
        direction = this.formulation.titrants[each.dose.titrant].direction
        assert direction == ("downward" if each.distance > 0.0 else "upward")
        portion = single.first.mass if single.first.volume is None else single.first.volume
        assert each.first == pytest.approx(portion, rel=1e-8)
    for sign in (-1.0, 1.0):
        outwards = sorted(
            (abs(each.distance), each.first)
            for each in card.corrections
            if each.distance * sign > 0.0 and not each.dose.refusal
        )
        portions = [portion for _, portion in outwards]
        assert all(portion > 0.0 for portion in portions)
        assert portions == sorted(set(portions))


def test_only_plain_water_and_meter_checks_are_never_corrected() -> None:
    refused = [
        key
        for key in FORMULATIONS
        if all(each.dose.refusal for each in card_of(subject(key), 2, 2).corrections)
    ]
    assert len(CHECKS) == 8
    assert refused == [*CHECKS, "plain-water"]


@pytest.mark.parametrize("key", DOSED)
def test_doses_at_other_temperatures_differ_by_no_more_than_the_card_says(key: str) -> None:
    """Sampled at temperatures that the card did not look at, and one correction at a time."""
    this = subject(key)
    card, use = card_of(this, 30, 8), this.formulation.use_temperature
    stated = float(card_context(sheet_of(this.formulation, shipped())).differ) / 100.0
    assert 0.0 <= card.fall <= card.spread < stated
    use_pH = this.formulation.use_pH
    for kelvin in random_places(key, use):
        target = target_at(this, kelvin)
        for each in (card.corrections[0], card.corrections[-1]):
            there = Batch(temperature=kelvin, pH=target + each.distance, volume=1.0)
            if each.dose.refusal or not (use_pH.holds(there.pH) and use_pH.holds(target)):
                continue
            moles = corrected(this, there).whole.moles
            assert abs(moles / each.dose.moles - 1.0) < stated


def random_places(key: str, use: Interval) -> list[float]:
    """Return two temperatures of a range, the same ones in every run."""
    seeded = np.random.default_rng(sum(map(ord, key)))
    return sorted(use.low + (use.high - use.low) * float(part) for part in seeded.random(2))


def test_a_card_warns_where_a_first_portion_may_overshoot() -> None:
    """Where a dose falls by more than the fifth that is held back, the card asks for half."""
    for key, warns in (("tris-assay", False), ("activation-dip", True)):
        this = subject(key)
        card = card_of(this, 30, 8)
        assert (card.fall > 1.0 - FIRST) == warns
        assert card_context(sheet_of(this.formulation, shipped())).falls == warns


def test_published_buffers_are_led_to_each_other_by_the_published_difference() -> None:
    """Clark & Lubs: 50 mL of KH2PO4 0.2 mol/L and so much NaOH make 200 mL of each pH at 20 °C.

    Between two rows lies a dose. An accuracy of 0.02 at both ends is 14 % of the dose over 0.2 and
    3 % over 1.0. The acid adds water, the table has none to spare: below 1 % here.
    """
    table = {
        float(row["value"]): float(row["contents"].split("NaOH=")[1])
        for row in rows_of("clark-lubs-1917")
        if row["part"] == "phosphate-naoh"
    }
    this = phosphate(table[7.0])
    doses = {each.distance: each.dose.moles / 1000.0 for each in card_of(this, 2, 12).corrections}
    for distance, tolerance in ((-1.0, 0.04), (-0.2, 0.14), (0.2, 0.14), (1.0, 0.06)):
        published = abs(table[round(7.0 + distance, 1)] - table[7.0])
        assert doses[distance] == pytest.approx(published, rel=tolerance)


def phosphate(hydroxide: float) -> Subject:
    """Return a litre of KH2PO4, 0.05 mol/L, with so much NaOH, as a formulation."""
    shelf = shipped().reagents
    form = shipped().formulations["meter-check-phosphate"]
    portions = tuple(
        Portion(
            reagent=shelf[key],
            amount=amount,
            basis="mol",
            stated="",
            weighed=True,
            place=form.place,
        )
        for key, amount in (
            ("potassium-dihydrogen-phosphate", 0.05),
            ("sodium-hydroxide", hydroxide),
        )
    )
    make_up = replace(
        form.make_up,
        basis="made up to",
        volume=1e-3,
        mass=None,
        temperature=20.0 + ZERO_CELSIUS,
        portions=portions,
    )
    changes = {"make_up": make_up, "expected": None, "never_corrected": False}
    wide = Interval(low=5.5, high=8.5)
    return subject_of(replace(form, use_pH=wide, **changes), shipped())


@pytest.mark.parametrize(
    ("low", "high", "through", "most", "expected"),
    [
        (2.0, 6.0, 4.0, 30, (2, 3, 4, 5, 6)),
        (2.0, 45.0, 25.0, 30, (2, *range(3, 46, 2))),
        (5.0, 60.0, 25.0, 20, (5, *range(10, 60, 5), 60)),
        (4.5, 12.0, 8.0, 6, (4.5, 6, 8, 10, 12)),
        (0.0, 100.0, 25.0, 4, (0, 5, 15, 25, 35, 45, 55, 65, 75, 85, 95, 100)),
    ],
)
def test_temperatures_go_in_whole_steps_through_the_reference(
    low: float, high: float, through: float, most: int, expected: tuple[float, ...]
) -> None:
    use = Interval(low=low + ZERO_CELSIUS, high=high + ZERO_CELSIUS)
    found = temperature_grid(use, through + ZERO_CELSIUS, most)
    assert [each - ZERO_CELSIUS for each in found] == pytest.approx(expected, abs=1e-9)


def test_distances_begin_at_the_tolerance_and_end_at_the_limits() -> None:
    form = changed("tris-assay")
    assert distance_grid(form, 8.16, 8) == (
        *(-0.7, -0.5, -0.3, -0.2, -0.15, -0.1, -0.07, -0.05),
        *(0.05, 0.07, 0.1, 0.15, 0.2, 0.3, 0.5, 0.7),
    )
    assert distance_grid(form, 8.16, 4)[4:] == (0.05, 0.1, 0.2, 0.5)
    assert distance_grid(form, 8.98, 8)[-1] < 0.0
    unstated = replace(form, expected=None)
    assert min(map(abs, distance_grid(unstated, 8.16, 8))) == 0.05


def test_a_card_without_target_or_titrants_says_so() -> None:
    """No target: the computed pH stands for it. No titrant: nothing is to be added."""
    sheet = sheet_of(changed("tris-assay", expected=None, titrants=()), shipped())
    card = card_context(sheet)
    assert (card.tolerance, card.differ) == ("", "")
    (own,) = [row for block in card.blocks for row in block if row.reference]
    assert card.target == own.target == own.expected
    for side in card.sides:
        assert side.refusal == "Do not correct: the formulation names no reagent for this side."
        assert (side.titrant, side.lines, side.reserve) == ("", (), "")
    assert [picture.title for picture in card.pictures] == ["pH and temperature"]


def test_a_refused_line_says_why_in_a_word() -> None:
    """So much excess is no reading of this solution; the lines before it have portions."""
    card = card_context(sheet_of(shipped().formulations["alkaline-cleaner"], shipped()))
    high = next(side for side in card.sides if side.high)
    assert high.lines[-1].refusal == "check the electrode"
    assert high.lines[-1].portions == ()
    assert all(len(line.portions) == len(card.batches) for line in high.lines[:-1])


@pytest.mark.parametrize("key", FORMULATIONS)
def test_all_portions_of_a_table_are_in_one_unit_and_in_proportion(key: str) -> None:
    """As printed: columns for a tenth, a half, one and two of the recipe's own batch."""
    card = card_context(sheet_of(shipped().formulations[key], shipped()))
    for side in card.sides:
        units = {portion.split()[1] for line in side.lines for portion in line.portions}
        assert len(units) <= 1
        for line in side.lines:
            if line.portions:
                tenth, half, one, two = (float(portion.split()[0]) for portion in line.portions)
                assert tenth * 10.0 == pytest.approx(one, rel=0.11)
                assert half * 2.0 == pytest.approx(one, rel=0.11)
                assert two / 2.0 == pytest.approx(one, rel=0.11)


def test_long_words_make_coarser_tables_not_lost_ones() -> None:
    """Ten more cautions: fewer readings, from the same lowest to the same highest temperature."""
    form = shipped().formulations["tissue-ringer"]
    wordy = replace(
        form, cautions=form.cautions + ("Mind the tide, and what it brings. " * 6,) * 10
    )
    plain, long = (card_context(sheet_of(each, shipped())) for each in (form, wordy))
    count = [sum(map(len, card.blocks)) for card in (plain, long)]
    assert count[0] > count[1] >= 2
    assert count[1] <= BLOCKS * LEAST_ROWS
    for card in (plain, long):
        assert (card.blocks[0][0].celsius, card.blocks[-1][-1].celsius) == ("5", "30")
        assert card.log_lines >= LEAST_LOG


def test_words_are_counted_in_lines() -> None:
    assert [lines_of("x" * count, 10) for count in (0, 1, 10, 11, 30)] == [1, 1, 1, 2, 3]


def test_a_target_outside_the_limits_is_marked() -> None:
    """In the cold the target rises above the upper limit, pH 10.4."""
    card = card_context(sheet_of(shipped().formulations["boiler-phosphate"], shipped()))
    marked = [row.celsius for block in card.blocks for row in block if row.outside]
    assert card.outside
    this = subject("boiler-phosphate")
    cold = [each for each in range(15, 46) if target_at(this, each + ZERO_CELSIUS) > 10.4]
    assert marked == [str(each) for each in cold]
    assert 0 < len(cold) < 10
    form = changed("boiler-phosphate")
    assert isinstance(form.expected, Expectation)
    wide = replace(form, use_pH=Interval(low=9.3, high=11.0))
    assert not card_context(sheet_of(wide, shipped())).outside
