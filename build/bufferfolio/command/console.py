"""How the command talks: encodings, tables, progress."""

import io
import sys
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from typing import Final

from tqdm import tqdm


def speak_utf8() -> None:
    """Make the output UTF-8 whatever the console's habit, and never fail on a character."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(encoding="utf-8", errors="replace")


@contextmanager
def progress(total: int) -> Iterator[Callable[[str], None]]:
    """Yield what to call before each piece of work: a bar on a terminal, plain lines elsewhere."""
    if not sys.stderr.isatty():
        yield lambda name: print(name, file=sys.stderr, flush=True)
        return
    with tqdm(total=total, file=sys.stderr, leave=False, dynamic_ncols=True) as bar:
        begun = 0

        def advance(name: str) -> None:
            # What is named is only begun: the piece before it is done.
            nonlocal begun
            bar.set_description_str(name[:NAME_WIDTH].ljust(NAME_WIDTH), refresh=False)
            bar.update(min(begun, 1))
            begun += 1

        yield advance
        bar.update(min(begun, 1))


def counted(number: int, noun: str) -> str:
    """Return a number with its noun in the right form."""
    return f"{number} {noun}" if number == 1 else f"{number} {noun}s"


def table(head: Sequence[str], rows: Sequence[Sequence[str]], right: frozenset[int]) -> str:
    """Return rows as aligned text; the columns numbered in `right` stand flush right."""
    widths = [max(len(row[column]) for row in [head, *rows]) for column in range(len(head))]

    def line(row: Sequence[str]) -> str:
        cells = (
            cell.rjust(width) if column in right else cell.ljust(width)
            for column, (cell, width) in enumerate(zip(row, widths, strict=True))
        )
        return "  ".join(cells).rstrip()

    return "\n".join([line(head), *(line(row) for row in rows)])


NAME_WIDTH: Final = 32  # so that the bar stands still
