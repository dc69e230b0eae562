"""What the tests share: the library, a site built once a run, and a browser."""

import json
import os
import subprocess
import sys
import time
from collections.abc import Iterator
from pathlib import Path

import pytest
from playwright.sync_api import Browser, BrowserContext, Page, sync_playwright

from bootstrap import CHROMIUM_VARIABLE, find_chromium
from bufferfolio import resources

TESTS = Path(__file__).parent


def pytest_addoption(parser: pytest.Parser) -> None:
    parser.addoption("--no-browser", action="store_true", help="leave out the browser tests")


@pytest.hookimpl(tryfirst=True)
def pytest_collection_modifyitems(config: pytest.Config, items: list[pytest.Item]) -> None:
    """Mark tests by the folder they stand in, and leave out those of the browser if asked to."""
    for item in items:
        folder = item.path.relative_to(TESTS).parts[0]
        if folder == "browser":
            item.add_marker("browser")
        if folder == "benchmarks":
            item.add_marker("benchmark")
    if config.getoption("--no-browser"):
        left_out = [item for item in items if item.get_closest_marker("browser")]
        config.hook.pytest_deselected(items=left_out)
        items[:] = [item for item in items if item not in left_out]


@pytest.fixture(scope="session")
def systems() -> Path:
    """Return the folder of the shipped definitions."""
    return resources.systems()


@pytest.fixture(scope="session")
def site(tmp_path_factory: pytest.TempPathFactory, systems: Path) -> Path:
    """Return a folder with the site of the shipped definitions, built once for all workers."""
    shared = tmp_path_factory.getbasetemp()
    if "PYTEST_XDIST_WORKER" in os.environ:
        shared = shared.parent
    out, outcome = shared / "site", shared / "site.json"
    try:
        (shared / "site.started").touch(exist_ok=False)
    except FileExistsError:
        waited_for(outcome)
    else:
        command = [sys.executable, "-m", "bufferfolio", "build", str(systems), "--out", str(out)]
        ended = subprocess.run(command, capture_output=True, encoding="utf-8")
        unfinished = shared / "site.json.new"
        unfinished.write_text(json.dumps([ended.returncode, ended.stdout, ended.stderr]), "utf-8")
        unfinished.replace(outcome)
    code, stdout, stderr = json.loads(outcome.read_text("utf-8"))
    assert code == 0, f"the site cannot be built:\n{stdout}\n{stderr}"
    return out


def waited_for(path: Path, seconds: float = 300.0) -> None:
    """Return when another worker has made `path`."""
    last = time.monotonic() + seconds
    while not path.exists():
        assert time.monotonic() < last, f"{path} has not appeared in {seconds:.0f} s"
        time.sleep(0.2)


@pytest.fixture(scope="session")
def chromium() -> Path:
    """Return the browser that the tests drive."""
    found = find_chromium()
    if found is None:
        pytest.fail(f"no Chromium: install it or set {CHROMIUM_VARIABLE}, or give --no-browser")
    return found


@pytest.fixture(scope="session")
def browser(chromium: Path) -> Iterator[Browser]:
    """Yield a running browser without a window."""
    # Chromium refuses its sandbox to the administrator, as whom continuous integration often runs.
    administrator = hasattr(os, "geteuid") and os.geteuid() == 0
    arguments = ["--no-sandbox"] if administrator else []
    with sync_playwright() as playwright:
        running = playwright.chromium.launch(executable_path=chromium, args=arguments)
        yield running
        running.close()


@pytest.fixture
def context(browser: Browser) -> Iterator[BrowserContext]:
    """Yield a fresh browser context at the wide width, without a network."""
    fresh = browser.new_context(viewport={"width": 1280, "height": 900}, offline=True)
    yield fresh
    fresh.close()


@pytest.fixture
def page(context: BrowserContext) -> Page:
    """Return an empty page of the fresh context."""
    return context.new_page()
