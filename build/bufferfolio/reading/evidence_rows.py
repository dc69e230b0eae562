"""The rows of a published table: from CSV cells to records."""

import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Final, get_args

from bufferfolio.definitions import Citation, Family, HowKnown, Ion, Source
from bufferfolio.errors import DefinitionError, Place
from bufferfolio.published import OWN, PublishedValue, Quantity, Solution
from bufferfolio.reading.csv_files import Cell, Sheet
from bufferfolio.reading.evidence_models import TableShape
from bufferfolio.reading.quantities import Unfit, parse_number, suggestion


@dataclass(frozen=True, slots=True)
class Substance:
    """What one mole of something in a published mixture brings."""

    families: Mapping[str, float]
    ions: Mapping[Ion, float]


@dataclass(frozen=True, slots=True)
class Names:
    """What the cells of a table may refer to."""

    substances: Mapping[str, Substance]
    families: Mapping[str, Family]
    sources: Mapping[str, Source]


@dataclass(frozen=True, slots=True)
class RowReader:
    """Reads the cells of one table's rows and gathers what is wrong with them."""

    table: TableShape
    names: Names
    sheet: Sheet
    errors: list[DefinitionError] = field(default_factory=list)

    def rows(self) -> tuple[PublishedValue, ...]:
        """Return every row that is right; the rest is among the errors."""
        found = [self._row(cells) for cells in self.sheet.rows]
        return tuple(row for row in found if row is not None)

    def _row(self, cells: Mapping[str, Cell]) -> PublishedValue | None:
        before = len(self.errors)
        value = self._number(cells, "value")
        if not self._text(cells, "value"):
            self._blame(self._anywhere(cells), "the row has no value", "the published number")
        for name in NEEDED[self.table.quantity]:
            if not self._given(cells, name):
                problem = f"a {self.table.quantity} lacks its {name!r}"
                accepted = f"{name}: {COLUMNS[name]}"
                self._blame(self._anywhere(cells), problem, accepted)
        temperature = self._temperature(cells)
        solution, constants = self._solution(cells, "contents"), self._constants(cells)
        if solution is not None and OWN in solution.families and not constants:
            problem = f"{solution.stated!r} has no constants of its own"
            self._blame(self._anywhere(cells), problem, CONSTANTS)
        citation = self._citation(cells)
        row = PublishedValue(
            part=self._part(cells),
            solution=solution,
            volume=_scaled(self._number(cells, "volume"), 1e-6),
            titrant=self._solution(cells, "titrant"),
            added=_scaled(self._number(cells, "added"), 1e-6),
            pK=constants,
            form=self._form(cells),
            charge=self._whole(cells, "charge"),
            ionic_strength=self._number(cells, "ionic_strength"),
            temperature=temperature,
            pH=self._number(cells, "pH"),
            value=math.nan if value is None else value,
            doubtful=self._text(cells, "doubtful") or None,
            note=self._text(cells, "note") or None,
            citation=citation or NOBODY,
            place=self._anywhere(cells),
        )
        return row if len(self.errors) == before else None

    def _anywhere(self, cells: Mapping[str, Cell]) -> Place:
        return next(iter(cells.values())).place

    def _blame(self, place: Place, problem: str, accepted: str) -> None:
        self.errors.append(self.sheet.error(place, problem, accepted))

    def _text(self, cells: Mapping[str, Cell], name: str) -> str:
        return cells[name].text if name in cells else ""

    def _given(self, cells: Mapping[str, Cell], name: str) -> bool:
        return bool(self._text(cells, name)) or getattr(self.table, name, None) is not None

    def _number(self, cells: Mapping[str, Cell], name: str) -> float | None:
        text = self._text(cells, name)
        if not text:
            return None
        try:
            return parse_number(text)
        except Unfit as problem:
            self._blame(cells[name].place, f"{name} {problem.problem}", problem.accepted)
            return None

    def _whole(self, cells: Mapping[str, Cell], name: str) -> int | None:
        number = self._number(cells, name)
        return None if number is None else int(number)

    def _temperature(self, cells: Mapping[str, Cell]) -> float:
        celsius = self._number(cells, "celsius")
        if celsius is not None:
            return celsius + ZERO_CELSIUS
        if self.table.at is None and not self._text(cells, "celsius"):
            problem = "the row has no temperature"
            self._blame(self._anywhere(cells), problem, "a column celsius, or `at` in the index")
        return self.table.at or math.nan

    def _part(self, cells: Mapping[str, Cell]) -> str:
        text, known = self._text(cells, "part"), list(self.table.parts)
        if text not in known and (text or known):
            place = cells["part"].place if "part" in cells else self._anywhere(cells)
            problem = f"unknown part {text!r}{suggestion(text, known)}"
            self._blame(place, problem, ", ".join(known) or "no part: the index names none")
        return text

    def _solution(self, cells: Mapping[str, Cell], name: str) -> Solution | None:
        text = self._text(cells, name)
        if not text:
            return None
        families: dict[str, float] = {}
        ions: dict[Ion, float] = {}
        for portion in text.split(";"):
            substance, _, amount = (word.strip() for word in portion.partition("="))
            found = self.names.substances.get(substance)
            if found is None:
                close = suggestion(substance, list(self.names.substances))
                problem = f"{name} has the unknown substance {substance!r}{close}"
                self._blame(cells[name].place, problem, SUBSTANCES)
                continue
            try:
                moles = parse_number(amount)
            except Unfit as problem:
                words = f"the amount of {substance} {problem.problem}"
                self._blame(cells[name].place, words, "NAME=AMOUNT; NAME=AMOUNT")
                continue
            for family, times in found.families.items():
                families[family] = families.get(family, 0.0) + times * moles
            for ion, times in found.ions.items():
                ions[ion] = ions.get(ion, 0.0) + times * moles
        return Solution(stated=text, families=families, ions=ions)

    def _constants(self, cells: Mapping[str, Cell]) -> tuple[float, ...]:
        text = self._text(cells, "constants") or self.table.constants or ""
        place = cells["constants"].place if "constants" in cells else self._anywhere(cells)
        found = []
        for part in text.split(";") if text else []:
            name, _, number = (word.strip() for word in part.partition("="))
            try:
                value = parse_number(number)
                if name not in ("Ka", "pKa") or (name == "Ka" and value <= 0.0):
                    raise Unfit(f"is not a constant: {part.strip()!r}", CONSTANTS)
            except Unfit as problem:
                self._blame(place, f"constants {problem.problem}", CONSTANTS)
                continue
            found.append(-math.log10(value) if name == "Ka" else value)
        return tuple(found)

    def _form(self, cells: Mapping[str, Cell]) -> tuple[str, int] | None:
        text = self._text(cells, "form") or self.table.form
        if not text:
            return None
        own, _, lost_of_own = text.partition(" ")
        if own == OWN and lost_of_own.isdecimal():
            count = len(self._constants(cells))
            if int(lost_of_own) > count:
                problem = f"{text!r} has lost more protons than the {count} constants have"
                self._blame(self._anywhere(cells), problem, FORMS)
            return OWN, int(lost_of_own)
        for family in self.names.families.values():
            for lost, species in enumerate(family.species):
                if species.name == text:
                    return family.key, lost
        place = cells["form"].place if "form" in cells else self._anywhere(cells)
        known = [s.name for family in self.names.families.values() for s in family.species]
        self._blame(place, f"unknown form {text!r}{suggestion(text, known)}", FORMS)
        return None

    def _citation(self, cells: Mapping[str, Cell]) -> Citation | None:
        key = self._text(cells, "source") or self.table.source or ""
        known = self._text(cells, "how_known") or self.table.how_known or ""
        if key not in self.names.sources:
            place = cells["source"].place if "source" in cells else self._anywhere(cells)
            close = suggestion(key, list(self.names.sources))
            self._blame(place, f"unknown source {key!r}{close}", "a source of sources.yaml")
        if known not in get_args(HowKnown):
            place = cells["how_known"].place if "how_known" in cells else self._anywhere(cells)
            accepted = ", ".join(get_args(HowKnown))
            self._blame(place, f"how_known has the unknown value {known!r}", accepted)
        if key not in self.names.sources or known not in get_args(HowKnown):
            return None
        return Citation(
            source=self.names.sources[key],
            where=self._text(cells, "where") or self.table.where or "",
            how_known=known,  # type: ignore[arg-type]
        )


def _scaled(number: float | None, factor: float) -> float | None:
    return None if number is None else number * factor


ZERO_CELSIUS: Final = 273.15  # K
NOBODY: Final = Citation(
    source=Source(key="", cite="", doi=None, note=None), where="", how_known="recalled"
)
SUBSTANCES: Final = "a substance of index.yaml"
CONSTANTS: Final = "Ka=1.8e-5, or pKa=5.00; pKa=10.00"
FORMS: Final = "the formula of a form of one family, or `own` and how many protons it has lost"

# Every column a table may have; DEVELOPERS.md says when it needs them.
COLUMNS: Final[Mapping[str, str]] = {
    "part": "key of a part that the index names",
    "contents": "what the mixture holds: NAME=AMOUNT; NAME=AMOUNT",
    "volume": "mL of it that are titrated",
    "titrant": "what is added: NAME=AMOUNT",
    "added": "mL of the titrant",
    "constants": "the source's own: Ka=1.8e-5 or pKa=5.00; pKa=10.00",
    "form": "the form whose share it is",
    "charge": "of the ion, without sign",
    "ionic_strength": "mol/kg",
    "celsius": "temperature in °C",
    "pH": "where the share holds",
    "value": "the published number, as printed",
    "doubtful": "why it is doubtful as printed; empty where it is not",
    "source": "key of the work in sources.yaml",
    "where": "where in the work",
    "how_known": "seen, seen-secondary, recalled or computed",
    "note": "anything else that helps to find it again",
}

# The columns that each quantity needs beside its value, temperature and source.
NEEDED: Final[Mapping[Quantity, tuple[str, ...]]] = {
    "pH": ("contents",),
    "pH after titrant": ("contents", "volume", "titrant", "added"),
    "buffer value": ("contents",),
    "dilution value": ("contents",),
    "temperature coefficient": ("contents",),
    "mean activity coefficient": ("contents",),
    "ion activity coefficient": ("charge", "ionic_strength"),
    "share": ("form", "pH"),
    "percent": ("form", "pH"),
    "-log10 share": ("form", "pH"),
    "CO2 over alkalinity": ("pH",),
    "density": (),
    "permittivity": (),
    "Debye-Hückel coefficient": (),
    "pKw": (),
}
