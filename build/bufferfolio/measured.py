"""Measured points from text that was pasted or opened: volumes of titrant, readings of the meter.

Spreadsheets and meters write tables in many manners. What separates cells and which decimal mark is
meant is decided once for the whole text (`measured_layout`), and every cell is then held to it: one
that does not fit is pointed at, never guessed. `js/measured.js` says the same, word for word.
"""

import math
import re
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final, Literal

import numpy as np

from bufferfolio.measured_layout import (
    NUMBER,
    THOUSANDS,
    UNITS,
    Cell,
    Layout,
    Line,
    Misfit,
    cells_of,
    content_lines,
    layout_of,
)
from bufferfolio.water import FloatArray

MOST_POINTS: Final = 5000
LOWEST_PH: Final = -1.0
HIGHEST_PH: Final = 15.0
READING: Final = 0.02  # pH; standard uncertainty of a reading where nothing is said
BURETTE_SHARE: Final = 1e-3  # of the largest volume: that of a volume where nothing is said
Quantity = Literal["volume", "pH"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Points:
    """What was measured, in the order of addition."""

    volume: FloatArray  # n, m3 of titrant added so far
    pH: FloatArray  # n, as the meter said
    rows: tuple[int, ...]  # of the text, counted from one


@dataclass(frozen=True, slots=True, kw_only=True)
class Precision:
    """How well one reads."""

    pH: float  # standard uncertainty of a reading
    volume: float  # m3, of a volume


@dataclass(frozen=True, slots=True, kw_only=True)
class Complaint:
    """One thing that is wrong with the text, and where."""

    row: int  # counted from one
    column: int  # in characters, counted from one
    problem: str
    accepted: str
    line: str  # the whole row


@dataclass(frozen=True, slots=True, kw_only=True)
class Parsed:
    """What a text holds: points where nothing is wrong with it, else every complaint."""

    points: Points | None
    layout: Layout | None  # None where there is not even a table
    complaints: tuple[Complaint, ...]


def text_of(content: bytes) -> str:
    """Return the text of a file: UTF-8, or UTF-16 where the file begins by saying so."""
    for mark, encoding in ((b"\xff\xfe", "utf-16-le"), (b"\xfe\xff", "utf-16-be")):
        if content.startswith(mark):
            return content[len(mark) :].decode(encoding, errors="replace")
    return content.decode("utf-8", errors="replace").removeprefix("\ufeff")


def parsed(text: str, unit: str = "mL") -> Parsed:
    """Return the points of a text; `unit` is that of volumes whose heading names none."""
    lines = content_lines(text)
    layout, misfits = layout_of(lines, unit)
    if layout is None:
        return Parsed(points=None, layout=None, complaints=tuple(map(_complaint, misfits)))
    body = lines[layout.headings :]
    if len(body) > MOST_POINTS:
        misfits = [*misfits, _too_many(body[MOST_POINTS])]
    rows, wrong = _rows(body[:MOST_POINTS], layout)
    complaints = tuple(map(_complaint, sorted([*misfits, *wrong], key=_place)))
    if complaints:
        return Parsed(points=None, layout=layout, complaints=complaints)
    factor = UNITS[layout.unit]
    points = Points(
        volume=np.array([volume * factor for volume, _ in rows]),
        pH=np.array([pH for _, pH in rows]),
        rows=tuple(line.row for line in body),
    )
    return Parsed(points=points, layout=layout, complaints=())


def default_precision(points: Points) -> Precision:
    """Return the precision that is taken where none is stated."""
    return Precision(pH=READING, volume=BURETTE_SHARE * float(np.max(points.volume, initial=0.0)))


def told(complaint: Complaint) -> str:
    """Return a complaint as one sentence for the page."""
    return (
        f"row {complaint.row}, column {complaint.column}: {complaint.problem}; "
        f"accepted: {complaint.accepted}"
    )


def _place(misfit: Misfit) -> tuple[int, int]:
    return misfit.line.row, misfit.column


def _complaint(misfit: Misfit) -> Complaint:
    return Complaint(
        row=misfit.line.row,
        column=misfit.column,
        problem=misfit.problem,
        accepted=misfit.accepted,
        line=misfit.line.text,
    )


def _too_many(line: Line) -> Misfit:
    problem = f"there are more than {MOST_POINTS} rows of points"
    return Misfit(line, 1, problem, f"at most {MOST_POINTS}: leave out some, or paste a part")


def _rows(body: Sequence[Line], layout: Layout) -> tuple[list[tuple[float, float]], list[Misfit]]:
    """Return the numbers of every sound row, and what is wrong with the others."""
    found: list[tuple[float, float]] = []
    wrong: list[Misfit] = []
    last: tuple[float, str] = (-math.inf, "")
    for line in body:
        cells = cells_of(line.text, layout.separator)
        count = _count_misfit(line, cells, layout)
        if count is not None:
            wrong.append(count)
            continue
        cell = cells[layout.volume_column]
        volume = _number(line, cell, "volume", layout)
        if not isinstance(volume, Misfit) and volume < last[0]:
            problem = (
                f"the volume is smaller than {_quoted(last[1])} before it: {_quoted(cell.text)}"
            )
            volume = Misfit(line, cell.column, problem, "volumes in the order of addition")
        pH = _number(line, cells[layout.pH_column], "pH", layout)
        wrong += [each for each in (volume, pH) if isinstance(each, Misfit)]
        if not isinstance(volume, Misfit):
            last = (volume, cell.text)
            if not isinstance(pH, Misfit):
                found.append((volume, pH))
    return found, wrong


def _count_misfit(line: Line, cells: Sequence[Cell], layout: Layout) -> Misfit | None:
    """Say what is wrong with the number of cells in a row, if anything is."""
    needed = max(layout.volume_column, layout.pH_column) + 1
    if needed <= len(cells) <= layout.columns:
        return None
    count = "1 cell" if len(cells) == 1 else f"{len(cells)} cells"
    if len(cells) < needed:
        problem = f"the row has {count}, and a volume and a pH are needed"
        return Misfit(line, cells[0].column, problem, ACCEPTED_ROW)
    problem = f"the row has {count} where {layout.columns} are expected"
    accepted = ACCEPTED_COMMAS if layout.separator == "comma" else ACCEPTED_ROW
    return Misfit(line, cells[layout.columns].column, problem, accepted)


def _number(line: Line, cell: Cell, quantity: Quantity, layout: Layout) -> float | Misfit:
    """Return the number in a cell, or what is wrong with it."""
    problem = _problem(cell.text, quantity, layout)
    if problem is not None:
        return Misfit(line, cell.column, f"the {quantity} {problem[0]}", problem[1])
    return float(_plain(cell.text))


def _problem(text: str, quantity: Quantity, layout: Layout) -> tuple[str, str] | None:
    if text == "":
        return "is missing", EXAMPLES[quantity]
    if THOUSANDS.fullmatch(text):
        return f"has a thousands separator: {_quoted(text)}", "a number such as 1250.5"
    if not NUMBER.fullmatch(text):
        if NUMBER.match(text) and LETTERS.search(text):
            return f"has something beside the number: {_quoted(text)}", ACCEPTED_BARE
        return f"is not a number: {_quoted(text)}", EXAMPLES[quantity]
    strange = "," if layout.decimal == "point" else "."
    if strange in text:
        return DECIMALS[layout.decimal] + _quoted(text), "one decimal mark, no thousands separators"
    value = float(_plain(text))
    if not math.isfinite(value):
        return f"is not a finite number: {_quoted(text)}", EXAMPLES[quantity]
    if quantity == "volume" and value < 0.0:
        return f"is negative: {_quoted(text)}", "volumes from 0 up"
    if quantity == "pH" and not LOWEST_PH <= value <= HIGHEST_PH:
        return f"is out of bounds: {_quoted(text)}", "a reading from -1 to 15"
    return None


def _plain(text: str) -> str:
    return text.replace(",", ".").replace("−", "-")


def _quoted(text: str) -> str:
    cut = text if len(text) <= LONGEST_QUOTE else text[:LONGEST_QUOTE] + "…"
    return "'" + CONTROL.sub(" ", cut) + "'"


LONGEST_QUOTE: Final = 40
LETTERS: Final = re.compile("[A-Za-zµμ%°³]$")
CONTROL: Final = re.compile("[\u0000-\u001f\u007f-\u009f]")
EXAMPLES: Final = {"volume": "a number such as 12.5", "pH": "a number such as 7.02"}
DECIMALS: Final = {
    "point": "has a comma where the other numbers have points: ",
    "comma": "has a point where the other numbers have commas: ",
}
ACCEPTED_BARE: Final = "a number alone; the unit stands in the heading"
ACCEPTED_ROW: Final = "a volume and a pH in each row; more columns only below a heading"
ACCEPTED_COMMAS: Final = "semicolons or tabs between cells where numbers have decimal commas"
