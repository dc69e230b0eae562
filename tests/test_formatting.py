"""How numbers and formulas are written, and how a figure's numbers are thinned."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from bufferfolio.figure_tables import MOST_MAP_ROWS, MOST_ROWS, numbers_table
from bufferfolio.figures import Axis, Cells, Figure, Series
from bufferfolio.formatting import (
    celsius,
    chemical,
    fixed,
    mass,
    percent,
    plain,
    signed,
    significant,
    volume,
)

SUPERSCRIPTS = str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹−", "-0123456789-")


def value_of(text: str) -> float:
    """Read a number as pages write it: −0.0230, 1.23×10⁻⁹."""
    mantissa, _, power = text.partition("×10")
    number = float(mantissa.translate(SUPERSCRIPTS))
    return number * 10.0 ** int(power.translate(SUPERSCRIPTS)) if power else number


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (0.0123456, "0.0123"),
        (0.000123456, "0.000123"),
        (0.0000123456, "1.23×10⁻⁵"),
        (12.0, "12.0"),
        (9.996, "10.0"),
        (1234.5, "1230"),
        (12345.0, "1.23×10⁴"),
        (1.125, "1.13"),  # exactly half way: up, in both languages
        (-0.5, "−0.500"),
        (0.0, "0"),
        (math.nan, "—"),
    ],
)
def test_three_significant_figures(value: float, text: str) -> None:
    assert significant(value) == text


@given(st.floats(min_value=1e-30, max_value=1e30), st.integers(min_value=1, max_value=9))
def test_significant_figures_keep_the_value(value: float, figures: int) -> None:
    assert value_of(significant(value, figures)) == pytest.approx(
        value, rel=0.5000001 * 10.0 ** (1 - figures)
    )
    assert value_of(plain(value, figures)) == value_of(significant(value, figures))


@given(st.floats(min_value=-1e5, max_value=1e5), st.integers(min_value=0, max_value=5))
def test_fixed_decimals_keep_the_value_and_never_show_minus_zero(
    value: float, decimals: int
) -> None:
    text = fixed(value, decimals)
    assert value_of(text) == pytest.approx(value, rel=0, abs=0.5001 * 10.0**-decimals)
    assert not text.startswith("−") or value_of(text) < 0.0


def test_plain_numbers_have_no_trailing_zeros() -> None:
    assert [plain(25.0), plain(6.06), plain(0.05), plain(1000.0), plain(20.0, 2)] == [
        "25",
        "6.06",
        "0.05",
        "1000",
        "20",
    ]


def test_differences_carry_their_sign_unless_they_vanish() -> None:
    written = [signed(value, 2) for value in (0.118, -0.33, 0.004, -0.004)]
    assert written == ["+0.12", "−0.33", "0.00", "0.00"]


def test_amounts_take_the_unit_that_reads_best() -> None:
    assert [mass(0.00606), mass(1.25), mass(2.5e-5)] == ["6.06 g", "1.25 kg", "25 mg"]
    assert [volume(4.2e-6), volume(0.02), volume(1.5), volume(4.586e-8, 3)] == [
        "4.2 mL",
        "20 L",
        "1.5 m³",
        "45.9 µL",
    ]


def test_temperatures_are_written_in_degrees_celsius() -> None:
    assert [celsius(298.15), celsius(310.65), celsius(268.15), celsius(273.15)] == [
        "25",
        "37.5",
        "−5",
        "0",
    ]


def test_shares_are_written_in_per_cent() -> None:
    assert [percent(0.382), percent(1.0), percent(2.1e-9), percent(math.nan)] == [
        "38.2 %",
        "100 %",
        "2.10×10⁻⁷ %",
        "—",
    ]


@pytest.mark.parametrize(
    ("name", "text"),
    [
        ("Na2HPO4·7H2O", "Na₂HPO₄·7H₂O"),
        ("SO4-2", "SO₄²⁻"),
        ("NH4+", "NH₄⁺"),
        ("Na+", "Na⁺"),
        ("NH4Cl", "NH₄Cl"),
        ("(NH4)2SO4", "(NH₄)₂SO₄"),
        ("C4H12NO3+", "C₄H₁₂NO₃⁺"),
        ("CaSO4·0.5H2O", "CaSO₄·0.5H₂O"),
    ],
)
def test_formulas_are_printed_as_chemists_write_them(name: str, text: str) -> None:
    assert chemical(name) == text


def axis(high: float) -> Axis:
    return Axis(label="x", unit="", low=0.0, high=high)


def figure_of(points: int) -> Figure:
    x = np.linspace(0.0, 14.0, points)
    return Figure(
        key="k",
        kind="lines",
        title="t",
        x=axis(14.0),
        y=axis(1.0),
        series=(Series(name="a", label="A", style=0, x=x, y=x / 14.0),),
        marks=(),
        cells=None,
        summary="s",
    )


@pytest.mark.parametrize("points", [1, 2, 33, 34, 141, 161, 500])
def test_a_table_keeps_both_ends_and_fits_a_screen(points: int) -> None:
    rows = numbers_table(figure_of(points)).rows
    assert 1 <= len(rows) <= MOST_ROWS + 1
    assert rows[0] == ("0", "0.000")
    if points > 1:
        assert rows[-1] == ("14", "1.000")


def test_a_gap_is_written_as_such() -> None:
    shown = figure_of(3)
    shown.series[0].y[1] = math.nan
    assert numbers_table(shown).rows[1] == ("7", "—")


def test_a_map_is_thinned_and_its_cells_stand_at_their_points() -> None:
    centres = np.array([-4.0, -2.0, 0.0, 1.0, 2.0])
    middles = 0.5 * (centres[1:] + centres[:-1])
    edges = np.concatenate([centres[:1], middles, centres[-1:]])
    tall = np.linspace(2.0, 40.0, 21)
    shown = Figure(
        key="k",
        kind="map",
        title="t",
        x=axis(2.0),
        y=axis(40.0),
        series=(),
        marks=(),
        cells=Cells(
            x=edges,
            y=np.concatenate([tall[:1], 0.5 * (tall[1:] + tall[:-1]), tall[-1:]]),
            values=np.add.outer(tall, centres),
            label="sum",
            unit="",
        ),
        summary="s",
    )
    table = numbers_table(shown)
    assert table.head == ("x", "−4", "−2", "0", "1", "2")
    assert len(table.rows) <= MOST_MAP_ROWS
    assert table.rows[0] == ("2", "−2.00", "0.00", "2.00", "3.00", "4.00")
    assert table.rows[-1][0] == "40"
