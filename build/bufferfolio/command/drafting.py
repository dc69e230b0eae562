"""`bufferfolio new`: a commented definition to fill in, which `check` accepts as it stands."""

import re
from pathlib import Path
from typing import Final

from bufferfolio import resources
from bufferfolio.command.arguments import LOCAL_SYSTEMS, Arguments, CommandLineError, ExitCode
from bufferfolio.reading.fields import KEY, KEY_RULE


def new(arguments: Arguments) -> ExitCode:
    """Write one draft, and the source it cites; never over a file that is there."""
    kind, name = arguments.kind, arguments.name
    if not re.fullmatch(KEY, name):
        raise CommandLineError(f"{name!r} cannot be the name of a {kind}\naccepted: {KEY_RULE}")
    systems = arguments.systems or LOCAL_SYSTEMS
    path = systems / FOLDERS[kind] / f"{name}.yaml"
    # A folder's formulations are its own; families and reagents add to those that are shipped.
    shipped = resources.systems() / FOLDERS[kind] / f"{name}.yaml"
    if path.exists() or (kind != "formulation" and shipped.exists()):
        where = path if path.exists() else "the shipped library"
        raise CommandLineError(f"there is a {kind} {name!r} already ({where})")
    text = (DRAFTS / f"{kind}.yaml").read_text(encoding="utf-8").replace("NAME", name)
    path.parent.mkdir(parents=True, exist_ok=True)
    with path.open("x", encoding="utf-8", newline="\n") as file:
        file.write(text)
    print(f"wrote {path}: fill it in, then run: bufferfolio check {systems}")
    if f"source: {UNNAMED}" in text and _add_source(systems / "sources.yaml"):
        print(
            f"added {UNNAMED!r} to {systems / 'sources.yaml'}: the work that is still to be named"
        )
    return ExitCode.DONE


def _add_source(sources: Path) -> bool:
    """Add the entry that stands for a work still to be named; say whether it was missing."""
    text = sources.read_text(encoding="utf-8") if sources.is_file() else ""
    if re.search(rf"(?m)^{UNNAMED}\s*:", text):
        return False
    gap = "" if text.endswith("\n") or not text else "\n"
    with sources.open("a", encoding="utf-8", newline="\n") as file:
        file.write(f"{gap}{UNNAMED}:\n  cite: To be named\n")
    return True


DRAFTS: Final = Path(__file__).parent / "drafts"
UNNAMED: Final = "to-be-named"
FOLDERS: Final = {"family": "families", "reagent": "reagents", "formulation": "formulations"}
