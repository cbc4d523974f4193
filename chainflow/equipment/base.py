"""What every piece of equipment is: frozen settings and one verb, streams in, streams out.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat and power [W], both positive
*into* the equipment.  Equipment knows nothing of the flowsheet around it, so one stream is enough
to test it.  A subclass gives its `ports`, its settings (pydantic fields) and `operate`; the
structural methods (`outlet_pressures`, `destinations`, ...) have defaults that fit equipment with
one gas passing through.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import replace
from typing import Annotated, Any, ClassVar, Self

import numpy as np
from pydantic import BaseModel, ConfigDict

from chainflow.basis.faults import NotSolved
from chainflow.equipment.cases import case_count, matter_of, one_case, stack_outcomes
from chainflow.equipment.heat_needs import Duty, settle
from chainflow.equipment.outcome import Caution, Outcome, Site
from chainflow.equipment.ports import (
    Feeds,
    Flow,
    Heat,
    Light,
    Port,
    Role,
    arriving,
    rate_of,
)
from chainflow.equipment.setting_numbers import (
    inside,
    is_difference,
    number_of,
    replaced,
    type_at,
    unit_of,
)
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream

Array = np.ndarray


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

    def sees(self) -> Iterator[tuple[tuple[str, ...], str, str]]:
        """Other equipment whose settings it has to know: (setting path, name, outlet to it)."""
        return iter(())

    def trouble_seeing(self, name: str, other: Equipment) -> str:
        """Why it cannot work with the equipment that it sees; empty if it can."""
        return ""

    def seeing(self, others: Mapping[str, Equipment]) -> Self:
        """A copy that knows the equipment it sees, by name."""
        return self

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
        return dict.fromkeys(self.material_outlets(), level)

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        """What is wrong with the pressures that arrive: (inlet, sentence)."""
        return iter(())

    # --- physics -----------------------------------------------------------------------------

    def sample(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> dict[str, Flow]:
        """One mol of a serving outlet (a stream of 1 mol/s), or the level of the heat served."""
        raise TypeError(f"{self.kind} serves nothing")

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        """Do the work for one case.

        Parameters
        ----------
        feeds : flows at the inlets; a *called* inlet gets one mol/s of what its server gives.
        asked : amounts asked at serving outlets [mol/s or W; `Heat` for served heat].
        """
        raise NotImplementedError  # every kind gives its own

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        """Derivatives that are known in closed form: {input: {output: array}}.

        Material flows are vectors ``[n_1..n_C, H]``; an input is an inlet's name (of ``name#2``
        for one of several lines), ``asked:name`` or ``settings:path``; an output is an outlet's
        name or ``drawn:name``.  An input that is given at all is given completely: outputs that
        are not listed do not depend on it.  Inputs not given are found by differences.  A result
        that a hold may look at is ``own:name``, given for all of these inputs or for none.
        """
        return {}

    def settled(self, outcome: Outcome) -> Equipment:
        """The equipment with its discrete choices (number of stages) fixed as they now are."""
        return self

    def run(
        self, feeds: Feeds, asked: Mapping[str, Any] | None = None, site: Site | None = None
    ) -> Outcome:
        """Do the work, for one case or for a batch of cases (leading axis of every stream).

        Streams of a batch have flows of shape (cases, components); plain numbers may be arrays of
        shape (cases,).  Every number of the outcome then has that leading axis.
        """
        asked = asked or {}
        if site is None:
            site = Site(matter_of(feeds), inlets=frozenset(feeds))
        cases = case_count(feeds, asked)
        if cases is None:
            return self.operate(feeds, asked, site)
        singles = [self.operate(one_case(feeds, i), one_case(asked, i), site) for i in range(cases)]
        return stack_outcomes(singles)

    # --- settings ----------------------------------------------------------------------------

    def setting(self, path: tuple[str, ...]) -> float:
        """The number at a setting's path, in SI."""
        value: Any = getattr(self, path[0])
        for key in path[1:]:
            value = inside(value, key)
        return float(number_of(value))

    def with_setting(self, path: tuple[str, ...], number: float) -> Self:
        """A copy in which one number is another."""
        old = getattr(self, path[0])
        return self.model_copy(update={path[0]: replaced(old, path[1:], number)})

    @classmethod
    def setting_unit(cls, path: tuple[str, ...]) -> str | None:
        """The SI unit of a setting's number ('' if it has none), or None if there is no number."""
        return unit_of(cls._setting_type(path))

    @classmethod
    def setting_is_difference(cls, path: tuple[str, ...]) -> bool:
        """Whether a setting's number is a temperature difference."""
        return is_difference(cls._setting_type(path))

    @classmethod
    def _setting_type(cls, path: tuple[str, ...]) -> Any:
        info = cls.model_fields.get(path[0])
        if info is None:
            return None
        own = Annotated[info.annotation, *info.metadata] if info.metadata else info.annotation
        return type_at(own, path[1:])

    # --- for subclasses ----------------------------------------------------------------------

    def settle(
        self, needs: Iterable[Duty], site: Site
    ) -> tuple[tuple[Duty, ...], float, dict[str, Any], dict[str, Flow]]:
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


def light(feeds: Feeds, port: str = "light") -> Light:
    """The light that arrives at an inlet."""
    (flow,) = arriving(feeds, port)
    assert isinstance(flow, Light)
    return flow


def rate(feeds: Feeds, port: str) -> float:
    """The sum [W] of the power, light or heat that arrives at an inlet."""
    return sum(rate_of(f) for f in arriving(feeds, port))


__all__ = [
    "HEAT_PORTS",
    "Array",
    "Caution",
    "Duty",
    "Equipment",
    "Flow",
    "Heat",
    "Impossible",
    "Light",
    "Outcome",
    "Port",
    "Role",
    "Site",
    "light",
    "material",
    "rate",
]
