"""CSV text to rows in which every cell knows its place.

One row a line, commas between cells, quotation marks around a cell that holds a comma; a quotation
mark inside such a cell is written twice. The first line names the columns.
"""

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Final

from bufferfolio.errors import DefinitionError, DefinitionErrors, Place
from bufferfolio.reading.files import content, shown, whole_file_error
from bufferfolio.reading.nodes import complaint
from bufferfolio.reading.quantities import suggestion


@dataclass(frozen=True, slots=True)
class Cell:
    """One value of a table."""

    text: str
    place: Place


@dataclass(frozen=True, slots=True)
class Sheet:
    """One file as it was read: every row has all the columns of the first line."""

    lines: tuple[str, ...]
    columns: tuple[str, ...]
    rows: tuple[Mapping[str, Cell], ...]

    def error(self, place: Place, problem: str, accepted: str) -> DefinitionError:
        """Return the complaint about a place, with the line it blames."""
        return complaint(self.lines, place, problem, accepted)


def load_csv(path: Path, known: Sequence[str]) -> Sheet:
    """Return a file's rows, whose columns are some of `known`; raises DefinitionErrors."""
    file = shown(path)
    try:
        text = content(path).decode("utf-8-sig")
    except UnicodeDecodeError:
        raise whole_file_error(path, "the file is not UTF-8 text", ENCODING) from None
    lines = tuple(text.splitlines())
    errors: list[DefinitionError] = []
    head = _cells(lines, 0, file, errors) if lines else ()
    columns = _columns(lines, head, known, file, errors)
    rows = []
    for number in range(1, len(lines)):
        if not lines[number].strip():
            continue
        before = len(errors)
        cells = _cells(lines, number, file, errors)
        if len(errors) > before:
            continue
        if len(cells) != len(head):
            problem = f"the row has {_cells_counted(len(cells))}, the first line {len(head)}"
            place = Place(file, number + 1, 1)
            errors.append(complaint(lines, place, problem, ",".join(columns)))
            continue
        rows.append({cell.text: value for cell, value in zip(head, cells, strict=True)})
    if errors:
        raise DefinitionErrors(errors)
    if not rows:
        raise whole_file_error(path, "the table has no rows", "a row for each published number")
    return Sheet(lines, columns, tuple(rows))


def _columns(
    lines: tuple[str, ...],
    head: Sequence[Cell],
    known: Sequence[str],
    file: str,
    errors: list[DefinitionError],
) -> tuple[str, ...]:
    accepted = ", ".join(known)
    if not head:
        errors.append(DefinitionError(Place(file, 1, 1), "the file is empty", accepted=accepted))
    seen: set[str] = set()
    for cell in head:
        if cell.text not in known:
            problem = f"unknown column {cell.text!r}{suggestion(cell.text, known)}"
            errors.append(complaint(lines, cell.place, problem, accepted))
        elif cell.text in seen:
            problem = f"the column {cell.text!r} stands here twice"
            errors.append(complaint(lines, cell.place, problem, "each column once"))
        seen.add(cell.text)
    return tuple(cell.text for cell in head)


def _cells(
    lines: tuple[str, ...], number: int, file: str, errors: list[DefinitionError]
) -> tuple[Cell, ...]:
    line, at = lines[number], 0
    found: list[Cell] = []
    while True:
        match = CELL.match(line, at)
        end = match.end() if match else at
        if match is None or (end < len(line) and line[end] != ","):
            place = Place(file, number + 1, at + 1)
            problem = "a quotation mark is not closed, or stands inside a cell"
            errors.append(complaint(lines, place, problem, QUOTING))
            return tuple(found)
        text = match.group()
        if text.startswith('"'):
            text = text[1:-1].replace('""', '"')
        found.append(Cell(text.strip(), Place(file, number + 1, at + 1)))
        if end == len(line):
            return tuple(found)
        at = end + 1


def _cells_counted(count: int) -> str:
    return "1 cell" if count == 1 else f"{count} cells"


CELL: Final = re.compile(r'"(?:[^"]|"")*"|[^",]*')
QUOTING: Final = 'quotation marks around the whole cell, and "" for one inside'
ENCODING: Final = "a file saved with the encoding UTF-8"
