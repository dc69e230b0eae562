"""What the template of the page of sources is given: every work, and what rests on it."""

from collections import Counter
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Final

from bufferfolio.activity import MODELS
from bufferfolio.definitions import Citation, Library, PublishedEquation, Source, Step
from bufferfolio.formatting import chemical, plain
from bufferfolio.published import PublishedTable


@dataclass(frozen=True, slots=True, kw_only=True)
class UseRow:
    """One number that a source stands behind."""

    what: str  # "pK2 of phosphoric acid"
    link: str  # path of where the number stands; "" where there is none
    where: str
    how_known: str


@dataclass(frozen=True, slots=True, kw_only=True)
class SourceRow:
    """A source with its number and everything that rests on it."""

    number: int
    source: Source
    uses: tuple[UseRow, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class GeneralWork:
    """A work behind an equation of the program itself rather than of a definition file."""

    what: str
    cite: str


def source_rows(
    library: Library, numbers: Mapping[str, int], tables: Sequence[PublishedTable] = ()
) -> tuple[SourceRow, ...]:
    """Return every source in the order of its number."""
    found: dict[str, list[UseRow]] = {key: [] for key in library.sources}
    of_library = [*_of_families(library), *_of_pairs(library), *_of_reagents(library)]
    for key, use in [*of_library, *_of_tables(tables)]:
        found[key].append(use)
    rows = [
        SourceRow(number=numbers[key], source=library.sources[key], uses=tuple(uses))
        for key, uses in found.items()
    ]
    return tuple(sorted(rows, key=lambda row: row.number))


def _of_families(library: Library) -> Iterator[tuple[str, UseRow]]:
    for key, family in sorted(library.families.items()):
        for index, step in enumerate(family.steps):
            for citation, what in _of_step(step):
                name = f"{what}, step {index + 1} of {family.label}"
                yield citation.source.key, _use(citation, name, f"families/{key}.html#constants")


def _of_step(step: Step) -> Iterator[tuple[Citation, str]]:
    yield step.citation, "equation" if isinstance(step.law, PublishedEquation) else "pK"
    if step.enthalpy_citation is not None:
        yield step.enthalpy_citation, "ΔH°"
    if step.heat_capacity_citation is not None:
        yield step.heat_capacity_citation, "ΔCp°"


def _of_pairs(library: Library) -> Iterator[tuple[str, UseRow]]:
    for pair in library.interactions:
        name = (
            f"ε of {chemical(pair.cation)} with {chemical(pair.anion)}, "
            f"{plain(pair.epsilon)} kg/mol"
        )
        yield pair.citation.source.key, _use(pair.citation, name, "")


def _of_reagents(library: Library) -> Iterator[tuple[str, UseRow]]:
    for _, reagent in sorted(library.reagents.items()):
        yield (
            reagent.citation.source.key,
            _use(
                reagent.citation, f"reagent {reagent.label}", f"reagents.html#reagent-{reagent.key}"
            ),
        )


def _of_tables(tables: Sequence[PublishedTable]) -> Iterator[tuple[str, UseRow]]:
    for table in tables:
        counts = Counter(row.citation for row in table.rows)
        for citation, count in counts.items():
            name = f"evidence, {table.title}: {count} row{'' if count == 1 else 's'}"
            yield citation.source.key, _use(citation, name, f"evidence.html#{table.key}")


def _use(citation: Citation, what: str, link: str) -> UseRow:
    return UseRow(what=what, link=link, where=citation.where, how_known=citation.how_known)


HOW_KNOWN: Final[Mapping[str, str]] = {
    "seen": "read in the work itself",
    "seen-secondary": "read in another work that quotes it",
    "recalled": "carried over from memory; compare it with the work before relying on it",
    "computed": "computed from other values",
}

GENERAL_WORKS: Final = (
    GeneralWork(
        what="ionisation of water, pKw",
        cite="IAPWS R11-07(2019); Bandura & Lvov, J. Phys. Chem. Ref. Data 35 (2006) 15",
    ),
    GeneralWork(what="density of water", cite="Kell, J. Chem. Eng. Data 20 (1975) 97"),
    GeneralWork(
        what="permittivity of water",
        cite="IAPWS R8-97; Fernández et al., J. Phys. Chem. Ref. Data 26 (1997) 1125",
    ),
    GeneralWork(
        what="Debye–Hückel coefficient",
        cite="limiting law, as in Robinson & Stokes, Electrolyte Solutions, chapter 9",
    ),
    GeneralWork(
        what="pK with temperature, constant heat capacity",
        cite="Clarke & Glew, Trans. Faraday Soc. 62 (1966) 539",
    ),
    GeneralWork(what="buffer capacity", cite="Van Slyke, J. Biol. Chem. 52 (1922) 525"),
    *(
        GeneralWork(what=f"activity model: {model.label}", cite=model.source)
        for name, model in MODELS.items()
        if name != "ideal"
    ),
    GeneralWork(what="physical constants", cite="CODATA 2018; exact since the SI of 2019"),
)
