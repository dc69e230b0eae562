"""The manner of the code that a program can check: direction, labels, length."""

import ast
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

import bufferfolio

PACKAGE = Path(bufferfolio.__file__).parent
PROJECT = Path(__file__).parents[1]
MODULES = sorted(PACKAGE.rglob("*.py"))
LABELS = ["Shapes:", "Units:", "Raises:", "Source:"]
LONGEST_FUNCTION = 45
LONGEST_MODULE = 320

Function = ast.FunctionDef | ast.AsyncFunctionDef


def functions_of(path: Path) -> Iterator[Function]:
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, Function):
            yield node


def public_functions_of(path: Path) -> Iterator[Function]:
    """Yield the module's own functions; a record's fields and properties state units in place."""
    for node in ast.parse(path.read_text(encoding="utf-8")).body:
        if isinstance(node, Function) and not node.name.startswith("_"):
            yield node


def is_numerical(function: Function) -> bool:
    every = [*function.args.posonlyargs, *function.args.args, *function.args.kwonlyargs]
    annotations = [function.returns, *(argument.annotation for argument in every)]
    return any("FloatArray" in ast.unparse(kind) for kind in annotations if kind)


def name_of(path: Path) -> str:
    return path.relative_to(PACKAGE).as_posix()


def test_imports_go_one_way() -> None:
    """The contracts of pyproject.toml: rows of modules, and who may read files."""
    lint = "from importlinter.cli import lint_imports_command; lint_imports_command()"
    command = [sys.executable, "-c", lint, "--no-logo"]
    ended = subprocess.run(command, cwd=PROJECT, capture_output=True, encoding="utf-8")
    assert ended.returncode == 0, ended.stdout + ended.stderr


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_public_numerical_functions_say_shapes_units_raises_and_source(path: Path) -> None:
    for function in public_functions_of(path):
        if is_numerical(function):
            words = [line.split()[:1] for line in (ast.get_docstring(function) or "").splitlines()]
            found = [label for first in words for label in first if label in LABELS]
            assert found == LABELS, f"{path.name}:{function.lineno}: {function.name} has {found}"


def test_the_walk_over_labels_sees_the_numerical_functions() -> None:
    """Guard against a walk that finds nothing, and so never complains."""
    seen = {f.name for path in MODULES for f in public_functions_of(path) if is_numerical(f)}
    assert {"density", "pKw_at", "pK_at"} <= seen


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_a_function_fits_on_a_screen(path: Path) -> None:
    for function in functions_of(path):
        length = (function.end_lineno or function.lineno) - function.lineno + 1
        assert length <= LONGEST_FUNCTION, f"{path.name}: {function.name} has {length} lines"


@pytest.mark.parametrize("path", MODULES, ids=name_of)
def test_a_module_answers_one_question(path: Path) -> None:
    length = len(path.read_text(encoding="utf-8").splitlines())
    assert length <= LONGEST_MODULE, f"{path.name} has {length} lines: split it by idea"
