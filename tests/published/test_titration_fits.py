"""Textbook titrations, fitted: the strength and the pK that the book began with come back.

The tables are calculated with concentrations in place of activities, Kw = 1.0e-14 and volumes that
add up, and printed to 0.01. So are the models here: ideal, moles per litre read as moles per
kilogram of water, at the temperature at which water's own pKw is 14. Where a printed value is an
approximation (column `doubtful`), the exact value stands in for it.
"""

from collections.abc import Sequence
from dataclasses import replace
from itertools import groupby

import numpy as np
import pytest
from scipy.optimize import brentq

from bufferfolio.activity import MODELS
from bufferfolio.end_points import end_points
from bufferfolio.experiments import Experiment
from bufferfolio.fit_parameters import Free
from bufferfolio.fitting import Fit, fit
from bufferfolio.gran import gran_lines
from bufferfolio.measured import Points, Precision
from bufferfolio.water import pKw_at
from published_tables import Row, rows_of
from solutions import CHLORIDE, SODIUM, made_up_family, mixture_of, strong_titrant

NEUTRAL = float(brentq(lambda kelvin: float(pKw_at(np.array(kelvin))) - 14.0, 290.0, 305.0))
ROUNDING = 0.01 / np.sqrt(12.0)  # pH, standard deviation of printing to 0.01
EXACT = Precision(pH=ROUNDING, volume=1e-12)

Titration = tuple[Row, ...]


def key(row: Row) -> tuple[str, ...]:
    return tuple(row[name] for name in ("source", "part", "contents", "volume"))


TITRATIONS: list[Titration] = [
    tuple(rows) for _, rows in groupby(sorted(rows_of("titrations"), key=key), key=key)
]


def pK_of(row: Row) -> list[float]:
    """Return the pK of a row, which prints Ka or pKa; none of a strong acid or base."""
    if "constants" not in row:
        return []
    named = [part.split("=") for part in row["constants"].split("; ")]
    return [
        float(value) if name == "pKa" else -float(np.log10(float(value))) for name, value in named
    ]


def amount(text: str) -> float:
    """Return the moles per litre of "NaOH=0.100"."""
    return float(text.partition("=")[2])


def reading(row: Row) -> float:
    """Return the printed pH, or the exact one where the book approximates."""
    return float(row.get("doubtful", row["value"]).rpartition(": ")[2])


def experiment_and_points(rows: Titration) -> tuple[Experiment, Points]:
    row = rows[0]
    part, strength = row["part"], amount(row["contents"])
    families = []
    if not part.startswith("strong"):
        charge = 2 if part == "dibasic-base" else 0
        families = [(made_up_family("analyte", charge, pK_of(row)), strength)]
    sodium = strength if part in ("strong-base", "salt") else 0.0
    chloride = strength if part == "strong-acid" else 0.0
    molar = amount(row["titrant"])
    ion = SODIUM if row["titrant"].startswith("NaOH") else CHLORIDE
    ordered = sorted(rows, key=lambda each: float(each["added"]))
    experiment = Experiment(
        mixture=mixture_of(families, [(SODIUM, sodium), (CHLORIDE, chloride)]),
        water=float(row["volume"]) * 1e-3,
        added=replace(strong_titrant(ion, molar), volume=1e-3 / molar),
        temperature=NEUTRAL,
        model=MODELS["ideal"],
        interactions=(),
    )
    points = Points(
        volume=np.array([float(each["added"]) * 1e-6 for each in ordered]),
        pH=np.array([reading(each) for each in ordered]),
        rows=tuple(range(len(ordered))),
    )
    return experiment, points


def fitted(rows: Titration, free: Sequence[Free]) -> Fit:
    experiment, points = experiment_and_points(rows)
    return fit(experiment, points, free, EXACT)


def name_of(rows: Titration) -> str:
    row = rows[0]
    return f"{row['source']}, {row['volume']} mL, {row['contents']}"


ENOUGH = [rows for rows in TITRATIONS if len(rows) >= 6]


def test_every_row_belongs_to_a_titration() -> None:
    assert sum(len(rows) for rows in TITRATIONS) == 164
    assert len(ENOUGH) == 11


@pytest.mark.parametrize("rows", ENOUGH, ids=name_of)
def test_the_strength_of_the_titrant_comes_back(rows: Titration) -> None:
    """The books' volumes are exact, and a pH on the jump settles the strength: to 1e-5 today."""
    result = fitted(rows, [Free(kind="strength")])
    (found,) = result.estimates
    assert found.value == pytest.approx(found.recipe, rel=1e-4)
    # Nothing but the printing may be left: 0.003, and a slip of 0.01 here and there.
    assert np.sqrt(np.mean(result.residuals**2)) < 0.006


@pytest.mark.parametrize("rows", [rows for rows in ENOUGH if pK_of(rows[0])], ids=name_of)
def test_strength_and_pK_come_back_together(rows: Titration) -> None:
    """The last step's pK to 0.005: printing leaves 0.001 to 0.002. The largest miss is 0.003."""
    step = len(pK_of(rows[0])) - 1
    result = fitted(rows, [Free(kind="strength"), Free(kind="pK", family="analyte", step=step)])
    strength, pK = result.estimates
    assert strength.value == pytest.approx(strength.recipe, rel=1e-4)
    assert pK.value == pytest.approx(pK.recipe, abs=0.005)


def equivalence(rows: Titration) -> float:
    """Return the volume in m3 that meets the analyte, of a monoprotic one."""
    row = rows[0]
    return float(row["volume"]) * 1e-6 * amount(row["contents"]) / amount(row["titrant"])


# At 0.001 mol/L the jump is small among eleven points: no end point is claimed there.
FAINT = [rows for rows in ENOUGH if rows[0]["contents"] == "weak acid=0.001000"]
CLEAR = [rows for rows in ENOUGH if rows not in FAINT and rows[0]["part"] != "dibasic-base"]


@pytest.mark.parametrize("rows", CLEAR, ids=name_of)
def test_end_points_and_gran_lines_meet_the_books_equivalence(rows: Titration) -> None:
    """Printing makes a Gran value 0.7 % uncertain, and a line of five less: 0.1 % in volume."""
    experiment, points = experiment_and_points(rows)
    found = end_points(points)
    expected = equivalence(rows)
    assert len(found) == 1
    assert found[0].volume == pytest.approx(expected, rel=1e-4)
    lines = gran_lines(experiment, points, found, EXACT)
    for line in lines:
        assert line.volume == pytest.approx(expected, rel=0.001), (line.side, line.kind)


def test_gran_lines_are_drawn_where_the_tables_allow() -> None:
    """Four points at least between the limits: the shorter tables have fewer."""
    counts = []
    for rows in CLEAR:
        experiment, points = experiment_and_points(rows)
        counts.append(len(gran_lines(experiment, points, end_points(points), EXACT)))
    assert sorted(counts, reverse=True) == [2, 2, 2, 2, 2, 1, 0, 0, 0]


def test_nothing_is_claimed_where_the_jump_is_faint() -> None:
    (rows,) = FAINT
    assert end_points(experiment_and_points(rows)[1]) == ()
