"""What the command line may say, and what the exit codes mean."""

import argparse
from collections.abc import Sequence
from dataclasses import dataclass
from enum import IntEnum
from importlib.metadata import PackageNotFoundError, version
from pathlib import Path
from typing import Final, Literal, NoReturn

from bufferfolio import resources
from bufferfolio.errors import BufferfolioError

Kind = Literal["family", "reagent", "formulation"]


class ExitCode(IntEnum):
    """How the command ended."""

    DONE = 0
    WRONG_INPUT = 1
    WRONG_COMMAND_LINE = 2
    STRICT_WARNING = 3
    STOPPED = 130  # what shells report after Ctrl-C


class CommandLineError(BufferfolioError):
    """Something on the command line is wrong that only shows once files have been read."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Arguments:
    """The command line, read. What an action does not know has its default here."""

    action: Literal["check", "build", "predict", "fit", "evidence", "new"]
    systems: Path | None  # None: nothing was said; see `chosen_systems`
    out: Path
    strict: bool
    formulation: str
    temperatures: tuple[str, ...]
    additions: tuple[str, ...]
    data: Path
    unit: str
    titrant: str
    sample_volume: str
    free: tuple[str, ...]
    reading_uncertainty: str
    volume_uncertainty: str
    json: bool
    kind: Kind
    name: str


def chosen_systems(arguments: Arguments) -> Path:
    """Return the folder of definitions: the one named, else ./systems, else the shipped library."""
    if arguments.systems is not None:
        if not arguments.systems.is_dir():
            raise CommandLineError(f"there is no folder {arguments.systems}")
        return arguments.systems
    return LOCAL_SYSTEMS if LOCAL_SYSTEMS.is_dir() else resources.systems()


def parse(words: Sequence[str]) -> Arguments:
    """Return the arguments in `words`; ends the program with a message where they are wrong."""
    said = vars(_parser().parse_args(words))
    return Arguments(
        action=said["action"],
        systems=said.get("systems"),
        out=said.get("out", DEFAULT_OUT),
        strict=said.get("strict", False),
        formulation=said.get("formulation", ""),
        temperatures=_listed(said.get("temperature", ())),
        additions=tuple(said.get("add", ())),
        data=said.get("data", Path()),
        unit=said.get("unit", "mL"),
        titrant=said.get("titrant", ""),
        sample_volume=said.get("sample_volume", ""),
        free=tuple(said.get("free", DEFAULT_FREE).split(",")),
        reading_uncertainty=said.get("reading_uncertainty", ""),
        volume_uncertainty=said.get("volume_uncertainty", ""),
        json=said.get("json", False),
        kind=said.get("kind", "formulation"),
        name=said.get("name", ""),
    )


def _listed(said: Sequence[str] | str) -> tuple[str, ...]:
    """Return what was said once or several times."""
    return ((said,) if said else ()) if isinstance(said, str) else tuple(said)


class _Parser(argparse.ArgumentParser):
    """A parser whose complaint ends with where to read on."""

    def error(self, message: str) -> NoReturn:
        self.exit(ExitCode.WRONG_COMMAND_LINE, f"{self.prog}: {message}\nsee {self.prog} --help\n")


def _parser() -> argparse.ArgumentParser:
    parser = _Parser(
        prog="bufferfolio",
        description="Buffered formulations, from YAML to numbers and to an offline site.",
        epilog=EXIT_CODES,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    parser.add_argument("--version", action="version", version=f"bufferfolio {_version()}")
    actions = parser.add_subparsers(dest="action", required=True, metavar="ACTION")
    _add_check(actions)
    _add_build(actions)
    _add_predict(actions)
    _add_fit(actions)
    _add_evidence(actions)
    _add_new(actions)
    return parser


def _version() -> str:
    try:
        return version("bufferfolio")
    except PackageNotFoundError:
        return "(run from its sources, not installed)"


Actions = argparse._SubParsersAction  # argparse has no public name for what add_subparsers returns


def _action(actions: "Actions[_Parser]", name: str, summary: str, examples: str) -> _Parser:
    return actions.add_parser(
        name,
        help=summary,
        description=f"{summary[0].upper()}{summary[1:]}.",
        epilog=f"examples:\n{examples}\n\n{EXIT_CODES}",
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )


def _add_check(actions: "Actions[_Parser]") -> None:
    examples = "  bufferfolio check\n  bufferfolio check my-systems"
    parser = _action(actions, "check", "read every definition, one line a file", examples)
    parser.add_argument("systems", nargs="?", type=Path, metavar="SYSTEMS", help=SYSTEMS_HELP)


def _add_build(actions: "Actions[_Parser]") -> None:
    examples = "  bufferfolio build\n  bufferfolio build my-systems --out my-site --strict"
    parser = _action(actions, "build", "write the site as a folder of pages", examples)
    parser.add_argument("systems", nargs="?", type=Path, metavar="SYSTEMS", help=SYSTEMS_HELP)
    parser.add_argument(
        "--out",
        type=Path,
        default=DEFAULT_OUT,
        metavar="FOLDER",
        help="folder to write, dist where nothing is said; replaced as a whole",
    )
    parser.add_argument("--strict", action="store_true", help="end with code 3 on any warning")


def _add_predict(actions: "Actions[_Parser]") -> None:
    examples = (
        "  bufferfolio predict tris-assay\n"
        '  bufferfolio predict tris-assay --temperature "4 °C" --temperature "37 °C"\n'
        '  bufferfolio predict tris-assay --add "hydrochloric-acid-1-molar 5 mL" --json\n'
        "  bufferfolio predict drafts/my-rinse.yaml"
    )
    parser = _action(actions, "predict", "print the numbers of a sheet", examples)
    # argparse would put the formulation last, where --temperature swallows it.
    parser.usage = f"{parser.prog} FORMULATION [options]"
    parser.add_argument(
        "formulation",
        metavar="FORMULATION",
        help="its key (the file name without .yaml), or the path of a YAML file",
    )
    parser.add_argument(
        "--temperature",
        action="extend",
        nargs="+",
        default=[],
        metavar="TEMPERATURE",
        help='such as "4 °C", one or more; else that of the expected pH, or of the make-up',
    )
    parser.add_argument(
        "--add",
        action="append",
        default=[],
        metavar='"REAGENT AMOUNT"',
        help='what goes into the whole make-up, such as "sodium-hydroxide 5 mmol"; once or more',
    )
    parser.add_argument("--json", action="store_true", help="print JSON (keys: see DEVELOPERS.md)")
    parser.add_argument("--systems", type=Path, metavar="SYSTEMS", help=SYSTEMS_HELP, default=None)


def _add_fit(actions: "Actions[_Parser]") -> None:
    examples = (
        '  bufferfolio fit acetate-extract points.csv --sample-volume "50 mL"\n'
        "  bufferfolio fit tris-assay points.txt --free strength,pK:tris:1,offset --json"
    )
    parser = _action(actions, "fit", "fit a model curve to a measured titration", examples)
    parser.usage = f"{parser.prog} FORMULATION DATA [options]"
    parser.add_argument("formulation", metavar="FORMULATION", help="its key, or a YAML file")
    parser.add_argument("data", type=Path, metavar="DATA", help="a text of volumes and readings")
    for option, metavar, words in FIT_OPTIONS:
        parser.add_argument(option, metavar=metavar, default="", help=words)
    parser.add_argument(
        "--free",
        default=DEFAULT_FREE,
        metavar="A,B,…",
        help="up to four of: strength, total:FAMILY, pK:FAMILY:STEP, offset, slope; else strength",
    )
    parser.add_argument("--unit", default="mL", help="of volumes whose heading names none; else mL")
    parser.add_argument("--json", action="store_true", help="print JSON (keys: see DEVELOPERS.md)")
    parser.add_argument("--systems", type=Path, metavar="SYSTEMS", help=SYSTEMS_HELP, default=None)


def _add_evidence(actions: "Actions[_Parser]") -> None:
    examples = "  bufferfolio evidence\n  bufferfolio evidence --json > evidence.json"
    summary = "compare predictions with every published table"
    parser = _action(actions, "evidence", summary, examples)
    parser.add_argument("systems", nargs="?", type=Path, metavar="SYSTEMS", help=SYSTEMS_HELP)
    parser.add_argument("--json", action="store_true", help="print JSON (keys: see DEVELOPERS.md)")


def _add_new(actions: "Actions[_Parser]") -> None:
    examples = (
        "  bufferfolio new formulation rinse-water\n"
        "  bufferfolio new reagent potassium-iodide --systems my-systems"
    )
    parser = _action(actions, "new", "write a commented definition to fill in", examples)
    parser.add_argument("kind", choices=["family", "reagent", "formulation"], help="what to define")
    parser.add_argument("name", metavar="NAME", help="its key: small letters, digits and hyphens")
    parser.add_argument(
        "--systems",
        type=Path,
        metavar="SYSTEMS",
        help="folder to write into, ./systems where nothing is said; made if it is not there",
    )


LOCAL_SYSTEMS: Final = Path("systems")
DEFAULT_OUT: Final = Path("dist")
DEFAULT_FREE: Final = "strength"

FIT_OPTIONS: Final = (
    ("--titrant", "TITRANT", "such as 'sodium-hydroxide 0.1 mol/L'; else the formulation's own"),
    ("--sample-volume", "VOLUME", "such as '50 mL'; else the whole make-up"),
    ("--temperature", "TEMPERATURE", "of the titration, such as '25 °C'"),
    ("--reading-uncertainty", "PH", "standard uncertainty of a reading; else 0.02"),
    ("--volume-uncertainty", "VOLUME", "likewise of a volume; else a thousandth of the largest"),
)  # fmt: skip

SYSTEMS_HELP: Final = (
    "folder of definitions; else ./systems if there is one, or the shipped library"
)

EXIT_CODES: Final = (
    "exit codes: 0 done, 1 the input is wrong, 2 the command line is wrong, 3 a strict warning"
)
