"""`bufferfolio build`: the site, and a table of what was computed for it."""

import time
from collections.abc import Iterator, Sequence
from typing import TYPE_CHECKING, Final

from bufferfolio import resources
from bufferfolio.command.arguments import Arguments, ExitCode, chosen_systems
from bufferfolio.command.console import counted, progress, table
from bufferfolio.command.drafting import UNNAMED
from bufferfolio.definitions import Library
from bufferfolio.formatting import fixed, signed
from bufferfolio.reading import read_evidence, read_library
from bufferfolio.water import ZERO_CELSIUS

if TYPE_CHECKING:
    from bufferfolio.pages import PageReport


def build(arguments: Arguments) -> ExitCode:
    """Write the site, print the table and what to open."""
    # Bokeh takes most of a second to import, and only this action needs it.
    from bufferfolio.pages import write_site

    start = time.perf_counter()
    systems = chosen_systems(arguments)
    library = read_library(systems, resources.systems())
    tables = read_evidence(systems, library, resources.systems())
    pieces = len(library.formulations) + len(library.families) + SHARED_PIECES
    with progress(pieces) as show:
        reports = write_site(library, arguments.out, show, tables)
    print(report_table(library, reports))
    warnings = [*unnamed_sources(library), *sheet_warnings(reports)]
    if warnings:
        print(f"\n{counted(len(warnings), 'warning')}:")
        print("\n".join(f"  {warning}" for warning in warnings))
    index = (arguments.out / "index.html").resolve()
    print(f"\nwritten in {time.perf_counter() - start:.1f} s; open\n  {index}\n  {index.as_uri()}")
    return ExitCode.STRICT_WARNING if warnings and arguments.strict else ExitCode.DONE


def report_table(library: Library, reports: "Sequence[PageReport]") -> str:
    """Return what was computed for each formulation beside what its file expects."""
    return table(HEAD, [_row(library, report) for report in reports], right=RIGHT)


def _row(library: Library, report: "PageReport") -> list[str]:
    expected = library.formulations[report.key].expected
    return [
        report.key,
        fixed(report.pH, 3),
        "" if expected is None else f"{expected.temperature - ZERO_CELSIUS:.4g} °C",
        "" if expected is None else f"{expected.pH:g}",
        "" if report.difference is None else signed(report.difference, 3),
        str(len(report.warnings)) if report.warnings else "",
        f"{report.seconds:.2f} s",
    ]


def sheet_warnings(reports: "Sequence[PageReport]") -> Iterator[str]:
    """Yield each warning with the formulation it is about."""
    for report in reports:
        yield from (f"{report.key}: {warning}" for warning in report.warnings)


def unnamed_sources(library: Library) -> Iterator[str]:
    """Yield a warning for each definition whose source is still the draft's stand-in."""
    for key, family in library.families.items():
        cited = [step.citation for step in family.steps]
        cited += [step.enthalpy_citation for step in family.steps if step.enthalpy_citation]
        if any(citation.source.key == UNNAMED for citation in cited):
            yield f"family {key}: a source is still to be named"
    for key, reagent in library.reagents.items():
        if reagent.citation.source.key == UNNAMED:
            yield f"reagent {key}: a source is still to be named"


SHARED_PIECES: Final = 3  # what pages share; evidence; index, sources and method

HEAD: Final = ("formulation", "pH", "at", "expected", "difference", "warnings", "time")
RIGHT: Final = frozenset({1, 2, 3, 4, 5, 6})
