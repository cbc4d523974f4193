"""Who sets the amount of each line, and whether the two ends agree.

An inlet that calls is followed back through equipment that a call may pass (pump, valve, cooler,
compressor, ...) to an outlet that serves.  Every other inlet takes what an outlet offers.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from chainflow.basis.faults import Fault
from chainflow.equipment.base import Equipment
from chainflow.equipment.ports import Role
from chainflow.flowsheet.lines import JoinedPorts
from chainflow.flowsheet.network import Line

_ONE_LINE = ("material", "light", "any")


def contents(joined: Sequence[JoinedPorts], faults: list[Fault]) -> list[str]:
    """The content of each line; ports that take any content get it from the other end."""
    known: list[str] = ["any"] * len(joined)
    passing = {line.source for line in joined if line.outlet.content == "any"}
    for _ in range(len(joined) + 1):
        before = list(known)
        through = {
            line.target: known[i]
            for i, line in enumerate(joined)
            if line.target in passing and known[i] != "any"
        }
        for i, line in enumerate(joined):
            given = (
                line.outlet.content
                if line.outlet.content != "any"
                else through.get(line.source, "any")
            )
            known[i] = given if given != "any" else line.inlet.content
        if known == before:
            break
    for i, line in enumerate(joined):
        wanted = line.inlet.content
        if known[i] == "any":
            known[i] = "material"
        if wanted != "any" and known[i] not in wanted.split(" or "):
            say = f"lines: '{line.text}' brings {known[i]} to a port for {wanted}"
            faults.append(Fault("wrong-content", say).located(line.place))
    return known


def check_counts(joined: Sequence[JoinedPorts], faults: list[Fault]) -> None:
    """One line per outlet, unless it serves power or heat; one per inlet, unless it takes many."""
    starts: dict[tuple[str, str], JoinedPorts] = {}
    ends: dict[tuple[str, str], JoinedPorts] = {}
    for line in joined:
        start, end = (line.source, line.outlet.name), (line.target, line.inlet.name)
        shared = line.outlet.role is Role.SERVES and line.outlet.content not in _ONE_LINE
        if start in starts and not shared:
            say = (
                f"lines: two lines leave '{start[0]}.{start[1]}' "
                f"(the other goes to {starts[start].target}): put a splitter between"
            )
            faults.append(Fault("two-lines-from-outlet", say).located(line.place))
        if end in ends and not line.inlet.many:
            say = (
                f"lines: two lines enter '{end[0]}.{end[1]}' "
                f"(the other comes from {ends[end].source}): put a mixer before it"
            )
            faults.append(Fault("two-lines-into-inlet", say).located(line.place))
        starts.setdefault(start, line)
        ends.setdefault(end, line)


def assign(
    joined: Sequence[JoinedPorts],
    kinds: Sequence[str],
    equipment: Mapping[str, Equipment],
    faults: list[Fault],
    complete: bool = True,
) -> list[Line]:
    """Decide for each line whether it is called, and refuse ends that do not agree.

    Where equipment is missing that could not be made it is not `complete`.
    """
    called = _called(joined, kinds, equipment, faults)
    lines = []
    sound = complete and not faults  # a call may be missing only because something else is wrong
    for i, line in enumerate(joined):
        if sound and not called[i] and line.outlet.role is Role.SERVES:
            faults.append(_nobody_sets(line, equipment))
        start, end = (line.source, line.outlet.name), (line.target, line.inlet.name)
        lines.append(Line(i, *start, *end, kinds[i], called[i], line.place))
    return lines


def _called(
    joined: Sequence[JoinedPorts],
    kinds: Sequence[str],
    equipment: Mapping[str, Equipment],
    faults: list[Fault],
) -> list[bool]:
    """Whether each line is called, followed back from the inlets that call."""
    called = [line.inlet.role is Role.CALLS for line in joined]
    into: dict[str, list[int]] = {}
    for i, line in enumerate(joined):
        into.setdefault(line.target, []).append(i)
    queue = [i for i, is_called in enumerate(called) if is_called]
    while queue:
        i = queue.pop(0)
        for back in _call_passes(joined[i], kinds[i], equipment, into, joined, faults):
            if not called[back]:
                called[back] = True
                queue.append(back)
    return called


def _call_passes(
    line: JoinedPorts,
    content: str,
    equipment: Mapping[str, Equipment],
    into: Mapping[str, list[int]],
    joined: Sequence[JoinedPorts],
    faults: list[Fault],
) -> list[int]:
    """The lines that a call at the end of `line` goes back to."""
    piece = equipment[line.source]
    if line.outlet.role is Role.SERVES:
        return []
    main_out, main_in = piece.main_port(inlet=False), piece.main_port(inlet=True)
    passes = piece.through and main_out is not None and main_out.name == line.outlet.name
    if content != "material" or not passes:
        faults.append(_offers_to_call(line, content))
        return []
    if not piece.passes_calls:
        say = (
            f"lines: the call of '{line.target}.{line.inlet.name}' cannot pass through "
            f"'{line.source}': its duty is fixed, give it a temperature"
        )
        faults.append(Fault("call-cannot-pass", say).located(line.place))
        return []
    assert main_in is not None
    return [i for i in into.get(line.source, []) if joined[i].inlet.name == main_in.name]


def _offers_to_call(line: JoinedPorts, content: str) -> Fault:
    between = {
        "material": "put a store between: it takes the surplus and makes up the shortage",
        "power": "put a switchboard between and take the power from one of its named outlets",
        "heat": "put a heat-network between and take the heat from one of its named outlets",
    }.get(content, "put something that serves between")
    say = (
        f"lines: '{line.text}': the sender offers what it has, "
        f"the receiver calls for what it needs; {between}"
    )
    return Fault("offers-calls", say).located(line.place)


def _nobody_sets(line: JoinedPorts, equipment: Mapping[str, Equipment]) -> Fault:
    kind = equipment[line.source].kind
    mend = {
        "supply": f"give 'flow:' to '{line.source}'",
        "air-capture": f"give 'flow:' to '{line.source}'",
        "store": f"take '{line.source}.rest', or let the receiver ask for its amount",
        "switchboard": f"take '{line.source}.rest', or let the receiver ask for its amount",
        "heat-network": f"take '{line.source}.rest', or let the receiver ask for its amount",
    }.get(kind, "let the receiver ask for its amount")
    say = f"lines: '{line.text}': nobody sets the amount: {mend}"
    return Fault("serves-takes", say).located(line.place)
