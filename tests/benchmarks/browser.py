#!/usr/bin/env python3
"""How fast a built site answers: `python tests/benchmarks/browser.py [SITE] [PAGE]`.

Opens a sheet in Chromium, at full speed and with the processor four times throttled, and prints
what the design has targets for. Not a test: times belong to the machine that they were taken on.
"""

import os
import statistics
import sys
import tempfile
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Final

from playwright.sync_api import Browser, Page, sync_playwright

sys.path.insert(0, str(Path(__file__).resolve().parents[2] / "build"))

from bootstrap import find_chromium
from bufferfolio import resources
from bufferfolio.pages import write_site
from bufferfolio.reading import read_library

LOADS: Final = 5
UPDATES: Final = 21
SPEEDS: Final = (1, 4)  # how many times slower than the machine is


@dataclass(frozen=True, slots=True, kw_only=True)
class Target:
    """One line of the table."""

    name: str
    milliseconds: tuple[float, float]  # at full speed, and throttled


TARGETS: Final = (
    Target(name="picture on screen", milliseconds=(300, 1200)),
    Target(name="first Bokeh plot", milliseconds=(1200, 3500)),
    Target(name="live numbers", milliseconds=(16, 50)),
    Target(name="live numbers, with a reading", milliseconds=(16, 50)),
    Target(name="a visible drawing refreshed", milliseconds=(50, 250)),
    Target(name="a visible plot refreshed", milliseconds=(50, 250)),
)

# Runs before the page's own scripts: notes the first frame after something is there to be seen.
WATCH: Final = """
  window.seen = {};
  const watch = () => {
    const now = performance.now();
    if (!seen.picture && document.querySelector(".plot-picture svg")) seen.picture = now;
    if (!seen.plot && document.querySelector("figure.live")) seen.plot = now;
    if (!seen.plot) requestAnimationFrame(watch);
  };
  requestAnimationFrame(watch);
"""

# Notes when the frame after each drawing of a figure has ended; Bokeh paints in that frame.
LISTEN: Final = """
  () => {
    window.painted = [];
    for (const [module, name] of [["svg_figures", "svg"], ["bokeh_figures", "update"]]) {
      const own = bufferfolio[module][name];
      bufferfolio[module][name] = (...given) => {
        const result = own(...given);
        requestAnimationFrame(() => {
          const channel = new MessageChannel();
          channel.port1.onmessage = () => painted.push(performance.now());
          channel.port2.postMessage(0);
        });
        return result;
      };
    }
  }
"""

# A reading that is off: then every section of a sheet has something to answer.
READ: Final = """
  () => {
    const field = document.querySelector("[data-input=reading]");
    const right = Number(document.querySelector("[data-value=pH]").textContent);
    field.value = (right - 0.2).toFixed(2);
    field.dispatchEvent(new Event("input", { bubbles: true }));
  }
"""

# One input: until its handlers have ended (numbers stand on the page and are laid out), until the
# sections that may be late have answered in the next frame, until the first figure has been
# painted, and until all have.
UPDATE: Final = """
  ([value, figures]) => new Promise((resolve) => {
    const slider = document.querySelector("[type=range][data-input=temperature]");
    painted.length = 0;
    const start = performance.now();
    slider.value = String(value);
    slider.dispatchEvent(new Event("input", { bubbles: true }));
    document.body.offsetHeight;
    const numbers = performance.now() - start;
    let late = NaN;
    requestAnimationFrame(() => { late = performance.now() - start; });
    const wait = () => {
      if (painted.length < figures) setTimeout(wait, 1);
      else resolve([numbers, late, painted[0] - start, painted[figures - 1] - start]);
    };
    wait();
  })
"""


# The margin is the page's own: a figure about to come into sight is drawn as well.
IN_SIGHT: Final = """
  () => Array.from(document.querySelectorAll("figure.plot")).filter((figure) => {
    const box = figure.getBoundingClientRect();
    return box.bottom > -60 && box.top < innerHeight + 60;
  }).length
"""


def main() -> None:
    """Measure and print."""
    chromium = find_chromium()
    if chromium is None:
        sys.exit("no Chromium was found")
    with tempfile.TemporaryDirectory() as folder, sync_playwright() as playwright:
        site = (
            Path(sys.argv[1]).resolve() if len(sys.argv) > 1 else built_site(Path(folder) / "site")
        )
        name = sys.argv[2] if len(sys.argv) > 2 else "formulations/citrate-phosphate.html"
        administrator = hasattr(os, "geteuid") and os.geteuid() == 0
        arguments = ["--disable-gpu", *(["--no-sandbox"] if administrator else [])]
        browser = playwright.chromium.launch(executable_path=chromium, args=arguments)
        measured = [measurements(browser, site / name, speed) for speed in SPEEDS]
        browser.close()
    sys.stdout.write(report(name, measured))


def report(name: str, measured: Sequence[Mapping[str, float]]) -> str:
    """Return the table of what was measured at each speed."""
    lines = [
        f"{name}, medians in ms of {LOADS} loads or {UPDATES} updates; in brackets the target",
        f"{'':28}{'full speed':>20}{'4 times slower':>20}",
    ]
    for target in TARGETS:
        cells = [
            f"{values[target.name]:.0f} ({aim:.0f})"
            for values, aim in zip(measured, target.milliseconds, strict=True)
        ]
        lines.append(f"{target.name:28}{cells[0]:>20}{cells[1]:>20}")
    lines += [
        f"{extra:28}{measured[0][extra]:>20.0f}{measured[1][extra]:>20.0f}"
        for extra in ("all drawings in sight", "all plots in sight", "faults ranked")
    ]
    return "\n".join(lines) + "\n"


def built_site(out: Path) -> Path:
    """Build the shipped site into a folder."""
    write_site(read_library(resources.systems()), out, lambda _: None)
    return out


def measurements(browser: Browser, path: Path, speed: int) -> dict[str, float]:
    """Return every time, in ms, at one speed."""
    pictures, plots = [], []
    for _ in range(LOADS):
        page = opened(browser, path, speed)
        page.locator("figure.live").first.wait_for(timeout=60_000)
        page.wait_for_timeout(100)
        pictures.append(page.evaluate("seen.picture"))
        plots.append(page.evaluate("seen.plot"))
        page.context.close()
    found = {
        "picture on screen": statistics.median(pictures),
        "first Bokeh plot": statistics.median(plots),
    }
    for name, without in (("plot", None), ("drawing", "**/bokeh.min.js")):
        page = opened(browser, path, speed, without)
        page.wait_for_timeout(2000 + 1500 * speed)
        found["live numbers"], _, first, last = updates(page)
        found[f"a visible {name} refreshed"] = first
        found[f"all {name}s in sight"] = last
        page.evaluate(READ)
        found["live numbers, with a reading"], found["faults ranked"], _, _ = updates(page)
        page.context.close()
    return found


def opened(browser: Browser, path: Path, speed: int, without: str | None = None) -> Page:
    """Return a page that shows its pictures, in a fresh context."""
    # Without motion: scrolling smoothly to the figures would count as waiting for them.
    context = browser.new_context(
        viewport={"width": 1280, "height": 900}, offline=True, reduced_motion="reduce"
    )
    page = context.new_page()
    if without is not None:
        page.route(without, lambda route: route.abort())
    page.add_init_script(WATCH)
    session = page.context.new_cdp_session(page)
    session.send("Emulation.setCPUThrottlingRate", {"rate": speed})
    page.goto(path.as_uri() + "#figure-fractions", wait_until="commit")
    return page


def updates(page: Page) -> tuple[float, ...]:
    """Return the median time of numbers, late answers, the first figure and all in sight."""
    page.evaluate(LISTEN)
    figures = page.evaluate(IN_SIGHT)
    low, high = page.evaluate(
        "() => { const s = document.querySelector('[type=range][data-input=temperature]');"
        " return [Number(s.min), Number(s.max)]; }"
    )
    times = [
        page.evaluate(UPDATE, [low + (high - low) * (step + 1) / (UPDATES + 1), figures])
        for step in range(UPDATES)
    ]
    return tuple(statistics.median(column) for column in zip(*times, strict=True))


if __name__ == "__main__":
    main()
