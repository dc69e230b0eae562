"""Every analysis of the shipped formulations and families: do the parts agree with each other?"""

from dataclasses import replace

import numpy as np
import pytest

from bufferfolio.definitions import Expectation
from bufferfolio.equilibrium import Status
from bufferfolio.explorations import exploration_of
from bufferfolio.sheets import Sheet, sheet_of, sheets_of
from bufferfolio.subjects import reference_temperature, state_at
from recipes import shipped

KEYS = sorted(shipped().formulations)
FAMILIES = sorted(shipped().families)


@pytest.fixture(scope="module")
def sheets() -> dict[str, Sheet]:
    return dict(sheets_of(shipped()))


def test_there_are_as_many_as_promised(sheets: dict[str, Sheet]) -> None:
    assert len(sheets) >= 10
    assert len(FAMILIES) >= 14
    assert len(shipped().reagents) >= 30


@pytest.mark.parametrize("key", KEYS)
def test_a_formulation_reads_what_its_file_expects(key: str, sheets: dict[str, Sheet]) -> None:
    sheet = sheets[key]
    expected = sheet.subject.formulation.expected
    assert expected is not None
    assert sheet.deviation == sheet.reference.pH - expected.pH
    assert abs(sheet.deviation) <= expected.tolerance
    assert sheet.reference.temperature == expected.temperature


@pytest.mark.parametrize("key", KEYS)
def test_the_reference_lies_on_the_drift(key: str, sheets: dict[str, Sheet]) -> None:
    sheet = sheets[key]
    use = sheet.subject.formulation.use_temperature
    assert sheet.drift.temperature[[0, -1]].tolist() == [use.low, use.high]
    assert np.isfinite(sheet.drift.state.pH).all()
    for index in (0, 20, 40):
        alone = state_at(sheet.subject, float(sheet.drift.temperature[index]))
        assert float(sheet.drift.state.pH[index]) == pytest.approx(alone.pH, abs=1e-9)


@pytest.mark.parametrize("key", KEYS)
def test_the_sweep_asks_for_no_base_at_the_formulations_own_pH(
    key: str, sheets: dict[str, Sheet]
) -> None:
    sheet = sheets[key]
    base = sheet.sweep.base
    assert (np.diff(base) > 0.0).all()
    assert (sheet.sweep.capacity > 0.0).all()
    own = float(np.interp(0.0, base, sheet.sweep.pH))
    # Between two tenths of pH the curve bends: the straight line between them is good to that.
    assert own == pytest.approx(sheet.reference.pH, abs=0.1)


@pytest.mark.parametrize("key", KEYS)
def test_the_reserve_ends_at_the_limit_of_use(key: str, sheets: dict[str, Sheet]) -> None:
    """Or there is none, because the limit lies beyond all that doubles the batch."""
    sheet = sheets[key]
    limits = sheet.subject.formulation.use_pH
    temperature = reference_temperature(sheet.subject.formulation)
    directions = [side.titrant.direction for side in sheet.sides]
    assert directions == sorted(set(directions))
    for side in sheet.sides:
        limit = limits.high if side.titrant.direction == "upward" else limits.low
        whole = float("inf") if side.added.water == 0.0 else 1.0 / side.added.water
        reached = side.reserve > 0.0
        assert reached or key in {"ammonia-buffer", "spent-cleaner"}
        amount = side.reserve if reached else whole
        assert amount <= whole
        after = state_at(sheet.subject, temperature, additions=[(side.added, amount)])
        if reached:
            assert after.pH == pytest.approx(limit, abs=1e-9)
        else:
            assert sheet.subject.formulation.use_pH.holds(after.pH)


@pytest.mark.parametrize("key", KEYS)
def test_both_titrations_begin_at_the_formulation(key: str, sheets: dict[str, Sheet]) -> None:
    sheet = sheets[key]
    for side in sheet.sides:
        sign = 1.0 if side.titrant.direction == "upward" else -1.0
        pH = side.curve.state.pH
        assert float(pH[0]) == pytest.approx(sheet.reference.pH, abs=1e-9)
        assert (sign * np.diff(pH) > 0.0).all()
        assert (side.curve.state.status != Status.NO_SOLUTION).all()
        assert (np.diff(side.curve.amount) > 0.0).all()
        if side.equivalences:
            assert side.equivalences[-1].amount <= side.curve.amount[-1]


@pytest.mark.parametrize("key", [key for key in KEYS if key != "plain-water"])
def test_the_same_portion_moves_plain_water_further(key: str, sheets: dict[str, Sheet]) -> None:
    """At the reserve the formulation is at its limit, and water is far beyond.

    A reserve beyond the end of the curve is compared there: where the batch has doubled.
    """
    for side in sheets[key].sides:
        move = np.abs(side.curve.state.pH - side.curve.state.pH[0])
        plain = np.abs(side.contrast.state.pH - side.contrast.state.pH[0])
        at = min(int(np.searchsorted(side.curve.amount, side.reserve)), move.size - 1)
        assert plain[at] > move[at]


@pytest.mark.parametrize("key", KEYS)
def test_the_surface_meets_drift_and_titration(key: str, sheets: dict[str, Sheet]) -> None:
    sheet = sheets[key]
    surface = sheet.surface
    assert surface is not None
    assert surface.pH.shape == (surface.temperature.size, surface.amount.size)
    assert (np.diff(surface.amount) > 0.0).all()
    assert np.isfinite(surface.pH).all()
    middle = surface.pH[:, int(np.argmin(np.abs(surface.amount)))]
    np.testing.assert_allclose(middle, sheet.drift.state.pH[::2], rtol=0.0, atol=1e-9)
    assert (np.diff(surface.pH, axis=1) > 0.0).all()


def test_plain_water_has_next_to_no_reserve(sheets: dict[str, Sheet]) -> None:
    """To 5.0 and 8.5: 1e-5 mol/kg of acid and 3e-6 of base."""
    plain = {side.titrant.direction: side.reserve for side in sheets["plain-water"].sides}
    assert plain["downward"] == pytest.approx(1e-5, rel=0.02)
    assert plain["upward"] == pytest.approx(3.2e-6, rel=0.02)
    assert sheets["plain-water"].estimate.kind == "none"


def test_no_shipped_formulation_warns(sheets: dict[str, Sheet]) -> None:
    assert {key: sheet.warnings for key, sheet in sheets.items() if sheet.warnings} == {}


def test_a_missed_expectation_and_narrow_limits_are_told() -> None:
    formulation = shipped().formulations["tris-assay"]
    wrong = replace(
        formulation,
        expected=Expectation(pH=7.0, temperature=298.15, tolerance=0.05, origin="computed"),
        use_temperature=replace(formulation.use_temperature, high=373.15),
        use_pH=replace(formulation.use_pH, low=4.0, high=8.0),
    )
    told = " / ".join(sheet_of(wrong, shipped()).warnings)
    assert "from the expected 7, tolerance 0.05" in told
    assert "a constant is used outside its source's temperatures" in told
    assert "lies outside the limits of use" in told


def test_concentration_beyond_the_model_is_told() -> None:
    formulation = shipped().formulations["tris-assay"]
    salt = formulation.make_up.portions[-1]
    salty = replace(
        formulation,
        make_up=replace(
            formulation.make_up,
            portions=(*formulation.make_up.portions[:-1], replace(salt, amount=10 * salt.amount)),
        ),
    )
    told = " / ".join(sheet_of(salty, shipped()).warnings)
    assert "is above what the model (Davies equation) is trusted to, 0.5 mol/kg" in told


@pytest.mark.parametrize("key", FAMILIES)
def test_an_exploration_is_complete(key: str) -> None:
    """Fractions add up at every pH, and the capacity peaks where pK lies apart and in view."""
    family = shipped().families[key]
    found = exploration_of(family)
    share = found.sweep.forms.fractions[0]
    np.testing.assert_allclose(share.sum(axis=0), 1.0, rtol=1e-12)
    np.testing.assert_allclose(found.sweep.ionic_strength, found.ionic_strength, rtol=1e-12)
    assert found.pK.shape == (len(family.steps), found.pK_temperature.size)
    at_25 = found.pK[:, int(np.argmin(np.abs(found.pK_temperature - 298.15)))]
    assert np.isfinite(at_25).all()
    # Most protons first: the first form fades and the last one grows with pH.
    assert (np.diff(share[0]) <= 1e-15).all()
    assert (np.diff(share[-1]) >= -1e-15).all()
