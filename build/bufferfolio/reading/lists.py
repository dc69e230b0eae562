"""The two files that hold many definitions each: sources.yaml and interactions.yaml."""

from pathlib import Path

from bufferfolio.definitions import Interaction, Source
from bufferfolio.errors import DefinitionError, DefinitionErrors
from bufferfolio.reading.complaints import validate
from bufferfolio.reading.families import cite
from bufferfolio.reading.files import load
from bufferfolio.reading.formulas import parse_ion
from bufferfolio.reading.known import Complaints, Known
from bufferfolio.reading.models import InteractionShape, InteractionsShape, SourcesShape
from bufferfolio.reading.nodes import Location
from bufferfolio.reading.quantities import Unfit


def read_sources(folders: list[Path], errors: list[DefinitionError]) -> Known[Source]:
    """Return the works that the folders list."""
    found: dict[str, Source] = {}
    homes: dict[str, str] = {}
    complete = True
    for path in _present(folders, "sources.yaml"):
        try:
            document = load(path)
            shapes = validate(document, SourcesShape).root
        except DefinitionErrors as problem:
            errors += problem.errors
            complete = False
            continue
        complaints = Complaints(document)
        for key, shape in shapes.items():
            source = Source(key=key, cite=shape.cite, doi=shape.doi, note=shape.note)
            if found.setdefault(key, source) != source:
                text = f"the source {key!r} is already defined in {homes[key]}"
                complaints.at_key((key,), text, "another key, or exactly the same entry")
            homes.setdefault(key, document.file)
        errors += complaints.errors
    return Known("source", found, complete=complete)


def read_interactions(
    folders: list[Path], sources: Known[Source], errors: list[DefinitionError]
) -> tuple[Interaction, ...]:
    """Return the interaction coefficients that the folders list, in the order of the files."""
    found: dict[tuple[str, str], Interaction] = {}
    for path in _present(folders, "interactions.yaml"):
        try:
            document = load(path)
            shapes = validate(document, InteractionsShape).root
        except DefinitionErrors as problem:
            errors += problem.errors
            continue
        complaints = Complaints(document)
        for number, shape in enumerate(shapes):
            interaction = _interaction(shape, (number,), sources, complaints)
            if interaction is None:
                continue
            pair = interaction.cation, interaction.anion
            if found.setdefault(pair, interaction) != interaction:
                text = f"{pair[0]} with {pair[1]} is given twice, with different values"
                complaints.at((number,), text, "one coefficient for each pair")
        errors += complaints.errors
    return tuple(found.values())


def _interaction(
    shape: InteractionShape, location: Location, sources: Known[Source], complaints: Complaints
) -> Interaction | None:
    before = len(complaints.errors)
    for side, text, sign in (("cation", shape.cation, 1), ("anion", shape.anion, -1)):
        try:
            formula = parse_ion(text)
        except Unfit as problem:
            complaints.at((*location, side), f"{side} {problem.problem}", problem.accepted)
            continue
        if formula.charge * sign < 0:
            problem_text = f"{side} has the wrong sign: {text!r}"
            complaints.at((*location, side), problem_text, "a cation with +, an anion with -")
    citation = cite(complaints, shape, location, sources)
    if citation is None or len(complaints.errors) > before:
        return None
    return Interaction(
        cation=shape.cation, anion=shape.anion, epsilon=shape.epsilon, citation=citation
    )


def _present(folders: list[Path], name: str) -> list[Path]:
    return [folder / name for folder in folders if (folder / name).exists()]
