"""Writing a generated folder: all of it or nothing, and never over somebody else's files.

A folder that was written here carries README.txt, whose first line is the mark, and contents.txt,
which lists every file with its SHA-256 (`sha256sum --check contents.txt` proves a copy).
"""

import hashlib
import os
import shutil
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Final

from bufferfolio.errors import BufferfolioError


class CannotWrite(BufferfolioError):
    """A folder cannot be written, or should not be."""


@contextmanager
def replace_folder(out: Path) -> Iterator[Path]:
    """Yield an empty folder beside `out`; when the block ends well, it takes the place of `out`.

    When the block fails or is interrupted, `out` stays as it was. README.txt and contents.txt are
    added here. Raises CannotWrite where `out` holds anything that was not written this way.
    """
    out = out.resolve()
    _refuse_foreign(out)
    fresh = out.with_name(f".{out.name}.new-{os.getpid()}")
    try:
        out.parent.mkdir(parents=True, exist_ok=True)
        shutil.rmtree(fresh, ignore_errors=True)
        fresh.mkdir()
    except OSError as problem:
        raise CannotWrite(f"cannot write beside {out}: {problem.strerror}") from problem
    try:
        yield fresh
        _write_notes(fresh)
        _swap(fresh, out)
    finally:
        shutil.rmtree(fresh, ignore_errors=True)


def _refuse_foreign(out: Path) -> None:
    if not out.exists():
        return
    if not out.is_dir():
        raise CannotWrite(f"{out} is a file; give the name of a folder")
    present = {path.relative_to(out).as_posix() for path in out.rglob("*") if not path.is_dir()}
    foreign = sorted(name for name in present - _own_files(out) if Path(name).name not in DROPPINGS)
    if foreign:
        shown = ", ".join(foreign[:3]) + (f" and {len(foreign) - 3} more" if foreign[3:] else "")
        problem = f"{out} holds files that bufferfolio did not write ({shown})"
        raise CannotWrite(f"{problem}; move them away or choose another folder")


def _own_files(out: Path) -> set[str]:
    readme, contents = out / "README.txt", out / "contents.txt"
    if not readme.is_file() or _text(readme).split("\n", 1)[0].strip() != MARK:
        return set()
    listed = _text(contents).splitlines() if contents.is_file() else []
    return {"README.txt", "contents.txt", *(line.partition("  ")[2] for line in listed)}


def _text(path: Path) -> str:
    return path.read_text(encoding="utf-8", errors="replace")


def _write_notes(folder: Path) -> None:
    (folder / "README.txt").write_text(README, encoding="utf-8", newline="\n")
    files = sorted(path for path in folder.rglob("*") if path.is_file())
    lines = (
        f"{hashlib.sha256(path.read_bytes()).hexdigest()}  {path.relative_to(folder).as_posix()}\n"
        for path in files
    )
    (folder / "contents.txt").write_text("".join(sorted(lines, key=_name)), "utf-8", newline="\n")


def _name(line: str) -> str:
    # By name as text, not as a path: folders sort differently on Windows.
    return line.partition("  ")[2]


def _swap(fresh: Path, out: Path) -> None:
    old = out.with_name(f".{out.name}.old-{os.getpid()}")
    try:
        if out.exists():
            out.rename(old)
        fresh.rename(out)
    except OSError as problem:
        raise CannotWrite(f"cannot replace {out}; does a program hold it open?") from problem
    finally:
        # Also when interrupted between the two: the folder that was there comes back.
        if old.exists() and not out.exists():
            old.rename(out)
    shutil.rmtree(old, ignore_errors=True)


MARK: Final = "This folder is written by bufferfolio."

README: Final = f"""{MARK}

Open index.html in a browser. The pages need no internet and no other program; copy the whole
folder to take them elsewhere. contents.txt lists every file with its SHA-256, so that

    sha256sum --check contents.txt

run in this folder proves that a copy is whole.

Do not change or add files here: the next build replaces the folder. The formulations are written as
YAML in systems/, and either of

    python3 build/make_site.py      in the project's folder
    bufferfolio build               where bufferfolio is installed

builds the pages again.
"""

# What desktops leave in folders that people look into; losing them harms nobody.
DROPPINGS: Final = frozenset({".DS_Store", "Thumbs.db", "desktop.ini"})
