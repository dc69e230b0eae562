"""The page's engine without a page, and results of Python in the shape that comes back from it."""

import json
import math
from collections.abc import Mapping, Sequence
from dataclasses import fields, is_dataclass
from enum import IntEnum
from typing import Final

import numpy as np
from playwright.sync_api import Page

from bufferfolio import resources
from bufferfolio.page_scripts import ENGINE_SCRIPTS

ENGINE: Final = (*ENGINE_SCRIPTS, "band_words")

SMALLEST: Final = 1e-12

# JSON has no NaN: it travels as a word.
ASK: Final = """
  ([body, data]) => {
    const ask = eval(body);
    return JSON.stringify(ask(bufferfolio, data), (_, value) =>
      typeof value === "number" && !Number.isFinite(value) ? String(value) : value);
  }
"""


def load(page: Page, scripts: Sequence[str] = ENGINE) -> Page:
    """Put the scripts of the engine into an empty page."""
    for name in scripts:
        path = resources.templates() / "js" / f"{name}.js"
        page.add_script_tag(content=path.read_text(encoding="utf-8"))
    return page


def ask(page: Page, body: str, data: object) -> object:
    """Return what a function `(bf, data) => …` answers in the page, NaN as the word."""
    return json.loads(page.evaluate(ASK, [body, data]))


def plain(value: object) -> object:
    """Return a result of Python as lists, mappings and numbers, NaN as the word."""
    if isinstance(value, IntEnum):
        return int(value)
    if is_dataclass(value):
        return {field.name: plain(getattr(value, field.name)) for field in fields(value)}
    if isinstance(value, np.ndarray):
        return plain(value.tolist())
    if isinstance(value, Mapping):
        return {key: plain(item) for key, item in value.items()}
    if isinstance(value, list | tuple):
        return [plain(item) for item in value]
    if isinstance(value, float) and not math.isfinite(value):
        return "NaN" if math.isnan(value) else str(value)
    return value


def assert_agrees(
    found: object, expected: object, limit: float, about: str, smallest: float = SMALLEST
) -> None:
    """Hold an answer of the page against Python's: the same but for `limit` of any number.

    Differences of nearly equal numbers are as good as those, hence `smallest`. What the page has
    beyond Python's fields is its own affair.
    """
    if isinstance(expected, dict):
        assert isinstance(found, dict), about
        for key, value in expected.items():
            assert key in found, f"{about}: {key} is missing"
            assert_agrees(found[key], value, limit, f"{about}.{key}", smallest)
    elif isinstance(expected, list):
        assert isinstance(found, list), about
        assert len(found) == len(expected), about
        for at, (one, other) in enumerate(zip(found, expected, strict=True)):
            assert_agrees(one, other, limit, f"{about}[{at}]", smallest)
    elif isinstance(expected, float) and not isinstance(found, str):
        near = abs(found - expected) <= max(limit * abs(expected), smallest)
        assert near, f"{about}: {found} is not {expected}"
    else:
        assert found == expected, about
