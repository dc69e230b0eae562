#!/usr/bin/env python3
"""Run every check: `python3 tests/run.py [--no-browser] [pytest arguments]`.

Makes .venv with what the tests need, finds Chromium (installs it where `apt-get` may), then runs
ruff, mypy and the import contracts, the benchmarks, and pytest. With pytest arguments of your own
(`python3 tests/run.py tests/test_water.py -k density`) only those tests run after the linters.
"""

import sys

if sys.version_info < (3, 11):  # noqa: UP036 - it is the message for those who have less
    sys.exit("bufferfolio needs Python 3.11 or later; this is Python %d.%d" % sys.version_info[:2])

import os
import shutil
import subprocess
from collections.abc import Iterator, Sequence
from pathlib import Path
from typing import Final

sys.path.insert(0, str(Path(__file__).resolve().parents[1] / "build"))

from bootstrap import (
    CHROMIUM_VARIABLE,
    ENVIRONMENT,
    ROOT,
    CannotGoOn,
    clean_variables,
    find_chromium,
    prepare_environment,
    program,
)


def main(arguments: Sequence[str]) -> int:
    """Run all checks and return the exit code: 0 where every one of them passed."""
    chosen = [argument for argument in arguments if argument != "--no-browser"]
    variables = clean_variables()
    try:
        prepare_environment(ENVIRONMENT, extra="test")
        if len(chosen) == len(arguments):
            variables[CHROMIUM_VARIABLE] = str(find_chromium() or install_chromium())
    except CannotGoOn as problem:
        print(problem, file=sys.stderr)
        return 1
    failed = [check for check in LINTERS if not passed(check, variables)]
    for check in failed:
        print(f"failed: {' '.join(check)}", flush=True)
    # pytest comes last whatever the linters said: its closing line is the one people look for.
    pytest = ["pytest", *(["--no-browser"] if len(chosen) < len(arguments) else [])]
    failed += [run for run in pytest_runs(pytest, chosen) if not passed(run, variables)]
    return 1 if failed else 0


def pytest_runs(pytest: Sequence[str], chosen: Sequence[str]) -> Iterator[list[str]]:
    """Yield the pytest runs: what was asked for, or the benchmarks alone and then the rest."""
    if chosen:
        yield [*pytest, *chosen]
        return
    yield [*pytest, "-m", "benchmark"]
    workers = str(min(4, os.cpu_count() or 1))
    yield [*pytest, "-m", "not benchmark", "-n", workers, "--dist", "worksteal"]


def passed(command: Sequence[str], variables: dict[str, str]) -> bool:
    """Run one program of the environment in the project's folder; say whether it was content."""
    print(f"\n== {' '.join(command)}", flush=True)
    found = str(program(ENVIRONMENT, command[0]))
    return not subprocess.run([found, *command[1:]], cwd=ROOT, env=variables).returncode


def install_chromium() -> Path:
    """Install Chromium where that takes no questions, and return it; say what to do elsewhere."""
    named = os.environ.get(CHROMIUM_VARIABLE)
    if named:
        raise CannotGoOn(f"{CHROMIUM_VARIABLE} names {named}, which is no program here")
    administrator = as_administrator()
    if shutil.which("apt-get") and administrator is not None:
        print("installing Chromium for the browser tests", flush=True)
        quiet = {**os.environ, "DEBIAN_FRONTEND": "noninteractive"}
        for step in (["update"], ["install", "-y", "--no-install-recommends", "chromium"]):
            command = [*administrator, "apt-get", "-qq", *step]
            if subprocess.run(command, env=quiet, stdin=subprocess.DEVNULL).returncode:
                break
    found = find_chromium()
    if found is None:
        raise CannotGoOn(WITHOUT_BROWSER)
    return found


def as_administrator() -> list[str] | None:
    """Return what to put before a command to run it as administrator; None where that would ask."""
    if sys.platform == "win32":
        return None
    if os.geteuid() == 0:
        return []
    sudo = shutil.which("sudo")
    if sudo and not subprocess.run([sudo, "-n", "true"], capture_output=True).returncode:
        return [sudo, "-n"]
    return None


LINTERS: Final = (
    ["ruff", "check"],
    ["ruff", "format", "--check"],
    ["mypy"],
    ["lint-imports", "--no-logo"],
)

WITHOUT_BROWSER: Final = f"""The browser tests need Chromium, and none was found. Install it:
    Debian, Ubuntu    sudo apt-get update && sudo apt-get install chromium
    Fedora            sudo dnf install chromium
    Arch              sudo pacman -S chromium
    macOS             brew install --cask chromium, or Google Chrome from its own page
    Windows           winget install Google.Chrome
or name a browser of that kind in the variable {CHROMIUM_VARIABLE}. To leave the browser tests
out, run: python3 tests/run.py --no-browser"""


if __name__ == "__main__":
    try:
        sys.exit(main(sys.argv[1:]))
    except KeyboardInterrupt:
        sys.exit("stopped")
