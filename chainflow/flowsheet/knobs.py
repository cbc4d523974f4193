"""What do the knobs of a file stand for, and which value does each ``$name`` get?

Knobs are named values under ``knobs:``. ``$name`` as a whole value stands for one, anywhere but
in the title; a knob may name other knobs. There is no arithmetic. A value that came from a knob
keeps the place where it is used and the knob's name.
"""

import re
from collections.abc import Iterator
from collections.abc import Mapping as AnyMapping
from dataclasses import dataclass, field, replace
from typing import Final

from chainflow.basis.faults import Fault, FlowsheetFault, Place, UsageFault
from chainflow.basis.names import NAME_PATTERN, name_trouble, shorten, suggest
from chainflow.flowsheet.tree import (
    DEEPEST,
    MOST_FAULTS,
    MOST_NODES,
    Mapping,
    Node,
    Sequence,
    Text,
    Tree,
)

_KNOB: Final = re.compile(rf"\$({NAME_PATTERN})")
_UNTOUCHED: Final = frozenset({"title", "knobs"})


def substitute_knobs(tree: Tree, overrides: AnyMapping[str, str] | None = None) -> Tree:
    """Return the tree with every ``$name`` replaced by what the knob stands for.

    Parameters
    ----------
    tree : Tree
        As read from a file; its ``knobs`` are left in place.
    overrides : mapping of str to str, optional
        Other texts for some knobs, by name.

    Returns
    -------
    Tree
        With a remark for each knob that nothing uses.

    Raises
    ------
    FlowsheetFault
        With every fault: unknown knobs, knobs that stand for themselves, ``$`` inside a text.
    UsageFault
        If an override names no knob.
    """
    faults: list[Fault] = []
    knobs = _knobs_of(tree.root, faults)
    substitution = _Substitution(_overridden(knobs, overrides or {}), faults)
    root = substitution.root(tree.root)
    _refuse_size(root, faults)
    if faults:
        raise FlowsheetFault(faults)
    return replace(tree, root=root, remarks=(*tree.remarks, *_unused(knobs, substitution.used)))


def knob_places(root: Mapping) -> dict[str, tuple[str, ...]]:
    """Return where each knob acts in a tree whose knobs are written out, in file order.

    A place is the address of a setting (``stack.energy_use``), or the words down to another entry
    (``holds.0.at``, counted from 0). A knob that names another one acts where that one's name
    stands too.
    """
    places: dict[str, list[str]] = {name: [] for name in _knobs_of(root, [])}
    named = {name: _named_by(node) for name, (_, node) in _knobs_of(root, []).items()}
    for key, (_, node) in root.entries.items():
        if key not in _UNTOUCHED:
            for knob, words in _uses(node, () if key == "equipment" else (key,)):
                seen: list[str] = []
                while knob in places and knob not in seen:
                    places[knob].append(".".join(words))
                    seen.append(knob)
                    knob = named[knob]
    return {name: tuple(found) for name, found in places.items()}


def _named_by(node: Node) -> str:
    """Return the knob that another knob stands for, if it stands for one."""
    match = _KNOB.fullmatch(node.value) if isinstance(node, Text) and node.value else None
    return match[1] if match else ""


def _uses(node: Node, words: tuple[str, ...]) -> Iterator[tuple[str, tuple[str, ...]]]:
    if isinstance(node, Text):
        if node.knob:
            yield node.knob, words
        return
    children = (
        ((str(place), item) for place, item in enumerate(node.items))
        if isinstance(node, Sequence)
        else ((key, child) for key, (_, child) in node.entries.items())
    )
    for key, child in children:
        yield from _uses(child, (*words, key))


def _knobs_of(root: Mapping, faults: list[Fault]) -> dict[str, tuple[Place, Node]]:
    """Return the entries under ``knobs``; wrong names are faults."""
    node = root.get("knobs")
    if node is None or (isinstance(node, Text) and node.value is None):
        return {}
    if not isinstance(node, Mapping):
        text = "knobs: wanted names with values, as in 'sun: 850 W/m2'"
        faults.append(Fault("knob", text).located(node.place))
        return {}
    for name, (place, _) in node.entries.items():
        if trouble := name_trouble(name):
            faults.append(Fault("knob", f"knobs: {trouble}").located(place))
    return dict(node.entries)


def _overridden(
    knobs: AnyMapping[str, tuple[Place, Node]], overrides: AnyMapping[str, str]
) -> dict[str, tuple[Place, Node]]:
    changed = dict(knobs)
    for name, text in overrides.items():
        if name not in knobs:
            raise UsageFault(f"there is no knob {shorten(name)}{suggest(name, knobs)}")
        place, node = knobs[name]
        changed[name] = (place, Text(text, node.place))
    return changed


def _refuse_size(root: Mapping, faults: list[Fault]) -> None:
    """Knobs that hold knobs can grow without end: judged by count, before anything is copied."""
    if root.size > MOST_NODES or root.depth > DEEPEST:
        text = (
            f"with its knobs written out the file has {min(root.size, 10**9)} values and "
            f"{min(root.depth, 10**9)} levels: at most {MOST_NODES} and {DEEPEST} are read"
        )
        faults.append(Fault("too-large", text).located(root.place))


def _unused(knobs: AnyMapping[str, tuple[Place, Node]], used: set[str]) -> Iterator[Fault]:
    for name, (place, _) in knobs.items():
        if name not in used:
            text = f"knob '{name}' is not used: write ${name} where it should act, or remove it"
            yield Fault("unused-knob", text).located(place)


@dataclass(slots=True)
class _Substitution:
    """The walk through one tree: what is known, what was used, what went wrong."""

    knobs: AnyMapping[str, tuple[Place, Node]]
    faults: list[Fault]
    used: set[str] = field(default_factory=set)
    resolved: dict[str, Node | None] = field(default_factory=dict)
    stack: list[str] = field(default_factory=list)
    level: int = 0

    def root(self, root: Mapping) -> Mapping:
        """Replace everywhere but in title and knobs."""
        entries = {
            key: (place, node if key in _UNTOUCHED else self.node(node))
            for key, (place, node) in root.entries.items()
        }
        return Mapping(entries, root.place)

    def node(self, node: Node) -> Node:
        """Return a node with its knobs replaced."""
        if isinstance(node, Text):
            return self._text(node)
        if self.level >= DEEPEST:
            text = f"with its knobs written out this is more than {DEEPEST} levels deep"
            self._fault("too-deep", text, node.place)
            return node
        self.level += 1
        replaced = self._list(node) if isinstance(node, Sequence) else self._map(node)
        self.level -= 1
        return replaced

    def _list(self, node: Sequence) -> Sequence:
        return Sequence(tuple(self.node(item) for item in node.items), node.place)

    def _map(self, node: Mapping) -> Mapping:
        for key, (place, _) in node.entries.items():
            if "$" in key:
                text = f"{shorten(key)}: a knob stands for a value, not for a key"
                self._fault("knob", text, place)
        entries = {key: (place, self.node(child)) for key, (place, child) in node.entries.items()}
        return Mapping(entries, node.place)

    def _text(self, node: Text) -> Node:
        if node.value is None or "$" not in node.value:
            return node
        match = _KNOB.fullmatch(node.value)
        if match is None:
            text = f"{shorten(node.value)}: a knob stands for a whole value, as in $name"
            self._fault("knob", text, node.place)
            return node
        name = match[1]
        found = self._value(name, node.place)
        if isinstance(found, Text):
            return Text(found.value, node.place, name)
        return found or node

    def _value(self, name: str, place: Place) -> Node | None:
        """Return what a knob stands for, None after a fault."""
        self.used.add(name)
        if name in self.resolved:
            return self.resolved[name]
        if name in self.stack:
            self._ring(name)
            return None
        if name not in self.knobs:
            text = f"there is no knob '{name}'{suggest(name, self.knobs)}"
            self._fault("unknown-knob", text, place)
            return None
        return self._resolve(name, place)

    def _resolve(self, name: str, place: Place) -> Node | None:
        if len(self.stack) >= DEEPEST:
            text = f"knob '{name}': more than {DEEPEST} knobs stand for one another, use fewer"
            self._fault("knob", text, place)
            return None
        self.stack.append(name)
        before = len(self.faults)
        found = self.node(self.knobs[name][1])
        self.stack.pop()
        self.resolved[name] = found if len(self.faults) == before else None
        return self.resolved[name]

    def _ring(self, name: str) -> None:
        ring = [*self.stack[self.stack.index(name) :], name]
        shown = " -> ".join(f"${knob}" for knob in ring)
        text = f"knobs stand for one another in a ring, {shown}: give one of them a value"
        self._fault("knob-ring", text, self.knobs[name][0])

    def _fault(self, code: str, text: str, place: Place) -> None:
        self.faults.append(Fault(code, text).located(place))
        if len(self.faults) >= MOST_FAULTS:
            raise FlowsheetFault(self.faults)
