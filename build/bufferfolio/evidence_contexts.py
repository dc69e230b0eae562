"""What the template of the page of evidence is given: published tables, and how they compare."""

from collections import Counter
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Final

from markupsafe import Markup

from bufferfolio.evidence import Measure, Misfit, TableResult, Verdict, measure_of
from bufferfolio.evidence_batches import WAYS, Way
from bufferfolio.evidence_plots import evidence_figures
from bufferfolio.figures import Figure, legend
from bufferfolio.formatting import chemical, fixed, plain, signed
from bufferfolio.published import PublishedTable, PublishedValue, Scale, TableGroup
from bufferfolio.svg_figures import svg, swatch
from bufferfolio.water import ZERO_CELSIUS


@dataclass(frozen=True, slots=True, kw_only=True)
class MisfitText:
    """A misfit as a page prints it."""

    mean: str
    root_mean_square: str
    largest: str
    where: str


@dataclass(frozen=True, slots=True, kw_only=True)
class FiguresRow:
    """A table as a whole, or a part of one."""

    title: str
    count: int
    own: MisfitText
    davies: MisfitText | None  # None: no activity model takes part
    without_pairs: str | None  # r.m.s.; None likewise
    verdict: str  # "" where there is no target
    met: bool


@dataclass(frozen=True, slots=True, kw_only=True)
class Picture:
    """Differences drawn as points."""

    title: str
    drawing: Markup
    summary: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Work:
    """A source of a table, with its number throughout the folio."""

    key: str
    number: int
    cite: str
    rows: int


@dataclass(frozen=True, slots=True, kw_only=True)
class TableContext:
    """One published table."""

    table: PublishedTable
    unit: str
    scale: str
    target: str  # "" where there is none
    whole: FiguresRow
    parts: tuple[FiguresRow, ...]
    causes: tuple[tuple[str, str], ...]  # of which part ("": of the whole), and the cause
    doubtful: int  # rows that are doubtful as printed
    how_known: str
    works: tuple[Work, ...]
    pictures: tuple[Picture, ...]
    legend: tuple[tuple[Markup, str], ...]  # mark and label of each part


@dataclass(frozen=True, slots=True, kw_only=True)
class GroupContext:
    """Tables of one kind."""

    group: TableGroup
    tables: tuple[TableContext, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class EvidenceContext:
    """Everything on the page of evidence."""

    rows: int
    tables: int
    groups: tuple[GroupContext, ...]
    with_target: tuple[TableContext, ...]


def evidence_context(results: Sequence[TableResult], numbers: Mapping[str, int]) -> EvidenceContext:
    """Return everything on the page of evidence."""
    tables = [_table(result, numbers) for result in results]
    groups = {one.table.group.key: one.table.group for one in tables}
    return EvidenceContext(
        rows=sum(len(result.table.rows) for result in results),
        tables=len(results),
        groups=tuple(
            GroupContext(
                group=group,
                tables=tuple(one for one in tables if one.table.group.key == key),
            )
            for key, group in groups.items()
        ),
        with_target=tuple(one for one in tables if one.table.target is not None),
    )


def _table(result: TableResult, numbers: Mapping[str, int]) -> TableContext:
    table = result.table
    causes = [("", cause) for cause in table.causes]
    causes += [(part.title, part.cause) for part in table.parts if part.cause]
    figures = evidence_figures(result)
    return TableContext(
        table=table,
        unit=measure_of(table).unit,
        scale=SCALES[table.scale],
        target=target_words(table),
        whole=_row("all rows", result, result.misfits, result.verdict),
        parts=tuple(
            _row(part.part.title, result, part.misfits, part.verdict) for part in result.parts
        ),
        causes=tuple(causes),
        doubtful=sum(row.doubtful is not None for row in table.rows),
        how_known=_how_known(table),
        works=_works(table, numbers),
        pictures=tuple(
            Picture(title=figure.title, drawing=Markup(svg(figure)), summary=figure.summary)
            for figure in figures
        ),
        legend=_legend(figures),
    )


def _row(
    title: str,
    result: TableResult,
    misfits: Mapping[Way, Misfit],
    verdict: Verdict | None,
) -> FiguresRow:
    measure = measure_of(result.table)
    own, plain_davies, bare = misfits[result.way], misfits.get("davies"), misfits.get("no pairs")
    if result.way == "no pairs":
        bare = None
    return FiguresRow(
        title=title,
        count=own.count,
        own=_text(result, own, measure),
        davies=None if plain_davies is None else _text(result, plain_davies, measure),
        without_pairs=None if bare is None else fixed(bare.root_mean_square, measure.decimals),
        verdict=verdict_words(verdict),
        met=verdict is not None and verdict.met,
    )


def _text(result: TableResult, misfit: Misfit, measure: Measure) -> MisfitText:
    return MisfitText(
        mean=signed(misfit.mean, measure.decimals),
        root_mean_square=fixed(misfit.root_mean_square, measure.decimals),
        largest=signed(misfit.largest, measure.decimals),
        where=place_words(result.table, result.table.rows[misfit.at]),
    )


def place_words(table: PublishedTable, row: PublishedValue) -> str:
    """Return which row of its table one is, in a few words."""
    words = []
    if table.quantity in ("pH", "pH after titrant"):
        words.append(f"pH {plain(row.value, 5)}")
    elif row.pH is not None:
        words.append(f"pH {plain(row.pH, 4)}")
    elif row.solution is not None:
        words.append(contents_words(row.solution.stated))
    elif row.ionic_strength is not None:
        words.append(f"I = {plain(row.ionic_strength)} mol/kg")
    if len({each.temperature for each in table.rows}) > 1:
        words.append(f"{plain(row.temperature - ZERO_CELSIUS, 5)} °C")
    return ", ".join(words)


def contents_words(stated: str) -> str:
    """Return a mixture as a page prints it: KH₂PO₄ 0.025, Na₂HPO₄ 0.025."""
    parts = (part.strip().partition("=") for part in stated.split(";"))
    return ", ".join(f"{chemical(name)} {amount}" for name, _, amount in parts)


def target_words(table: PublishedTable) -> str:
    """Return what a table's predictions ought to reach; "" where nothing is asked."""
    target = table.target
    if target is None:
        return ""
    largest = "" if target.largest is None else f", largest at most {plain(target.largest)}"
    return f"r.m.s. at most {plain(target.root_mean_square)}{largest}, no worse than plain Davies"


def verdict_words(verdict: Verdict | None) -> str:
    """Return what became of a target: "met", or what was missed."""
    if verdict is None:
        return ""
    missed = [
        words
        for met, words in (
            (verdict.root_mean_square, "r.m.s."),
            (verdict.largest, "largest"),
            (verdict.as_good_as_davies, "plain Davies is closer"),
        )
        if not met
    ]
    return f"missed: {', '.join(missed)}" if missed else "met"


def _how_known(table: PublishedTable) -> str:
    counts = Counter(row.citation.how_known for row in table.rows)
    if len(counts) == 1:
        return next(iter(counts))
    return ", ".join(f"{counts[known]} {known}" for known in HOW_KNOWN if counts[known])


def _works(table: PublishedTable, numbers: Mapping[str, int]) -> tuple[Work, ...]:
    counts = Counter(row.citation.source.key for row in table.rows)
    sources = {row.citation.source.key: row.citation.source for row in table.rows}
    works = [
        Work(key=key, number=numbers[key], cite=source.cite, rows=counts[key])
        for key, source in sources.items()
    ]
    return tuple(sorted(works, key=lambda work: work.number))


def _legend(figures: Sequence[Figure]) -> tuple[tuple[Markup, str], ...]:
    entries = legend(figures[0]) if figures else ()
    marks = tuple((Markup(swatch(entry.style)), entry.label) for entry in entries)
    return marks if len(marks) > 1 else ()


SCALES: Final[Mapping[Scale, str]] = {
    "activity": "activity scale",
    "older": "older scale, about 0.04 below the activity scale; compared as published",
    "not stated": "scale not stated; compared as published",
    "concentration": "concentrations in place of activities",
    "none": "",
}
HOW_KNOWN: Final = ("seen", "seen-secondary", "recalled", "computed")
WAY_LABELS: Final[Mapping[Way, str]] = {way: setting.label for way, setting in WAYS.items()}
