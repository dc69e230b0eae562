"""How many lines the two pages of a printed card have room for.

Nothing of a card may be cut, and its letters must not shrink: where words are long, the table of
readings takes wider steps and fewer lines are left to write on. Heights were measured in Chromium
on Letter, which is the lower of the two papers; letters are counted for A4, which is the narrower.
"""

import math
from collections.abc import Iterable
from typing import Final


def lines_of(text: str, width: int = 98) -> int:
    """Return how many lines a text takes on paper, `width` letters each."""
    return max(1, math.ceil(len(text) / width))


def room_for_readings(
    title: str, purpose: str, recipe: Iterable[str], cautions: Iterable[str], small: Iterable[str]
) -> int:
    """Return how many lines of readings the first page holds, in two tables side by side.

    `recipe` has a text for each reagent; `cautions` are items, `small` paragraphs in small print.
    """
    used = TITLE * (lines_of(title, 40) - 1) + LINE * (lines_of(purpose) - 1)
    used += sum(RECIPE + LINE * (lines_of(row, 62) - 1) for row in recipe)
    used += sum(CAUTION_GAP + LINE * lines_of(item) for item in cautions)
    used += sum(PARAGRAPH_GAP + SMALL * lines_of(text, 103) for text in small)
    rows = math.floor((FIRST_PAGE - used) / ROW)
    return BLOCKS * max(LEAST_ROWS, rows)


def room_for_log(rows: int, words: int, pictures: bool) -> int:
    """Return how many lines to write on the second page holds.

    Beside them stand `rows` lines of doses and `words` lines of headings, notes and reserve.
    """
    used = ROW * rows + LINE * words + (PICTURES if pictures else 0.0)
    return min(MOST_LOG, max(LEAST_LOG, math.floor((SECOND_PAGE - used) / LOG_ROW)))


BLOCKS: Final = 2  # tables of readings, side by side
LEAST_ROWS: Final = 6  # of readings in each
LEAST_LOG, MOST_LOG = 4, 12

# All in mm. What is left of a page beside headings, notes and what every card has.
FIRST_PAGE: Final = 144.8
SECOND_PAGE: Final = 153.0
LINE: Final = 4.45
SMALL: Final = 4.2
ROW: Final = 5.35
RECIPE: Final = 5.7
TITLE: Final = 8.0
CAUTION_GAP: Final = 0.7
PARAGRAPH_GAP: Final = 1.0
PICTURES: Final = 52.0
LOG_ROW: Final = 6.35
