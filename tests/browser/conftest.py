"""Pages of the built site, watched for whatever a quiet page must not do."""

from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from pathlib import Path

import pytest
from playwright.sync_api import Page

# Runs before the page's own scripts, and is not bound by the page's policy.
LISTEN = """
  window.violations = [];
  addEventListener("securitypolicyviolation", (event) => {
    violations.push(event.violatedDirective + " " + event.blockedURI);
  });
"""


@dataclass(frozen=True, slots=True, kw_only=True)
class Visitor:
    """A reader of one site, who notes every complaint of the browser and every request."""

    page: Page
    site: Path
    complaints: list[str] = field(default_factory=list)
    requests: list[str] = field(default_factory=list)

    def open(self, name: str, place: str = "") -> Page:
        """Open a page of the site, `place` being "#…", and return it once it is ready."""
        self.page.goto((self.site / name).as_uri() + place)
        return self.page

    def outside(self) -> list[str]:
        """Return what was asked for outside the site's folder."""
        inside = (self.site.as_uri() + "/", "data:", "blob:")
        return [url for url in self.requests if not url.startswith(inside)]

    def violations(self) -> list[str]:
        """Return what the page's security policy has refused."""
        return list(self.page.evaluate("window.violations"))

    def assert_quiet(self) -> None:
        """Nothing on the console, no request outside the folder, nothing against the policy."""
        assert self.complaints == []
        assert self.outside() == []
        assert self.violations() == []


def watched(page: Page, site: Path) -> Visitor:
    """Return a visitor that sees all that happens on a page."""
    visitor = Visitor(page=page, site=site)
    page.add_init_script(LISTEN)
    page.on("console", lambda said: visitor.complaints.append(f"{said.type}: {said.text}"))
    page.on("pageerror", lambda error: visitor.complaints.append(str(error)))
    page.on("request", lambda request: visitor.requests.append(request.url))
    return visitor


@pytest.fixture
def visitor(page: Page, site: Path) -> Iterator[Visitor]:
    """Return a visitor of the shipped site; the test fails if the browser complains of a page."""
    visitor = watched(page, site)
    yield visitor
    visitor.assert_quiet()


@pytest.fixture
def stranger(page: Page) -> Callable[[Path], Visitor]:
    """Return what makes a visitor of another site, whose complaints the test judges itself."""
    return lambda folder: watched(page, folder)
