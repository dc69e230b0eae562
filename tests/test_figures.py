"""What figures say about themselves: data, legends, bands, round numbers, colours."""

import dataclasses
import itertools
import json
import math
import re

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from bufferfolio import resources
from bufferfolio.figure_styles import BAND_COLOURS, STYLES, SURFACES, Style, stylesheet
from bufferfolio.figure_ticks import fixed, number_text, step_of, ticks
from bufferfolio.figures import Axis, Figure, as_data, bands, legend, rounded
from sample_figures import fractions_sample, line, lines, map_sample, random_figures

UNIT = Axis(label="share", unit="", low=0.0, high=1.0)
PLAIN = str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹−", "-0123456789-")


def names(record: type) -> list[str]:
    return [field.name for field in dataclasses.fields(record)]


def value_of(text: str) -> float:
    """Read a number as figures write it: −0.02, 5×10⁻⁹, 10³."""
    found = re.fullmatch(r"(−?)(?:([\d.]+)×)?10([⁻⁰¹²³⁴⁵⁶⁷⁸⁹]+)", text)
    if found is None:
        return float(text.translate(PLAIN))
    sign = -1.0 if found[1] else 1.0
    return sign * float(found[2] or 1) * 10.0 ** int(found[3].translate(PLAIN))


@pytest.mark.parametrize("figure", [fractions_sample(), map_sample()], ids=lambda each: each.kind)
def test_data_have_the_names_of_the_records(figure: Figure) -> None:
    data = as_data(figure)
    assert list(data) == names(Figure)
    assert json.loads(json.dumps(data, allow_nan=False)) == data
    parts = [(data["x"], figure.x), (data["cells"], figure.cells)]
    parts += zip(data["series"], figure.series, strict=True)
    parts += zip(data["marks"], figure.marks, strict=True)
    for part, record in parts:
        assert (part is None) == (record is None)
        if record is not None:
            assert list(part) == names(type(record))


def test_data_are_rounded_to_six_digits_and_gaps_are_none() -> None:
    shown = line([0.123456789, 1234567.0, 3.0], [math.nan, math.inf, -1.23456789e-9])
    (series,) = as_data(lines((shown,), UNIT))["series"]
    assert series["x"] == [0.123457, 1234570.0, 3.0]
    assert series["y"] == [None, None, -1.23457e-9]


def test_rounding_twice_changes_nothing() -> None:
    for figure in random_figures(60, seed=5):
        assert as_data(rounded(figure)) == as_data(figure)


def test_a_legend_lists_every_series_with_a_style_that_exists() -> None:
    hidden = dataclasses.replace(line([0], [0], "second"), visible=False, style=len(STYLES) + 1)
    entries = legend(lines((line([0], [0], "first"), hidden), UNIT))
    assert [(each.label, each.style, each.visible) for each in entries] == [
        ("first", 0, True),
        ("second", 1, False),
    ]


def test_bands_cover_every_value_without_overlap() -> None:
    for figure in random_figures(120, seed=6):
        steps = bands(figure)
        values = np.array([]) if figure.cells is None else figure.cells.values.ravel()
        values = values[np.isfinite(values)]
        assert bool(steps) == bool(values.size)
        if not steps:
            continue
        slack = 1e-5 * (steps[0].high - steps[0].low)
        assert steps[0].low <= values.min() + slack
        assert values.max() <= steps[-1].high + slack
        for one, other in itertools.pairwise(steps):
            assert one.high == other.low
            assert one.colour < other.colour
        assert len(steps) <= len(BAND_COLOURS)
        assert 0 <= steps[0].colour <= steps[-1].colour < len(BAND_COLOURS)


def test_a_map_of_one_value_is_one_band() -> None:
    figure = map_sample()
    assert figure.cells is not None
    flat = dataclasses.replace(figure.cells, values=np.full_like(figure.cells.values, 7.3))
    (band,) = bands(dataclasses.replace(figure, cells=flat))
    assert band.low <= 7.3 <= band.high


@given(st.floats(-1e6, 1e6), st.floats(1e-6, 1e6), st.integers(4, 12))
def test_ticks_are_round_inside_and_say_their_value(low: float, span: float, about: int) -> None:
    span = max(span, 1e-4 * abs(low))
    found = ticks(low, low + span, "linear", about)
    mantissa, exponent = step_of(span, about)
    step = mantissa * 10.0**exponent
    assert about / 3 - 1 <= len(found) <= about + 1
    for tick in found:
        assert low - 1e-5 * step <= tick.value <= low + span + 1e-5 * step
        assert tick.value / step == pytest.approx(round(tick.value / step), abs=1e-6)
        assert value_of(tick.text) == pytest.approx(tick.value, rel=1e-12, abs=1e-6 * step)


@given(st.floats(-12, 4), st.floats(0.7, 12))
def test_log_ticks_are_decades_or_1_2_5(start: float, decades: float) -> None:
    low, high = 10.0**start, 10.0 ** (start + decades)
    found = ticks(low, high, "log", 7)
    assert 1 <= len(found) <= 10
    for tick in found:
        assert low * (1 - 1e-6) <= tick.value <= high * (1 + 1e-6)
        assert value_of(tick.text) == pytest.approx(tick.value, rel=1e-12)


def test_numbers_are_written_as_people_write_them() -> None:
    assert number_text(-25, -1) == "−2.5"
    assert number_text(5, -4) == "0.0005"
    assert number_text(20, -9) == "2×10⁻⁸"
    assert number_text(1, 7) == "10⁷"
    assert number_text(3, 2) == "300"
    assert fixed(-0.04, 1) == "0.0"
    assert fixed(2.25, 1) == "2.3"
    assert [tick.text for tick in ticks(0.0, 1.0, "linear", 7)][:3] == ["0", "0.2", "0.4"]


def luminance(colour: str) -> float:
    """Relative luminance as WCAG 2.2 defines it, of #rrggbb."""
    channels = [int(colour[at : at + 2], 16) / 255 for at in (1, 3, 5)]
    linear = [
        each / 12.92 if each <= 0.04045 else ((each + 0.055) / 1.055) ** 2.4 for each in channels
    ]
    return sum(part * each for part, each in zip((0.2126, 0.7152, 0.0722), linear, strict=True))


def contrast(one: str, other: str) -> float:
    lighter, darker = sorted((luminance(one), luminance(other)), reverse=True)
    return (lighter + 0.05) / (darker + 0.05)


@pytest.mark.parametrize("page", ["light", "dark"])
def test_colours_can_be_read(page: str) -> None:
    """WCAG 2.2, 1.4.3 (text 4.5 : 1) and 1.4.11 (lines 3 : 1); lines carry coloured names."""
    surfaces = {each.name: getattr(each, page) for each in SURFACES}
    surface, ink = surfaces["figure-surface"], surfaces["figure-ink"]
    assert all(contrast(getattr(style, page), surface) >= 4.5 for style in STYLES)
    assert contrast(surfaces["figure-frame"], surface) >= 3
    assert contrast(surfaces["figure-mark"], surface) >= 4.5
    # Words on a map have a halo of the surface, and would do without.
    assert all(contrast(getattr(style, page), ink) >= 4.5 for style in (*BAND_COLOURS,))


def test_colours_for_sunlight_hold_seven_to_one() -> None:
    """WCAG 2.2, 1.4.6 (text 7 : 1): lines carry coloured names; words stand on every band."""
    surfaces = {each.name: each.stark for each in SURFACES}
    surface, ink = surfaces["figure-surface"], surfaces["figure-ink"]
    assert (surface, ink) == ("#ffffff", "#000000")
    assert all(contrast(style.stark, surface) >= 7.0 for style in STYLES)
    assert contrast(surfaces["figure-frame"], surface) >= 7.0
    assert contrast(surfaces["figure-mark"], surface) >= 7.0
    assert all(contrast(style.stark or style.light, ink) >= 7.0 for style in BAND_COLOURS)
    sheet = stylesheet()
    assert "@media screen{:root[data-contrast=high]{--figure-surface:#ffffff;" in sheet
    assert f"--s4:{STYLES[4].stark};" in sheet


def test_no_two_series_share_a_dash() -> None:
    assert len({style.dash for style in STYLES}) == len(STYLES)


@pytest.mark.parametrize("page", ["light", "dark"])
def test_bands_keep_their_order_in_grey(page: str) -> None:
    depths = [
        contrast(getattr(style, page), getattr(BAND_COLOURS[0], page)) for style in BAND_COLOURS
    ]
    assert all(one * 1.03 < other for one, other in itertools.pairwise(depths))


# Machado, Oliveira & Fernandes, IEEE Trans. Vis. Comput. Graph. 15 (2009) 1291: complete loss of
# one kind of cone, acting on linear red, green and blue.
PROTANOPIA = (
    (0.152286, 1.052583, -0.204868),
    (0.114503, 0.786281, 0.099216),
    (-0.003882, -0.048116, 1.051998),
)
DEUTERANOPIA = (
    (0.367322, 0.860646, -0.227968),
    (0.280085, 0.672501, 0.047413),
    (-0.011820, 0.042940, 0.968881),
)


def seen(colour: str, eye: tuple[tuple[float, ...], ...]) -> np.ndarray:
    """Return CIE L*a*b* of a colour as an eye without one kind of cone has it."""
    channels = np.array([int(colour[at : at + 2], 16) / 255 for at in (1, 3, 5)])
    linear = np.where(channels <= 0.04045, channels / 12.92, ((channels + 0.055) / 1.055) ** 2.4)
    linear = np.clip(np.array(eye) @ linear, 0.0, 1.0)
    to_xyz = [[0.4124, 0.3576, 0.1805], [0.2126, 0.7152, 0.0722], [0.0193, 0.1192, 0.9505]]
    ratio = np.array(to_xyz) @ linear / [0.9505, 1.0, 1.089]
    f = np.where(ratio > (6 / 29) ** 3, np.cbrt(ratio), ratio / (3 * (6 / 29) ** 2) + 4 / 29)
    return np.array([116 * f[1] - 16, 500 * (f[0] - f[1]), 200 * (f[1] - f[2])])


@pytest.mark.parametrize("page", ["light", "dark"])
@pytest.mark.parametrize("eye", [PROTANOPIA, DEUTERANOPIA], ids=["protanopia", "deuteranopia"])
def test_first_colours_differ_for_colour_blind_eyes(page: str, eye: tuple) -> None:
    """A difference of 10 in L*a*b* is plain to see side by side; later styles rest on dashes."""
    first: tuple[Style, ...] = STYLES[:4]
    for one, other in itertools.combinations(first, 2):
        difference = seen(getattr(one, page), eye) - seen(getattr(other, page), eye)
        assert np.linalg.norm(difference) > 10


def test_the_style_sheet_has_every_class_and_prints_in_light_colours() -> None:
    sheet = stylesheet()
    for at, style in enumerate(STYLES):
        assert f"svg.figure .s{at}{{stroke:var(--s{at})" in sheet
        assert sheet.count(f"--s{at}:{style.dark};") == 1
    assert "@media screen and (prefers-color-scheme:dark)" in sheet
    assert sheet.count("{") == sheet.count("}")


def test_the_engine_counts_the_same_styles() -> None:
    script = (resources.templates() / "js" / "figures.js").read_text("utf-8")
    assert f"const STYLES = {len(STYLES)};" in script
    assert f"const BAND_COLOURS = {len(BAND_COLOURS)};" in script
