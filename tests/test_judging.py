"""Judgement of a reading: the meter, the band, the tolerance, the batch behind the sample."""

from dataclasses import replace

import pytest

from bufferfolio.judging import VERDICT_OF, VERDICTS, judged
from bufferfolio.measurements import (
    REFUSALS,
    expected_pH,
    meant,
    measured,
    shown,
    target_at,
)
from bufferfolio.subjects import Subject, solved_at, subject_of
from recipes import shipped

ROOM = 298.15


def subject(key: str, **changed: object) -> Subject:
    return subject_of(replace(shipped().formulations[key], **changed), shipped())


TRIS = subject("tris-assay")


def test_a_meter_without_compensation_stretches_its_scale_about_pH_7() -> None:
    """Nernst: 54.20 mV per pH at 0 °C, 59.16 at 25 °C; pH 10 at 0 °C shows 7 + 3 × 0.9162."""
    assert shown(10.0, 273.15, 298.15) == pytest.approx(7.0 + 3.0 * 54.20 / 59.16, abs=2e-4)
    assert shown(7.0, 273.15, 298.15) == 7.0
    assert shown(4.0, 313.15, 298.15) < 4.0
    assert shown(4.2, 313.15, None) == 4.2


@pytest.mark.parametrize("compensation", [None, 273.15, 298.15, 323.15])
def test_what_is_shown_can_be_undone(compensation: float | None) -> None:
    for pH in (0.5, 4.0, 7.0, 9.3, 13.0):
        there = shown(pH, 281.0, compensation)
        assert meant(there, 281.0, compensation) == pytest.approx(pH, abs=1e-12)


def test_the_target_is_what_the_chemist_stated_carried_by_the_drift() -> None:
    borax = subject("meter-check-borax")
    assert target_at(borax, 298.15) == pytest.approx(9.180, abs=1e-12)
    drift = expected_pH(borax, 283.15) - expected_pH(borax, 298.15)
    assert target_at(borax, 283.15) == pytest.approx(9.180 + drift, abs=1e-12)
    silent = subject("meter-check-borax", expected=None)
    assert target_at(silent, 283.15) == expected_pH(silent, 283.15)


@pytest.mark.parametrize(
    ("off", "tolerance", "verdict"),
    [
        (0.00, 0.05, "right"),
        (0.05, 0.05, "accepted"),
        (-0.03, 0.05, "right"),
        (0.03, 0.01, "doubtful"),
        (0.20, 0.05, "off"),
        (0.20, 0.50, "accepted"),
    ],
)
def test_verdicts(off: float, tolerance: float, verdict: str) -> None:
    """The band of this formulation is 0.040 wide at 25 °C; its target lies 0.004 above."""
    expected = replace(TRIS.formulation.expected, tolerance=tolerance)
    this = subject("tris-assay", expected=expected)
    found = judged(this, ROOM, 8.16 + off)
    assert found.verdict == verdict
    assert found.band.half_width == pytest.approx(0.040, abs=0.001)


@pytest.mark.parametrize(("off", "verdict"), [(0.0, "expected"), (0.3, "unexpected")])
def test_verdicts_without_a_tolerance(off: float, verdict: str) -> None:
    found = judged(subject("tris-assay", expected=None), ROOM, 8.16 + off)
    assert found.verdict == verdict
    assert found.inside_tolerance is None


def test_an_edge_of_the_tolerance_is_inside_whatever_binary_fractions_say() -> None:
    """8.16 − 0.05 is not 8.11 to a computer."""
    assert judged(TRIS, ROOM, 8.11).inside_tolerance
    assert judged(TRIS, ROOM, 8.21).inside_tolerance
    assert not judged(TRIS, ROOM, 8.2101).inside_tolerance


def test_every_verdict_has_a_mark_words_and_an_action() -> None:
    assert set(VERDICT_OF.values()) == set(VERDICTS)
    for verdict in VERDICTS.values():
        assert verdict.mark in "✓?✗"
        assert verdict.words.endswith(".")
        assert verdict.action.endswith(".")


@pytest.mark.parametrize(
    ("kelvin", "reading", "batch", "refusal"),
    [
        (ROOM, 14.01, None, "reading"),
        (ROOM, -0.2, None, "reading"),
        (ROOM, float("nan"), None, "reading"),
        (274.9, 8.2, None, "temperature"),
        (314.0, 8.2, None, "temperature"),
        (ROOM, 8.2, 314.0, "temperature"),
        (275.15, 8.2, 313.15, ""),  # the limits themselves
    ],
)
def test_refusals(kelvin: float, reading: float, batch: float | None, refusal: str) -> None:
    found = judged(TRIS, kelvin, reading, batch_temperature=batch)
    assert found.refusal == refusal
    assert (found.verdict == "") == bool(refusal)
    assert not refusal or REFUSALS[refusal]


def test_a_meter_that_stands_at_25_degrees_is_judged_by_what_it_should_show() -> None:
    """Tris at 5 °C: the pH is about 8.7, the meter shows 7 + 1.7 × 278.15 / 298.15."""
    pH = expected_pH(TRIS, 278.15)
    found = judged(TRIS, 278.15, shown(pH, 278.15, 298.15), compensation=298.15)
    assert found.pH == pytest.approx(pH, abs=1e-12)
    assert found.difference == pytest.approx(0.0, abs=1e-12)
    assert found.verdict == "right"
    assert found.shown == pytest.approx(7.0 + (pH - 7.0) * 278.15 / 298.15, abs=1e-12)
    # The same number of a meter that compensates would be far too low.
    assert judged(TRIS, 278.15, found.reading).verdict == "off"


def test_a_reading_tells_of_the_acid_in_the_batch() -> None:
    """Put in 3 mmol/kg of strong acid, read, and find it again; also in a batch half as strong."""
    for dilution in (1.0, 2.0):
        made = measured(TRIS, ROOM, 8.0, dilution)
        again = float(solved_at(TRIS, ROOM, made.mixture).pH)
        assert again == pytest.approx(8.0, abs=1e-9)
        assert made.mixture.totals[0] == pytest.approx(TRIS.mixture.totals[0] / dilution, rel=1e-12)
    assert measured(TRIS, ROOM, expected_pH(TRIS, ROOM)).excess == pytest.approx(0.0, abs=1e-12)
    assert measured(TRIS, ROOM, 7.9).excess < 0.0 < measured(TRIS, ROOM, 8.4).excess


def test_a_sample_read_warm_tells_where_the_cold_batch_stands() -> None:
    """A right batch, read at 25 °C, is right at 5 °C too; one that reads 0.1 low is 0.1 low."""
    right = judged(TRIS, ROOM, expected_pH(TRIS, ROOM), batch_temperature=278.15)
    assert right.batch.pH == pytest.approx(expected_pH(TRIS, 278.15), abs=1e-9)
    assert right.batch.within_use
    low = judged(TRIS, ROOM, expected_pH(TRIS, ROOM) - 0.1, batch_temperature=278.15)
    assert low.batch.pH - low.batch.expected == pytest.approx(-0.1, abs=0.002)
    assert judged(TRIS, ROOM, 8.1, batch_temperature=ROOM).batch is None
