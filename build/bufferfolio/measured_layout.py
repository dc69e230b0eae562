"""How a pasted table is laid out: what separates its cells, its decimal mark, headings and units.

The choices are made for the whole text, by what most of its rows do.
"""

import re
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final, Literal

Separator = Literal["tab", "semicolon", "comma", "space"]
Decimal = Literal["point", "comma"]


@dataclass(frozen=True, slots=True)
class Line:
    """One row of a text that holds something."""

    row: int  # counted from one
    text: str


@dataclass(frozen=True, slots=True)
class Cell:
    """A cell without the blanks and quotation marks around it."""

    column: int  # of its first character, counted from one
    text: str


@dataclass(frozen=True, slots=True)
class Misfit:
    """What is wrong at a place, before it is told."""

    line: Line
    column: int
    problem: str
    accepted: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Layout:
    """How a table is laid out."""

    separator: Separator
    decimal: Decimal
    unit: str  # of volume, a key of UNITS
    unit_stated: bool  # whether the heading says so
    headings: int  # rows before the first that holds a number
    columns: int  # cells that a row may have
    volume_column: int  # counted from zero
    pH_column: int


def content_lines(text: str) -> tuple[Line, ...]:
    """Return the rows that hold something; one that begins with # is a remark."""
    rows = enumerate(re.split(r"\r\n|\r|\n", text.removeprefix("\ufeff")), start=1)
    found = (Line(row, line) for row, line in rows)
    return tuple(line for line in found if not NOTHING.fullmatch(line.text))


def layout_of(lines: Sequence[Line], unit: str) -> tuple[Layout | None, list[Misfit]]:
    """Return how a table is laid out, None where there is none, and what is wrong with headings."""
    separator = _separator([line.text for line in lines])
    tables = [cells_of(line.text, separator) for line in lines]
    numeric = [any(_is_number(cell.text) for cell in cells) for cells in tables]
    if True not in numeric:
        first = lines[0] if lines else Line(1, "")
        accepted = "rows of a volume and a pH, such as 12.5; 7.02"
        return None, [Misfit(first, 1, "there are no points", accepted)]
    headings = numeric.index(True)
    columns, volume_column, pH_column, misfits = _columns(lines, tables, headings, separator)
    named, stated, unknown = _unit(lines, tables, headings, separator, volume_column)
    body = tables[headings:]
    layout = Layout(
        separator=separator,
        decimal=_decimal([cell.text for cells in body for cell in cells]),
        unit=named if stated else unit,
        unit_stated=stated,
        headings=headings,
        columns=columns,
        volume_column=volume_column,
        pH_column=pH_column,
    )
    return layout, [*misfits, *unknown]


def cells_of(text: str, separator: Separator) -> tuple[Cell, ...]:
    """Return the cells of a row; empty ones at its end do not count."""
    masked = QUOTED.sub(lambda found: "q" * len(found.group()), text)
    left = 0
    if separator == "space":
        left = len(masked) - len(masked.lstrip(BLANKS))
        masked = masked.rstrip(BLANKS)
    starts, ends = [left], []
    for found in BREAKS[separator].finditer(masked, left):
        ends.append(found.start())
        starts.append(found.end())
    ends.append(len(masked))
    cells = [_cell(text, start, end) for start, end in zip(starts, ends, strict=True)]
    while len(cells) > 1 and cells[-1].text == "":
        cells.pop()
    return tuple(cells)


def _cell(text: str, start: int, end: int) -> Cell:
    content = text[start:end]
    trimmed = content.lstrip(BLANKS)
    start += len(content) - len(trimmed)
    trimmed = trimmed.rstrip(BLANKS)
    if len(trimmed) > 1 and trimmed[0] == trimmed[-1] == '"':
        return Cell(start + 2, trimmed[1:-1].strip(BLANKS))
    return Cell(start + 1, trimmed)


def _separator(texts: Sequence[str]) -> Separator:
    """Return what most rows have between their cells; a blank counts before a comma."""
    masked = [QUOTED.sub("q", text).strip(BLANKS) for text in texts]
    names: tuple[Separator, ...] = ("tab", "semicolon", "space", "comma")
    for name in names:
        if 2 * sum(bool(BREAKS[name].search(text)) for text in masked) > len(masked):
            return name
    return "space"


def _is_number(text: str) -> bool:
    return bool(NUMBER.fullmatch(text) or THOUSANDS.fullmatch(text))


def _decimal(texts: Sequence[str]) -> Decimal:
    numbers = [text for text in texts if NUMBER.fullmatch(text)]
    points = sum("." in text for text in numbers)
    commas = sum("," in text for text in numbers)
    return "comma" if commas > points else "point"


def _columns(
    lines: Sequence[Line],
    tables: Sequence[Sequence[Cell]],
    headings: int,
    separator: Separator,
) -> tuple[int, int, int, list[Misfit]]:
    """Return how many cells a row may have, and which hold volume and pH."""
    for at in reversed(range(headings)):
        if separator == "space":
            # Blanks stand inside headings too: only the order of the two words can be told.
            pH, volume = PH.search(lines[at].text), VOLUME.search(lines[at].text)
            if pH is not None and volume is not None:
                return (2, 1, 0, []) if pH.start() < volume.start() else (2, 0, 1, [])
            continue
        texts = [cell.text for cell in tables[at]]
        pH_column = next((i for i, text in enumerate(texts) if PH.search(text)), None)
        others = [i for i, text in enumerate(texts) if i != pH_column and VOLUME.search(text)]
        if pH_column is not None and others:
            return len(texts), others[0], pH_column, []
        if pH_column is not None and len(texts) == 2:
            return 2, 1 - pH_column, pH_column, []
    count = len(tables[headings])
    if count > 2 and (separator in ("tab", "semicolon") or (headings and separator == "comma")):
        problem = f"no heading says which of the {count} columns are volume and pH"
        place = lines[max(headings - 1, 0)]
        accepted = "a heading such as Volume (mL) and one such as pH"
        return count, 0, 1, [Misfit(place, 1, problem, accepted)]
    return 2, 0, 1, []


def _unit(
    lines: Sequence[Line],
    tables: Sequence[Sequence[Cell]],
    headings: int,
    separator: Separator,
    column: int,
) -> tuple[str, bool, list[Misfit]]:
    """Return the unit that a heading names, whether one does, and a complaint of an unknown one."""
    for at in reversed(range(headings)):
        if separator == "space":
            cell = Cell(1, lines[at].text)
        elif column < len(tables[at]):
            cell = tables[at][column]
        else:
            continue
        found = UNIT.search(cell.text)
        if found is not None:
            return SPELLINGS[found.group(1).lower()], True, []
        if separator != "space" and (strange := STRANGE_UNIT.search(cell.text)) is not None:
            problem = f"the volume has the unknown unit '{strange.group(1)}'"
            return "mL", False, [Misfit(lines[at], cell.column, problem, ", ".join(UNITS))]
    return "mL", False, []


UNITS: Final = {"µL": 1e-9, "mL": 1e-6, "L": 1e-3, "m3": 1.0}  # m3 each
SPELLINGS: Final = {
    "µl": "µL", "μl": "µL", "ul": "µL", "ml": "mL", "cm3": "mL", "cm³": "mL", "cc": "mL",
    "l": "L", "dm3": "L", "dm³": "L", "m3": "m3", "m³": "m3",
}  # fmt: skip
BLANKS: Final = " \t\u00a0\u2007\u2009\u202f"
NOTHING: Final = re.compile(rf'[{BLANKS};,"]*(#[^\n]*)?')
QUOTED: Final = re.compile(r'"[^"]*"')
BREAKS: Final = {
    "tab": re.compile(r"\t"),
    "semicolon": re.compile(r";"),
    "comma": re.compile(r","),
    "space": re.compile(rf"[{BLANKS}]*,[{BLANKS}]+|[{BLANKS}]+,?"),
}
NUMBER: Final = re.compile(r"[-+−]?(?:[0-9]+(?:[.,][0-9]*)?|[.,][0-9]+)(?:[eE][-+−]?[0-9]+)?")
THOUSANDS: Final = re.compile(
    rf"[-+−]?(?:[0-9]{{1,3}}(?:['’{BLANKS}][0-9]{{3}})+(?:[.,][0-9]*)?"
    r"|[0-9]{1,3}(?:,[0-9]{3})+\.[0-9]*|[0-9]{1,3}(?:\.[0-9]{3})+,[0-9]*"
    r"|[0-9]{1,3}(?:,[0-9]{3}){2,}|[0-9]{1,3}(?:\.[0-9]{3}){2,})"
)
PH: Final = re.compile(r"(?:^|[^a-z])ph(?![a-z])|reading", re.IGNORECASE | re.ASCII)
VOLUME: Final = re.compile(
    r"vol|added|titrant|buret|(?:^|[^a-z])v(?![a-z])|(?:^|[^a-zµμ])[mµμu]?l(?![a-z])",
    re.IGNORECASE | re.ASCII,
)
# U+FFFD stands for a letter that was not UTF-8: "�L" must not be read as litres.
UNIT: Final = re.compile(
    r"(?:^|[^A-Za-zµμ\ufffd])([µμu]l|ml|cm3|cm³|cc|dm3|dm³|m3|m³|l)(?![A-Za-z0-9³\ufffd])",
    re.IGNORECASE | re.ASCII,
)
STRANGE_UNIT: Final = re.compile(r"[(\[/][ ]*([A-Za-zµμ\ufffd]{1,8}[0-9³]?)[ ]*(?:[)\]]|$)")
