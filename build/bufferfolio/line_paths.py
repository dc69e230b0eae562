"""Lines in px of a drawing: cut at gaps and at a frame, and without points nobody would miss."""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

Point = tuple[float, float]
Path = list[Point]

TOLERANCE = 0.25  # px that a simplified line may leave the true one
CROWDED = 3.0  # px; of points in the same square of this side one is drawn


@dataclass(frozen=True, slots=True)
class Box:
    """A rectangle, y downwards."""

    left: float
    top: float
    right: float
    bottom: float


def clipped(points: Sequence[Point], frame: Box) -> list[Path]:
    """Return the parts of a line that lie in the frame; a point that is not finite is a gap."""
    paths: list[Path] = []
    for start, end in pairwise(points):
        part = _inside(start, end, frame)
        if part is None:
            continue
        # Only a segment that starts where the last one ended goes on with its path.
        if paths and paths[-1][-1] == part[0]:
            paths[-1].append(part[1])
        else:
            paths.append([part[0], part[1]])
    return paths


def _inside(start: Point, end: Point, frame: Box) -> tuple[Point, Point] | None:
    """Return the part of a segment inside the frame (Liang and Barsky's clipping)."""
    across_x, across_y = end[0] - start[0], end[1] - start[1]
    if not math.isfinite(across_x) or not math.isfinite(across_y):
        return None
    enter, leave = 0.0, 1.0
    for step, distance in (
        (-across_x, start[0] - frame.left),
        (across_x, frame.right - start[0]),
        (-across_y, start[1] - frame.top),
        (across_y, frame.bottom - start[1]),
    ):
        if step == 0.0:
            if distance < 0.0:
                return None
        elif step < 0.0:
            enter = max(enter, distance / step)
        else:
            leave = min(leave, distance / step)
    if enter > leave:
        return None
    first = start if enter == 0.0 else (start[0] + enter * across_x, start[1] + enter * across_y)
    second = end if leave == 1.0 else (start[0] + leave * across_x, start[1] + leave * across_y)
    return first, second


def simplified(path: Sequence[Point]) -> Path:
    """Return a path with fewer points, nowhere off by more than TOLERANCE (Douglas, Peucker)."""
    keep = {0, len(path) - 1}
    stack = [(0, len(path) - 1)]
    while stack:
        first, last = stack.pop()
        furthest, most = first, TOLERANCE * TOLERANCE
        for at in range(first + 1, last):
            distance = _square_distance(path[at], path[first], path[last])
            if distance > most:
                furthest, most = at, distance
        if furthest != first:
            keep.add(furthest)
            stack.append((first, furthest))
            stack.append((furthest, last))
    return [path[at] for at in sorted(keep)]


def scattered(points: Sequence[Point], frame: Box) -> list[Path]:
    """Return the points inside the frame as paths of no length, without those that hide others."""
    taken: set[tuple[int, int]] = set()
    paths = []
    for x, y in points:
        # A comparison with what is not finite is false.
        if frame.left <= x <= frame.right and frame.top <= y <= frame.bottom:
            square = (math.floor(x / CROWDED), math.floor(y / CROWDED))
            if square not in taken:
                taken.add(square)
                paths.append([(x, y), (x, y)])
    return paths


def _square_distance(point: Point, start: Point, end: Point) -> float:
    across_x, across_y = end[0] - start[0], end[1] - start[1]
    x, y = point[0] - start[0], point[1] - start[1]
    length = across_x * across_x + across_y * across_y
    part = 0.0 if length == 0.0 else (x * across_x + y * across_y) / length
    part = min(max(part, 0.0), 1.0)
    x, y = x - part * across_x, y - part * across_y
    return x * x + y * y
