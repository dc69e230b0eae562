"""The empty plots that pages share: complete, safe to open from disk, always the same bytes."""

import json
import os
import subprocess
import sys
from collections.abc import Iterator

import pytest

from bufferfolio.bokeh_figures import POINTS, SERIES, bokeh_script, skeletons_script
from bufferfolio.figure_styles import STYLES

START = "(globalThis.bufferfolio=globalThis.bufferfolio||{}).skeletons="
LINES = ["Line"] * SERIES + ["Scatter"] * POINTS + ["VSpan", "HSpan", "Text"]
# In the order that js/bokeh_figures.js counts on.
GLYPHS = {
    "lines": LINES,
    "log lines": LINES,
    "map": ["MultiPolygons", "Quad", "MultiLine", "MultiLine", "VSpan", "HSpan", "Text"],
}


@pytest.fixture(scope="module")
def skeletons() -> dict[str, object]:
    script = skeletons_script()
    assert script.startswith(START)
    return json.loads(script.removeprefix(START).removesuffix(";\n"))


def models(part: object) -> Iterator[dict[str, object]]:
    """Yield every model that is spelled out below a part of Bokeh's JSON."""
    if isinstance(part, dict):
        if part.get("type") == "object":
            yield part
        for each in part.values():
            yield from models(each)
    elif isinstance(part, list):
        for each in part:
            yield from models(each)


def figure_of(skeleton: dict[str, object]) -> dict[str, object]:
    (root,) = skeleton["doc"]["roots"]
    assert root["id"] == skeleton["root_id"]
    return root["attributes"]


@pytest.mark.parametrize("shape", GLYPHS)
def test_renderers_and_tools_come_in_the_order_the_script_counts_on(
    skeletons: dict[str, object], shape: str
) -> None:
    figure = figure_of(skeletons[shape])
    glyphs = [each["attributes"]["glyph"]["name"] for each in figure["renderers"]]
    assert glyphs == GLYPHS[shape]
    tools = figure["toolbar"]["attributes"]["tools"]
    assert [each["name"] for each in tools] == [
        "BoxZoomTool",
        "WheelZoomTool",
        "PanTool",
        "HoverTool",
    ]
    assert [each["name"] for each in figure["below"]] == ["LinearAxis", "Title"]
    axis = "LogAxis" if shape == "log lines" else "LinearAxis"
    assert [each["name"] for each in figure["left"]] == [axis]


@pytest.mark.parametrize("shape", GLYPHS)
def test_plots_leave_scrolling_to_the_page_and_ask_nothing_of_a_network(
    skeletons: dict[str, object], shape: str
) -> None:
    figure = figure_of(skeletons[shape])
    toolbar = figure["toolbar"]["attributes"]
    assert toolbar["active_drag"] is None
    assert toolbar["active_scroll"] is None
    assert toolbar["logo"] is None
    assert figure["toolbar_location"] is None
    assert "http" not in json.dumps(skeletons[shape])
    kinds = {each["name"] for each in models(skeletons[shape])}
    # These need what the page's policy forbids (eval), or a second script of Bokeh's.
    assert not {each for each in kinds if each.startswith("CustomJS") or "Legend" in each}
    assert "Range1d" in kinds
    assert "DataRange1d" not in kinds


def test_every_style_has_its_dashes(skeletons: dict[str, object]) -> None:
    assert skeletons["dashes"] == [list(style.dash) for style in STYLES]


def test_the_script_is_small_and_the_same_twice() -> None:
    assert skeletons_script() == skeletons_script()
    assert len(skeletons_script()) < 40_000


def test_the_script_is_the_same_in_another_process() -> None:
    program = (
        "import sys; from bokeh.plotting import figure; figure();"
        "from bufferfolio.bokeh_figures import skeletons_script;"
        "sys.stdout.buffer.write(skeletons_script().encode())"
    )
    outputs = []
    for seed in ("1", "77"):
        environment = {
            **os.environ,
            "PYTHONHASHSEED": seed,
            "PYTHONPATH": os.pathsep.join(sys.path),
        }
        command = [sys.executable, "-c", program]
        outputs.append(subprocess.run(command, env=environment, capture_output=True, check=True))
    assert [each.stdout.decode() for each in outputs] == [skeletons_script()] * 2


def test_bokeh_comes_from_the_installed_package() -> None:
    script = bokeh_script()
    assert script[:40].lstrip().startswith((b"/*", b"(", b"'use"))
    assert 800_000 < len(script) < 1_600_000
