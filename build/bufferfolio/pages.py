"""The pages of the site: which there are, what each is given, and where they are written."""

import time
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Final

from jinja2 import Environment, FileSystemLoader, StrictUndefined

from bufferfolio import resources
from bufferfolio.activity import MODELS
from bufferfolio.bokeh_figures import bokeh_script, skeletons_script
from bufferfolio.card_contexts import card_context
from bufferfolio.definitions import Library
from bufferfolio.evidence import compared
from bufferfolio.evidence_contexts import evidence_context
from bufferfolio.explorations import exploration_of
from bufferfolio.family_contexts import FamilyContext, family_context
from bufferfolio.figure_styles import stylesheet
from bufferfolio.formatting import FILTERS
from bufferfolio.make_up_contexts import hazard_rows
from bufferfolio.page_parts import numbering
from bufferfolio.page_scripts import EXPLORER_SCRIPTS, FIRST_SCRIPT, INDEX_SCRIPTS, SHEET_SCRIPTS
from bufferfolio.published import PublishedTable
from bufferfolio.reagent_contexts import ReagentRow, reagent_rows
from bufferfolio.sheet_contexts import SheetContext, sheet_context
from bufferfolio.sheets import sheet_of
from bufferfolio.source_contexts import GENERAL_WORKS, HOW_KNOWN, source_rows
from bufferfolio.tolerances import ASSUMED
from bufferfolio.writing import replace_folder

Progress = Callable[[str], None]


@dataclass(frozen=True, slots=True, kw_only=True)
class PageReport:
    """What became of one formulation, for the table at the end of a build."""

    key: str
    title: str
    pH: float  # NaN where the equations have no solution
    expected: float | None  # pH
    difference: float | None  # computed minus expected
    warnings: tuple[str, ...]
    seconds: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Shell:
    """What the frame around a page needs to know."""

    page: str  # kind: index, sheet, explorer, reagents, sources, evidence, method
    section: str  # of the navigation; one of `SECTIONS`
    top: str  # path from the page to the folder's top: "" or "../"
    scripts: tuple[str, ...]


def write_site(
    library: Library, out: Path, progress: Progress, tables: Sequence[PublishedTable] = ()
) -> tuple[PageReport, ...]:
    """Write the whole site into `out`; `progress` is told each page before it is made.

    The page of evidence compares predictions with `tables`.
    """
    environment = environment_of(resources.templates())
    numbers = numbering(library.sources)
    with replace_folder(out) as folder:
        progress("shared files")
        write_assets(folder / "assets")
        writer = Writer(environment=environment, folder=folder)
        sheets, reports = _write_sheets(writer, library, numbers, progress)
        families = _write_explorers(writer, library, numbers, progress)
        progress("evidence")
        _write_evidence(writer, library, numbers, tables)
        progress("index, reagents, sources, method")
        index = Shell(page="index", section="formulations", top="", scripts=INDEX_SCRIPTS)
        reagents = reagent_rows(library, numbers)
        writer.write(
            "index.html",
            "index.html",
            index,
            sheets=_by_title(sheets),
            families=families,
            reagents=reagents,
        )
        _write_reagents(writer, reagents)
        shell = Shell(page="sources", section="sources", top="", scripts=())
        writer.write(
            "sources.html",
            "sources.html",
            shell,
            rows=source_rows(library, numbers, tables),
            how_known=HOW_KNOWN,
            general=GENERAL_WORKS,
        )
        shell = Shell(page="method", section="method", top="", scripts=())
        assumptions = ASSUMED.values()
        writer.write("method.html", "method.html", shell, models=MODELS, assumptions=assumptions)
    return reports


def _write_reagents(writer: "Writer", rows: Sequence[ReagentRow]) -> None:
    shell = Shell(page="reagents", section="reagents", top="", scripts=())
    hazards = hazard_rows([row.reagent for row in rows])
    writer.write("reagents.html", "reagents.html", shell, rows=rows, hazards=hazards)


def _write_evidence(
    writer: "Writer",
    library: Library,
    numbers: Mapping[str, int],
    tables: Sequence[PublishedTable],
) -> None:
    shell = Shell(page="evidence", section="evidence", top="", scripts=())
    context = evidence_context(compared(tables, library), numbers)
    writer.write("evidence.html", "evidence.html", shell, this=context)


@dataclass(frozen=True, slots=True, kw_only=True)
class Writer:
    """Turns a template into a file of the new folder."""

    environment: Environment
    folder: Path

    def write(self, name: str, template: str, shell: Shell, **context: object) -> None:
        """Render one page."""
        page = self.environment.get_template(f"pages/{template}").render(shell=shell, **context)
        path = self.folder / name
        path.parent.mkdir(exist_ok=True)
        path.write_text(page, encoding="utf-8", newline="\n")


def _write_sheets(
    writer: Writer, library: Library, numbers: Mapping[str, int], progress: Progress
) -> tuple[tuple[SheetContext, ...], tuple[PageReport, ...]]:
    contexts, reports = [], []
    shell = Shell(page="sheet", section="formulations", top="../", scripts=SHEET_SCRIPTS)
    for key, formulation in sorted(library.formulations.items()):
        progress(formulation.title)
        start = time.perf_counter()
        sheet = sheet_of(formulation, library)
        context = sheet_context(sheet, library, numbers)
        writer.write(
            f"formulations/{key}.html",
            "sheet.html",
            shell,
            this=context,
            card=card_context(sheet),
        )
        contexts.append(context)
        expected = formulation.expected
        reports.append(
            PageReport(
                key=key,
                title=formulation.title,
                pH=sheet.reference.pH,
                expected=None if expected is None else expected.pH,
                difference=sheet.deviation,
                warnings=sheet.warnings,
                seconds=time.perf_counter() - start,
            )
        )
    return tuple(contexts), tuple(reports)


def _write_explorers(
    writer: Writer, library: Library, numbers: Mapping[str, int], progress: Progress
) -> tuple[FamilyContext, ...]:
    contexts = []
    shell = Shell(page="explorer", section="families", top="../", scripts=EXPLORER_SCRIPTS)
    for key, family in sorted(library.families.items()):
        progress(family.label)
        context = family_context(exploration_of(family), library, numbers)
        writer.write(f"families/{key}.html", "explorer.html", shell, this=context)
        contexts.append(context)
    return tuple(contexts)


def _by_title(sheets: tuple[SheetContext, ...]) -> tuple[SheetContext, ...]:
    return tuple(sorted(sheets, key=lambda sheet: sheet.formulation.title.casefold()))


def write_assets(folder: Path) -> None:
    """Write what pages share: styles, the page's own engine, Bokeh and its empty plots."""
    folder.mkdir()
    templates = resources.templates()
    # What holds for every page comes first; what belongs to parts of pages may differ from it.
    files = sorted((templates / "css").glob("*.css"), key=lambda path: (path.stem != "site", path))
    style = "".join(path.read_text(encoding="utf-8") for path in files)
    (folder / "site.css").write_text(style + stylesheet(), encoding="utf-8", newline="\n")
    for name in sorted({FIRST_SCRIPT, *SHEET_SCRIPTS, *INDEX_SCRIPTS}):
        script = (templates / "js" / f"{name}.js").read_text(encoding="utf-8")
        (folder / f"{name}.js").write_text(script, encoding="utf-8", newline="\n")
    (folder / "skeletons.js").write_text(skeletons_script(), encoding="utf-8", newline="\n")
    (folder / "bokeh.min.js").write_bytes(bokeh_script())


def environment_of(templates: Path) -> Environment:
    """Return the environment in which templates are rendered: strict, and escaping everything."""
    environment = Environment(
        loader=FileSystemLoader(templates, encoding="utf-8"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
    )
    environment.filters.update(FILTERS)
    environment.globals["sections"] = SECTIONS
    environment.globals["first_script"] = FIRST_SCRIPT
    return environment


@dataclass(frozen=True, slots=True, kw_only=True)
class Section:
    """One entry of the navigation."""

    key: str
    label: str
    path: str  # from the folder's top


SECTIONS: Final = (
    Section(key="formulations", label="Formulations", path="index.html"),
    Section(key="families", label="Families", path="index.html#families"),
    Section(key="reagents", label="Reagents", path="reagents.html"),
    Section(key="sources", label="Sources", path="sources.html"),
    Section(key="evidence", label="Evidence", path="evidence.html"),
    Section(key="method", label="Method", path="method.html"),
)
