"""YAML text to a tree in which every key and value knows its place.

Only a plain part of YAML is read: one document, mappings with plain keys, lists, scalars. Anchors,
aliases and tags are refused. Scalars stay text, so nothing turns into a yes, a date or a base-60
number on the way; the field that a scalar stands in decides what it means.
"""

import re
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Final, TypeAlias

import yaml

from bufferfolio.errors import DefinitionError, DefinitionErrors, Place

Location: TypeAlias = tuple[int | str, ...]
Data: TypeAlias = "str | list[Data] | dict[str, Data]"


class Quoted(str):
    """Text that stood in quotation marks or as a block: never a number."""

    __slots__ = ()


class Glued(str):
    """Text after a comma without a blank: most likely the rest of the entry before it."""

    __slots__ = ()


@dataclass(frozen=True, slots=True)
class Node:
    """One value of a file."""

    place: Place
    content: "str | list[Node] | dict[str, Node]"
    keys: dict[str, Place]  # of a mapping: where each key stands

    def data(self) -> Data:
        """Return the bare value, without places."""
        if isinstance(self.content, dict):
            return {key: node.data() for key, node in self.content.items()}
        if isinstance(self.content, list):
            return [node.data() for node in self.content]
        return self.content


@dataclass(frozen=True, slots=True)
class Document:
    """One file as it was read."""

    file: str  # as messages name it
    lines: tuple[str, ...]
    root: Node
    repeated: tuple[DefinitionError, ...]  # keys given twice

    def place(self, location: Location) -> Place:
        """Return where the value at `location` starts, or the nearest value that holds it."""
        node = self.root
        for part in location:
            inner = _child(node, part)
            if inner is None:
                break
            node = inner
        return node.place

    def key_place(self, location: Location) -> Place:
        """Return where the key at `location` stands."""
        node = self.root
        for part in location[:-1]:
            node = _child(node, part) or node
        return node.keys.get(str(location[-1]), node.place) if location else node.place

    def error(self, place: Place, problem: str, accepted: str) -> DefinitionError:
        """Return the complaint about `place`, with the line it blames."""
        return complaint(self.lines, place, problem, accepted)


def _child(node: Node, part: int | str) -> Node | None:
    if isinstance(node.content, dict):
        return node.content.get(str(part))
    if isinstance(node.content, list) and isinstance(part, int) and part < len(node.content):
        return node.content[part]
    return None


def complaint(lines: tuple[str, ...], place: Place, problem: str, accepted: str) -> DefinitionError:
    """Return an error with the text of the line that `place` names."""
    text = lines[place.line - 1] if place.line <= len(lines) else None
    return DefinitionError(place, problem, accepted=accepted, line_text=text)


def compose(text: str, file: str) -> Document:
    """Return the tree of one YAML document; raises DefinitionErrors where it is none."""
    lines = tuple(LINE_BREAK.split(text))
    _refuse_unprintable(lines, file)
    builder = _Builder(file, lines)
    try:
        for event in yaml.parse(text, Loader=LOADER):
            builder.take(event)
    except yaml.YAMLError as problem:
        raise DefinitionErrors([_not_yaml(problem, lines, file)]) from None
    if builder.root is None:
        place = Place(file, 1, 1)
        raise DefinitionErrors([DefinitionError(place, "the file is empty", accepted=ONE_DOCUMENT)])
    return Document(file, lines, builder.root, tuple(builder.repeated))


class _Builder:
    """Takes parser events, keeps the containers that are still open; no recursion anywhere."""

    def __init__(self, file: str, lines: tuple[str, ...]) -> None:
        self.file = file
        self.lines = lines
        self.root: Node | None = None
        self.open: list[tuple[Node, tuple[str, Place] | None]] = []  # with the key that waits
        self.repeated: list[DefinitionError] = []
        self.documents = 0

    def take(self, event: yaml.Event) -> None:
        mark = event.start_mark
        line, column = (mark.line, mark.column) if mark is not None else (0, 0)
        place = Place(self.file, line + 1, column + 1)
        if isinstance(event, yaml.DocumentStartEvent):
            self.documents += 1
            if self.documents > 1:
                self.refuse(place, "a second YAML document starts here", ONE_DOCUMENT)
        if isinstance(event, yaml.NodeEvent):
            self.refuse_extras(event, place)
        if isinstance(event, yaml.ScalarEvent):
            self.scalar(Node(place, self.text(event, place), {}))
        elif isinstance(event, yaml.MappingStartEvent):
            self.start(Node(place, {}, {}))
        elif isinstance(event, yaml.SequenceStartEvent):
            self.start(Node(place, [], {}))
        elif isinstance(event, yaml.MappingEndEvent | yaml.SequenceEndEvent):
            self.open.pop()

    def refuse_extras(self, event: yaml.NodeEvent, place: Place) -> None:
        if isinstance(event, yaml.AliasEvent):
            self.refuse(place, f"'*{event.anchor}' is an alias", NO_ALIASES)
        if event.anchor is not None:
            self.refuse(place, f"'&{event.anchor}' is an anchor", NO_ALIASES)
        if getattr(event, "tag", None) is not None:
            self.refuse(place, "a YAML tag ('!') stands here", "values without tags")

    def text(self, event: yaml.ScalarEvent, place: Place) -> str:
        if event.style:
            return Quoted(event.value)
        if place.column <= 2 or place.line > len(self.lines):
            return str(event.value)
        before = self.lines[place.line - 1][place.column - 3 : place.column - 1]
        return Glued(event.value) if GLUED.fullmatch(before) else str(event.value)

    def scalar(self, node: Node) -> None:
        if self.open and isinstance(self.open[-1][0].content, dict) and self.open[-1][1] is None:
            self.open[-1] = (self.open[-1][0], (str(node.content), node.place))
        else:
            self.add(node)

    def start(self, node: Node) -> None:
        if self.open and isinstance(self.open[-1][0].content, dict) and self.open[-1][1] is None:
            self.refuse(node.place, "a key is a list or a mapping", "plain text as the key")
        if len(self.open) >= DEEPEST:
            self.refuse(node.place, "the values are nested too deeply", f"at most {DEEPEST} levels")
        self.add(node)
        self.open.append((node, None))

    def add(self, node: Node) -> None:
        if not self.open:
            self.root = node
            return
        parent, waiting = self.open[-1]
        if isinstance(parent.content, list):
            parent.content.append(node)
        elif isinstance(parent.content, dict) and waiting is not None:
            self.open[-1] = (parent, None)
            self.add_entry(parent, parent.content, *waiting, node)

    def add_entry(
        self, parent: Node, content: dict[str, Node], key: str, place: Place, node: Node
    ) -> None:
        if key in content:
            problem = f"the key {key!r} stands here twice; first on line {parent.keys[key].line}"
            self.repeated.append(complaint(self.lines, place, problem, "each key once"))
            return
        content[key] = node
        parent.keys[key] = place

    def refuse(self, place: Place, problem: str, accepted: str) -> None:
        raise DefinitionErrors([complaint(self.lines, place, problem, accepted)])


def _refuse_unprintable(lines: Iterable[str], file: str) -> None:
    for number, line in enumerate(lines, start=1):
        found = UNPRINTABLE.search(line)
        if found:
            place = Place(file, number, found.start() + 1)
            problem = f"the character U+{ord(found.group()):04X} cannot be printed"
            raise DefinitionErrors(
                [DefinitionError(place, problem, accepted="printable text", line_text=line)]
            )


def _not_yaml(problem: yaml.YAMLError, lines: tuple[str, ...], file: str) -> DefinitionError:
    # The C parser and the Python parser word the same finding differently: one wording for both.
    said = str(getattr(problem, "problem", None) or problem).lower()
    known = ((words, start) for part, (words, start) in WORDINGS.items() if part in said)
    words, at_start = next(known, (said, False))
    marks = [getattr(problem, name, None) for name in ("problem_mark", "context_mark")]
    mark = next((mark for mark in (reversed(marks) if at_start else marks) if mark), None)
    line, column = (mark.line, mark.column) if mark else (0, 0)
    line = min(line, len(lines) - 1)
    tab = INDENTING_TAB.match(lines[line])
    if tab:
        return complaint(
            lines, Place(file, line + 1, tab.end()), "a tab indents this line", "spaces"
        )
    place = Place(file, line + 1, min(column, len(lines[line])) + 1)
    return complaint(lines, place, f"this is not YAML: {words}", "YAML as in the shipped files")


def other_meaning(text: str) -> str | None:
    """Return what YAML makes of a plain scalar, where that is not text: "a number"."""
    for tag, expression in yaml.SafeLoader.yaml_implicit_resolvers.get(text[:1], []):
        if expression.match(text):
            return MEANINGS.get(tag.rsplit(":", 1)[1], "something else")
    return None


DEEPEST: Final = 20  # levels; a definition needs five
ONE_DOCUMENT: Final = "one YAML document with the keys of a definition"
NO_ALIASES: Final = "each value written out where it belongs"
LOADER: Final = getattr(yaml, "CSafeLoader", yaml.SafeLoader)  # the C parser where PyYAML has it
LINE_BREAK: Final = re.compile("\r\n|[\n\r\x85\u2028\u2029]")  # what YAML 1.1 counts as one
INDENTING_TAB: Final = re.compile(r" *\t")
GLUED: Final = re.compile(r"[^,\s],")  # what stands before it then
UNPRINTABLE: Final = re.compile(
    "[^\x09\x20-\x7e\x85\xa0-\ud7ff\ue000-\ufefe\uff00-\ufffd\U00010000-\U0010ffff]"
)

MISFIT: Final = "this line does not fit the ones above it; check the indentation"
UNCLOSED: Final = "a bracket or brace is not closed, or a comma is missing"

# A part of what a parser says; what a message says instead, and whether it blames the start of
# what could not be finished.
WORDINGS: Final = {
    "mapping values are not allowed": (
        "a second ': ' on the line; text that holds one needs quotation marks",
        False,
    ),
    "expected <block end>": (MISFIT, False),
    "did not find expected key": (MISFIT, False),
    "did not find expected '-'": (MISFIT, False),
    "expected node content": (UNCLOSED, True),
    "expected the node content": (UNCLOSED, True),
    "expected ',' or": (UNCLOSED, True),
    "unexpected end of stream": ("a quotation mark is not closed", True),
    "could not find expected ':'": ("a key without ': '", True),
    "cannot start any token": (
        "a character that cannot start a value; put the text in quotation marks",
        False,
    ),
    "undefined alias": ("an alias without its anchor", False),
    "incompatible yaml document": ("an unknown version of YAML", False),
    "document start": ("text after the end of the document", False),
    "nesting depth": ("the values are nested too deeply", False),
}

# What YAML takes a plain scalar for, by its own name for it.
MEANINGS: Final = {
    "bool": "true or false",
    "null": "nothing",
    "int": "a number",
    "float": "a number",
    "timestamp": "a date",
}
