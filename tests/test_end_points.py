"""End points by derivatives and by Gran lines, against the equivalence that was put in."""

from dataclasses import replace

import numpy as np
import pytest

from bufferfolio.activity import MODELS
from bufferfolio.end_points import end_points, noise_of
from bufferfolio.fit_model import modelled
from bufferfolio.gran import gran_lines
from bufferfolio.measured import Points, Precision
from bufferfolio.titration import equivalences
from measured_titrations import titration_of

# Formulation, titrant, last volume in mL.
CURVES = [
    ("acetate-extract", 0, 5.0),
    ("meter-check-phthalate", 0, 50.0),
    ("tris-assay", 0, 3.0),
    ("tris-assay", 1, 4.0),
    ("meter-check-carbonate", 1, 60.0),
    ("citrate-phosphate", 0, 8.0),
]
PURE = CURVES[:5]  # the last has no stretch in which one step alone takes up the titrant


def noisy(
    curve: tuple[str, int, float], count: int, noise: float, seed: int
) -> tuple[object, Points, list[float]]:
    """Return a titration at uneven volumes, and the visible equivalences in m3."""
    formulation, titrant, last = curve
    random = np.random.default_rng(seed)
    experiment = titration_of(formulation, titrant)
    # Portions of unequal size, the largest nine times the smallest.
    portions = np.cumsum(random.uniform(0.2, 1.8, count))
    volume = last * 1e-6 * (portions - portions[0]) / (portions[-1] - portions[0])
    pH = modelled(experiment, volume, (), np.array([])).reading + noise * random.normal(size=count)
    seen = equivalences(
        experiment.mixture, experiment.added, 298.15, experiment.model, experiment.interactions
    )
    per_amount = (experiment.added.volume or 0.0) * experiment.water
    visible = [each.amount * per_amount for each in seen if each.visible]
    points = Points(volume=volume, pH=pH, rows=tuple(range(count)))
    return experiment, points, [each for each in visible if each < last * 1e-6]


@pytest.mark.parametrize("curve", CURVES, ids=lambda curve: f"{curve[0]} {curve[1]}")
@pytest.mark.parametrize(("count", "noise"), [(60, 0.002), (60, 0.01), (300, 0.02), (2000, 0.005)])
def test_end_points_lie_at_equivalence(
    curve: tuple[str, int, float], count: int, noise: float
) -> None:
    """At uneven volumes: every one found, none besides, and three standard errors hold.

    The smoothing is not the curve itself, and standard errors are guesses where six points serve:
    one in twenty may lie beyond three of them, none beyond six.
    """
    deviations = []
    for seed in range(5):
        _, points, expected = noisy(curve, count, noise, seed)
        found = end_points(points)
        assert len(found) == len(expected), seed
        for each, volume in zip(found, expected, strict=True):
            deviations.append((each.volume - volume) / each.standard_error)
            assert each.standard_error < 0.03 * volume
    assert np.mean(np.abs(deviations) < 3.0) >= 0.8
    assert np.max(np.abs(deviations)) < 6.0


def test_sixty_points_are_good_to_a_few_parts_in_a_thousand() -> None:
    for curve in CURVES[:4]:
        misses = []
        for seed in range(8):
            _, points, expected = noisy(curve, 60, 0.01, seed)
            misses.append(end_points(points)[0].volume / expected[0] - 1.0)
        assert np.sqrt(np.mean(np.square(misses))) < 0.005, curve


def test_the_smoothing_is_followed_exactly_where_the_curve_has_its_form() -> None:
    """V = 10 + 0.1 · 10^(pH − 8) − 0.2 · 10^(8 − pH), in mL: steepest at 10 mL, pH 8 + log √2."""
    pH = np.linspace(6.2, 9.9, 31)
    volume = 10.0 + 0.1 * 10.0 ** (pH - 8.0) - 0.2 * 10.0 ** (8.0 - pH)
    found = end_points(Points(volume=(volume + 5.0) * 1e-6, pH=pH, rows=()))
    assert len(found) == 1
    assert found[0].volume == pytest.approx(15e-6, rel=1e-9)
    assert found[0].pH == pytest.approx(8.0 + 0.5 * np.log10(2.0), abs=1e-9)
    steepest = 1e6 / (2.0 * np.log(10.0) * np.sqrt(0.1 * 0.2))
    assert found[0].slope == pytest.approx(steepest, rel=1e-9)


def test_turned_round_a_curve_has_the_same_end_points() -> None:
    _, points, _ = noisy(CURVES[0], 80, 0.01, 1)
    (one,) = end_points(points)
    (other,) = end_points(replace(points, pH=14.0 - points.pH))
    assert other.volume == pytest.approx(one.volume, rel=1e-9)
    assert other.pH == pytest.approx(14.0 - one.pH, abs=1e-9)
    assert other.slope == pytest.approx(-one.slope, rel=1e-9)


def test_a_buffer_has_none() -> None:
    """A stretch of curve that only rises evenly, with noise, at even and uneven volumes."""
    random = np.random.default_rng(5)
    for count in (4, 7, 40, 1000):
        volume = np.sort(random.uniform(0.0, 1e-6, count))
        pH = 7.0 + 1e6 * volume + 0.02 * random.normal(size=count)
        assert end_points(Points(volume=volume, pH=pH, rows=())) == ()
    flat = Points(volume=np.arange(9.0), pH=np.full(9, 7.0), rows=())
    assert end_points(flat) == ()


def test_repeated_volumes_count_by_their_mean() -> None:
    _, points, _ = noisy(CURVES[0], 60, 0.01, 2)
    twice = Points(
        volume=np.repeat(points.volume, 2),
        pH=np.repeat(points.pH, 2) + np.tile([0.01, -0.01], 60),
        rows=(),
    )
    (one,), (other,) = end_points(points), end_points(twice)
    assert other.volume == pytest.approx(one.volume, rel=1e-12)


def test_noise_is_that_of_the_readings() -> None:
    volume = np.linspace(0.0, 1.0, 4000)
    pH = 7.0 + np.sin(3.0 * volume) + 0.03 * np.random.default_rng(1).normal(size=4000)
    assert noise_of(volume, pH) == pytest.approx(0.03, rel=0.05)


# Gran


@pytest.mark.parametrize("curve", PURE, ids=lambda curve: f"{curve[0]} {curve[1]}")
def test_gran_lines_meet_zero_at_equivalence(curve: tuple[str, int, float]) -> None:
    """Exact readings of a fine burette: within 0.2 %, what 1 % of another taker may do."""
    formulation, _, last = curve
    experiment, _, expected = noisy(curve, 10, 0.0, 0)
    volume = np.linspace(0.0, last * 1e-6, 121)
    pH = modelled(experiment, volume, (), np.array([])).reading
    points = Points(volume=volume, pH=pH, rows=())
    precision = Precision(pH=0.01, volume=1e-9)
    lines = gran_lines(experiment, points, end_points(points), precision)
    assert {line.side for line in lines} == {"before", "after"}
    for line in lines:
        nearest = min(expected, key=lambda each, line=line: abs(each - line.volume))
        # The first end point of carbonate lies between two steps that overlap by more.
        allowed = (
            0.004
            if (formulation, nearest) == (formulation, min(expected[:-1], default=0))
            else 0.002
        )
        assert line.volume == pytest.approx(nearest, rel=allowed), (line.side, line.kind)


def test_activity_coefficients_make_gran_lines_straight() -> None:
    """In the ideal model the same readings lead elsewhere: by 0.3 % for phthalate, at 0.1 mol/L."""
    experiment, _, (expected,) = noisy(CURVES[1], 10, 0.0, 0)
    volume = np.linspace(0.0, 5e-5, 121)
    pH = modelled(experiment, volume, (), np.array([])).reading
    points = Points(volume=volume, pH=pH, rows=())
    precision = Precision(pH=0.01, volume=1e-9)
    found = end_points(points)

    blind = replace(experiment, model=MODELS["ideal"], interactions=())
    misses = [
        abs(gran_lines(each, points, found, precision)[0].volume / expected - 1.0)
        for each in (experiment, blind)
    ]
    assert misses[0] < 5e-4
    assert misses[1] > 3.0 * misses[0]


@pytest.mark.parametrize("curve", PURE[:4], ids=lambda curve: f"{curve[0]} {curve[1]}")
def test_gran_standard_errors_hold(curve: tuple[str, int, float]) -> None:
    """Noise of 0.01 in pH: of 40 lines most lie within two standard errors, none beyond five."""
    deviations = []
    for seed in range(20):
        experiment, points, (expected,) = noisy(curve, 100, 0.01, seed)
        found = end_points(points)
        lines = gran_lines(experiment, points, found, Precision(pH=0.01, volume=1e-11))
        deviations += [(line.volume - expected) / line.standard_error for line in lines]
    assert len(deviations) >= 30
    assert np.mean(np.abs(deviations) < 2.0) > 0.8
    assert np.max(np.abs(deviations)) < 5.0


def test_a_titrant_that_is_not_strong_has_no_gran_lines() -> None:
    experiment = titration_of("holding-water", 0)  # sodium carbonate
    volume = np.linspace(0.0, 1e-5, 40)
    pH = modelled(experiment, volume, (), np.array([])).reading
    points = Points(volume=volume, pH=pH, rows=())
    _, other, _ = noisy(CURVES[0], 60, 0.01, 2)
    assert gran_lines(experiment, points, end_points(other), Precision(pH=0.01, volume=1e-9)) == ()
