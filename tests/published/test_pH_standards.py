"""Primary pH standards from 0 to 50 °C, predicted from the shipped constants alone.

What a predicted pH may miss, as standard uncertainties: the convention for the chloride ion, on
which every assigned value rests, 0.005 (IUPAC 2002: 0.01 at k = 2); the assigned value, 0.005
(the scales differ by 0.003 to 0.011 for one solution); pK(T), 0.005 (equations for one acid differ
by 0.002 to 0.01); activity coefficients of doubly charged ions, 0.009 (at I = 0.1 mol/kg the Davies
and Bates–Guggenheim terms differ by 0.007 in pH, a published pair coefficient moves it by 0.006 to
0.011). Together 0.0125, and 0.025 at k = 2. No constant was chosen or moved to meet this.
"""

import pytest

from bufferfolio.activity import MODELS
from bufferfolio.equilibrium import solve
from published_tables import (
    Difference,
    Row,
    assert_within,
    differences,
    largest,
    root_mean_square,
)
from recipes import recipe, shipped
from solutions import constants_of

UNCERTAINTY = 0.0125
BAND = 0.025  # k = 2
PRIMARY = {"phthalate", "phosphate-1-1", "phosphate-1-3-5", "borax", "carbonate"}


def standards(table: str, model: str, *, pairs: bool = False) -> list[Difference]:
    """Predict every row of a table."""
    interactions = shipped().interactions if pairs else ()

    def predict(row: Row) -> float:
        mixture = recipe(row["contents"])
        constants = constants_of(mixture, 273.15 + float(row["celsius"]))
        return float(solve(mixture, constants, MODELS[model], interactions).pH)

    return differences(table, predict)


def of_modern_scales(model: str, *, pairs: bool = False) -> list[Difference]:
    tables = ("primary-standards", "tris-standard")
    return [item for table in tables for item in standards(table, model, pairs=pairs)]


# Largest misses today, five primary standards on the modern scales:
#   davies                        r.m.s. 0.0111, largest +0.024 (phosphate 1:3.5 at 50 °C)
#   specific-ion, no pair terms   r.m.s. 0.0095, largest -0.022 (borax at 0 °C)
#   specific-ion with pair terms  r.m.s. 0.0100, largest -0.023 (borax at 0 °C)
CASES = [("davies", False), ("specific-ion", False), ("specific-ion", True)]


@pytest.mark.parametrize(("model", "pairs"), CASES)
def test_standards_of_the_modern_scales_lie_in_their_band(model: str, pairs: bool) -> None:
    modern = of_modern_scales(model, pairs=pairs)
    assert len(modern) == 146
    assert_within(modern, lambda item: BAND)
    primary = [item for item in modern if item.row.get("part") in PRIMARY]
    assert len(primary) == 121
    assert root_mean_square(primary) < UNCERTAINTY


@pytest.mark.parametrize(("model", "pairs"), CASES)
def test_standards_of_pharmacopoeia_and_industry_lie_in_their_band(model: str, pairs: bool) -> None:
    """Two decimals: half of the last one on top. Largest today -0.029 (carbonate, pairs)."""
    rounded = standards("rounded-standards", model, pairs=pairs)
    assert len(rounded) == 70
    assert_within(rounded, lambda item: BAND + 0.005)


@pytest.mark.parametrize(("model", "pairs"), CASES)
def test_the_older_phthalate_scale_lies_in_a_wider_band(model: str, pairs: bool) -> None:
    """Another convention for activity coefficients, and it drifts from the later one by 0.01."""
    older = standards("older-phthalate", model, pairs=pairs)
    assert len(older) == 7
    assert_within(older, lambda item: BAND + 0.01)


def test_ideal_solutions_would_not_do() -> None:
    """The comparison can tell a model without activity coefficients: 0.36 off at most."""
    found = of_modern_scales("ideal")
    assert largest(found) > 0.25
