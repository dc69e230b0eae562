"""Finding definition files and reading their text."""

import os
import stat
from collections.abc import Iterator
from pathlib import Path
from typing import Final

from bufferfolio.errors import DefinitionError, DefinitionErrors, Place
from bufferfolio.reading.nodes import Document, compose


def load(path: Path) -> Document:
    """Return the YAML tree of one file; raises DefinitionErrors where it cannot be read."""
    return compose(_text(path), shown(path))


def shown(path: Path) -> str:
    """Return a file's name as messages print it: from the current folder on, with slashes."""
    try:
        return path.relative_to(Path.cwd()).as_posix()
    except ValueError:
        return path.as_posix()


def definition_files(folder: Path) -> Iterator[Path]:
    """Yield every file of `folder` and the folders in it that may be a definition, sorted."""
    found = []
    for parent, folders, names in os.walk(folder, followlinks=False):
        folders[:] = [name for name in folders if not name.startswith(".")]
        found += [Path(parent, name) for name in names if _is_candidate(name)]
    yield from sorted(found, key=lambda path: path.relative_to(folder).parts)


def _is_candidate(name: str) -> bool:
    return not name.startswith(".") and name.lower().endswith((".yaml", ".yml"))


def whole_file_error(path: Path, problem: str, accepted: str) -> DefinitionErrors:
    """Return a complaint about a file or a folder as a whole."""
    place = Place(shown(path), 1, 1)
    return DefinitionErrors([DefinitionError(place, problem, accepted=accepted)])


def _text(path: Path) -> str:
    raw = content(path)
    try:
        return raw.decode("utf-8-sig")
    except UnicodeDecodeError as problem:
        before = raw[: problem.start].decode("utf-8-sig", errors="replace")
        line = before.count("\n") + 1
        column = len(before) - before.rfind("\n")
        found = f"byte 0x{raw[problem.start]:02X} is not UTF-8 text"
        place = Place(shown(path), line, column)
        error = DefinitionError(place, found, accepted="a file saved with the encoding UTF-8")
        raise DefinitionErrors([error]) from None


def content(path: Path) -> bytes:
    """Return the bytes of a file; raises DefinitionErrors where that is no sensible file."""
    try:
        status = path.stat()
        if not stat.S_ISREG(status.st_mode):
            raise whole_file_error(path, "this is not a file", "a YAML file")
        if status.st_size > LARGEST:
            problem = f"the file is too large ({status.st_size} bytes)"
            raise whole_file_error(path, problem, f"at most {LARGEST} bytes")
        return path.read_bytes()
    except FileNotFoundError:
        raise whole_file_error(path, "there is no such file", "the name of a file") from None
    except (OSError, ValueError) as problem:
        reason = getattr(problem, "strerror", None) or str(problem)
        problem_text = f"the file cannot be read: {reason}"
        raise whole_file_error(path, problem_text, "a file that may be read") from None


LARGEST: Final = 1_000_000  # bytes; the longest shipped file has a few thousand
