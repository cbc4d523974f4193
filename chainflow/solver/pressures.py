"""Pressures, settled along the flow order from settings alone, before anything is solved.

Every line gets a pressure [Pa]: an outlet has its equipment's own pressure setting, else the
lowest inlet less the drop.  What cannot be (a low feed into high pressure, a loop that loses
pressure with nothing to raise it) is a fault of the file.
"""

from __future__ import annotations

import math

from chainflow.basis.faults import Fault, FlowsheetFault
from chainflow.equipment.ports import ANY_NAME
from chainflow.flowsheet.network import Flowsheet, Line

_ROUND_OFF = 1e-12
_VACUUM = 1.0  # [Pa]

Pressures = dict[tuple[str, str], float]  # by (equipment, outlet)


def settle_pressures(flowsheet: Flowsheet) -> Pressures:
    """The pressure of every material outlet that has a line.

    Raises
    ------
    FlowsheetFault
        With every pressure that cannot be.
    """
    pressures: Pressures = {}
    for _ in range(len(flowsheet.equipment) + 2):
        changed = _one_round(flowsheet, pressures)
        if not changed:
            break
    else:
        raise FlowsheetFault(_falling(flowsheet, changed))
    faults = list(_faults(flowsheet, pressures))
    if faults:
        raise FlowsheetFault(faults)
    return pressures


def inlet_pressures(
    flowsheet: Flowsheet, pressures: Pressures, name: str
) -> dict[str, tuple[float, ...]]:
    """Pressures that arrive at each material inlet of a piece of equipment."""
    arriving: dict[str, tuple[float, ...]] = {}
    for line in flowsheet.into(name):
        if line.content == "material":
            level = pressures.get((line.source, line.outlet), math.inf)
            arriving[line.inlet] = (*arriving.get(line.inlet, ()), level)
    return arriving


def _one_round(flowsheet: Flowsheet, pressures: Pressures) -> list[str]:
    """Update every outlet once; the names of equipment whose outlets changed."""
    changed = []
    for name, piece in flowsheet.equipment.items():
        given = piece.outlet_pressures(inlet_pressures(flowsheet, pressures, name))
        for line in flowsheet.out_of(name):
            if line.content != "material":
                continue
            level = given.get(line.outlet, given.get(ANY_NAME, math.inf))
            before = pressures.get((name, line.outlet), math.inf)
            if level != before and not abs(level - before) <= _ROUND_OFF * abs(level):
                pressures[name, line.outlet] = level
                changed.append(name)
    return changed


def _falling(flowsheet: Flowsheet, changed: list[str]) -> Fault:
    names = list(dict.fromkeys(changed))
    loop = _loop_among(flowsheet, names)
    place = next((line.place for line in flowsheet.lines if line.source == loop[0]), None)
    say = (
        f"the loop {' -> '.join([*loop, loop[0]])} loses pressure on every round "
        "and nothing raises it again: put a compressor or pump into it, "
        "or set its pressure drops to zero"
    )
    return Fault("loop-loses-pressure", say).located(place)


def _loop_among(flowsheet: Flowsheet, names: list[str]) -> list[str]:
    """One loop of material lines through equipment in `names`."""
    path: list[str] = [names[0]]
    while True:
        follow = [
            line.target
            for line in flowsheet.out_of(path[-1])
            if line.content == "material" and line.target in names
        ]
        if not follow:
            names = [name for name in names if name != path[-1]]
            path = path[:-1] or names[:1]
            continue
        if follow[0] in path:
            return path[path.index(follow[0]) :]
        path.append(follow[0])


def _faults(flowsheet: Flowsheet, pressures: Pressures) -> list[Fault]:
    found = []
    for name, piece in flowsheet.equipment.items():
        arriving = inlet_pressures(flowsheet, pressures, name)
        for inlet, text in piece.pressure_faults(arriving):
            line = _line_at(flowsheet, name, inlet)
            found.append(Fault("pressure", f"{name}: {text}").located(line.place if line else None))
    for line in flowsheet.lines:
        if line.content == "material":
            found += _level_faults(line, pressures.get((line.source, line.outlet), math.inf))
    return found


def _level_faults(line: Line, level: float) -> list[Fault]:
    if math.isfinite(level) and level > _VACUUM:
        return []
    if math.isinf(level):
        say = (
            f"nothing sets the pressure of '{line.start}': "
            "give a piece of equipment in this loop a pressure"
        )
    else:
        say = (
            f"'{line.start}' would be at {level / 1e5:.4g} bar: make the pressure drops before it "
            "smaller, or start at a higher pressure"
        )
    return [Fault("pressure", say).located(line.place)]


def _line_at(flowsheet: Flowsheet, name: str, inlet: str) -> Line | None:
    lines = flowsheet.line_into(name, inlet)
    return lines[0] if lines else None
