"""A page as a tree of elements, read strictly: every tag has to close."""

import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from html.parser import HTMLParser

VOID = {"meta", "link", "input", "br", "path", "img", "hr"}


@dataclass
class Element:
    """One element of a page, with what it holds."""

    tag: str
    attributes: Mapping[str, str]
    children: list["Element | str"] = field(default_factory=list)

    def walk(self) -> Iterator["Element"]:
        yield self
        for child in self.children:
            if isinstance(child, Element):
                yield from child.walk()

    def text(self) -> str:
        parts = (child if isinstance(child, str) else child.text() for child in self.children)
        return re.sub(r"\s+", " ", "".join(parts)).strip()

    def all(self, tag: str = "", **attributes: str) -> list["Element"]:
        """Return what lies below with a tag and with attributes; data_x stands for data-x."""
        wanted = {name.replace("_", "-"): value for name, value in attributes.items()}
        return [
            element
            for element in self.walk()
            if tag in ("", element.tag)
            and all(element.attributes.get(name) == value for name, value in wanted.items())
        ]

    def one(self, tag: str = "", **attributes: str) -> "Element":
        found = self.all(tag, **attributes)
        assert len(found) == 1, f"{len(found)} of {tag} {attributes}"
        return found[0]


class Tree(HTMLParser):
    """Builds elements, and complains about tags that do not close."""

    def __init__(self) -> None:
        super().__init__()
        self.root = Element("", {})
        self.open = [self.root]

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        element = Element(tag, {name: value or "" for name, value in attrs})
        self.open[-1].children.append(element)
        if tag not in VOID:
            self.open.append(element)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.open[-1].children.append(Element(tag, {n: v or "" for n, v in attrs}))

    def handle_endtag(self, tag: str) -> None:
        assert self.open[-1].tag == tag, f"</{tag}> closes <{self.open[-1].tag}>"
        self.open.pop()

    def handle_data(self, data: str) -> None:
        self.open[-1].children.append(data)


def parsed(text: str) -> Element:
    tree = Tree()
    tree.feed(text)
    tree.close()
    assert len(tree.open) == 1, f"<{tree.open[-1].tag}> stays open"
    return tree.root
