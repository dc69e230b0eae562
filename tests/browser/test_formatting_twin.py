"""Numbers and tables as the page writes them are those of the build, character by character."""

import json
import math
import random
import struct
from pathlib import Path

import pytest
from playwright.sync_api import Page

from bufferfolio import formatting, resources
from bufferfolio.figure_tables import numbers_table
from bufferfolio.figures import as_data, rounded
from sample_figures import random_figures

SCRIPTS = ["figure_ticks", "figures", "formatting", "figure_tables"]


@pytest.fixture
def twin(page: Page) -> Page:
    """Return a page that holds nothing but the scripts under test."""
    for name in SCRIPTS:
        path: Path = resources.templates() / "js" / f"{name}.js"
        page.add_script_tag(content=path.read_text(encoding="utf-8"))
    return page


def numbers() -> list[float]:
    """Return numbers of every size, and ones that lie exactly between two roundings."""
    chance = random.Random(20)
    found = [struct.unpack("<d", chance.randbytes(8))[0] for _ in range(300)]
    found += [chance.uniform(-20.0, 20.0) for _ in range(500)]
    found += [10.0 ** chance.uniform(-14.0, 6.0) for _ in range(700)]
    found += [whole / 1024.0 for whole in range(-600, 600)]
    return [each for each in found if math.isfinite(each) and abs(each) < 1e9]


@pytest.mark.parametrize(
    ("name", "rest"),
    [
        ("fixed", (2,)),
        ("fixed", (3,)),
        ("signed", (2,)),
        ("significant", (3,)),
        ("significant", (1,)),
        ("plain", (4,)),
        ("percent", ()),
        ("celsius", ()),
        ("mass", ()),
        ("volume", (3,)),
    ],
)
def test_numbers(twin: Page, name: str, rest: tuple[int, ...]) -> None:
    given = [abs(each) if name in {"mass", "volume"} else each for each in numbers()]
    call = f"([all, rest]) => all.map((each) => bufferfolio.formatting.{name}(each, ...rest))"
    there = twin.evaluate(call, [given, list(rest)])
    here = [getattr(formatting, name)(each, *rest) for each in given]
    assert there == here


def test_tables(twin: Page) -> None:
    figures = random_figures(120, seed=3)
    call = "(all) => JSON.parse(all).map((each) => bufferfolio.figure_tables.numbersTable(each))"
    there = twin.evaluate(call, json.dumps([as_data(figure) for figure in figures]))
    for figure, table in zip(figures, there, strict=True):
        here = numbers_table(rounded(figure))
        assert table == {"head": list(here.head), "rows": [list(row) for row in here.rows]}
