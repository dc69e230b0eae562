"""`bufferfolio evidence`: how far predictions lie from every published table."""

import json
from collections.abc import Iterator, Mapping, Sequence
from typing import Final

from bufferfolio import resources
from bufferfolio.command.arguments import Arguments, ExitCode, chosen_systems
from bufferfolio.command.console import table
from bufferfolio.evidence import Misfit, TableResult, Verdict, compared, measure_of
from bufferfolio.evidence_batches import WAYS, Way
from bufferfolio.evidence_contexts import place_words, target_words, verdict_words
from bufferfolio.formatting import fixed, signed
from bufferfolio.published import PublishedValue
from bufferfolio.reading import read_evidence, read_library
from bufferfolio.water import ZERO_CELSIUS


def evidence(arguments: Arguments) -> ExitCode:
    """Print the figures of every table, as text or as JSON."""
    systems = chosen_systems(arguments)
    library = read_library(systems, resources.systems())
    results = compared(read_evidence(systems, library, resources.systems()), library)
    if arguments.json:
        print(json.dumps(as_json(results), indent=1, ensure_ascii=False, allow_nan=False))
    else:
        print("\n".join(as_text(results)))
    return ExitCode.DONE


def as_text(results: Sequence[TableResult]) -> Iterator[str]:
    """Yield the lines that people read."""
    rows = sum(len(result.table.rows) for result in results)
    yield f"{rows} published numbers in {len(results)} tables; computed less published"
    group = ""
    lines: list[list[str]] = []
    for result in results:
        if result.table.group.title != group:
            group = result.table.group.title
            lines += [[""] * len(HEAD), [group.upper(), *[""] * (len(HEAD) - 1)]]
        lines.append(_line(result, result.table.key, result.misfits, result.verdict))
        lines += [
            _line(result, f"  {part.part.key}", part.misfits, part.verdict) for part in result.parts
        ]
    yield table(HEAD, lines, right=RIGHT)
    for result in results:
        if result.verdict is not None:
            outcome = verdict_words(result.verdict)
            yield f"\n{result.table.title}: {target_words(result.table)}: {outcome}"
            yield from (f"  {cause}" for cause in result.table.causes)
            yield from (f"  {p.title}: {p.cause}" for p in result.table.parts if p.cause)


def _line(
    result: TableResult, name: str, misfits: Mapping[Way, Misfit], verdict: Verdict | None
) -> list[str]:
    measure, own, davies = measure_of(result.table), misfits[result.way], misfits.get("davies")
    return [
        name,
        str(own.count),
        signed(own.mean, measure.decimals),
        fixed(own.root_mean_square, measure.decimals),
        signed(own.largest, measure.decimals),
        place_words(result.table, result.table.rows[own.at]),
        "" if davies is None else fixed(davies.root_mean_square, measure.decimals),
        "" if davies is None else signed(davies.largest, measure.decimals),
        measure.unit,
        verdict_words(verdict),
    ]


def as_json(results: Sequence[TableResult]) -> dict[str, object]:
    """Return what --json prints; the keys are explained in DEVELOPERS.md."""
    return {
        "ways": {way: setting.label for way, setting in WAYS.items()},
        "tables": [_table(result) for result in results],
    }


def _table(result: TableResult) -> dict[str, object]:
    shown, target = result.table, result.table.target
    return {
        "key": shown.key,
        "group": shown.group.key,
        "title": shown.title,
        "quantity": shown.quantity,
        "compared_by": shown.compared_by,
        "unit": measure_of(shown).unit,
        "scale": shown.scale,
        "uncertainty": shown.uncertainty,
        "causes": list(shown.causes),
        "target": None
        if target is None
        else {"root_mean_square": target.root_mean_square, "largest": target.largest},
        "outcome": _outcome(result.verdict),
        "misfits": {way: _misfit(each) for way, each in result.misfits.items()},
        "parts": [
            {
                "key": part.part.key,
                "title": part.part.title,
                "cause": part.part.cause,
                "outcome": _outcome(part.verdict),
                "misfits": {way: _misfit(each) for way, each in part.misfits.items()},
            }
            for part in result.parts
        ],
        "rows": [_row(result, number, row) for number, row in enumerate(shown.rows)],
    }


def _outcome(verdict: Verdict | None) -> dict[str, bool] | None:
    if verdict is None:
        return None
    return {
        "met": verdict.met,
        "root_mean_square": verdict.root_mean_square,
        "largest": verdict.largest,
        "as_good_as_davies": verdict.as_good_as_davies,
    }


def _misfit(misfit: Misfit) -> dict[str, float]:
    return {
        "n": misfit.count,
        "mean": _number(misfit.mean),
        "root_mean_square": _number(misfit.root_mean_square),
        "largest": _number(misfit.largest),
        "row": misfit.at,
    }


def _row(result: TableResult, number: int, row: PublishedValue) -> dict[str, object]:
    return {
        "part": row.part or None,
        "contents": None if row.solution is None else row.solution.stated,
        "titrant": None if row.titrant is None else row.titrant.stated,
        "temperature_celsius": _number(row.temperature - ZERO_CELSIUS),
        "pH": row.pH,
        "published": row.value,
        "computed": {way: _number(float(v[number])) for way, v in result.computed.items()},
        "difference": {way: _number(float(v[number])) for way, v in result.differences.items()},
        "doubtful": row.doubtful,
        "note": row.note,
        "source": row.citation.source.key,
        "where": row.citation.where or None,
        "how_known": row.citation.how_known,
    }


def _number(value: float) -> float:
    # Twelve figures: what the solver vouches for, without the noise of the last bits.
    return float(f"{value:.12g}")


HEAD: Final = (
    "table",
    "rows",
    "mean",
    "r.m.s.",
    "largest",
    "where",
    "Davies r.m.s.",
    "largest",
    "unit",
    "target",
)
RIGHT: Final = frozenset({1, 2, 3, 4, 6, 7})
