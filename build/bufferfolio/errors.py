"""The build's own exceptions, and the place in a file that each of them blames."""

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Final


@dataclass(frozen=True, slots=True, order=True)
class Place:
    """A position in an input file, counted from one as editors count."""

    file: str
    line: int
    column: int

    def __str__(self) -> str:
        return f"{self.file}:{self.line}:{self.column}"


class BufferfolioError(Exception):
    """Something that a user of the project can put right."""


class DefinitionError(BufferfolioError):
    """One thing that is wrong in one definition file."""

    def __init__(
        self, place: Place, problem: str, *, accepted: str, line_text: str | None = None
    ) -> None:
        super().__init__(f"{place}: {problem}")
        self.place = place
        self.problem = problem
        self.accepted = accepted
        self.line_text = line_text  # the line of the file that is blamed; None: no line to show


class DefinitionErrors(BufferfolioError):
    """Everything that is wrong in a set of definition files, sorted by place."""

    def __init__(self, errors: Iterable[DefinitionError]) -> None:
        self.errors = tuple(sorted(errors, key=lambda error: (error.place, error.problem)))
        super().__init__("\n\n".join(render(error) for error in self.errors))


def render(error: DefinitionError) -> str:
    """Return the whole complaint: place and problem, the line with a caret, what would do."""
    parts = [str(error)]
    if error.line_text is not None:
        before, shown = _excerpt(error.line_text, error.place.column)
        parts.append(f"{error.place.line:5d} | {shown}".rstrip())
        parts.append(f"      | {' ' * before}^")
    parts.append(f"accepted: {error.accepted}")
    return "\n".join(parts)


def _excerpt(line: str, column: int) -> tuple[int, str]:
    start = max(0, column - 1 - LINE_WIDTH // 2) if len(line) > LINE_WIDTH else 0
    cut = line[start : start + LINE_WIDTH]
    # Characters that would move the caret or the terminal's cursor become blanks.
    clean = "".join(letter if letter.isprintable() else " " for letter in cut)
    left = "…" if start else ""
    right = "…" if start + LINE_WIDTH < len(line) else ""
    return column - 1 - start + len(left), left + clean + right


class OutOfRange(BufferfolioError):
    """A condition lies outside the range that a constant or an equation is vouched for."""


LINE_WIDTH: Final = 100  # of a source line in a complaint; a longer one is cut around the caret
