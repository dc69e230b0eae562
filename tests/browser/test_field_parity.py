"""Band, judgement and correction in the page's engine: the numbers of Python, every formulation."""

import math
from dataclasses import fields, is_dataclass, replace

import numpy as np
import pytest
from playwright.sync_api import Page

from bufferfolio import band_words, dosing, judging, measurements, suspects
from bufferfolio.definitions import Family
from bufferfolio.dosing import Batch, corrected
from bufferfolio.engine_data import setting_data, subject_data
from bufferfolio.faults import Reading, diagnosed
from bufferfolio.field_data import field_data
from bufferfolio.judging import judged
from bufferfolio.measurements import target_at
from bufferfolio.recipes import with_amounts
from bufferfolio.routes import routes_of
from bufferfolio.sensitivities import sensitivities
from bufferfolio.shelves import shelf_of
from bufferfolio.subjects import Subject, reference_temperature, solved_at, subject_of
from bufferfolio.substitutes import setting_of
from bufferfolio.uncertainty import band_of
from bufferfolio.weighing import (
    ACTIONS,
    adjustment_of,
    as_weighed,
    order_of,
    times,
    weighings,
)
from recipes import shipped

from .engine_scripts import ask, assert_agrees, load, plain

FORMULATIONS = sorted(shipped().formulations)
# Both solve to the last bits; a solution that buffers next to nothing loses a few of them.
LIMIT = 1e-9
# An extent is fitted; where the curve is flat it is less well determined than the reading.
FAULTS_LIMIT = 1e-6


TWO_OF_A_KIND = ("ammonia-buffer", "sanitising-bath", "plain-water", "cooling-loop")
ROUTE_FIELDS = ("kind", "recipe", "instead", "differences")


@pytest.fixture
def engine(page: Page) -> Page:
    return load(page)


def subject(key: str) -> Subject:
    return subject_of(shipped().formulations[key], shipped())


def keyed(value: object) -> object:
    """Return a result of Python whose families go by their keys, as the page has them."""
    if isinstance(value, Family):
        return value.key
    if is_dataclass(value):
        return {field.name: keyed(getattr(value, field.name)) for field in fields(value)}
    return [keyed(item) for item in value] if isinstance(value, list | tuple) else value


def temperatures(this: Subject) -> list[float]:
    use = this.formulation.use_temperature
    return [use.low, 0.3 * use.low + 0.7 * use.high, use.high]


@pytest.mark.parametrize("key", FORMULATIONS)
def test_sensitivities_and_bands(engine: Page, key: str) -> None:
    this = subject(key)
    body = """(bf, [data, temperatures]) => {
      const subject = bf.subjects.subjectOf(data);
      const { mixture, model, interactions } = subject;
      return temperatures.map((kelvin) => [
        bf.sensitivities.sensitivities(
          mixture, kelvin, model, bf.subjects.solvedAt(subject, kelvin), interactions),
        bf.uncertainty.bandOf(subject, kelvin),
        bf.uncertainty.bandOf(subject, kelvin, bf.recipes.withAmounts(subject.recipe,
          new Map(subject.recipe.parts.map((part, at) => [at, part.amount * (1 + 0.1 * at)]))), 2),
      ]);
    }"""
    found = ask(engine, body, [subject_data(this), temperatures(this)])
    parts = this.recipe.parts
    other = with_amounts(
        this.recipe, {at: part.amount * (1 + 0.1 * at) for at, part in enumerate(parts)}
    )
    for kelvin, answer in zip(temperatures(this), found, strict=True):
        solved = solved_at(this, kelvin)
        expected = [
            plain(sensitivities(this.mixture, kelvin, this.model, solved, this.interactions)),
            plain(band_of(this, kelvin)),
            plain(band_of(this, kelvin, other, 2.0)),
        ]
        assert_agrees(answer, expected, LIMIT, key)
        assert [item["name"] for item in answer[1]["ranked"]] == [
            item.name for item in band_of(this, kelvin).ranked
        ]


def readings(this: Subject, kelvin: float) -> list[tuple[float, float, float | None, float | None]]:
    """Return (temperature, reading, compensation, temperature of the batch) of every kind."""
    pH, use = band_of(this, kelvin).pH, this.formulation.use_temperature
    return [
        (kelvin, pH, None, None),
        (kelvin, pH + 0.04, None, None),
        (kelvin, pH - 0.31, 298.15, use.high),
        (kelvin, pH + 1.7, 283.15, use.low),
        (kelvin, 14.2, None, None),
        (kelvin, float("nan"), None, None),
        (use.high + 1.0, pH, None, None),
        (kelvin, pH, None, use.low - 3.0),
    ]


@pytest.mark.parametrize("key", FORMULATIONS)
def test_judgements(engine: Page, key: str) -> None:
    this = subject(key)
    body = """(bf, [data, readings]) => {
      const subject = bf.subjects.subjectOf(data);
      return readings.map(([kelvin, reading, compensation, batch]) =>
        [null, bf.recipes.withAmounts(subject.recipe, new Map([[0, 0.9]]))].map((recipe) =>
          bf.judging.judged(subject, kelvin, Number(reading), compensation, batch, recipe)));
    }"""
    asked = [each for kelvin in temperatures(this)[1:2] for each in readings(this, kelvin)]
    found = ask(engine, body, [subject_data(this), plain(asked)])
    recipes = (None, with_amounts(this.recipe, {0: 0.9} if this.recipe.parts else {}))
    for each, answer in zip(asked, found, strict=True):
        expected = [judged(this, *each, recipe) for recipe in recipes]
        assert_agrees(answer, plain(expected), LIMIT, f"{key} {each}")


@pytest.mark.parametrize("key", FORMULATIONS)
def test_corrections(engine: Page, key: str) -> None:
    this = subject(key)
    kelvin = temperatures(this)[1]
    right, use = target_at(this, kelvin), this.formulation.use_pH
    batches = [
        Batch(temperature=kelvin, pH=pH, volume=volume, dilution=dilution)
        for pH, volume, dilution in (
            (right + 0.3 * (use.high - right), 2.0, 1.0),
            (right + 0.8 * (use.low - right), 1e-6, 1.25),
            (use.high + 0.2, 1.0, 1.0),
        )
    ]
    asked = [(batch, None) for batch in batches]
    if key in TWO_OF_A_KIND:  # every titrant, and every reading that is refused
        batches += [
            Batch(temperature=kelvin, pH=pH, volume=1.0) for pH in (right + 0.001, 0.3, 13.5)
        ]
        titrants = range(len(this.formulation.titrants))
        asked += [(batch, titrant) for batch in batches for titrant in titrants]
    body = """(bf, [data, asked]) => {
      const subject = bf.subjects.subjectOf(data);
      return asked.map(([batch, titrant]) => bf.dosing.corrected(subject, batch, null, titrant));
    }"""
    found = ask(engine, body, [subject_data(this), plain(asked)])
    for (batch, titrant), answer in zip(asked, found, strict=True):
        expected = plain(corrected(this, batch, titrant=titrant))
        assert_agrees(answer, expected, LIMIT, f"{key} {batch} {titrant}")


@pytest.mark.parametrize("key", FORMULATIONS)
def test_faults(engine: Page, key: str) -> None:
    """One reading that is off by far, two of the same batch, and one that is refused."""
    this = subject(key)
    setting = setting_of(this, shipped())
    low, kelvin, _ = temperatures(this)
    right, colder = target_at(this, kelvin), target_at(this, low)
    asked = [
        [Reading(temperature=kelvin, pH=right + 0.9 if right < 12.0 else right - 0.9)],
        [
            Reading(temperature=kelvin, pH=right + 0.2),
            Reading(temperature=low, pH=colder + 0.1, dilution=2.0),
        ],
        [Reading(temperature=kelvin, pH=-1.0)],
    ]
    body = """(bf, [subject, data, asked]) => {
      const setting = bf.suspects.settingOf(bf.subjects.subjectOf(subject), data);
      return asked.map((readings) => bf.faults.diagnosed(setting, readings));
    }"""
    found = ask(engine, body, [subject_data(this), setting_data(setting), plain(asked)])
    for readings, answer in zip(asked, found, strict=True):
        expected = plain(diagnosed(setting, readings))
        # Equal weights (none of what is added shows) may come in any order, and those that come to
        # nothing hang on where the last points of a curve were looked at.
        for each in (answer, expected):
            each["explanations"].sort(key=lambda one: (one["words"], one["extent"]))
        assert_agrees(answer, expected, FAULTS_LIMIT, f"{key} {readings}", FAULTS_LIMIT)


def test_the_error_function(engine: Page) -> None:
    values = [0.0, 1e-9, 0.3, 1.0, 2.5, 4.0, 5.9, 6.1, 30.0]
    values += [-each for each in values]
    found = ask(engine, "(bf, values) => values.map(bf.faults.erf)", values)
    np.testing.assert_allclose(found, [math.erf(each) for each in values], rtol=1e-14)


def test_words_are_the_same(engine: Page) -> None:
    body = """(bf) => [bf.measurements.REFUSALS, bf.judging.VERDICTS,
      bf.dosing.REFUSALS, bf.suspects.KINDS, bf.band_words.WORDS]"""
    expected = [
        measurements.REFUSALS,
        judging.VERDICTS,
        dosing.REFUSALS,
        suspects.KINDS,
        band_words.WORDS,
    ]
    assert ask(engine, body, None) == plain(expected)


def test_an_ideal_solution_has_a_band_too(engine: Page) -> None:
    """No shipped formulation is reckoned as ideal: one is made so."""
    shipped_one = shipped().formulations["plain-water"]
    this = subject_of(replace(shipped_one, model="ideal"), shipped())
    body = "(bf, data) => bf.uncertainty.bandOf(bf.subjects.subjectOf(data), 298.15)"
    expected = plain(band_of(this, 298.15))
    assert_agrees(ask(engine, body, subject_data(this)), expected, LIMIT, "ideal")
    assert np.isfinite(expected["half_width"])


@pytest.mark.parametrize("key", FORMULATIONS)
def test_making_and_the_page_s_own_checks(engine: Page, key: str) -> None:
    """Routes as they travel, rounding, what was really weighed, order, advice; all checks pass."""
    this = subject(key)
    kelvin = reference_temperature(this.formulation)
    data = field_data(this, shipped())
    body = """(bf, [data, field, kelvin]) => {
      const subject = bf.subjects.subjectOf(data);
      const { recipe } = subject;
      const weighed = new Map(recipe.parts.map((part, at) => [at, 0.01 * (at + 1)]));
      return {
        checks: bf.field_checks.runFieldChecks(subject, field),
        routes: bf.weighing.routesOf(subject, field.routes),
        bands: bf.weighing.routesOf(subject, field.routes).map((route) =>
          bf.uncertainty.bandOf(subject, kelvin, route.recipe)),
        weighings: bf.weighing.weighings(bf.weighing.times(recipe, 3.7), 1e-5, 1e-7),
        weighed: bf.weighing.asWeighed(recipe, weighed, 2.5),
        order: bf.weighing.orderOf(recipe),
        adjustment: bf.weighing.adjustmentOf(subject),
      };
    }"""
    found = ask(engine, body, [subject_data(this), plain(data), kelvin])
    assert found.pop("checks") == {"count": 5, "failed": 0}
    routes = routes_of(this, shelf_of(this, shipped()), kelvin)
    measures = {at: 0.01 * (at + 1) for at in range(len(this.recipe.parts))}
    expected = plain(
        {
            "routes": [
                {name: keyed(getattr(route, name)) for name in ROUTE_FIELDS} for route in routes
            ],
            "bands": [band_of(this, kelvin, route.recipe) for route in routes],
            "weighings": keyed(weighings(times(this.recipe, 3.7), 1e-5, 1e-7)),
            "weighed": keyed(as_weighed(this.recipe, measures, 2.5)),
            "order": order_of(this.recipe),
            "adjustment": adjustment_of(this),
        }
    )
    assert_agrees(found, expected, LIMIT, key)


def test_checks_fail_where_the_engine_does_not_agree(engine: Page) -> None:
    """Every case, one at a time, is off by more than the engine may be."""
    this = subject("tris-assay")
    data = field_data(this, shipped())
    body = """(bf, [data, field]) => {
      const subject = bf.subjects.subjectOf(data);
      const wrong = (change) => {
        const copy = structuredClone(field);
        change(copy.checks);
        return bf.field_checks.runFieldChecks(subject, copy).failed;
      };
      return [
        wrong((checks) => { checks.bands[0].pH += 1e-7; }),
        wrong((checks) => { checks.bands[2].half_width *= 1 + 1e-6; }),
        wrong((checks) => { checks.dose.moles *= 1 + 1e-6; }),
        wrong((checks) => { checks.dose.refusal = "little"; }),
        wrong((checks) => { checks.air.total *= 1 + 1e-6; }),
        wrong((checks) => { checks.bands[1].temperature = "warm"; }),
      ];
    }"""
    assert ask(engine, body, [subject_data(this), plain(data)]) == [1] * 6


def test_words_of_making_are_the_same(engine: Page) -> None:
    assert ask(engine, "(bf) => bf.weighing.ACTIONS", None) == plain(ACTIONS)
