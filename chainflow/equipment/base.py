"""What every piece of equipment is: frozen settings and one verb, streams in, streams out.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat and power [W], both positive
*into* the equipment.  Equipment knows nothing of the flowsheet around it, so one stream is enough
to test it.  A subclass gives its `ports`, its settings (pydantic fields) and `operate`; the
structural methods (`outlet_pressures`, `destinations`, ...) have defaults that fit equipment with
one gas passing through.
"""

from __future__ import annotations

import types
import typing
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, field, replace
from typing import Annotated, Any, ClassVar, Literal, Self

import numpy as np
from pydantic import BaseModel, ConfigDict

from chainflow.basis.faults import NotSolved
from chainflow.equipment.heat_needs import Duty, settle
from chainflow.equipment.ports import Feeds, Flow, Heat, Port, Role, arriving
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream

Array = np.ndarray
Asked = Mapping[str, float]  # at serving outlets: mol/s or W
HeatsAsked = Mapping[str, tuple[Heat, ...]]


@dataclass(frozen=True, slots=True)
class Caution:
    """A doubtful but usable result: what was seen and why it matters."""

    code: str
    text: str


@dataclass(frozen=True, slots=True)
class Site:
    """What the place gives: the matter, the ambient temperature [K] and which ports are linked.

    `detail` asks for what only the printed answer needs (duty segments, cautions).
    """

    matter: Matter
    ambient: float = 298.15
    inlets: frozenset[str] = frozenset()
    outlets: frozenset[str] = frozenset()
    detail: bool = True


@dataclass(frozen=True, slots=True)
class Outcome:
    """What equipment did: flows at every outlet, amounts asked for, duties and results."""

    outlets: dict[str, Flow]
    drawn: dict[str, float | Heat] = field(default_factory=dict)
    duties: tuple[Duty, ...] = ()
    power: float = 0.0  # net electric power into the equipment [W]
    results: dict[str, float] = field(default_factory=dict)
    cautions: tuple[Caution, ...] = ()
    idealisations: tuple[Caution, ...] = ()
    unmet: dict[str, str] = field(default_factory=dict)  # port -> why its amount has no answer

    @property
    def heat(self) -> float:
        """Net heat into the equipment that is not electric [W]."""
        return sum(duty.heat for duty in self.duties if duty.met_by != "power")


class Equipment(BaseModel):
    """Base of all kinds."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    kind: ClassVar[str]
    family: ClassVar[str] = ""
    ports: ClassVar[tuple[Port, ...]] = ()
    through: ClassVar[bool] = False  # one material inlet and one main outlet: a call may pass
    makes: ClassVar[bool] = False  # chemistry: what enters is not what leaves
    burns: ClassVar[bool] = False  # a user of fuel
    gives: ClassVar[tuple[str, ...]] = ()  # names of its own results, ending in their unit
    formulas: ClassVar[tuple[str, ...]] = ()
    sources: ClassVar[tuple[str, ...]] = ()

    # --- ports as this piece has them --------------------------------------------------------

    def port_list(self) -> tuple[Port, ...]:
        """The ports of this piece with the roles its settings give them."""
        return self.ports

    def port(self, name: str, *, inlet: bool) -> Port | None:
        """The port of that name; a family of any name answers for names not taken."""
        family = None
        for port in self.port_list():
            if port.is_inlet == inlet:
                if port.name == name:
                    return port
                if port.any_name:
                    family = port
        return replace(family, name=name, many=False, optional=True) if family else None

    def main_port(self, *, inlet: bool) -> Port | None:
        """The port that a line means when it names none."""
        return next((p for p in self.port_list() if p.main and p.is_inlet == inlet), None)

    @property
    def passes_calls(self) -> bool:
        """Whether everything about it scales with the amount, so that a call may pass."""
        return self.through and getattr(self, "duty", None) is None

    # --- structure ---------------------------------------------------------------------------

    def component_names(self) -> Iterator[tuple[tuple[str, ...], str]]:
        """Places (setting path) and names of components that the settings mention."""
        return iter(())

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        """What is wrong with the settings once the components are known: (path, sentence)."""
        return iter(())

    def origins(self) -> dict[str, tuple[str, ...]]:
        """Species that come into the plant here, by outlet."""
        return {}

    def material_outlets(self) -> tuple[str, ...]:
        """Names of the outlets that carry matter (a family's names come with the lines)."""
        return tuple(
            p.name for p in self.port_list() if not p.is_inlet and p.content in ("material", "any")
        )

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        """Where a species that enters may leave: pairs (outlet, species)."""
        return [(outlet, species) for outlet in outlets]

    def outlet_pressures(self, inlets: Mapping[str, tuple[float, ...]]) -> dict[str, float]:
        """Pressure [Pa] of every material outlet, from the settings and the inlets' pressures."""
        set_pressure = getattr(self, "pressure", None)
        entering = [p for pressures in inlets.values() for p in pressures]
        level = set_pressure if set_pressure is not None else min(entering, default=float("inf"))
        level -= getattr(self, "pressure_drop", 0.0)
        return {ANY: level for ANY in self.material_outlets()}

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        """What is wrong with the pressures that arrive: (inlet, sentence)."""
        return iter(())

    # --- physics -----------------------------------------------------------------------------

    def sample(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> dict[str, Flow]:
        """What one mol of a serving outlet is (a stream of 1 mol/s), or the level of served heat."""
        raise TypeError(f"{self.kind} serves nothing")

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        """Do the work for one case.

        Parameters
        ----------
        feeds : flows at the inlets; a *called* inlet gets one mol/s of what its server gives.
        asked : amounts asked at serving outlets [mol/s or W; `Heat` for served heat].
        """
        raise NotImplementedError

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        """Derivatives that are known in closed form: {input: {output: array}}.

        Material flows are vectors ``[n_1..n_C, H]``; an input is an inlet's name (of ``name#2``
        for one of several lines), ``asked:name`` or ``settings:path``; an output is an outlet's
        name or ``drawn:name``.  An input that is given at all is given completely: outputs that
        are not listed do not depend on it.  Inputs not given are found by differences.
        """
        return {}

    def settled(self, outcome: Outcome) -> Equipment:
        """This equipment with its discrete choices (number of stages) fixed as they now are."""
        return self

    def run(self, feeds: Feeds, asked: Mapping[str, Any] | None = None, site: Site | None = None) -> Outcome:
        """Do the work, for one case or for a batch of cases (leading axis of every stream).

        Streams of a batch have flows of shape (cases, components); plain numbers may be arrays of
        shape (cases,).  Every number of the outcome then has that leading axis.
        """
        asked = asked or {}
        if site is None:
            site = Site(_matter_of(feeds), inlets=frozenset(feeds))
        cases = _case_count(feeds, asked)
        if cases is None:
            return self.operate(feeds, asked, site)
        singles = [
            self.operate(_case(feeds, i), _case(asked, i), site) for i in range(cases)
        ]
        return _stack_outcomes(singles)

    # --- settings ----------------------------------------------------------------------------

    def setting(self, path: tuple[str, ...]) -> float:
        """The number at a setting's path, in SI."""
        value: Any = getattr(self, path[0])
        for key in path[1:]:
            value = value[key]
        return float(getattr(value, "value", value))

    def with_setting(self, path: tuple[str, ...], number: float) -> Self:
        """A copy in which one number is another."""
        old = getattr(self, path[0])
        return self.model_copy(update={path[0]: _replaced(old, path[1:], number)})

    @classmethod
    def setting_unit(cls, path: tuple[str, ...]) -> str | None:
        """The SI unit of a setting's number ('' if it has none), or None if there is no number."""
        info = cls.model_fields.get(path[0])
        if info is None:
            return None
        return _unit_of(Annotated[info.annotation, *info.metadata] if info.metadata else info.annotation)

    # --- for subclasses ----------------------------------------------------------------------

    def settle(self, needs: Iterable[Duty], site: Site) -> tuple[tuple[Duty, ...], float, dict[str, Any], dict[str, Flow]]:
        """Meet the heat needs: (duties, electric power, drawn, heat outlets)."""
        inlets, outlets = site.inlets, site.outlets
        if not any(p.name == "heat" and p.is_inlet for p in self.ports):
            inlets = inlets - {"power", "heat"}
        met = settle(tuple(needs), site.ambient, inlets, outlets)
        drawn: dict[str, Any] = {}
        if "power" in inlets:
            drawn["power"] = met.power
        if met.heat is not None:
            drawn["heat"] = met.heat
        return met.duties, met.power, drawn, {} if met.offered is None else {"heat": met.offered}


HEAT_PORTS = (
    Port("power", "power", Role.CALLS, optional=True, means="electricity that meets the heat need"),
    Port("heat", "heat", Role.CALLS, optional=True, means="heat from a heat-network"),
    Port("heat", "heat", Role.OFFERS, optional=True, means="heat given off"),
)


class Impossible(NotSolved):
    """What is asked of a piece of equipment has no answer at any amount."""


def material(feeds: Feeds, port: str) -> Stream:
    """The one stream that arrives at an inlet."""
    (stream,) = arriving(feeds, port)
    assert isinstance(stream, Stream)
    return stream


def rate(feeds: Feeds, port: str) -> float:
    """The sum [W] of the power, light or heat that arrives at an inlet."""
    return sum(f.rate if isinstance(f, Heat) else f for f in arriving(feeds, port))  # type: ignore[misc] # streams do not arrive here


def vector(flow: Flow) -> Array:
    """A flow as the solver's numbers: ``[n_1..n_C, H]``, ``[W]`` or ``[W, start, end, mean]``."""
    if isinstance(flow, Stream):
        return np.append(flow.flows, flow.enthalpy)
    if isinstance(flow, Heat):
        return np.array([flow.rate, flow.start, flow.end, flow.mean])
    return np.array([flow])


# --- cases ---------------------------------------------------------------------------------------


def _matter_of(feeds: Feeds) -> Matter:
    for port in feeds:
        for flow in arriving(feeds, port):
            if isinstance(flow, Stream):
                return flow.matter
    return Matter.of(())


def _case_count(*groups: Mapping[str, Any]) -> int | None:
    for group in groups:
        for port in group:
            for flow in arriving(group, port):
                if isinstance(flow, Stream) and flow.gas.ndim == 2:
                    return int(flow.gas.shape[0])
                if isinstance(flow, np.ndarray) and flow.ndim == 1:
                    return int(flow.shape[0])
    return None


def _case(group: Mapping[str, Any], i: int) -> dict[str, Any]:
    def one(flow: Any) -> Any:
        if isinstance(flow, Stream) and flow.gas.ndim == 2:
            return flow.case(i)
        if isinstance(flow, np.ndarray) and flow.ndim == 1:
            return float(flow[i])
        return flow

    return {
        port: tuple(one(f) for f in flow) if isinstance(flow, tuple) else one(flow)
        for port, flow in group.items()
    }


def _stack(values: list[Any]) -> Any:
    if isinstance(values[0], Stream):
        return Stream.stack(values)
    if isinstance(values[0], Heat):
        return Heat(*(np.array([getattr(v, name) for v in values]) for name in ("rate", "start", "end", "mean")))  # type: ignore[arg-type] # a batch of heats holds arrays
    return np.array(values)


def _stack_outcomes(singles: list[Outcome]) -> Outcome:
    first = singles[0]
    return Outcome(
        outlets={k: _stack([s.outlets[k] for s in singles]) for k in first.outlets},
        drawn={k: _stack([s.drawn[k] for s in singles]) for k in first.drawn},
        duties=_stack_duties(singles),
        power=np.array([s.power for s in singles]),  # type: ignore[arg-type] # one number a case
        results={k: np.array([s.results.get(k, np.nan) for s in singles]) for k in first.results},  # type: ignore[misc] # one number a case
        cautions=tuple(dict.fromkeys(c for s in singles for c in s.cautions)),
        idealisations=tuple(dict.fromkeys(c for s in singles for c in s.idealisations)),
        unmet={k: v for s in singles for k, v in s.unmet.items()},
    )


def _stack_duties(singles: list[Outcome]) -> tuple[Duty, ...]:
    """One duty per purpose and way of meeting, with the heat of each case."""
    keys = list(dict.fromkeys((d.purpose, d.met_by) for s in singles for d in s.duties))
    stacked = []
    for purpose, met_by in keys:
        mine = [[d for d in s.duties if (d.purpose, d.met_by) == (purpose, met_by)] for s in singles]
        some = next(d[0] for d in mine if d)
        heat = np.array([sum(d.heat for d in group) for group in mine])
        stacked.append(replace(some, heat=heat))  # type: ignore[arg-type] # one number a case
    return tuple(stacked)


# --- settings ------------------------------------------------------------------------------------


def _replaced(old: Any, path: tuple[str, ...], number: float) -> Any:
    if path:
        return {**old, path[0]: _replaced(old[path[0]], path[1:], number)}
    if hasattr(old, "value") and hasattr(old, "_replace"):
        return old._replace(value=number)
    if hasattr(old, "value"):
        return replace(old, value=number)
    return number


def _unit_of(annotation: Any) -> str | None:
    """Find the unit of the number inside a setting's type."""
    if annotation is float:
        return ""
    origin = typing.get_origin(annotation)
    if origin is Annotated:
        for note in annotation.__metadata__:
            unit = getattr(note, "unit", None)
            if unit is not None:
                return str(unit)
        return _unit_of(annotation.__origin__)
    if origin in (typing.Union, types.UnionType, dict):
        for part in typing.get_args(annotation)[1 if origin is dict else 0 :]:
            unit = _unit_of(part)
            if unit is not None:
                return unit
    return None


__all__ = [
    "HEAT_PORTS", "Array", "Asked", "Caution", "Duty", "Equipment", "Flow", "Heat", "Impossible",
    "Literal", "Outcome", "Port", "Role", "Site", "material", "rate", "vector",
]
