"""Whatever stands in a file, the reader answers with definitions or with DefinitionErrors."""

import sys
from pathlib import Path

import pytest
import yaml
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from bufferfolio.errors import DefinitionErrors, render
from bufferfolio.reading import read_formulation, read_library
from bufferfolio.reading.complaints import validate
from bufferfolio.reading.files import load
from bufferfolio.reading.models import (
    FamilyShape,
    FormulationShape,
    InteractionsShape,
    ReagentShape,
    SourcesShape,
)
from bufferfolio.reading.nodes import compose

BROKEN = Path(__file__).parent / "broken"
SHAPES = [FamilyShape, FormulationShape, InteractionsShape, ReagentShape, SourcesShape]
GOOD = {
    shape: (BROKEN / "good" / f"{kind}.yaml").read_text(encoding="utf-8")
    for shape, kind in [
        (FamilyShape, "family"),
        (FormulationShape, "formulation"),
        (ReagentShape, "reagent"),
    ]
}
QUICK = settings(
    deadline=None, max_examples=150, suppress_health_check=[HealthCheck.function_scoped_fixture]
)

scalars = (
    st.text(max_size=12)
    | st.integers()
    | st.floats()
    | st.booleans()
    | st.none()
    | st.sampled_from(["1 g", "25 °C", "not stated", "Na+", "1e999 g", "phosphate", "recalled"])
)
keys = st.sampled_from(
    sorted({key for shape in SHAPES for key in shape.model_fields} | {"value", "source", "at"})
)
trees = st.recursive(
    scalars,
    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(keys | st.text(max_size=4), inner),
    max_leaves=12,
)


def answers(text: str, shape: type) -> None:
    """Read; a complaint has to name a place inside the text, and be printable."""
    try:
        validate(compose(text, "file.yaml"), shape)
    except DefinitionErrors as problem:
        assert problem.errors
        for error in problem.errors:
            assert error.place.line >= 1
            assert error.place.column >= 1
            assert error.problem
            assert error.accepted
            assert render(error).startswith(f"file.yaml:{error.place.line}:")


@given(raw=st.binary(max_size=200))
@QUICK
def test_any_bytes(raw, tmp_path):
    path = tmp_path / "any.yaml"
    path.write_bytes(raw)
    try:
        validate(load(path), FormulationShape)
    except DefinitionErrors as problem:
        assert str(problem)


@given(
    text=st.text(alphabet=st.sampled_from("ab:- \n\t{}[],&*!|>'\"#%@?~.0\x85\u2028é"), max_size=60)
)
@QUICK
def test_any_text_made_of_what_means_something_to_yaml(text):
    answers(text, FormulationShape)


@given(tree=trees, shape=st.sampled_from(SHAPES))
@QUICK
def test_any_tree(tree, shape):
    answers(yaml.safe_dump(tree, allow_unicode=True), shape)


@given(data=st.data())
@QUICK
def test_a_good_file_with_one_thing_replaced(data, tmp_path):
    """One piece of a good file exchanged for another piece or for a bad one, then read whole."""
    shape = data.draw(st.sampled_from(sorted(GOOD, key=lambda shape: shape.__name__)))
    pieces = GOOD[shape].replace("{", "\0{\0").replace(",", "\0,\0").replace(": ", "\0: \0")
    parts = pieces.split("\0")
    at = data.draw(st.integers(0, len(parts) - 1))
    parts[at] = data.draw(
        st.sampled_from(parts) | st.sampled_from(["", "[]", "{}", "-1 g", "1e400", "~", "&a", "H"])
    )
    home = {FamilyShape: "families", ReagentShape: "reagents", FormulationShape: "formulations"}
    folder = tmp_path / "systems"
    path = folder / home[shape] / "case.yaml"
    for old in folder.rglob("case.yaml"):
        old.unlink()
    path.parent.mkdir(parents=True, exist_ok=True)
    path.write_text("".join(parts), encoding="utf-8")
    try:
        read_library(folder, BROKEN / "library")
    except DefinitionErrors as problem:
        assert str(problem)


@pytest.mark.parametrize(
    "text",
    [
        "[" * 100_000,
        "a: " + "[" * 3_000 + "]" * 3_000,
        "{a: " * 50_000,
        "- " * 50_000 + "a",
        "? " * 20_000,
        "a:\n" + "".join(" " * n + "b:\n" for n in range(1, 1200)),
        "x" * 900_000,
        "a" * 2_000 + ": 1\n",
        "[" + "1," * 200_000,
        "H" * 500_000 + ": {}",
        "cautions: [" + "1," * 200_000 + "]",
        "{" + ", ".join(f"titel{n}: 1" for n in range(40_000)) + "}",
        "{" + "titel: 1," * 80_000 + "}",
    ],
    ids=lambda text: text[:8].strip(),
)
def test_large_and_deep_text_is_answered(text):
    answers(text, FormulationShape)


def test_the_slow_parser_answers_alike(monkeypatch):
    """PyYAML without its C part, as on some platforms: the same complaints, and no recursion."""
    monkeypatch.setattr("bufferfolio.reading.nodes.LOADER", yaml.SafeLoader)
    assert sys.getrecursionlimit() < 100_000
    answers("[" * 20_000, FormulationShape)
    library = read_library(BROKEN / "library")
    assert read_formulation(BROKEN / "good" / "formulation.yaml", library).title
    for case in ("not-yaml", "open-quote", "colon-in-text", "tab", "duplicate-key", "deep"):
        text = (BROKEN / f"formulation-{case}.yaml").read_text(encoding="utf-8")
        with pytest.raises(DefinitionErrors) as caught:
            validate(compose(text, f"formulations/formulation-{case}.yaml"), FormulationShape)
        expected = (BROKEN / f"formulation-{case}.txt").read_text(encoding="utf-8")
        assert f"{caught.value}\n" == expected
