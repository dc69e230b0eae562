"""What a reader of a page does and sees, in the words of the tests."""

import re

from playwright.sync_api import Locator, Page, expect

SHEET = "formulations/tris-assay.html"
EXPLORER = "families/phosphate.html"


def field(page: Page, name: str) -> Locator:
    """Return a text field or a choice by the name of its input."""
    return page.locator(f'[data-input="{name}"]:not([type=range])')


def slider(page: Page, name: str) -> Locator:
    """Return the first slider of an input."""
    return page.locator(f'[type=range][data-input="{name}"]').first


def shown(page: Page, name: str) -> str:
    """Return the first text of a live value."""
    return page.locator(f'[data-value="{name}"]').first.inner_text()


def first_drawing(page: Page) -> str:
    return page.locator(".plot-picture").first.inner_html()


def bring(page: Page, key: str) -> None:
    """Bring a figure into sight and wait for its plot."""
    figure = page.locator(f'figure[data-figure="{key}"]')
    figure.scroll_into_view_if_needed()
    expect(figure).to_have_class(re.compile(r"\blive\b"), timeout=30_000)
