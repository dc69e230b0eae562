"""A folder of definition files to the library: everything that is defined, by key.

References are followed in one order: sources, families, reagents, interactions, formulations. What
is broken is known to be there, so that one mistake is one message.
"""

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Final, Generic, TypeVar

from pydantic import BaseModel

from bufferfolio.definitions import (
    Family,
    Formulation,
    Library,
    Reagent,
    Source,
)
from bufferfolio.errors import DefinitionError, DefinitionErrors
from bufferfolio.reading import families, formulations, reagents
from bufferfolio.reading.complaints import validate
from bufferfolio.reading.files import load, whole_file_error
from bufferfolio.reading.folders import files_by_key, refuse_strangers
from bufferfolio.reading.known import Complaints, Known
from bufferfolio.reading.lists import read_interactions, read_sources
from bufferfolio.reading.models import FamilyShape, FormulationShape, ReagentShape
from bufferfolio.reading.nodes import Document

Shape = TypeVar("Shape", bound=BaseModel)
Item = TypeVar("Item")


@dataclass(frozen=True, slots=True)
class Raw(Generic[Shape]):
    """The files of one kind whose shape is right, and the keys of those that are not."""

    files: Mapping[str, tuple[Document, Shape]]
    broken: frozenset[str]


def read_library(folder: Path, base: Path | None = None) -> Library:
    """Return everything that `folder` defines, on top of what `base` defines.

    Formulations come from `folder` alone. Raises DefinitionErrors with all errors of all files.
    """
    if not folder.is_dir():
        problem = "this is not a folder" if folder.exists() else "there is no such folder"
        raise whole_file_error(folder, problem, ACCEPTED_FOLDER)
    folders = [folder]
    if base is not None and base.resolve() != folder.resolve():
        folders.insert(0, base)
    errors: list[DefinitionError] = []
    refuse_strangers(folder, errors)
    sources = read_sources(folders, errors)
    family_files = _raw("families", folders, FamilyShape, errors)
    known_families = _families(family_files, sources, errors)
    known_reagents = _reagents(folders, sources, known_families, errors)
    interactions = read_interactions(folders, sources, errors)
    known_formulations = _formulations(folder, known_reagents, known_families.found, errors)
    if errors:
        raise DefinitionErrors(errors)
    return Library(
        sources=_sorted(sources.found),
        families=_sorted(known_families.found),
        reagents=_sorted(known_reagents.found),
        formulations=_sorted(known_formulations.found),
        interactions=interactions,
    )


def read_formulation(path: Path, library: Library) -> Formulation:
    """Return the formulation of one file, made of the library's reagents."""
    document = load(path)
    shape = validate(document, FormulationShape)
    known = Known("reagent", library.reagents)
    result, complaints = formulations.formulation(
        path.stem, document, shape, known, library.families
    )
    if result is None:
        raise DefinitionErrors(complaints.errors)
    return result


def _raw(
    kind: str, folders: list[Path], shape: type[Shape], errors: list[DefinitionError]
) -> Raw[Shape]:
    files: dict[str, tuple[Document, Shape]] = {}
    broken = set()
    for key, path in files_by_key(kind, folders, errors).items():
        try:
            document = load(path)
            files[key] = document, validate(document, shape)
        except DefinitionErrors as problem:
            errors += problem.errors
            broken.add(key)
    return Raw(files, frozenset(broken))


def _converted(
    kind: str,
    raw: Raw[Shape],
    convert: Callable[[str, Document, Shape], tuple[Item | None, Complaints]],
    errors: list[DefinitionError],
) -> Known[Item]:
    found: dict[str, Item] = {}
    broken = set(raw.broken)
    for key, (document, shape) in raw.files.items():
        item, complaints = convert(key, document, shape)
        errors += complaints.errors
        if item is None:
            broken.add(key)
        else:
            found[key] = item
    return Known(kind, found, frozenset(broken))


def _families(
    raw: Raw[FamilyShape], sources: Known[Source], errors: list[DefinitionError]
) -> Known[Family]:
    def convert(
        key: str, document: Document, shape: FamilyShape
    ) -> tuple[Family | None, Complaints]:
        return families.family(key, document, shape, sources)

    return _converted("family", raw, convert, errors)


def _reagents(
    folders: list[Path],
    sources: Known[Source],
    known: Known[Family],
    errors: list[DefinitionError],
) -> Known[Reagent]:
    raw = _raw("reagents", folders, ReagentShape, errors)

    def convert(
        key: str, document: Document, shape: ReagentShape
    ) -> tuple[Reagent | None, Complaints]:
        return reagents.reagent(key, document, shape, sources, known)

    alone = _converted("reagent", raw, convert, errors)
    shapes = {key: shape for key, (_, shape) in raw.files.items()}

    def accompany(
        key: str, document: Document, shape: ReagentShape
    ) -> tuple[Reagent | None, Complaints]:
        return reagents.accompanied(alone.found[key], document, shape, alone, shapes)

    sound = {key: raw.files[key] for key in alone.found}
    return _converted("reagent", Raw(sound, alone.broken), accompany, errors)


def _formulations(
    folder: Path,
    known: Known[Reagent],
    library_families: Mapping[str, Family],
    errors: list[DefinitionError],
) -> Known[Formulation]:
    raw = _raw("formulations", [folder], FormulationShape, errors)

    def convert(
        key: str, document: Document, shape: FormulationShape
    ) -> tuple[Formulation | None, Complaints]:
        return formulations.formulation(key, document, shape, known, library_families)

    return _converted("formulation", raw, convert, errors)


def _sorted(found: Mapping[str, Item]) -> dict[str, Item]:
    return {key: found[key] for key in sorted(found)}


ACCEPTED_FOLDER: Final = "a folder with formulations/, and families/, reagents/, sources.yaml"
