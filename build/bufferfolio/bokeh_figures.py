"""Figures as interactive Bokeh plots: two plots without data that every page shares.

Figures of a kind differ only in data, so the folder carries one empty plot for each kind (and one
for lines over a logarithmic axis), written once as a script. `js/bokeh_figures.js` embeds a copy
where a reader looks at a figure, and fills in sources, ranges, words and colours. The order of the
models below is what that script counts on.
"""

import json
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

import bokeh
from bokeh.core.types import ID
from bokeh.embed import json_item
from bokeh.models import (
    BoxZoomTool,
    ColumnDataSource,
    HoverTool,
    HSpan,
    Line,
    MultiLine,
    MultiPolygons,
    PanTool,
    Quad,
    Range1d,
    Scatter,
    Text,
    VSpan,
    WheelZoomTool,
)
from bokeh.models.annotations import Title
from bokeh.models.glyph import Glyph
from bokeh.models.renderers import DataRenderer
from bokeh.plotting import figure as empty_figure
from bokeh.util import serialization

from bufferfolio.figure_styles import STYLES
from bufferfolio.figure_ticks import Scale

SERIES = 10  # lines that one plot has room for
POINTS = 2  # series of points likewise


def skeletons_script() -> str:
    """Return the script of empty plots that pages share: bufferfolio.skeletons = {...};."""
    with _fresh_ids():
        lines = _item(_lines("linear"))
    with _fresh_ids():
        log_lines = _item(_lines("log"))
    with _fresh_ids():
        cells = _item(_map())
    skeletons = {
        "dashes": [list(style.dash) for style in STYLES],
        "lines": lines,
        "log lines": log_lines,
        "map": cells,
    }
    # Bokeh's own key order carries meaning (references follow what they refer to): never sort it.
    text = json.dumps(skeletons, separators=(",", ":"), ensure_ascii=False, allow_nan=False)
    return f"(globalThis.bufferfolio=globalThis.bufferfolio||{{}}).skeletons={text};\n"


def bokeh_script() -> bytes:
    """Return Bokeh's own script for plots, without its widgets, as the package carries it."""
    return (Path(bokeh.__file__).parent / "server" / "static" / "js" / "bokeh.min.js").read_bytes()


@contextmanager
def _fresh_ids() -> Iterator[None]:
    """Count Bokeh's ids from the start, so that the same plot has the same bytes in any process."""
    before = serialization._simple_id
    serialization._simple_id = 1000
    try:
        yield
    finally:
        serialization._simple_id = before


def _item(plot: empty_figure) -> object:
    return json_item(plot, ID("figure"))


def _lines(scale: Scale) -> empty_figure:
    """Return an empty plot: ten lines, points twice, marks across x and across y, words."""
    plot = _plot(scale)
    lines = [_add(plot, Line(x="x", y="y", line_width=2.2), "x", "y") for _ in range(SERIES)]
    points = [
        _add(plot, Scatter(x="x", y="y", size=6, line_width=1.4, fill_color=None), "x", "y")
        for _ in range(POINTS)
    ]
    _add_marks_and_words(plot)
    readable = [*lines, *points]
    plot.add_tools(HoverTool(renderers=readable, line_policy="nearest", tooltips=[("", "$name")]))
    return plot


def _map() -> empty_figure:
    """Return an empty plot: bands, cells to read, lines between bands, limits, marks, words."""
    plot = _plot("linear")
    bands = MultiPolygons(xs="xs", ys="ys", fill_color="colour", line_color=None)
    _add(plot, bands, "xs", "ys", "colour")
    # The bands are drawn as smooth regions; unseen cells under the pointer give the values.
    cells = Quad(left="left", right="right", bottom="bottom", top="top")
    cells.update(fill_color=None, line_color=None)
    readable = _add(plot, cells, "left", "right", "bottom", "top", "x", "y", "value")
    _add(plot, MultiLine(xs="xs", ys="ys", line_width=0.8), "xs", "ys")
    _add(plot, MultiLine(xs="xs", ys="ys", line_width=2.4), "xs", "ys")
    _add_marks_and_words(plot)
    plot.add_tools(HoverTool(renderers=[readable], tooltips=[("", "@value")]))
    return plot


def _add_marks_and_words(plot: empty_figure) -> None:
    _add(plot, VSpan(x="x", line_width=1), "x")
    _add(plot, HSpan(y="y", line_width=1), "y")
    words = Text(x="x", y="y", text="text", text_color="colour", text_font_style="weight")
    words.update(text_align="center", text_baseline="middle", background_fill_alpha=0.8)
    _add(plot, words, "x", "y", "text", "colour", "weight")


def _add(plot: empty_figure, glyph: Glyph, *columns: str) -> DataRenderer:
    source = ColumnDataSource(data={column: [] for column in columns})
    return plot.add_glyph(source, glyph)


def _plot(scale: Scale) -> empty_figure:
    """Return a plot with a thin frame and ticks inside it, that leaves scrolling to the page."""
    title = Title(text=" ", text_font_style="normal", standoff=14)
    title.update(offset=-38)  # to the left end of the drawing, above the ticks' numbers
    plot = empty_figure(
        x_range=Range1d(start=1, end=2),
        y_range=Range1d(start=1, end=2),
        y_axis_type=scale,
        tools=[BoxZoomTool(), WheelZoomTool(), PanTool()],
        active_drag=None,
        active_scroll=None,
        toolbar_location=None,
        output_backend="canvas",
        sizing_mode="stretch_both",
        min_border=0,
        min_border_left=46,
        min_border_bottom=42,
        min_border_right=10,
        title=title,
        background_fill_color=None,
        border_fill_color=None,
    )
    plot.toolbar.logo = None
    plot.grid.visible = False
    for axis in [*plot.xaxis, *plot.yaxis]:
        axis.update(major_tick_in=5, major_tick_out=0, minor_tick_in=0, minor_tick_out=0)
        axis.update(axis_line_color=None)
    plot.add_layout(Title(text=" ", text_font_style="normal", align="right", standoff=1), "below")
    return plot
