"""Measured points from text: what is understood, and every complaint in full."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from bufferfolio.measured import MOST_POINTS, default_precision, parsed, text_of
from measured_cases import CASES, described


@pytest.mark.parametrize("name", CASES)
def test_a_text_says_what_it_should(name: str) -> None:
    text, expected = CASES[name]
    assert described(parsed(text)) == expected


def test_the_most_rows_that_are_taken() -> None:
    text = "\n".join(f"{at} 7.0" for at in range(MOST_POINTS))
    points = parsed(text).points
    assert points is not None
    assert points.volume.size == MOST_POINTS
    assert points.rows[-1] == MOST_POINTS


def test_a_unit_may_be_given_where_no_heading_has_one() -> None:
    assert described(parsed("1 7\n", unit="L")) == "space point L, 0 headings\n1000 7"
    assert described(parsed("µL pH\n1 7\n", unit="L")).startswith("space point µL stated")


@pytest.mark.parametrize(
    "content",
    [
        "V (µL);pH\n1;7\n".encode(),
        "\ufeffV (µL);pH\n1;7\n".encode(),
        b"\xff\xfe" + "V (µL);pH\n1;7\n".encode("utf-16-le"),
        b"\xfe\xff" + "V (µL);pH\n1;7\n".encode("utf-16-be"),
    ],
)
def test_a_file_may_be_utf_8_or_utf_16(content: bytes) -> None:
    assert text_of(content) == "V (µL);pH\n1;7\n"


def test_a_file_of_another_encoding_loses_only_its_letters() -> None:
    assert text_of("V (µL);pH\n1;7".encode("cp1252")) == "V (\ufffdL);pH\n1;7"


SEPARATORS = {"tab": "\t", "semicolon": ";", "comma": ",", "space": " "}


@given(
    st.lists(st.tuples(st.integers(0, 10**6), st.integers(-1000, 15000)), min_size=2, max_size=30),
    st.sampled_from(sorted(SEPARATORS)),
    st.booleans(),
)
def test_what_is_written_is_read(
    points: list[tuple[int, int]], separator: str, comma: bool
) -> None:
    """Thousandths of a mL and of a pH in any order of digits, in every layout."""
    comma = comma and separator != "comma"
    points = sorted(points)

    def cell(whole: int) -> str:
        text = f"{whole / 1000:.4f}"
        return text.replace(".", ",") if comma else text

    text = "\n".join(f"{cell(v)}{SEPARATORS[separator]}{cell(pH)}" for v, pH in points)
    found = parsed(text)
    assert found.complaints == ()
    assert found.points is not None
    assert found.points.volume.tolist() == [float(f"{v / 1000:.4f}") * 1e-6 for v, _ in points]
    assert found.points.pH.tolist() == [float(f"{pH / 1000:.4f}") for _, pH in points]


@given(st.text())
def test_no_text_is_too_much(text: str) -> None:
    """Whatever is pasted: points, or complaints that point into it; never both, never neither."""
    found = parsed(text)
    assert (found.points is None) == bool(found.complaints)
    for each in found.complaints:
        assert 1 <= each.column <= len(each.line) + 1
        assert each.row >= 1


def test_the_usual_precision_follows_the_burette() -> None:
    points = parsed("0 7\n25 8\n").points
    assert points is not None
    usual = default_precision(points)
    assert usual.pH == 0.02
    assert usual.volume == pytest.approx(25e-9)
