"""Recycles that lose no pressure: nothing moves their gas, which is an idealisation."""

from __future__ import annotations

from collections.abc import Iterator

import networkx as nx

from chainflow.basis.faults import Fault
from chainflow.equipment.stores import Store
from chainflow.flowsheet.network import Flowsheet
from chainflow.solver.pressures import Pressures

_MOVED = 1e-9  # relative change of pressure that counts


def drop_free_recycles(flowsheet: Flowsheet, pressures: Pressures) -> Iterator[Fault]:
    """A remark for each loop of material lines in which the pressure never changes."""
    graph: nx.DiGraph = nx.DiGraph()
    graph.add_nodes_from(flowsheet.equipment)
    for line in flowsheet.lines:
        if line.content != "material":
            continue
        level = pressures[line.source, line.outlet]
        arriving = [
            pressures[li.source, li.outlet]
            for li in flowsheet.into(line.source)
            if li.content == "material"
        ]
        changes = any(abs(level - before) > _MOVED * level for before in arriving)
        if not changes and not isinstance(flowsheet.equipment[line.source], Store):
            graph.add_edge(line.source, line.target)
    for members in nx.strongly_connected_components(graph):
        if len(members) > 1:
            names = [name for name in flowsheet.equipment if name in members]
            text = (
                f"the recycle through {', '.join(names)} loses no pressure and nothing drives it: "
                "give its equipment pressure drops and put a compressor or pump into it"
            )
            yield Fault("drop-free-recycle", text)
