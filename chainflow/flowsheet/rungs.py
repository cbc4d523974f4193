"""The rungs of a plant as a file names them: the optional block ``rungs:``.

    rungs:
      sunshine: light               # a cut that is found anyway, under another name
      panels: [field.power]         # what leaves these ports
      gas: [split.onward]
      evening: useful

A cut is a list of outlets, or the word of a cut that is found from the graph. What goes in is
always the first cut and what is useful the last, so that the rungs multiply to the overall
efficiency whatever is named between; either gets its own name with the words `light` and `useful`.
"""

from __future__ import annotations

from collections.abc import Mapping as AnyMapping
from dataclasses import dataclass
from itertools import pairwise

from chainflow.basis.faults import Fault, Place
from chainflow.basis.names import name_trouble, shorten, suggest
from chainflow.equipment.base import Equipment
from chainflow.flowsheet.tree import Mapping, Node, Sequence, Text

FIRST, LAST = "light", "useful"
WORDS = (FIRST, "power", "hydrogen", "fuel made", "fuel kept", "power kept", LAST)
_FORM = "a list of outlets as [stack.hydrogen], or one of: " + ", ".join(WORDS)


@dataclass(frozen=True, slots=True)
class NamedCut:
    """One cut: its name, and the outlets it passes or the word of an automatic cut."""

    name: str
    ports: tuple[str, ...] = ()
    word: str = ""


class RungReader:
    """Reads the rungs of one flowsheet; what is wrong goes into `faults`."""

    def __init__(
        self,
        pieces: AnyMapping[str, Equipment],
        broken: frozenset[str],
        linked: frozenset[str],
        faults: list[Fault],
    ) -> None:
        self.pieces, self.broken = pieces, broken  # broken: equipment with faults of its own
        self.linked, self.faults = linked, faults  # linked: outlets from which a line starts

    def read(self, node: Node | None) -> tuple[NamedCut, ...]:
        """All cuts of the map under `rungs`, in the file's order."""
        if node is None or (isinstance(node, Text) and node.value is None):
            return ()
        if not isinstance(node, Mapping):
            self._fault("wrong-value", f"wanted names, each with {_FORM}", node.place)
            return ()
        found: list[NamedCut] = []
        for name, (place, entry) in node.entries.items():
            if trouble := name_trouble(name):
                self._fault("bad-name", trouble, place)
            cut = self._cut(name, entry)
            self._refuse_other_word(name, cut, place)
            if cut is not None:
                self._refuse_twins(cut, found, entry.place)
                found.append(cut)
        self._refuse_order(found, node)
        return tuple(found)

    def _fault(self, code: str, text: str, place: Place | None) -> None:
        self.faults.append(Fault(code, f"rungs: {text}").located(place))

    def _cut(self, name: str, entry: Node) -> NamedCut | None:
        if isinstance(entry, Text):
            word = entry.value or ""
            if word in WORDS:
                return NamedCut(name, word=word)
            hint = "" if "." in word else suggest(word, WORDS)
            said = f"{shorten(word)} is no cut{hint}, wanted {_FORM}"
            self._fault("bad-rung", f"{shorten(name)}: {said}", entry.place)
            return None
        if not isinstance(entry, Sequence) or not entry.items:
            self._fault("bad-rung", f"{shorten(name)}: wanted {_FORM}", entry.place)
            return None
        ports: list[str] = []
        for item in entry.items:
            port = item.value if isinstance(item, Text) else None
            if port in ports:
                text = f"{shorten(name)}: '{port}' stands twice: what passes there counts once"
                self._fault("bad-rung", text, item.place)
            elif self._is_outlet(port or "", name, item.place):
                ports.append(port or "")
        return NamedCut(name, tuple(ports)) if len(ports) == len(entry.items) else None

    def _is_outlet(self, port: str, name: str, place: Place) -> bool:
        piece_name, dot, outlet = port.partition(".")
        if piece_name in self.broken:
            return True
        piece = self.pieces.get(piece_name)
        if piece is None or not dot:
            hint = suggest(piece_name, self.pieces)
            text = f"{shorten(port)} is no outlet{hint}, wanted equipment and port"
            self._fault("unknown-equipment", f"{shorten(name)}: {text}", place)
            return False
        family = [p.name for p in piece.port_list() if not p.is_inlet and not p.any_name]
        if piece.port(outlet, inlet=False) is None or (
            outlet not in family and port not in self.linked
        ):
            known = [
                *family,
                *(p.partition(".")[2] for p in self.linked if p.startswith(f"{piece_name}.")),
            ]
            text = (
                f"{piece_name} ({piece.kind}) has no outlet {shorten(outlet)}"
                f"{suggest(outlet, known)}; it has {', '.join(dict.fromkeys(known)) or 'none'}"
            )
            self._fault("unknown-port", f"{shorten(name)}: {text}", place)
            return False
        return True

    def _refuse_other_word(self, name: str, cut: NamedCut | None, place: Place) -> None:
        """The word of one cut is no name for another: an answer would show two of that name."""
        ends = (FIRST, LAST)  # always there, under these names unless the file gives others
        if cut is not None and name != cut.word and name in (WORDS if cut.word else ends):
            text = f"'{name}' is the word of another cut: take another name"
            self._fault("bad-rung", text, place)

    def _refuse_twins(self, cut: NamedCut, found: list[NamedCut], place: Place) -> None:
        for other in found:
            if (set(other.ports), other.word) == (set(cut.ports), cut.word):
                text = f"'{cut.name}' is the same cut as '{other.name}': keep one of them"
                self._fault("bad-rung", text, place)

    def _refuse_order(self, found: list[NamedCut], node: Mapping) -> None:
        """The words stand in the order of the chain, the ends at the ends."""
        words = [cut for cut in found if cut.word]
        for before, after in pairwise(words):
            if WORDS.index(before.word) > WORDS.index(after.word):
                text = (
                    f"'{after.name}' ({after.word}) is passed before '{before.name}' "
                    f"({before.word}): turn them round"
                )
                self._fault("bad-rung", text, node.entries[after.name][0])
        for place, word, end in ((0, FIRST, "first"), (-1, LAST, "last")):
            for cut in found:
                if cut.word == word and cut is not found[place]:
                    text = f"'{cut.name}' ({word}) is always {end}: put it there"
                    self._fault("bad-rung", text, node.entries[cut.name][0])
