"""Published tables: systems/evidence/index.yaml and a CSV file for each table that it names."""

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Final

from bufferfolio.definitions import Ion, Library
from bufferfolio.errors import DefinitionError, DefinitionErrors, Place
from bufferfolio.published import OWN, PublishedTable, TableGroup, TablePart, Target
from bufferfolio.reading.complaints import validate
from bufferfolio.reading.csv_files import load_csv
from bufferfolio.reading.evidence_models import IndexShape, SubstanceShape, TableShape
from bufferfolio.reading.evidence_rows import COLUMNS, Names, RowReader, Substance
from bufferfolio.reading.files import load, shown, whole_file_error
from bufferfolio.reading.formulas import is_ion_name, parse_formula, parse_ion
from bufferfolio.reading.known import Complaints, Known
from bufferfolio.reading.proof import prove
from bufferfolio.reading.quantities import Unfit


@dataclass(frozen=True, slots=True)
class Index:
    """One index file with what its tables may refer to."""

    folder: Path
    shape: IndexShape
    names: Names
    complaints: Complaints


def read_evidence(
    folder: Path, library: Library, base: Path | None = None
) -> tuple[PublishedTable, ...]:
    """Return the published tables of `base` and of `folder`, in the order of their indexes.

    Raises DefinitionErrors with all errors of all files.
    """
    folders = [folder]
    if base is not None and base.resolve() != folder.resolve():
        folders.insert(0, base)
    errors: list[DefinitionError] = []
    found: list[PublishedTable] = []
    for each in folders:
        path = each / "evidence" / "index.yaml"
        if not path.exists():
            continue
        try:
            tables = _tables(path, library)
        except DefinitionErrors as problem:
            errors += problem.errors
            continue
        _refuse_second(found, tables, path, errors)
        found += tables
    if errors:
        raise DefinitionErrors(errors)
    return tuple(found)


def evidence_files(folder: Path) -> tuple[Path, ...]:
    """Return the files of tables below a folder of definitions, sorted."""
    return tuple(sorted((folder / "evidence").glob("*.csv")))


def _refuse_second(
    found: list[PublishedTable],
    tables: list[PublishedTable],
    path: Path,
    errors: list[DefinitionError],
) -> None:
    homes = {table.key: table.place.file for table in found}
    for table in tables:
        if table.key in homes:
            problem = f"the table {table.key!r} is already defined in {homes[table.key]}"
            errors += whole_file_error(path, problem, "another key").errors


def _tables(path: Path, library: Library) -> list[PublishedTable]:
    document = load(path)
    shape = validate(document, IndexShape)
    complaints = Complaints(document)
    names = Names(
        substances=_substances(shape, library, complaints),
        families=library.families,
        sources=library.sources,
    )
    index = Index(path.parent, shape, names, complaints)
    _refuse_strangers(index)
    tables = [_table(index, key, table) for key, table in shape.tables.items()]
    if complaints.errors:
        raise DefinitionErrors(complaints.errors)
    return [table for table in tables if table is not None]


def _refuse_strangers(index: Index) -> None:
    for path in sorted(index.folder.iterdir()):
        if path.suffix == ".csv" and path.stem not in index.shape.tables:
            problem = "the index names no such table"
            accepted = f"a table {path.stem} in index.yaml"
            index.complaints.errors.append(
                DefinitionError(Place(shown(path), 1, 1), problem, accepted=accepted)
            )


def _table(index: Index, key: str, shape: TableShape) -> PublishedTable | None:
    complaints = index.complaints
    group = complaints.find(
        Known("group", index.shape.groups), shape.group, ("tables", key, "group")
    )
    path = index.folder / f"{key}.csv"
    try:
        reader = RowReader(shape, index.names, load_csv(path, list(COLUMNS)))
    except DefinitionErrors as problem:
        complaints.errors.extend(problem.errors)
        return None
    rows = reader.rows()
    complaints.errors.extend(reader.errors[:MOST])
    for part in shape.parts.keys() - {row.part for row in rows}:
        if not reader.errors:
            complaints.at_key(
                ("tables", key, "parts", part), "the part has no rows", str(path.name)
            )
    if group is None:
        return None
    return PublishedTable(
        key=key,
        group=TableGroup(key=shape.group, title=group.title, about=group.about),
        title=shape.title,
        quantity=shape.quantity,
        amounts=shape.amounts,
        compared_by=shape.compared_by,
        scale=shape.scale,
        uncertainty=shape.uncertainty,
        causes=tuple(shape.causes),
        parts=tuple(
            TablePart(key=name, title=part.title, cause=part.cause)
            for name, part in shape.parts.items()
        ),
        target=_target(shape),
        pKw=shape.pKw,
        rows=rows,
        place=complaints.document.place(("tables", key)),
    )


def _target(shape: TableShape) -> Target | None:
    if shape.target is None:
        return None
    return Target(root_mean_square=shape.target.root_mean_square, largest=shape.target.largest)


def _substances(
    shape: IndexShape, library: Library, complaints: Complaints
) -> Mapping[str, Substance]:
    found = {}
    for name, substance in shape.substances.items():
        try:
            found[name] = _substance(name, substance, library)
        except Unfit as problem:
            at = ("substances", name)
            complaints.at_key(at, f"{name} {problem.problem}", problem.accepted)
            found[name] = Substance({}, {})
    return found


def _substance(name: str, shape: SubstanceShape, library: Library) -> Substance:
    """Return what a substance brings; raises Unfit where that is not its formula."""
    families: dict[str, float] = {}
    ions: dict[Ion, float] = {}
    parts = []
    for brought, times in shape.brings.items():
        if brought == OWN:
            families[OWN] = times
        elif is_ion_name(brought):
            formula = parse_ion(brought)
            ions[Ion(name=brought, charge=formula.charge)] = times
            parts.append((formula, times))
        elif brought in library.families:
            families[brought] = times
            parts.append((parse_formula(library.families[brought].species[0].name), times))
        else:
            raise Unfit(f"brings the unknown family {brought!r}", "families, ions, or `own`")
    if OWN not in families:
        prove(parse_formula(shape.formula or name), parts)
    return Substance(families, ions)


MOST: Final = 20  # errors of one table that are shown
