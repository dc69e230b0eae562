"""Where words fit among the lines of a figure, in px of the drawing.

Lines are remembered by how high and how low they run in narrow columns; a label is tried in many
boxes and takes the one with most room, or none. Words are measured by counting characters, since
a figure is drawn before any browser has seen it.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

from bufferfolio.line_paths import Box, Point

COLUMN = 4.0  # px; narrower than any character
HEIGHT = 13.0  # px, of a line of text
GAP = 3.0  # px between a line and its label
ENOUGH = 2.0  # px of room below which a label would be read as another line's
PLACES = 26  # along the frame, where a line's label is tried
AMPLE = 24.0  # px of room beyond which more is no better


@dataclass(frozen=True, slots=True)
class Profile:
    """The highest and lowest y of a line in each column of a frame; infinite where it is not."""

    top: list[float]
    bottom: list[float]


def text_width(text: str) -> float:
    """Return the width of a text of 14 px, on the safe side of common fonts."""
    return sum(5.8 if character in NARROW else 8.7 for character in text)


def profile(paths: Sequence[Sequence[Point]], frame: Box) -> Profile:
    """Return how high and low a line runs in each column of the frame."""
    count = math.ceil((frame.right - frame.left) / COLUMN)
    found = Profile([math.inf] * count, [-math.inf] * count)
    for path in paths:
        for start, end in pairwise(path):
            _cover(found, frame, start, end)
    return found


def _cover(found: Profile, frame: Box, start: Point, end: Point) -> None:
    (x0, y0), (x1, y1) = (start, end) if start[0] <= end[0] else (end, start)
    last_column = len(found.top) - 1
    first = min(max(math.floor((x0 - frame.left) / COLUMN), 0), last_column)
    last = min(max(math.floor((x1 - frame.left) / COLUMN), 0), last_column)
    slope = (y1 - y0) / (x1 - x0) if x1 > x0 else 0.0
    for column in range(first, last + 1):
        left = frame.left + column * COLUMN
        # At the two ends the line's own end, so that a steep line keeps its full height.
        enter = y0 if column == first else y0 + slope * (left - x0)
        leave = y1 if column == last else y0 + slope * (left + COLUMN - x0)
        found.top[column] = min(found.top[column], enter, leave)
        found.bottom[column] = max(found.bottom[column], enter, leave)


def room(box: Box, profiles: Sequence[Profile], frame: Box) -> float:
    """Return the least upright distance from a box to any line; negative where one crosses it."""
    first = max(math.floor((box.left - frame.left) / COLUMN), 0)
    last = math.floor((box.right - frame.left) / COLUMN)
    least = AMPLE
    for each in profiles:
        for column in range(first, min(last + 1, len(each.top))):
            distance = max(each.top[column] - box.bottom, box.top - each.bottom[column])
            least = min(least, distance)
        if least < 0.0:
            break
    return least


def clear(box: Box, taken: Sequence[Box], frame: Box) -> bool:
    """Say whether a box lies inside the frame and meets no box taken before."""
    if box.left < frame.left + 2 or box.right > frame.right - 2:
        return False
    if box.top < frame.top + 2 or box.bottom > frame.bottom - 2:
        return False
    return all(
        box.right + 2 < other.left
        or other.right + 2 < box.left
        or box.bottom < other.top
        or other.bottom < box.top
        for other in taken
    )


def line_place(
    text: str, own: Profile, others: Sequence[Profile], taken: Sequence[Box], frame: Box
) -> Box | None:
    """Return the best box for a line's own label, above or below it; None where nothing fits."""
    width = text_width(text)
    best, best_score = None, ENOUGH
    for at in range(1, PLACES):
        left = frame.left + at * (frame.right - frame.left) / PLACES - width / 2
        for box in _beside(own, left, width, frame):
            if not clear(box, taken, frame):
                continue
            around = room(box, others, frame)
            # Far from its own line a label says nothing, even in the emptiest corner.
            score = around - 0.7 * max(_own_distance(own, box, frame) - GAP, 0.0)
            if around > ENOUGH and score > best_score + 0.01:
                best, best_score = box, score
    return best


def _beside(own: Profile, left: float, width: float, frame: Box) -> tuple[Box, ...]:
    first = max(math.floor((left - frame.left) / COLUMN), 0)
    last = max(math.floor((left + width - frame.left) / COLUMN), 0)
    top = min(own.top[first : last + 1], default=math.inf)
    bottom = max(own.bottom[first : last + 1], default=-math.inf)
    if not math.isfinite(top):
        return ()
    return (
        Box(left, top - GAP - HEIGHT, left + width, top - GAP),
        Box(left, bottom + GAP, left + width, bottom + GAP + HEIGHT),
    )


def _own_distance(own: Profile, box: Box, frame: Box) -> float:
    middle = math.floor(((box.left + box.right) / 2 - frame.left) / COLUMN)
    return max(own.top[middle] - box.bottom, box.top - own.bottom[middle])


def mark_place(
    choices: Sequence[Box], profiles: Sequence[Profile], taken: Sequence[Box], frame: Box
) -> Box | None:
    """Return the first box with room, else the clear box with most; None where none is clear."""
    best, best_room = None, -math.inf
    for box in choices:
        if clear(box, taken, frame):
            around = room(box, profiles, frame)
            if around >= ENOUGH:
                return box
            if around > best_room:
                best, best_room = box, around
    return best


NARROW = frozenset("₀₁₂₃₄₅₆₇₈₉₊₋⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻ .,:;()il")
