"""What does a flowsheet file look like once it is read, and where does each word stand?

A tree of three kinds of node, all frozen: text, sequence, mapping. Nothing is interpreted: a
number is still the text that was written. Every node knows its place (line and column from 1),
how deep it is and how many nodes it stands for with all aliases written out.
"""

from collections.abc import Iterable
from collections.abc import Mapping as AnyMapping
from dataclasses import dataclass, field
from typing import Any, Final, TypeAlias

from chainflow.basis.faults import Fault, Place

DEEPEST: Final = 30
"""Most levels of nesting that are read."""

MOST_NODES: Final = 100_000
"""Most nodes a file may stand for, aliases and knobs written out."""

MOST_FAULTS: Final = 200
"""Reading stops when it has found so many."""


@dataclass(frozen=True, slots=True)
class Text:
    """A scalar as written; None for an empty value, ``null`` or ``~``."""

    value: str | None
    place: Place
    knob: str = ""
    """Name of the knob this value came from, if any."""

    @property
    def size(self) -> int:
        """One node."""
        return 1

    @property
    def depth(self) -> int:
        """No levels below."""
        return 0


@dataclass(frozen=True, slots=True)
class Sequence:
    """A list of nodes."""

    items: "tuple[Node, ...]"
    place: Place
    size: int = field(init=False, compare=False, repr=False)
    depth: int = field(init=False, compare=False, repr=False)

    def __post_init__(self) -> None:
        _measure(self, self.items)


@dataclass(frozen=True, slots=True)
class Mapping:
    """Named nodes in file order; each entry is (place of the key, node)."""

    entries: "AnyMapping[str, tuple[Place, Node]]"
    place: Place
    size: int = field(init=False, compare=False, repr=False)
    depth: int = field(init=False, compare=False, repr=False)

    def __post_init__(self) -> None:
        _measure(self, (node for _, node in self.entries.values()))

    def get(self, key: str) -> "Node | None":
        """Return the node under a key, or None."""
        entry = self.entries.get(key)
        return None if entry is None else entry[1]


Node: TypeAlias = Text | Sequence | Mapping


def _measure(node: Sequence | Mapping, children: "Iterable[Node]") -> None:
    """Set size and depth once; the class is frozen, hence the detour."""
    size, depth = 1, 0
    for child in children:
        size += child.size
        depth = max(depth, child.depth)
    object.__setattr__(node, "size", size)
    object.__setattr__(node, "depth", depth + 1)


@dataclass(frozen=True, slots=True)
class Tree:
    """A whole file: root, name for messages, SHA-256, and remarks that are no faults."""

    root: Mapping
    name: str
    sha256: str
    remarks: tuple[Fault, ...] = ()


def plain(node: Node) -> Any:
    """Return a node as text, None, lists and dicts."""
    if isinstance(node, Text):
        return node.value
    if isinstance(node, Sequence):
        return [plain(item) for item in node.items]
    return {key: plain(child) for key, (_, child) in node.entries.items()}


def place_at(node: Node, location: Iterable[str | int], *, at_key: bool = False) -> Place:
    """Return the place of what a pydantic error location names, or of the nearest thing above it.

    Parameters
    ----------
    node : Node
        Where the location starts.
    location : iterable of str and int
        Keys and positions; parts that name nothing here (union members, missing keys) are passed.
    at_key : bool
        Point at the last key instead of its value, as for a key that should not be there.
    """
    key_place = node.place
    for part in location:
        if part == "[key]":
            at_key = True
        elif isinstance(node, Mapping) and part in node.entries:
            key_place, node = node.entries[str(part)]
        elif isinstance(node, Sequence) and isinstance(part, int) and 0 <= part < len(node.items):
            node = node.items[part]
            key_place = node.place
    return key_place if at_key else node.place
