"""The program of a flowsheet: its variables, its steps, and how the steps hang together.

Built once per topology from the lines, the settled pressures and the species that can be where.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass, field, replace

import numpy as np

from chainflow.basis.faults import NotSolved
from chainflow.equipment.base import Equipment, Site
from chainflow.equipment.boundary import Supply
from chainflow.equipment.ports import ANY_NAME, Flow, Role
from chainflow.equipment.power import Switchboard
from chainflow.equipment.stores import Store
from chainflow.flowsheet.addresses import HeldResult, parse_result, property_of
from chainflow.flowsheet.network import Flowsheet, Hold, Line
from chainflow.solver.inventories import Presence
from chainflow.solver.nodes import (
    EquipmentStep,
    ResultStep,
    Source,
    Step,
    StoreStateStep,
    ThroughAmountStep,
    ThroughStateStep,
    outside_the_data,
)
from chainflow.solver.pressures import Pressures
from chainflow.solver.variables import FORMS, Variable
from chainflow.thermo.streams import Stream
from chainflow.thermo.validity import StateError


@dataclass
class Program:
    """Variables and steps of one flowsheet; steps are in file order."""

    flowsheet: Flowsheet
    variables: dict[str, Variable] = field(default_factory=dict)
    steps: list[Step] = field(default_factory=list)
    states: dict[tuple[str, str], Source] = field(default_factory=dict)  # of servers, by outlet
    holds: list[tuple[Hold, str, str]] = field(default_factory=list)  # (hold, setting, result)

    @property
    def settings(self) -> dict[str, Hold]:
        """Held settings by the variable that carries them."""
        return {setting: hold for hold, setting, _ in self.holds}


def build_program(flowsheet: Flowsheet, pressures: Pressures, presence: Presence) -> Program:
    """Lay out the variables and steps of a checked flowsheet."""
    return _Builder(flowsheet, pressures, presence).program


def site_of(flowsheet: Flowsheet, name: str, *, detail: bool) -> Site:
    """The place a piece of equipment stands in."""
    return Site(
        flowsheet.matter,
        flowsheet.ambient,
        frozenset(line.inlet for line in flowsheet.into(name)),
        frozenset(line.outlet for line in flowsheet.out_of(name)),
        detail,
        frozenset(line.inlet for line in flowsheet.into(name) if line.content == "power"),
    )


def amount_key(line: Line) -> str:
    """The variable of the amount that is asked along a called line."""
    return f"{line.target}.{line.inlet}~amount"


class _Builder:
    def __init__(self, flowsheet: Flowsheet, pressures: Pressures, presence: Presence) -> None:
        self.flowsheet, self.pressures, self.presence = flowsheet, pressures, presence
        self.program = Program(flowsheet)
        self.held: dict[str, list[tuple[tuple[str, ...], str]]] = {}
        self.results: dict[str, dict[str, HeldResult]] = {}
        self.extra_outlets: dict[str, set[str]] = {}
        self.into: dict[str, list[Line]] = {name: [] for name in flowsheet.equipment}
        self.out: dict[str, list[Line]] = {name: [] for name in flowsheet.equipment}
        for line in flowsheet.lines:
            self.into[line.target].append(line)
            self.out[line.source].append(line)
        self._aim_holds()
        for name in flowsheet.equipment:
            self._steps_of(name)
        self._result_steps()

    # --- variables ---------------------------------------------------------------------------

    def _variable(
        self,
        key: str,
        form: str,
        source: str = "",
        outlet: str = "",
        *,
        content: str = "material",
        rate: bool = False,
    ) -> str:
        if key not in self.program.variables:
            places = None
            pressure = 0.0
            if form == "matter":
                species = self.presence.species.get((source, outlet), ())
                places = np.array([self.flowsheet.matter.index[s] for s in species], dtype=int)
                pressure = self.pressures.get((source, outlet), 0.0) or self._own_pressure(
                    source, outlet
                )
            self.program.variables[key] = Variable(key, form, places, pressure, content, rate)
        return key

    def _own_pressure(self, name: str, outlet: str) -> float:
        given = self.flowsheet.equipment[name].outlet_pressures(
            {
                li.inlet: (self.pressures[li.source, li.outlet],)
                for li in self.into[name]
                if li.content == "material"
            }
        )
        return given.get(outlet, given.get(ANY_NAME, 1e5))

    def _offered(self, line: Line) -> str:
        return self._outlet_variable(line.source, line.outlet, line.content)

    def _outlet_variable(self, name: str, outlet: str, content: str) -> str:
        form = FORMS.get(content, "number")
        rate = isinstance(self.flowsheet.equipment[name], Switchboard) and outlet == "rest"
        return self._variable(f"{name}.{outlet}", form, name, outlet, content=content, rate=rate)

    def _amount(self, line: Line) -> str:
        return self._variable(
            amount_key(line), "heat" if line.content == "heat" else "number", content=line.content
        )

    # --- what servers give --------------------------------------------------------------------

    def _state(self, line: Line) -> Source:
        """What one mol of a called material line is."""
        name = line.source
        known = self.program.states
        piece = self.flowsheet.equipment[name]
        spot = (name, ANY_NAME if isinstance(piece, Store) else line.outlet)
        if spot not in known:
            known[spot] = self._server_state(name, piece, line)
        return known[spot]

    def _server_state(self, name: str, piece: Equipment, line: Line) -> Source:
        site = site_of(self.flowsheet, name, detail=False)
        port = piece.port(line.outlet, inlet=False)
        if isinstance(piece, Store):
            species = self.presence.species.get((name, line.outlet), ())
            if piece.pure or (len(species) <= 1 and set(species) <= set(piece.contents)):
                pure = piece.model_copy(update={"pure": True})
                return Source(constant=_sampled(name, pure, site)[ANY_NAME])
            return Source(self._variable(f"{name}~state", "matter", name, line.outlet))
        if port is not None and port.role is Role.SERVES:
            return Source(constant=_sampled(name, piece, site)[line.outlet])
        return self._through_state(name, piece, line, site)

    def _through_state(self, name: str, piece: Equipment, line: Line, site: Site) -> Source:
        (feeding,) = [li for li in self.into[name] if li.called and li.content == "material"]
        before = self._state(feeding)
        if before.constant is None or name in self.held:
            return Source(
                self._variable(f"{name}.{line.outlet}~state", "matter", name, line.outlet)
            )
        try:
            outcome = piece.operate({feeding.inlet: before.constant}, {}, site)
        except StateError as problem:
            raise outside_the_data(name, problem) from problem
        return Source(constant=per_mol(outcome.outlets[line.outlet], line))

    # --- steps -------------------------------------------------------------------------------

    def _steps_of(self, name: str) -> None:
        piece = self.flowsheet.equipment[name]
        calling = [li for li in self.into[name] if li.called and li.content == "material"]
        if piece.through and calling:
            self._through_steps(name, piece, calling[0])
            return
        if isinstance(piece, Store):
            self._store_state(name, piece)
        if not (isinstance(piece, Supply) and piece.flow is None):
            self._equipment_step(name, piece)

    def _common(self, name: str, piece: Equipment, cls: type[EquipmentStep]) -> EquipmentStep:
        """A step with its feeds, amounts asked and held settings."""
        step = cls(
            name,
            self.program.variables,
            self.flowsheet.matter,
            equipment=piece,
            site=site_of(self.flowsheet, name, detail=name in self.results),
            many=frozenset(p.name for p in piece.port_list() if p.is_inlet and p.many),
            settings=tuple(self.held.get(name, ())),
            results=self.results.get(name, {}),
        )
        for line in self.into[name]:
            if line.called and line.content != "material":
                continue  # power and heat that are called bring no sample
            source = self._state(line) if line.called else Source(self._offered(line))
            step.feeds[line.inlet] = (*step.feeds.get(line.inlet, ()), source)
        for line in self.out[name]:
            if line.called and self._serves(piece, line):
                step.asked[line.outlet] = (
                    *step.asked.get(line.outlet, ()),
                    Source(self._amount(line)),
                )
        return step

    def _serves(self, piece: Equipment, line: Line) -> bool:
        port = piece.port(line.outlet, inlet=False)
        return port is not None and port.role is Role.SERVES

    def _outputs(self, step: EquipmentStep, name: str) -> None:
        for line in self.out[name]:
            if not line.called:
                step.outlets[line.outlet] = self._offered(line)
        for outlet in sorted(self.extra_outlets.get(name, ())):
            step.outlets[outlet] = f"{name}.{outlet}"
        for line in self.into[name]:
            if line.called:
                step.drawn[line.inlet] = self._amount(line)

    def _close(
        self, step: EquipmentStep, writes: Iterable[str], more_reads: Iterable[str] = ()
    ) -> None:
        reads: list[str] = []
        for sources in (*step.feeds.values(), *step.asked.values()):
            reads += [key for source in sources for key in source.keys]
        reads += [key for _, key in step.settings] + list(more_reads)
        step.reads, step.writes = tuple(dict.fromkeys(reads)), tuple(dict.fromkeys(writes))
        if step.writes:
            self.program.steps.append(step)

    def _equipment_step(self, name: str, piece: Equipment) -> None:
        step = self._common(name, piece, EquipmentStep)
        self._outputs(step, name)
        self._close(step, [*step.outlets.values(), *step.drawn.values(), *step.results])

    def _store_state(self, name: str, piece: Store) -> None:
        draws = [li for li in self.out[name] if li.called]
        if not draws or self._state(draws[0]).constant is not None:
            return
        step = self._common(name, piece, StoreStateStep)
        assert isinstance(step, StoreStateStep)
        step.state, step.results = self._state(draws[0]).key, {}
        self._close(step, [step.state])

    def _through_steps(self, name: str, piece: Equipment, feeding: Line) -> None:
        main = piece.main_port(inlet=False)
        assert main is not None
        (asking,) = [li for li in self.out[name] if li.outlet == main.name]
        state = self._state(asking)
        if state.constant is None:
            step = self._common(name, piece, ThroughStateStep)
            assert isinstance(step, ThroughStateStep)
            step.main_inlet, step.main_outlet = feeding.inlet, main.name
            step.state, step.results = state.key, {}
            assert step.site is not None
            step.site = replace(  # what heat and power the way takes is the amounts' affair
                step.site,
                inlets=frozenset({feeding.inlet}),
                outlets=frozenset({main.name}),
                electric=frozenset(),
                detail=False,
            )
            self._close(step, [state.key])
        amounts = self._common(name, piece, ThroughAmountStep)
        assert isinstance(amounts, ThroughAmountStep)
        amounts.main_inlet, amounts.main_outlet, amounts.results = feeding.inlet, main.name, {}
        amounts.amount = Source(self._amount(asking))
        self._outputs(amounts, name)
        self._close(
            amounts, [*amounts.outlets.values(), *amounts.drawn.values()], [amounts.amount.key]
        )
        if name in self.results:
            whole = self._common(name, piece, EquipmentStep)
            (sample,) = whole.feeds[feeding.inlet]
            whole.feeds[feeding.inlet] = (
                Source(sample.key, sample.constant, Source(self._amount(feeding))),
            )
            self._close(whole, list(whole.results))

    # --- holds -------------------------------------------------------------------------------

    def _aim_holds(self) -> None:
        for number, hold in enumerate(self.flowsheet.holds):
            setting = self._variable(f"hold {number + 1}~setting", "number", content="setting")
            result = self._variable(f"hold {number + 1}~result", "number", content="setting")
            self.held.setdefault(hold.piece, []).append((hold.path, setting))
            self.program.holds.append((hold, setting, result))
            address = parse_result(hold.text, self.flowsheet.equipment, self.flowsheet.components)
            if address.where in ("own", "duty"):
                self.results.setdefault(address.piece, {})[result] = HeldResult(
                    address.where, address.name
                )
            elif address.where == "outlet" and not self.flowsheet.line_from(
                address.piece, address.name
            ):
                self.extra_outlets.setdefault(address.piece, set()).add(address.name)
                port = self.flowsheet.equipment[address.piece].port(address.name, inlet=False)
                content = port.content if port is not None and port.content != "any" else "material"
                self._outlet_variable(address.piece, address.name, content)

    def _result_steps(self) -> None:
        for hold, _, result in self.program.holds:
            address = parse_result(hold.text, self.flowsheet.equipment, self.flowsheet.components)
            if address.where in ("own", "duty"):
                continue
            if address.where == "outlet":
                lines = self.flowsheet.line_from(address.piece, address.name)
            else:
                lines = self.flowsheet.line_into(address.piece, address.name)
            sources = tuple(self._whole(line) for line in lines) or (
                Source(f"{address.piece}.{address.name}"),
            )
            step = ResultStep(
                hold.text,
                self.program.variables,
                self.flowsheet.matter,
                sources=sources,
                get=_property(address.prop, address.argument),
                key=result,
            )
            step.reads = tuple(dict.fromkeys(key for source in sources for key in source.keys))
            step.writes = (result,)
            self.program.steps.append(step)

    def _whole(self, line: Line) -> Source:
        """What passes a line, also if it is called."""
        if not line.called:
            return Source(self._offered(line))
        if line.content != "material":
            return Source(self._amount(line))
        state = self._state(line)
        return Source(state.key, state.constant, Source(self._amount(line)))


def per_mol(flow: Flow, line: Line) -> Stream:
    """One mol of what a call gets through equipment; NotSolved if nothing comes through."""
    assert isinstance(flow, Stream)
    total = float(flow.total)
    if total == 0.0:
        text = (
            f"{line.end} calls for what comes at '{line.start}', but of what is served to "
            f"{line.source} nothing leaves there: take it from another outlet"
        )
        raise NotSolved("no-answer", text, {"equipment": line.source, "port": line.outlet})
    return flow.scaled(1.0 / total)


def _sampled(name: str, piece: Equipment, site: Site) -> dict[str, Flow]:
    try:
        return piece.sample({}, {}, site)
    except StateError as problem:
        raise outside_the_data(name, problem) from problem


def _property(prop: str, argument: str) -> Callable[[Flow], float]:
    return lambda flow: property_of(flow, prop, argument)
