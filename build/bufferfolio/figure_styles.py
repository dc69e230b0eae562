"""What figures look like: line colours with their dashes, map colours, and the style sheet.

Colours come in pairs, for light and for dark pages, and reach the drawings as CSS custom
properties: one drawing serves both, and print. Every colour holds 4.5 : 1 against its surface, so
labels may wear it; every line style has a dash pattern and a mark of its own, so none needs its
colour. A third set, for bright sunlight, holds 7 : 1 on white.
"""

from dataclasses import dataclass
from typing import Final


@dataclass(frozen=True, slots=True, kw_only=True)
class Style:
    """How one series looks."""

    light: str  # colour on a light page
    dark: str  # colour on a dark page
    dash: tuple[int, ...]  # lengths of stroke and gap in px; empty: solid
    stark: str = ""  # colour in bright sunlight; empty: as on a light page
    mark: str = ""  # path of a point about its centre


@dataclass(frozen=True, slots=True, kw_only=True)
class Surface:
    """What lies under and around the series."""

    name: str  # of the custom property
    light: str
    dark: str
    stark: str


STYLES: Final = (
    Style(light="#1c5fa8", dark="#7db4f0", stark="#19579a", dash=(), mark="h0"),
    Style(
        light="#b5430e",
        dark="#f39a6b",
        stark="#96370b",
        dash=(10, 4),
        mark="m-2.7-2.7h5.4v5.4h-5.4z",
    ),
    Style(light="#0a7659", dark="#5cc9a3", stark="#086149", dash=(3, 3), mark="m0-3.7l3.5 6h-7z"),
    Style(
        light="#8e3d86",
        dark="#d99ad3",
        stark="#84387c",
        dash=(11, 3, 2, 3),
        mark="m0-4l3.6 4-3.6 4-3.6-4z",
    ),
    Style(
        light="#856500",
        dark="#d9b64a",
        stark="#6d5200",
        dash=(6, 3),
        mark="m-2.9-2.9l5.8 5.8m0-5.8l-5.8 5.8",
    ),
    Style(
        light="#464e55",
        dark="#b9c2c9",
        stark="#464e55",
        dash=(11, 3, 2, 3, 2, 3),
        mark="m-3.7 0h7.4m-3.7-3.7v7.4",
    ),
    Style(light="#a32643", dark="#f08fa2", stark="#a12542", dash=(2, 5), mark="m0 3.7l3.5-6h-7z"),
    Style(light="#5146a8", dark="#aea6f5", stark="#5146a8", dash=(16, 5), mark="m-4.2 0h8.4"),
    Style(light="#5d6c10", dark="#b4c36a", stark="#4f5c0d", dash=(6, 2, 2, 2), mark="m0-4.2v8.4"),
    Style(light="#6b4a35", dark="#cfa78c", stark="#6b4a35", dash=(4, 6), mark="m-3-3h6l-6 6h6z"),
)

# From pale to deep on a light page and from deep to bright on a dark one: the order survives a
# grey printer, and the ink of labels stays readable on every step.
BAND_COLOURS: Final = (
    Style(light="#fbf8ea", dark="#16232b", dash=()),
    Style(light="#eff3df", dark="#182b34", dash=()),
    Style(light="#e1edd6", dark="#1a333d", dash=()),
    Style(light="#d1e6d0", dark="#1c3b45", dash=()),
    Style(light="#c0deca", dark="#1f434c", dash=()),
    Style(light="#aed5c6", dark="#234c53", dash=()),
    Style(light="#9dcbc3", dark="#28555a", dash=()),
    Style(light="#8dc1c1", dark="#2e5e60", dash=()),
    Style(light="#80b6bf", dark="#356764", dash=()),
    Style(light="#76aabc", dark="#3e7068", dash=()),
)

SURFACES: Final = (
    Surface(name="figure-surface", light="#ffffff", dark="#12181c", stark="#ffffff"),
    Surface(name="figure-ink", light="#1b2328", dark="#e4eaed", stark="#000000"),
    Surface(name="figure-frame", light="#66727a", dark="#8d9aa2", stark="#000000"),
    Surface(name="figure-mark", light="#3a444b", dark="#c3ccd2", stark="#000000"),
)

FONT: Final = "system-ui, -apple-system, 'Segoe UI', Roboto, 'Noto Sans', sans-serif"


def stylesheet() -> str:
    """Return the CSS that static figures and their legends need, custom properties first."""
    light, dark, stark = (_properties(page) for page in ("light", "dark", "stark"))
    series = [_series_rules(index, style.dash) for index, style in enumerate(STYLES)]
    bands = [
        f"svg.figure .m{index}{{fill:var(--m{index})}}\n"
        f".band-swatch.m{index}{{background:var(--m{index})}}"
        for index in range(len(BAND_COLOURS))
    ]
    # "screen": a page printed from a dark screen is still ink on white paper.
    screens = f"@media screen and (prefers-color-scheme:dark){{:root{{{dark}}}}}"
    stark += f"--figure-line:{STARK_LINE};"
    sunlight = f"@media screen{{:root[data-contrast=high]{{{stark}}}{' '.join(STARK_RULES)}}}"
    light += f"--figure-line:{LINE};"
    return "\n".join([f":root{{{light}}}", screens, sunlight, *RULES, *series, *bands]) + "\n"


def _properties(page: str) -> str:
    named: list[tuple[str, Style | Surface]] = [
        *((each.name, each) for each in SURFACES),
        *((f"s{index}", style) for index, style in enumerate(STYLES)),
        *((f"m{index}", style) for index, style in enumerate(BAND_COLOURS)),
    ]
    return "".join(f"--{name}:{_colour(each, page)};" for name, each in named)


def _colour(each: Style | Surface, page: str) -> str:
    return {"light": each.light, "dark": each.dark, "stark": each.stark or each.light}[page]


def _series_rules(index: int, dash: tuple[int, ...]) -> str:
    pattern = " ".join(str(length) for length in dash)
    dashes = f";stroke-dasharray:{pattern}" if dash else ""
    return (
        f"svg.figure .s{index}{{stroke:var(--s{index}){dashes}}}\n"
        f"svg.figure .t{index}{{fill:var(--s{index})}}"
    )


LINE: Final = 2.2  # px, width of lines
STARK_LINE: Final = 3.2  # in bright sunlight

# Thicker where shade alone would not carry; their selectors win over those of RULES.
STARK_RULES: Final = (
    ":root[data-contrast=high] svg.figure .frame{stroke-width:1.6}",
    ":root[data-contrast=high] svg.figure :is(.mark,.iso){stroke-width:1.6}",
    ":root[data-contrast=high] svg.figure text{font-weight:600}",
)

RULES: Final = (
    "svg.figure{display:block;width:100%;height:auto;color:var(--figure-ink)}",
    f"svg.figure{{background:var(--figure-surface);font:14px {FONT};print-color-adjust:exact}}",
    "svg.figure text{fill:currentColor}",
    "svg.figure .n{text-anchor:end}",
    "svg.figure .c{text-anchor:middle}",
    "svg.figure .halo{paint-order:stroke;stroke:var(--figure-surface)}",
    "svg.figure .halo{stroke-width:4px;stroke-linejoin:round}",
    "svg.figure .name{font-weight:600}",
    "svg.figure path{fill-rule:evenodd}",
    "svg.figure .frame{fill:none;stroke:var(--figure-frame);stroke-width:1}",
    "svg.figure .line{fill:none;stroke-width:var(--figure-line);stroke-linejoin:round}",
    "svg.figure path.point{fill-rule:nonzero;stroke-width:1.5;stroke-dasharray:none}",
    # A point of no length, as wide as its stroke.
    "svg.figure path.point.s0{stroke-width:6.5;stroke-linecap:round}",
    "svg.figure.swatch.spot{width:14px;height:14px}",
    "svg.figure path.circles{fill:none;stroke-width:1.4;stroke-dasharray:none}",
    "svg.figure .mark{fill:none;stroke:var(--figure-mark);stroke-width:1}",
    "svg.figure .limit{fill:none;stroke:var(--figure-mark);stroke-width:2.4}",
    "svg.figure .iso{fill:none;stroke:var(--figure-frame);stroke-width:.8}",
    "svg.figure.swatch{display:inline-block;width:34px;height:10px;background:none}",
    ".band-swatch{display:inline-block;width:22px;height:12px;print-color-adjust:exact}",
    # Bokeh hangs its read-outs on the page's body, where these reach them.
    ".bk-Tooltip{--background-color:var(--figure-surface);--color:var(--figure-ink)}",
    ".bk-Tooltip{--divider-color:var(--figure-frame);--bokeh-font-size:14px}",
    ".bk-Tooltip{--tooltip-arrow-color:var(--figure-frame)}",
    ".bk-Tooltip{--tooltip-arrow-inner-color:var(--figure-frame)}",
    ".band-swatch{border:1px solid var(--figure-frame)}",
)
