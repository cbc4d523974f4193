"""Values from the command line in place of those in the file, by knob or by address.

A value that does not fit is wrong usage, not a fault of the file.
"""

from __future__ import annotations

from collections.abc import Iterator
from collections.abc import Mapping as AnyMapping
from dataclasses import replace

from chainflow.basis.faults import ChainflowError, FlowsheetFault, Place, UsageFault
from chainflow.basis.names import shorten, suggest
from chainflow.flowsheet.tree import Mapping, Node, Sequence, Text, Tree

_DEEPEST = 8  # words behind the name of the equipment
_BLOCKS = ("environment", "costs")  # of numbers, at the top of a file
_SET = Place(0, 0)  # where a value from the command line stands


def with_settings(tree: Tree, overrides: AnyMapping[str, str]) -> Tree:
    """The tree with other texts at the addresses of settings (``reactor.temperature``).

    ``environment.temperature`` and ``costs.interest`` name entries of these blocks.
    """
    root: Node = tree.root
    pieces = tree.root.get("equipment")
    known = pieces.entries if isinstance(pieces, Mapping) else {}
    for address, text in overrides.items():
        name, *path = address.split(".")
        if len(path) > _DEEPEST:
            raise UsageFault(
                f"--set {shorten(address)}: no setting lies so deep, name one as in a file"
            )
        if name in _BLOCKS and name not in known:
            root = _put(root, (name, *path), Text(text, _SET))
            continue
        if name not in known:
            found = f"there is no equipment {shorten(name)}{suggest(name, known)}"
            raise UsageFault(f"--set {shorten(address)}: {found}")
        root = _put(root, ("equipment", name, *path), Text(text, _SET))
    assert isinstance(root, Mapping)
    return replace(tree, root=root)


def _put(node: Node, path: tuple[str, ...], value: Node) -> Node:
    if not path:
        return value
    key, below = path[0], path[1:]
    if isinstance(node, Sequence) and key.isdecimal() and int(key) < len(node.items):
        items = list(node.items)
        items[int(key)] = _put(items[int(key)], below, value)
        return Sequence(tuple(items), node.place)
    entries = dict(node.entries) if isinstance(node, Mapping) else {}
    key_place, old = entries.get(key, (_SET, Mapping({}, _SET)))
    entries[key] = (key_place, _put(old, below, value))
    return Mapping(entries, node.place)


def blamed(
    problem: FlowsheetFault,
    tree: Tree,
    knobs: AnyMapping[str, str],
    *,
    file_is_fine: bool = False,
) -> ChainflowError:
    """The faults of a file, or wrong usage if a value from the command line brought them."""
    mine = [fault.text for fault in problem.faults if fault.line == 0]
    if mine:
        return UsageFault("; ".join(f"--set: {text}" for text in mine))
    places = {text.place: text.knob for text in _texts(tree.root) if text.knob in knobs}
    by_knob = [(places[f.place], f.text) for f in problem.faults if f.place in places]
    if by_knob:
        return UsageFault("; ".join(f"--set {knob}: {text}" for knob, text in by_knob))
    if file_is_fine:
        return UsageFault("; ".join(f"--set: {fault.text}" for fault in problem.faults))
    return problem


def _texts(node: Node) -> Iterator[Text]:
    if isinstance(node, Text):
        yield node
        return
    children: Iterator[Node]
    if isinstance(node, Sequence):
        children = iter(node.items)
    else:
        children = (child for _, child in node.entries.values())
    for child in children:
        yield from _texts(child)
