"""Fits of measured titrations: the truth comes back, and every verdict where it belongs."""

from dataclasses import replace

import numpy as np
import pytest

from bufferfolio.fit_model import modelled
from bufferfolio.fit_parameters import BOUNDS, CannotFit, Free, bounds, nominal, units
from bufferfolio.fit_quality import covariance
from bufferfolio.fit_words import verdict_words, with_error
from bufferfolio.fitting import fit
from bufferfolio.measured import Points, Precision
from measured_titrations import PLANS, Made, Plan, free_quantities, made, titration_of

STRENGTH = Free(kind="strength")


def deviations(case: Made) -> np.ndarray:
    """Return how far the fit is from the truth, in standard errors."""
    result = fit(case.experiment, case.points, case.free, case.precision)
    errors = np.array([each.standard_error for each in result.estimates])
    return (result.parameters - case.truth) / (errors / units(case.experiment, case.free))


def thinned(case: Made, count: int) -> Points:
    chosen = np.linspace(0, case.points.pH.size - 1, count).astype(int)
    return Points(
        volume=case.points.volume[chosen], pH=case.points.pH[chosen], rows=tuple(chosen.tolist())
    )


@pytest.mark.parametrize("plan", PLANS, ids=lambda plan: f"{plan.formulation}: {plan.free}")
def test_exact_readings_give_the_truth_back(plan: Plan) -> None:
    """From the recipe's own numbers up to half as far away again, without any noise."""
    case = made(plan, 40, seed=0, reading=0.0, share=0.0)
    result = fit(case.experiment, case.points, case.free, Precision(pH=0.02, volume=0.0))
    np.testing.assert_allclose(result.parameters, case.truth, rtol=1e-7, atol=1e-8)
    assert result.reduced_chi_squared < 1e-12
    assert result.verdict.kind == "well determined"


def test_standard_errors_hold_what_they_promise() -> None:
    """Of 105 fits with 322 quantities, noise in pH and volume: 68 % within one error, all within 4.

    68.3 % of 322 are 220, give or take 8.3 (but for quantities of one fit going together); the
    limits are three such deviations away. One in 370 lies beyond three errors.
    """
    found = np.concatenate(
        [deviations(made(plan, 60, seed)) for plan in PLANS for seed in range(15)]
    )
    assert found.size == 15 * sum(len(plan.differs) for plan in PLANS)
    within_one = np.mean(np.abs(found) < 1.0)
    assert 0.60 < within_one < 0.76
    assert np.sum(np.abs(found) > 3.0) <= 5
    assert np.max(np.abs(found)) < 4.5
    assert abs(np.mean(found)) < 0.2


def test_the_scatter_that_is_stated_is_the_scatter_that_is_found() -> None:
    """Over 30 fits of 60 points: the mean of reduced chi-squared is 1 to about 0.035."""
    found = [
        fit(case.experiment, case.points, case.free, case.precision).reduced_chi_squared
        for case in (made(plan, 60, seed) for plan in PLANS[:3] for seed in range(10))
    ]
    assert np.mean(found) == pytest.approx(1.0, abs=0.12)


def test_a_titrant_of_another_strength_is_found_from_far_away() -> None:
    """The scan of strengths leads to the right valley from a quarter to four times the label."""
    for factor in (0.28, 0.6, 1.7, 3.5):
        plan = Plan("acetate-extract", 0, 4.0 / factor, "strength,offset", (factor - 1.0, 0.02))
        case = made(plan, 50, seed=3)
        result = fit(case.experiment, case.points, case.free, case.precision)
        assert result.parameters[0] == pytest.approx(factor, rel=0.01)


def test_slopes_of_the_model_are_slopes() -> None:
    """Central differences of the readings, for every kind of quantity and by volume."""
    experiment = titration_of("citrate-phosphate", 0)
    free = free_quantities("strength,total:citrate,pK:citrate:3,offset,slope")
    volume = np.linspace(1e-7, 5e-6, 25)
    values = nominal(experiment, free) + np.array([0.1, 0.1, 0.1, 0.05, -0.03])
    here = modelled(experiment, volume, free, values)
    for at in range(len(free)):
        step = 1e-5 * np.eye(len(free))[at]
        ahead = modelled(experiment, volume, free, values + step).reading
        behind = modelled(experiment, volume, free, values - step).reading
        np.testing.assert_allclose(
            here.by_parameter[at], (ahead - behind) / 2e-5, rtol=1e-5, atol=1e-7
        )
    ahead = modelled(experiment, volume + 1e-11, free, values).reading
    behind = modelled(experiment, volume - 1e-11, free, values).reading
    np.testing.assert_allclose(here.by_volume, (ahead - behind) / 2e-11, rtol=1e-4)


def test_an_uncertain_burette_takes_weight_from_the_steep_part() -> None:
    """One reading on the jump, a hundredth of a mL off: it must not drag the pK along."""
    case = made(Plan("acetate-extract", 0, 4.0, "pK:acetate:1", (0.0,)), 41, 0, 0.0, 0.0)
    steep = int(np.argmax(np.diff(case.points.pH)))
    moved = case.points.pH.copy()
    moved[steep + 1] += 0.8
    points = replace(case.points, pH=moved)
    careless = fit(case.experiment, points, case.free, Precision(pH=0.02, volume=0.0))
    careful = fit(case.experiment, points, case.free, Precision(pH=0.02, volume=1e-8))
    misses = [abs(float(each.parameters[0] - case.truth[0])) for each in (careless, careful)]
    assert misses[1] < misses[0]
    assert misses[1] < 1e-3


# verdicts


def verdict_of(case: Made, points: Points | None = None) -> tuple[str, tuple[str, ...], str]:
    result = fit(case.experiment, points or case.points, case.free, case.precision)
    return result.verdict.kind, result.verdict.about, verdict_words(result)


def test_well_determined() -> None:
    assert verdict_of(made(PLANS[1], 200, seed=0)) == (
        "well determined",
        (),
        "Well determined: every standard error is small enough to be of use.",
    )


def test_too_few_points() -> None:
    case = made(PLANS[1], 60, seed=0)
    words = "At least 6 are needed to judge the result."
    for count in (2, 3, 5):
        kind, about, said = verdict_of(case, thinned(case, count))
        assert (kind, about) == ("too few points", ())
        assert said == f"Too few points: {count} for 3 free quantities. {words}"
    assert verdict_of(case, thinned(case, 6))[0] != "too few points"


def test_not_separable_where_two_quantities_do_the_same() -> None:
    """Before the end point a buffer tells the ratio of titrant to tris, and pK less offset."""
    case = made(Plan("tris-assay", 1, 0.8, "pK:tris:1,offset", (0.05, 0.02)), 40, seed=1)
    kind, about, said = verdict_of(case)
    assert (kind, about) == ("not separable", ("pK:tris:1", "offset"))
    assert said == (
        "Not separable: these points do not tell the pK 1 of Tris and offset "
        "of the electrode from what else is free. Hold one of them at a value that is known "
        "otherwise."
    )


def test_not_separable_where_nothing_answers() -> None:
    """No titrant has gone in: its strength shows in no reading."""
    case = made(Plan("tris-assay", 1, 0.8, "strength,offset", (0.0, 0.0)), 12, seed=1)
    points = replace(case.points, volume=np.zeros(12), pH=np.full(12, case.points.pH[0]))
    result = fit(case.experiment, points, case.free, Precision(pH=0.01, volume=0.0))
    assert result.verdict.kind == "not separable"
    assert result.verdict.about == ("strength",)
    assert result.estimates[0].standard_error == np.inf
    assert np.isfinite(result.estimates[1].standard_error)


def test_poorly_determined() -> None:
    case = made(Plan("tris-assay", 1, 1.0, "strength", (0.0,)), 5, seed=2, reading=0.15)
    kind, about, said = verdict_of(case)
    assert (kind, about) == ("poorly determined", ("strength",))
    assert said == (
        "Poorly determined: these points leave the strength of the titrant uncertain. Take more "
        "points where the curve answers to it, or free less."
    )


def test_at_a_bound() -> None:
    case = made(Plan("tris-assay", 1, 2.0, "offset", (2.5,)), 30, seed=2)
    kind, about, said = verdict_of(case)
    assert (kind, about) == ("at a bound", ("offset",))
    assert said == (
        "At a bound: the offset of the electrode went as far as a fit may go. Sample, titrant or "
        "volumes may not be what they are said to be."
    )
    assert BOUNDS["offset"] == (-1.5, 1.5)


def test_does_not_fit() -> None:
    """Another titration's readings, from pH 3 up, against a tris buffer."""
    case = made(Plan("acetate-extract", 0, 4.0, "strength", (0.0,)), 40, seed=2)
    tris = titration_of("tris-assay", 0)
    result = fit(tris, case.points, case.free, case.precision)
    assert result.verdict.kind in ("does not fit", "at a bound")
    shifted = replace(case.points, pH=case.points.pH + 0.2 * np.sin(np.arange(40.0)))
    kind, _, said = verdict_of(case, shifted)
    assert kind == "does not fit"
    assert said.startswith("Does not fit: the points lie ")
    assert said.endswith(
        " times as far from the best curve as reading and burette explain. Something is at work "
        "that is not free here."
    )


# what may be free


@pytest.mark.parametrize(
    ("free", "problem"),
    [
        ((), "0 quantities cannot be free: choose 1 to 4"),
        (
            tuple(free_quantities("strength,total:tris,pK:tris:1,offset,slope")),
            "5 quantities cannot be free: choose 1 to 4",
        ),
        ((STRENGTH, STRENGTH), "more than one strength is free: choose one"),
        (
            free_quantities("total:phosphate"),
            "the sample does not hold 'phosphate'; it holds: tris",
        ),
        (free_quantities("pK:tris:2"), "tris has no step 2; its steps are 1 to 1"),
    ],
)
def test_what_cannot_be_free(free: tuple[Free, ...], problem: str) -> None:
    case = made(PLANS[0], 10, seed=0)
    with pytest.raises(CannotFit) as raised:
        fit(case.experiment, case.points, free, case.precision)
    assert str(raised.value) == problem


def test_a_total_that_the_recipe_does_not_bring_cannot_be_free() -> None:
    """Sodium carbonate is the titrant, so that carbonate is listed; a sample may hold none."""
    experiment = titration_of("holding-water", 0)
    empty = replace(experiment.mixture, totals=0.0 * experiment.mixture.totals)
    case = made(PLANS[4], 10, seed=0)
    with pytest.raises(CannotFit, match="the recipe brings no carbonate whose total could be free"):
        fit(replace(experiment, mixture=empty), case.points, free_quantities("total:carbonate"))


# parts


def test_bounds_stand_about_the_recipe() -> None:
    experiment = titration_of("tris-assay", 0)
    free = free_quantities("pK:tris:1,slope")
    start = nominal(experiment, free)
    low, high = bounds(start, free)
    assert (low[0], high[0]) == (start[0] - 2.0, start[0] + 2.0)
    assert (low[1], high[1]) == (0.7, 1.2)


def test_covariance_is_that_of_a_straight_line() -> None:
    """y = a + b x at x = 0 … 4: var a = 3/5, var b = 1/10, correlation −2/√6."""
    x = np.arange(5.0)
    variances, correlation, hidden = covariance(np.array([np.ones(5), x]))
    np.testing.assert_allclose(variances, [0.6, 0.1], rtol=1e-12)
    assert correlation[0, 1] == pytest.approx(-2.0 / np.sqrt(6.0))
    assert not hidden.any()
    _, _, hidden = covariance(np.array([np.ones(5), x, 2.0 * x]))
    assert hidden.tolist() == [False, True, True]


@pytest.mark.parametrize(
    ("value", "error", "written"),
    [
        (0.10034, 0.000213, ("0.10034", "0.00021")),
        (4.7561, 0.0996, ("4.76", "0.10")),
        (4.7561, 0.0994, ("4.756", "0.099")),
        (12.0, 25.0, ("12", "25")),
        (1.0, np.inf, ("1.000", "—")),
        (-0.0213, 1e-12, ("−0.0213000", "1.0×10⁻¹²")),
        (0.00101, 1.234e-6, ("0.00101000", "1.2×10⁻⁶")),
    ],
)
def test_errors_decide_the_decimals(value: float, error: float, written: tuple[str, str]) -> None:
    assert with_error(value, error) == written
