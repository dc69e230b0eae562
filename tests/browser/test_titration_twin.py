"""A titration of one's own in the page: texts, fits, end points and pictures are those of Python.

Fits are found by different methods (Levenberg and Marquardt's there, scipy's here), and agree to
1e-6 in every quantity; today to 1e-8. Everything else is the same to the last digits.
"""

import json
from dataclasses import asdict
from typing import Final

import numpy as np
import pytest
from playwright.sync_api import Page

from bufferfolio import resources
from bufferfolio.bokeh_figures import bokeh_script, skeletons_script
from bufferfolio.end_points import end_points
from bufferfolio.engine_data import subject_data
from bufferfolio.figure_styles import stylesheet
from bufferfolio.figures import as_data, rounded
from bufferfolio.fit_words import gran_words, scatter_words, verdict_words, with_error
from bufferfolio.fitting import fit
from bufferfolio.gran import gran_lines
from bufferfolio.measured import parsed, told
from bufferfolio.measured_plots import measured_figure
from bufferfolio.page_scripts import PURE_SCRIPTS
from bufferfolio.subjects import subject_of
from bufferfolio.svg_figures import svg
from measured_cases import CASES
from measured_titrations import PLANS, SAMPLE, Made, Plan, made
from recipes import shipped
from sample_figures import random_figures

# In the order in which a page loads them.
SCRIPTS: Final = PURE_SCRIPTS
LIMIT: Final = 1e-6

HELPERS: Final = """
  window.experimentOf = (each) => {
    const subject = bufferfolio.subjects.subjectOf(each.subject);
    const { experimentOf } = bufferfolio.experiments;
    return experimentOf(subject, subject.additions[each.titrant], each.temperature, each.sample);
  };
"""
FIT: Final = """
  async (each) => {
    const bf = bufferfolio;
    const experiment = experimentOf(each);
    const found = bf.end_points.endPoints(each.points);
    const lines = bf.gran.granLines(experiment, each.points, found, each.precision);
    const fit = await bf.fitting.fit(experiment, each.points, each.free, each.precision);
    const figures = bf.measured_plots.measuredFigure(experiment, each.points, found, fit);
    const recipe = bf.measured_plots.measuredFigure(experiment, each.points, found);
    const { experiment: _, ...rest } = fit;
    return {
      found, lines, fit: rest, words: bf.fit_words.verdictWords(fit),
      scatter: bf.fit_words.scatterWords(fit),
      belongs: lines.map((line) => bf.fit_words.granWords(line, experiment)),
      drawn: [...figures, ...recipe].map(bf.svg_figures.svg),
      written: fit.estimates.map((one) => bf.fit_words.withError(one.value, one.standard_error)),
    };
  }
"""
# Works on thousands of points while a timer ticks; returns the times between ticks.
PATIENT: Final = """
  async (each) => {
    let [last, told] = [performance.now(), 0];
    const gaps = [];
    const tick = () => {
      gaps.push(performance.now() - last);
      last = performance.now();
    };
    const timer = setInterval(tick, 1);
    const progress = () => { told += 1; };
    const begun = performance.now();
    const found = await bufferfolio.fitting.fit(
      experimentOf(each), each.points, each.free, each.precision, progress);
    clearInterval(timer);
    return {
      gaps, told, seconds: (performance.now() - begun) / 1e3, parameters: found.parameters,
    };
  }
"""


@pytest.fixture
def twin(page: Page) -> Page:
    """Return a page that holds nothing but the scripts under test."""
    for name in SCRIPTS:
        path = resources.templates() / "js" / f"{name}.js"
        page.add_script_tag(content=path.read_text(encoding="utf-8"))
    page.add_script_tag(content=HELPERS)
    return page


def case_data(plan: Plan, case: Made) -> dict[str, object]:
    library = shipped()
    return {
        "subject": subject_data(subject_of(library.formulations[plan.formulation], library)),
        "titrant": plan.titrant,
        "temperature": 298.15,
        "sample": SAMPLE,
        "points": {
            "volume": case.points.volume.tolist(),
            "pH": case.points.pH.tolist(),
            "rows": list(case.points.rows),
        },
        "free": [asdict(each) for each in case.free],
        "precision": asdict(case.precision),
    }


def test_every_text_is_understood_alike(twin: Page) -> None:
    """Points to the last bit, complaints word for word, for all that the Python tests know."""
    call = """
      (texts) => texts.map((text) => {
        const found = bufferfolio.measured.parsed(text);
        return { ...found, told: found.complaints.map(bufferfolio.measured.told) };
      })
    """
    there = twin.evaluate(call, [text for text, _ in CASES.values()])
    for (name, (text, _)), found in zip(CASES.items(), there, strict=True):
        here = parsed(text)
        assert found["told"] == [told(each) for each in here.complaints], name
        assert found["complaints"] == [asdict(each) for each in here.complaints], name
        assert found["layout"] == (asdict(here.layout) if here.layout else None), name
        if here.points is None:
            assert found["points"] is None, name
            continue
        assert found["points"]["volume"] == here.points.volume.tolist(), name
        assert found["points"]["pH"] == here.points.pH.tolist(), name
        assert found["points"]["rows"] == list(here.points.rows), name


def test_files_of_either_encoding_are_decoded_alike(twin: Page) -> None:
    text = "V (µL);pH\n1;7\n"
    contents = [
        text.encode(),
        "\ufeff".encode() + text.encode(),
        b"\xff\xfe" + text.encode("utf-16-le"),
        b"\xfe\xff" + text.encode("utf-16-be"),
    ]
    call = "(all) => all.map((each) => bufferfolio.measured.textOf(new Uint8Array(each)))"
    assert twin.evaluate(call, [list(each) for each in contents]) == [text] * 4


@pytest.mark.parametrize("plan", PLANS, ids=lambda plan: f"{plan.formulation}: {plan.free}")
@pytest.mark.parametrize("count", [12, 60, 300])
def test_fits_end_points_and_pictures_agree(twin: Page, plan: Plan, count: int) -> None:
    case = made(plan, count, seed=count)
    there = twin.evaluate(FIT, case_data(plan, case))
    here = fit(case.experiment, case.points, case.free, case.precision)
    np.testing.assert_allclose(there["fit"]["parameters"], here.parameters, rtol=0, atol=LIMIT)
    for one, other in zip(there["fit"]["estimates"], here.estimates, strict=True):
        for name in ("value", "standard_error", "recipe", "low", "high"):
            assert one[name] == pytest.approx(getattr(other, name), rel=LIMIT), name
    np.testing.assert_allclose(there["fit"]["correlation"], here.correlation, atol=LIMIT)
    np.testing.assert_allclose(there["fit"]["residuals"], here.residuals, rtol=0, atol=LIMIT)
    chi_squared = here.reduced_chi_squared
    assert there["fit"]["reduced_chi_squared"] == pytest.approx(chi_squared, rel=LIMIT)
    assert there["fit"]["freedom"] == here.freedom
    assert there["fit"]["verdict"]["kind"] == here.verdict.kind
    assert there["fit"]["verdict"]["about"] == list(here.verdict.about)
    assert there["words"] == verdict_words(here)
    assert there["scatter"] == scatter_words(here)
    written = [with_error(each.value, each.standard_error) for each in here.estimates]
    assert there["written"] == [list(each) for each in written]

    found = end_points(case.points)
    lines = gran_lines(case.experiment, case.points, found, case.precision)
    assert_close(there["found"], [asdict(each) for each in found])
    assert_close(there["lines"], [asdict(each) for each in lines])
    assert there["belongs"] == [gran_words(line, case.experiment) for line in lines]
    figures = [
        *measured_figure(case.experiment, case.points, found, here),
        *measured_figure(case.experiment, case.points, found),
    ]
    assert there["drawn"] == [svg(figure) for figure in figures]


def assert_close(there: object, here: object) -> None:
    """Numbers to nine digits; everything else exactly."""
    if isinstance(here, dict):
        assert set(there) == set(here)
        for name, value in here.items():
            assert_close(there[name], value)
    elif isinstance(here, list | np.ndarray):
        assert len(there) == len(here)
        for one, other in zip(there, here, strict=True):
            assert_close(one, other)
    elif isinstance(here, float):
        assert there == pytest.approx(here, rel=1e-9)
    else:
        assert there == here


def test_what_cannot_be_free_is_refused_in_the_same_words(twin: Page) -> None:
    case = made(PLANS[0], 12, seed=0)
    data = case_data(PLANS[0], case)
    refused = [
        ([], "0 quantities cannot be free: choose 1 to 4"),
        (["offset", "offset"], "more than one offset is free: choose one"),
        (["total phosphate"], "the sample does not hold 'phosphate'; it holds: tris"),
        (["pK tris 1"], "tris has no step 2; its steps are 1 to 1"),
    ]
    call = "([each, free]) => bufferfolio.fit_parameters.freeProblem(experimentOf(each), free)"
    for names, problem in refused:
        free = []
        for name in names:
            kind, family, step = [*name.split(" "), "", "0"][:3]
            free.append({"kind": kind, "family": family, "step": int(step or 0)})
        assert twin.evaluate(call, [data, free]) == problem


@pytest.mark.parametrize("plan", [PLANS[0], PLANS[2]], ids=["Davies", "pair terms"])
def test_five_thousand_points_leave_the_page_responsive(twin: Page, plan: Plan) -> None:
    """Work comes in slices of 12 ms: of twenty waits nineteen are shorter than 100 ms.

    The rest, and the seconds, leave room for a machine that is busy with other tests.
    """
    case = made(plan, 5000, seed=5)
    there = twin.evaluate(PATIENT, case_data(plan, case))
    here = fit(case.experiment, case.points, case.free, case.precision)
    np.testing.assert_allclose(there["parameters"], here.parameters, rtol=0, atol=LIMIT)
    assert there["told"] > 10
    assert np.quantile(there["gaps"], 0.95) < 100.0
    assert there["seconds"] < 60.0


def test_a_fit_can_be_ended(twin: Page) -> None:
    case = made(PLANS[2], 2000, seed=5)
    call = """
      async (each) => bufferfolio.fitting.fit(
        experimentOf(each), each.points, each.free, each.precision, () => false)
    """
    assert twin.evaluate(call, case_data(PLANS[2], case)) is None


def test_drawings_of_lines_and_points_are_the_same_characters(twin: Page) -> None:
    figures = random_figures(120, seed=11)
    assert any(each.points for figure in figures for each in figure.series)
    call = "(all) => JSON.parse(all).map((each) => bufferfolio.svg_figures.svg(each))"
    there = twin.evaluate(call, json.dumps([as_data(figure) for figure in figures]))
    assert there == [svg(rounded(figure)) for figure in figures]


def test_the_plot_shows_points_and_lines_where_the_drawing_does(twin: Page) -> None:
    """Circles carry every point; lines come without them, each in its own style."""
    twin.set_viewport_size({"width": 700, "height": 600})
    for content in (bokeh_script().decode(), skeletons_script()):
        twin.add_script_tag(content=content)
    twin.add_style_tag(content=stylesheet())
    case = made(PLANS[5], 41, seed=1)
    result = fit(case.experiment, case.points, case.free, case.precision)
    figures = measured_figure(case.experiment, case.points, end_points(case.points), result)
    call = """
      async (figure) => {
        const element = document.body.appendChild(document.createElement("div"));
        element.style.width = "520px";
        const { parts } = await bufferfolio.bokeh_figures.embed(element, figure);
        const shown = (renderers) => renderers.filter((each) => each.visible).map((each) =>
          [each.name, each.data_source.data.x.length, each.glyph.type]);
        return [shown(parts.lines), shown(parts.points)];
      }
    """
    measured, residuals = (twin.evaluate(call, as_data(figure)) for figure in figures)
    assert measured == [
        [["recipe and label", 241, "Line"], ["best fit", 241, "Line"]],
        [["measured", 41, "Scatter"]],
    ]
    assert residuals == [[], [["measured less best fit", 41, "Scatter"]]]
