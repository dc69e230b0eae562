"""`bufferfolio check`: every definition read, one line a file, and all that is wrong."""

from collections import Counter

from bufferfolio import resources
from bufferfolio.command.arguments import Arguments, ExitCode, chosen_systems
from bufferfolio.command.console import counted
from bufferfolio.errors import DefinitionErrors
from bufferfolio.reading import read_evidence, read_library
from bufferfolio.reading.evidence import evidence_files
from bufferfolio.reading.files import definition_files, shown


def check(arguments: Arguments) -> ExitCode:
    """Print one line a file; raises DefinitionErrors after them where anything is wrong."""
    systems = chosen_systems(arguments)
    files = [shown(path) for path in (*definition_files(systems), *evidence_files(systems))]
    try:
        library = read_library(systems, resources.systems())
        read_evidence(systems, library, resources.systems())
    except DefinitionErrors as problems:
        wrong = Counter(error.place.file for error in problems.errors)
        print_files([*files, *sorted(wrong.keys() - set(files))], wrong)
        print(f"{counted(sum(wrong.values()), 'error')} in {counted(len(wrong), 'file')}\n")
        raise
    print_files(files, Counter())
    print(f"{counted(len(files), 'file')}, no errors")
    return ExitCode.DONE


def print_files(files: list[str], wrong: Counter[str]) -> None:
    """Print one line a file: fine, or how much is wrong with it."""
    for file in files:
        print(f"{file}: {counted(wrong[file], 'error') if wrong[file] else 'ok'}")
