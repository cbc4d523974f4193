"""Which components does the list at the top of a file name?

Each entry is a component, or a range of carbon numbers that stands for many: `C1-C30`.
"""

from __future__ import annotations

from chainflow.basis.faults import Fault
from chainflow.basis.names import shorten, suggest
from chainflow.flowsheet.reading import Sequence, Text
from chainflow.thermo.chains import chains_in
from chainflow.thermo.components import known_components, known_in_words


def component_names(node: Sequence, faults: list[Fault]) -> tuple[str, ...]:
    """Return the names in the order of the list, ranges written out; faults are added."""
    entries: dict[str, str] = {}  # name, and the entry that it stands in
    for item in node.items:
        entry = str(item.value) if isinstance(item, Text) else ""
        try:
            meant = _meant(entry)
        except ValueError as problem:
            faults.append(Fault("unknown-component", f"components: {problem}").located(item.place))
            continue
        twice = [name for name in meant if name in entries]
        if twice:
            text = _said_twice(twice, entry, entries[twice[0]])
            faults.append(Fault("duplicate-component", f"components: {text}").located(item.place))
        entries |= dict.fromkeys(meant, entry)
    return tuple(entries)


def _meant(entry: str) -> tuple[str, ...]:
    """The components that one entry stands for; ValueError with a sentence if there are none."""
    known = known_components()
    if entry in known:
        return (entry,)
    chains = chains_in(entry)
    if chains is not None:
        return chains
    raise ValueError(
        f"there is no component {shorten(entry)}{suggest(entry, known)}; known: "
        f"{known_in_words()}; many chains at once: C1-C30, C21+, alkenes C2-C20="
    )


def _said_twice(names: list[str], entry: str, before: str) -> str:
    if entry == before:
        return f"'{entry}' stands twice"
    said = f"'{names[0]}'" if len(names) == 1 else f"'{names[0]}' and {len(names) - 1} more"
    where = f"in '{before}'" if before != names[0] else "by itself"
    here = f"in '{entry}'" if entry != names[0] else "by itself"
    return f"{said} stand{'s' if len(names) == 1 else ''} twice, {where} and {here}"
