"""Looking up what one file says about another, and collecting what is wrong with a file."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Generic, TypeVar

from bufferfolio.errors import DefinitionError
from bufferfolio.reading.nodes import Document, Location
from bufferfolio.reading.quantities import suggestion

Item = TypeVar("Item")


@dataclass(frozen=True, slots=True)
class Known(Generic[Item]):
    """The definitions of one kind that were read, and those that are there but broken."""

    kind: str  # "family"
    found: Mapping[str, Item]
    broken: frozenset[str] = frozenset()
    complete: bool = True  # False: the file that lists them could not be read


@dataclass(frozen=True, slots=True)
class Complaints:
    """Gathers what is wrong with one file."""

    document: Document
    errors: list[DefinitionError] = field(default_factory=list)

    def at(self, location: Location, problem: str, accepted: str) -> None:
        """Blame the value at a location."""
        place = self.document.place(location)
        self.errors.append(self.document.error(place, problem, accepted))

    def at_key(self, location: Location, problem: str, accepted: str) -> None:
        """Blame the key at a location."""
        place = self.document.key_place(location)
        self.errors.append(self.document.error(place, problem, accepted))

    def find(
        self, known: Known[Item], key: str, location: Location, *, by_key: bool = False
    ) -> Item | None:
        """Return a definition by key; blames the location where there is none.

        A definition that is there but broken is not blamed again.
        """
        if key in known.found:
            return known.found[key]
        if key not in known.broken and known.complete:
            names = sorted({*known.found, *known.broken})
            problem = f"unknown {known.kind} {key!r}{suggestion(key, names)}"
            accepted = ", ".join(names) if len(names) <= MOST_NAMES else _several(known.kind)
            (self.at_key if by_key else self.at)(location, problem, accepted or "none is defined")
        return None


def _several(kind: str) -> str:
    homes = {"source": "sources.yaml", "family": "families/", "reagent": "reagents/"}
    return f"a {kind} of {homes.get(kind, 'the folder')}, of the folder or of the shipped library"


MOST_NAMES = 12  # that a complaint still lists
