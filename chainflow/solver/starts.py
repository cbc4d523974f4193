"""Where a loop starts: stores with their contents, everything else empty."""

from __future__ import annotations

from chainflow.equipment.ports import ANY_NAME
from chainflow.equipment.stores import Store
from chainflow.solver.program import Program, per_mol, site_of
from chainflow.thermo.streams import Stream


def initial_state(program: Program, key: str) -> Stream:
    """The first guess of what one mol of a served line is, for the variable ``...~state``."""
    port = key.removesuffix("~state")
    name, _, outlet = port.partition(".")
    piece = program.flowsheet.equipment[name]
    site = site_of(program.flowsheet, name, detail=False)
    if isinstance(piece, Store):
        contents = piece.model_copy(update={"pure": True}).sample({}, {}, site)[ANY_NAME]
        assert isinstance(contents, Stream)
        return contents
    (feeding,) = [
        li for li in program.flowsheet.into(name) if li.called and li.content == "material"
    ]
    spot = (
        feeding.source,
        ANY_NAME
        if isinstance(program.flowsheet.equipment[feeding.source], Store)
        else feeding.outlet,
    )
    source = program.states[spot]
    before = source.constant if source.constant is not None else initial_state(program, source.key)
    outcome = piece.operate({feeding.inlet: before}, {}, site)
    (asking,) = program.flowsheet.line_from(name, outlet)
    return per_mol(outcome.outlets[outlet], asking)
