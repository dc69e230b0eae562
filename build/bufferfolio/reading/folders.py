"""Which file defines which key, and which files have no business in the folder."""

import re
from pathlib import Path
from typing import Final

from bufferfolio.errors import DefinitionError, DefinitionErrors
from bufferfolio.reading.fields import KEY, KEY_RULE
from bufferfolio.reading.files import content, definition_files, shown, whole_file_error
from bufferfolio.reading.quantities import suggestion


def files_by_key(kind: str, folders: list[Path], errors: list[DefinitionError]) -> dict[str, Path]:
    """Return the file of each key of one kind ("families"); later folders add to earlier ones."""
    found: dict[str, Path] = {}
    for folder in folders:
        if not (folder / kind).exists():
            continue
        if not (folder / kind).is_dir():
            errors += whole_file_error(folder / kind, "this is not a folder", f"{kind}/").errors
            continue
        for path in definition_files(folder / kind):
            problem = _misnamed(path)
            if problem is not None:
                errors += problem.errors
            elif path.stem not in found:
                found[path.stem] = path
            elif not _same(found[path.stem], path):
                text = f"{path.stem!r} is already defined in {shown(found[path.stem])}"
                errors += whole_file_error(path, text, "another file name").errors
    return found


def _misnamed(path: Path) -> DefinitionErrors | None:
    if path.suffix != ".yaml":
        return whole_file_error(path, f"the file name ends in {path.suffix!r}", "the ending .yaml")
    if not re.fullmatch(KEY, path.stem):
        return whole_file_error(path, f"{path.stem!r} cannot be a key", KEY_RULE)
    return None


def _same(first: Path, second: Path) -> bool:
    try:
        return content(first) == content(second)
    except DefinitionErrors:
        return False


def refuse_strangers(folder: Path, errors: list[DefinitionError]) -> None:
    """Complain about YAML files and misspelt folders that nothing would read."""
    known = False
    for path in sorted(folder.iterdir()):
        name = path.name
        known = known or name in FOLDERS or name in FILES
        if name.startswith(".") or name in FOLDERS or name in FILES:
            continue
        if path.is_dir():
            close = suggestion(name, FOLDERS)
            if close:
                problem = f"unknown folder{close}"
                errors += whole_file_error(path, problem, ", ".join(FOLDERS)).errors
        elif name.lower().endswith((".yaml", ".yml")):
            problem = f"a file of this name is not read{suggestion(name, FILES)}"
            accepted = f"{', '.join(FILES)}; all other definitions in {', '.join(FOLDERS)}"
            errors += whole_file_error(path, problem, accepted).errors
    if not known and not errors:
        accepted = f"a folder with {', '.join((*FOLDERS, *FILES))}, or some of them"
        errors += whole_file_error(folder, "the folder holds no definitions", accepted).errors


FOLDERS: Final = ("families", "reagents", "formulations", "evidence")
FILES: Final = ("sources.yaml", "interactions.yaml")
