"""How the command talks: encodings, tables, progress."""

import io
import sys
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from typing import Protocol

from tqdm import tqdm


class Progress(Protocol):
    """Called before each piece of work: how many are done, of how many, and which comes now."""

    def __call__(self, done: int, total: int, name: str) -> None:
        """Show where the work stands."""


def speak_utf8() -> None:
    """Make the output UTF-8 whatever the console's habit, and never fail on a character."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(encoding="utf-8", errors="replace")


@contextmanager
def progress() -> Iterator[Progress]:
    """Yield a progress display: a bar on a terminal, plain lines elsewhere; both on stderr."""
    if not sys.stderr.isatty():
        yield _print_line
        return
    with tqdm(file=sys.stderr, leave=False, unit="page", dynamic_ncols=True) as bar:

        def advance(done: int, total: int, name: str) -> None:
            bar.total = total
            bar.set_postfix_str(name, refresh=False)
            bar.update(done - bar.n)

        yield advance


def _print_line(done: int, total: int, name: str) -> None:
    print(f"{done + 1}/{total} {name}", file=sys.stderr, flush=True)


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
