"""How does a flowsheet file become a tree of words with places?

YAML 1.2, read from the event stream of ruamel.yaml (pure Python): no object is ever constructed,
no value interpreted, so nothing in a file can run. Refused with line and column: tags, several
documents, duplicate keys, keys that are not plain words, merge keys, aliases that stand for too
much, and files that are too large or too deep. Faults are collected as far as the syntax allows.
"""

import hashlib
from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, Final

from chainflow.basis.faults import Fault, FileFault, FlowsheetFault, Place
from chainflow.basis.names import shorten
from chainflow.flowsheet.knobs import substitute_knobs
from chainflow.flowsheet.tree import (
    DEEPEST,
    MOST_FAULTS,
    MOST_NODES,
    Mapping,
    Node,
    Sequence,
    Text,
    Tree,
    place_at,
    plain,
)

__all__ = [
    "LARGEST_FILE",
    "Mapping",
    "Node",
    "Sequence",
    "Text",
    "Tree",
    "place_at",
    "plain",
    "read_tree",
    "substitute_knobs",
]

LARGEST_FILE: Final = 2_000_000
"""Largest file that is read [bytes]."""

_NULLS: Final = frozenset({"", "~", "null", "Null", "NULL"})  # YAML 1.2.2, section 10.2 (core)
_CAUSES: Final = (
    # what ruamel.yaml says -> what to tell the writer of a flowsheet
    ("'\\t'", "a tab cannot indent or start a value: use spaces"),
    ("mapping values are not allowed", "a ':' stands where none can be: put the text in quotes"),
    ("could not find expected ':'", "a ':' is missing after a name"),
    ("expected <block end>", "the indentation does not fit the lines above"),
    ("expected ',' or '}'", "a ',' or '}' is missing"),
    ("expected ',' or ']'", "a ',' or ']' is missing"),
    ("unexpected end of stream", "a closing quote is missing"),
    ("cannot start any token", "a value cannot start with this character: put it in quotes"),
)


def read_tree(source: Path | str) -> Tree:
    """Return the tree of a file (a Path) or of a text (a str).

    Raises
    ------
    FlowsheetFault
        If it is no YAML, or YAML of a kind that is not read here; every fault has its place.
    FileFault
        If the file cannot be read.
    """
    if isinstance(source, str):
        return _tree(source.encode("utf-8", "surrogatepass"), "text")
    return _tree(_bytes_of(source), source.name)


def _bytes_of(path: Path) -> bytes:
    """Read at most one byte more than allowed, so that an endless file ends."""
    try:
        with path.open("rb") as file:
            return file.read(LARGEST_FILE + 1)
    except OSError as error:
        reason = error.strerror or type(error).__name__
        raise FileFault(f"cannot read {shorten(str(path), 200)}: {reason}") from error
    except ValueError as error:  # a path with a null character
        raise FileFault(f"cannot read {shorten(str(path), 200)}: {error}") from error


def _tree(content: bytes, name: str) -> Tree:
    if len(content) > LARGEST_FILE:
        text = f"the file is larger than {LARGEST_FILE} bytes: split it or leave something out"
        raise FlowsheetFault(Fault("too-large", text, 1, 1))
    builder = _Builder(_events(_decoded(content)))
    root = builder.document()
    if builder.faults:
        raise FlowsheetFault(builder.faults)
    if not isinstance(root, Mapping):
        text = "wanted a map with title, equipment and lines at the top of the file"
        raise FlowsheetFault(Fault("top", text).located(root.place))
    return Tree(root, name, hashlib.sha256(content).hexdigest())


def _decoded(content: bytes) -> str:
    """Decode UTF-8, with or without byte order mark, and refuse control characters."""
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        before = content[: error.start].decode("utf-8", "replace")
        place = _end_of(before)
        raise FlowsheetFault(
            Fault("encoding", "the file is not UTF-8 text here: save it as UTF-8").located(place)
        ) from None
    return text


def _end_of(text: str) -> Place:
    lines = text.split("\n")
    return Place(len(lines), len(lines[-1]) + 1)


# ------------------------------------------------------------------------------ YAML to events
def _events(text: str) -> Iterator[Any]:
    """Yield the parser's events; every complaint of the parser becomes a FlowsheetFault."""
    from ruamel.yaml import YAML
    from ruamel.yaml.error import YAMLError

    place = Place(1, 1)
    try:
        for event in YAML(typ="safe", pure=True).parse(text):
            place = _place(event)
            yield event
    except YAMLError as error:
        raise FlowsheetFault(_syntax_fault(error, text)) from None
    except (ValueError, OverflowError):  # ruamel.yaml hands numbers in escapes to chr() and int()
        text = "after this a number in an escape or directive is none: correct it"
        raise FlowsheetFault(Fault("syntax", text).located(place)) from None


def _syntax_fault(error: Any, text: str) -> Fault:
    """Put the parser's complaint into one sentence with a place."""
    mark = getattr(error, "problem_mark", None) or getattr(error, "context_mark", None)
    if "quoted scalar" in str(getattr(error, "context", "")):
        mark = error.context_mark  # the opening quote tells more than the end of the file
    if mark is not None:
        return Fault("syntax", _cause(error), mark.line + 1, mark.column + 1)
    position = getattr(error, "position", None)
    if isinstance(position, int):
        sign = shorten(text[position : position + 1])
        said = f"the character {sign} is not allowed in YAML: remove it"
        return Fault("syntax", said).located(_end_of(text[:position]))
    return Fault("syntax", f"this is not YAML: {shorten(str(error), 100)}", 1, 1)


def _cause(error: Any) -> str:
    said = f"{error.context or ''} {error.problem or ''}".strip()
    for words, meaning in _CAUSES:
        if words in said:
            return meaning
    return "this is not YAML: " + shorten(said, 100)[1:-1]


# ------------------------------------------------------------------------------ events to tree
def _place(event: Any) -> Place:
    return Place(event.start_mark.line + 1, event.start_mark.column + 1)


@dataclass(slots=True)
class _Builder:
    """Builds nodes from events; recursion is bounded by DEEPEST."""

    events: Iterator[Any]
    faults: list[Fault] = field(default_factory=list)
    anchors: dict[str, Node | None] = field(default_factory=dict)
    nodes: int = 0

    def document(self) -> Node:
        """Return the root of the only document."""
        kind = self._next()[0]
        if kind == "StreamStart":
            kind = self._next()[0]
        if kind != "DocumentStart":
            raise FlowsheetFault(Fault("empty", "the file is empty", 1, 1))
        root = self._node(*self._next(), level=1)
        self._next()  # end of document
        kind, event = self._next()
        if kind != "StreamEnd":
            text = "a second document starts here: keep one flowsheet in a file"
            self._fault("documents", text, _place(event))
        return root

    def _next(self) -> tuple[str, Any]:
        event = next(self.events)
        return type(event).__name__.removesuffix("Event"), event

    def _node(self, kind: str, event: Any, level: int) -> Node:
        place = _place(event)
        if kind == "Alias":
            return self._alias(event.anchor, place)
        self._refuse(event, place, level)
        if event.anchor is not None:
            self.anchors[event.anchor] = None
        node = self._fresh(kind, event, place, level)
        if event.anchor is not None:
            self.anchors[event.anchor] = node
        if node.size > MOST_NODES or node.depth + level > DEEPEST + 1:
            text = (
                f"with its aliases written out this is more than {MOST_NODES} values or "
                f"{DEEPEST} levels: write less"
            )
            raise FlowsheetFault([*self.faults, Fault("too-large", text).located(place)])
        return node

    def _fresh(self, kind: str, event: Any, place: Place, level: int) -> Node:
        if kind == "Scalar":
            if any("\ud800" <= letter <= "\udfff" for letter in event.value):
                self._fault("encoding", "half a character (a surrogate) is no text", place)
            is_null = event.implicit[0] and event.style in (None, "") and event.value in _NULLS
            return Text(None if is_null else event.value, place)
        if kind == "SequenceStart":
            return self._sequence(place, level)
        return self._mapping(place, level)

    def _refuse(self, event: Any, place: Place, level: int) -> None:
        """Count the node, stop at the limits and note a tag."""
        self.nodes += 1
        if self.nodes > MOST_NODES:
            text = f"the file has more than {MOST_NODES} values: write less"
            raise FlowsheetFault([*self.faults, Fault("too-large", text).located(place)])
        if level > DEEPEST:
            text = f"more than {DEEPEST} levels of nesting: write it flatter"
            raise FlowsheetFault([*self.faults, Fault("too-deep", text).located(place)])
        if event.tag is not None:
            text = f"the tag {shorten(str(event.tag))} is not read here: remove it"
            self._fault("tag", text, place)

    def _alias(self, anchor: str, place: Place) -> Node:
        found = self.anchors.get(anchor)
        if found is None:
            text = f"the alias {shorten(anchor)} stands for nothing: name a value above with &"
            if anchor in self.anchors:
                text = f"the alias {shorten(anchor)} stands inside what it stands for"
            self._fault("alias", text, place)
            return Text(None, place)
        return found

    def _sequence(self, place: Place, level: int) -> Sequence:
        items = []
        while (step := self._next())[0] != "SequenceEnd":
            items.append(self._node(*step, level=level + 1))
        return Sequence(tuple(items), place)

    def _mapping(self, place: Place, level: int) -> Mapping:
        entries: dict[str, tuple[Place, Node]] = {}
        while (step := self._next())[0] != "MappingEnd":
            key_place = _place(step[1])
            key = self._key(self._node(*step, level=level + 1), key_place)
            node = self._node(*self._next(), level=level + 1)
            if key is None:
                continue
            if key in entries:
                text = f"{shorten(key)} is here twice, first at {entries[key][0]}: keep one"
                self._fault("duplicate-key", text, key_place)
                continue
            entries[key] = (key_place, node)
        return Mapping(entries, place)

    def _key(self, node: Node, place: Place) -> str | None:
        """Return the word a key is, or note a fault."""
        if not isinstance(node, Text) or node.value is None:
            self._fault("key", "a name is wanted before the ':'", place)
            return None
        if node.value == "<<":
            self._fault("key", "'<<' is no part of YAML 1.2: write the entries out", place)
            return None
        return node.value

    def _fault(self, code: str, text: str, place: Place) -> None:
        self.faults.append(Fault(code, text).located(place))
        if len(self.faults) >= MOST_FAULTS:
            raise FlowsheetFault(self.faults)
