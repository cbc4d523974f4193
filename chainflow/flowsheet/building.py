"""From the words of a file to a checked flowsheet, with every fault at its place.

Equipment is made from its class, lines are joined to ports, amounts are settled, holds are aimed.
Faults are collected over the whole file and raised together.
"""

from __future__ import annotations

from collections.abc import Mapping as AnyMapping
from dataclasses import replace
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from chainflow.basis.faults import Fault, FileFault, FlowsheetFault, Place
from chainflow.basis.formatting import format_quantity
from chainflow.basis.names import name_trouble, shorten, suggest
from chainflow.basis.quantities import QuantityFault, parse
from chainflow.equipment.base import Equipment
from chainflow.equipment.register import kinds
from chainflow.flowsheet import lines as line_texts
from chainflow.flowsheet import roles
from chainflow.flowsheet.blocks import BLOCKS, read_blocks
from chainflow.flowsheet.component_list import component_names
from chainflow.flowsheet.holds import HoldReader
from chainflow.flowsheet.knobs import knob_places
from chainflow.flowsheet.linkage import LINE_FAULTS, Linkage
from chainflow.flowsheet.messages import bare, complaints
from chainflow.flowsheet.network import Flowsheet
from chainflow.flowsheet.overrides import blamed, with_settings
from chainflow.flowsheet.reading import (
    Mapping,
    Node,
    Sequence,
    Text,
    Tree,
    place_at,
    plain,
    read_tree,
    substitute_knobs,
)
from chainflow.flowsheet.sight import Sight
from chainflow.thermo.components import (
    DEFAULT_COMPONENTS,
    Matter,
    known_components,
)

_TOP = (
    *("title", "basis", "ambient", "approach", "components", "knobs", "equipment", "lines"),
    "holds",
    *BLOCKS,
)
_REQUIRED = {
    "equipment": "'equipment:' and below it names with their kind, as in 'town: {kind: product}'",
    "lines": "'lines:' and below it a list, as in '- stack.hydrogen -> dry'",
}
_AMBIENT = 298.15  # [K]
_SAME_LEVEL = 0.01  # [K]
_APPROACH = 10.0  # [K], common practice, no source


def read_flowsheet(path: Path | str, overrides: AnyMapping[str, str] | None = None) -> Flowsheet:
    """Read and check a flowsheet file.

    Parameters
    ----------
    path : file to read.
    overrides : other values by knob (``sun``) or address (``reactor.temperature``), as text.

    Raises
    ------
    FlowsheetFault
        With every fault of the file, each with its place.
    UsageFault
        If an override names nothing or its value does not fit.
    FileFault
        If the file cannot be read.
    """
    path = Path(path)
    return build_flowsheet(read_tree(path), overrides, str(path))


def read_text(text: str, overrides: AnyMapping[str, str] | None = None) -> Flowsheet:
    """Read and check a flowsheet from its text."""
    return build_flowsheet(read_tree(text), overrides)


def build_flowsheet(
    tree: Tree, overrides: AnyMapping[str, str] | None = None, path: str = ""
) -> Flowsheet:
    """Check a tree of words and make the flowsheet of it."""
    overrides = dict(overrides or {})
    knobs = {name: text for name, text in overrides.items() if "." not in name}
    settings = {name: text for name, text in overrides.items() if "." in name}
    changed = tree
    try:
        changed = _overridden(tree, knobs, settings)
        return _Builder(changed, path, knobs).flowsheet()
    except FlowsheetFault as problem:
        fine = bool(overrides) and _is_fine(tree, path)
        raise blamed(problem, changed, knobs, file_is_fine=fine) from None


def _overridden(tree: Tree, knobs: AnyMapping[str, str], settings: AnyMapping[str, str]) -> Tree:
    """The tree with its knobs written out and other values at addresses; these may be knobs."""
    written = substitute_knobs(tree, knobs)
    changed = with_settings(written, settings)
    if any("$" in text for text in settings.values()):
        changed = substitute_knobs(changed, knobs)
    return replace(changed, remarks=written.remarks)


def _is_fine(tree: Tree, path: str) -> bool:
    """Whether the file as it stands has no fault."""
    try:
        _Builder(substitute_knobs(tree), path, {}).flowsheet()
    except FlowsheetFault:
        return False
    return True


class _Builder:
    """One walk through one tree."""

    def __init__(self, tree: Tree, path: str, knobs: AnyMapping[str, str]) -> None:
        self.tree, self.root, self.path = tree, tree.root, path
        self.folder = str(Path(path).parent) if path else ""  # files that settings name are here
        self.overrides = knobs
        self.faults: list[Fault] = []
        self.unread: list[Fault] = []  # files named in settings that cannot be read
        self.remarks: list[Fault] = list(tree.remarks)

    def fault(self, code: str, text: str, place: Place | None) -> None:
        self.faults.append(Fault(code, text).located(place))

    def stop_on_faults(self) -> None:
        if self.faults:
            raise FlowsheetFault([*self.faults, *self.unread])
        if self.unread:
            raise FileFault("; ".join(f"{self.path}:{fault}" for fault in self.unread))

    def flowsheet(self) -> Flowsheet:
        self._top_keys()
        components = self._components()
        pieces = self._equipment()
        title, basis, ambient = self._title(), self._basis(), self._ambient()
        approach = self._approach()
        if components is not None:
            self._check_components(pieces, components)
        joined = self._joined(pieces)
        linkage = Linkage(pieces, joined, self.fault, self.remark, self._spot)
        if whole := self._lines_are_whole(pieces):
            linkage.missing_lines()
        contents = roles.contents(joined, self.faults)
        roles.check_counts(joined, self.faults)
        broken = self._broken(pieces)
        lines = roles.assign(joined, contents, pieces, self.faults, complete=not broken)
        ends = {name for line in lines for name in (line.source, line.target)}
        used = {name: piece for name, piece in pieces.items() if name in ends}
        linkage.idle(used)
        known = components or DEFAULT_COMPONENTS
        holds = HoldReader(pieces, broken, known, self.faults).read(self.root.get("holds"))
        if whole:
            linkage.unmoved(holds, used)
        used = Sight(used, lines, holds, broken, self.fault, self._spot).seeing()
        starts = frozenset(f"{line.source}.{line.outlet.name}" for line in joined)
        blocks = read_blocks(self.root, pieces, broken, known, starts, self.faults)
        self._compare_surroundings(ambient, blocks.environment.temperature)
        self.stop_on_faults()
        return Flowsheet(
            title,
            basis,
            ambient,
            components or DEFAULT_COMPONENTS,
            used,
            tuple(lines),
            holds,
            self._knob_texts(),
            tuple(self.remarks),
            self.tree.sha256,
            self.path,
            approach,
            blocks,
            knob_places(self.root),
        )

    # --- the small entries -------------------------------------------------------------------

    def _top_keys(self) -> None:
        for key, (place, _) in self.root.entries.items():
            if key not in _TOP:
                self.fault(
                    "unknown-key",
                    f"there is no entry {shorten(key)} at the top of a flowsheet"
                    f"{suggest(key, _TOP)}; it has {', '.join(_TOP)}",
                    place,
                )
        for key, form in _REQUIRED.items():
            if key not in self.root.entries:
                text = f"'{key}' is missing at the top of the file: write {form}"
                self.fault("missing-key", text, self.root.place)

    def _text(self, key: str) -> Text | None:
        node = self.root.get(key)
        if node is None:
            return None
        if isinstance(node, Text) and node.value is not None:
            return node
        self.fault("wrong-value", f"{key}: wanted a text", node.place)
        return None

    def _title(self) -> str:
        node = self._text("title")
        return node.value or "" if node is not None else ""

    def _basis(self) -> str:
        node = self._text("basis")
        if node is None:
            return "LHV"
        if node.value not in ("LHV", "HHV"):
            self.fault(
                "wrong-value",
                f"basis: {shorten(str(node.value))} is not possible, wanted LHV or HHV",
                node.place,
            )
        return str(node.value)

    def _ambient(self) -> float:
        return self._temperature("ambient", _AMBIENT, gt=0.0)

    def _compare_surroundings(self, ambient: float, environment: float) -> None:
        """Heat that is given to the ambient is worth nothing only where that is the environment."""
        block = self.root.get("environment")
        if block is not None and abs(environment - ambient) > _SAME_LEVEL:
            self.remark(
                "two-surroundings",
                f"environment: it is at {format_quantity(environment, 'K')}, 'ambient' at "
                f"{format_quantity(ambient, 'K')}: heat given to the ambient then carries exergy; "
                "give both the same temperature",
                block.place if block.place.line else None,  # no line of the file: it is set
            )

    def _approach(self) -> float:
        return self._temperature("approach", _APPROACH, ge=0.0, difference=True)

    def _temperature(self, entry: str, default: float, **limits: Any) -> float:
        node = self._text(entry)
        if node is None:
            return default
        try:
            return parse(str(node.value), "K", **limits)
        except QuantityFault as problem:
            self.fault("wrong-quantity", f"{entry}: {problem}", node.place)
            return default

    def _components(self) -> tuple[str, ...] | None:
        node = self.root.get("components")
        if node is None:
            return DEFAULT_COMPONENTS
        if not isinstance(node, Sequence):
            self.fault(
                "wrong-value",
                "components: wanted a list such as [H2, O2, H2O, CO2, CH4] or [CO, C1-C30, wax]",
                node.place,
            )
            return None
        names = component_names(node, self.faults)
        return names if names and not self.faults else None

    def _knob_texts(self) -> dict[str, str]:
        node = self.root.get("knobs")
        given = plain(node) if isinstance(node, Mapping) else {}
        return {name: str(self.overrides.get(name, value)) for name, value in given.items()}

    # --- equipment ---------------------------------------------------------------------------

    def _equipment(self) -> dict[str, Equipment]:
        node = self.root.get("equipment")
        if node is None:
            return {}
        if not isinstance(node, Mapping):
            self.fault(
                "wrong-value",
                "equipment: wanted a map of names, as in 'stack: {kind: electrolyser, ...}'",
                node.place,
            )
            return {}
        pieces = {}
        for name, (place, entry) in node.entries.items():
            trouble = name_trouble(name)
            if trouble:
                self.fault("bad-name", f"equipment: {trouble}", place)
            piece = self._piece(name, place, entry)
            if piece is not None:
                pieces[name] = piece
        self.all_names = tuple(node.entries)
        return pieces

    all_names: tuple[str, ...] = ()

    def _piece(self, name: str, place: Place, entry: Node) -> Equipment | None:
        if not isinstance(entry, Mapping):
            self.fault(
                "wrong-value",
                f"{shorten(name)}: wanted its kind and settings, as in {{kind: mixer}}",
                entry.place,
            )
            return None
        kind = entry.get("kind")
        known = kinds()
        if kind is None:
            self.fault(
                "missing-kind",
                f"{shorten(name)}: 'kind' is missing, wanted one of: {', '.join(known)}",
                place,
            )
            return None
        word = kind.value if isinstance(kind, Text) else None
        if word not in known:
            self.fault(
                "unknown-kind",
                f"{shorten(name)}: there is no kind {shorten(str(word))}"
                f"{suggest(str(word), known)}; 'chainflow kinds' lists them",
                kind.place,
            )
            return None
        return self._made(name, known[str(word)], place, entry)

    def _made(
        self, name: str, cls: type[Equipment], place: Place, entry: Mapping
    ) -> Equipment | None:
        """Equipment of a known kind, or None with what is wrong among the faults."""
        settings: dict[str, Any] = plain(entry)
        del settings["kind"]
        try:
            return cls.model_validate(settings, context={"folder": self.folder})
        except FileFault as problem:
            self.unread.append(Fault("wrong-setting", f"{name}: {problem}").located(place))
            return None
        except ValidationError as problem:
            for complaint in complaints(problem, cls, name):
                spot = (
                    place_at(entry, complaint.path, at_key=complaint.at_key)
                    if complaint.path
                    else place
                )
                self.fault(complaint.code, complaint.text, spot)
            return None

    def _spot(self, name: str, path: tuple[str, ...]) -> Place | None:
        node = self.root.get("equipment")
        if not isinstance(node, Mapping) or name not in node.entries:
            return None
        parts = [int(part) if part.isdecimal() else part for part in path]
        return place_at(node.entries[name][1], parts)

    def _check_components(
        self, pieces: AnyMapping[str, Equipment], components: tuple[str, ...]
    ) -> None:
        matter = Matter.of(components)
        for name, piece in pieces.items():
            strange = False
            for path, component in piece.component_names():
                if component not in components:
                    strange = True
                    hint = suggest(component, components) or (
                        "; add it to 'components'" if component in known_components() else ""
                    )
                    self.fault(
                        "unknown-component",
                        f"{bare(name)}: {'.'.join(map(bare, path))}: "
                        f"there is no component {shorten(component)}{hint}",
                        self._spot(name, path),
                    )
            if not strange:
                for path, text in piece.setting_faults(matter):
                    self.fault("wrong-setting", f"{bare(name)}: {text}", self._spot(name, path))

    # --- lines -------------------------------------------------------------------------------

    def _joined(self, pieces: AnyMapping[str, Equipment]) -> list[line_texts.JoinedPorts]:
        node = self.root.get("lines")
        if node is None:
            return []
        if not isinstance(node, Sequence):
            self.fault(
                "wrong-value", "lines: wanted a list, as in '- stack.hydrogen -> dry'", node.place
            )
            return []
        if not node.items:
            self.fault("no-lines", "lines: there is none: write '- from -> to'", node.place)
        joined = []
        for item in node.items:
            if not isinstance(item, Text) or item.value is None:
                self.fault(
                    "bad-line",
                    "lines: wanted 'from -> to', as in '- stack.hydrogen -> dry'",
                    item.place,
                )
                continue
            for joint in line_texts.cut_chain(item.value, item.place, self.faults):
                found = line_texts.join(joint, pieces, self._broken(pieces), self.faults)
                if found is not None:
                    joined.append(found)
        return joined

    def _broken(self, pieces: AnyMapping[str, Equipment]) -> frozenset[str]:
        """Equipment that could not be made."""
        return frozenset(self.all_names) - frozenset(pieces)

    def _lines_are_whole(self, pieces: AnyMapping[str, Equipment]) -> bool:
        """Whether every line was read: if not, one may seem missing for another fault's sake."""
        return len(pieces) == len(self.all_names) and not any(
            f.code in LINE_FAULTS for f in self.faults
        )

    def remark(self, code: str, text: str, place: Place | None) -> None:
        self.remarks.append(Fault(code, text).located(place))
