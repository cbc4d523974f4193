"""The burner: adiabatic or cooled, its flame kept at a temperature by a moderator if wanted.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat [W].
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from typing import Annotated, Any, ClassVar, Literal

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import OpenFraction, Temperature, measured
from chainflow.equipment.base import (
    HEAT_PORTS,
    Array,
    Caution,
    Duty,
    Flow,
    Outcome,
    Port,
    Role,
    Site,
    material,
)
from chainflow.equipment.burning import Combustion, Oxygen, burnt, oxidiser_needed
from chainflow.equipment.flue import flue_results, nitric_oxide
from chainflow.equipment.junctions import joined
from chainflow.equipment.oxidisers import Oxidiser, enriched
from chainflow.equipment.ports import Feeds, arriving
from chainflow.thermo.components import Matter
from chainflow.thermo.equilibrium import Equilibrium, equilibrate, equilibrate_adiabatic
from chainflow.thermo.flames import flame_state
from chainflow.thermo.stream_slopes import enthalpy_slopes
from chainflow.thermo.streams import Stream

_MOST_STEPS = 60
_FLAME = 2000.0  # [K], where the search for an adiabatic flame begins


class Burner(Combustion):
    """Burns fuel with the oxidiser it asks for; adiabatic unless a temperature is given.

    `flue_temperature` makes it ask at `moderator` for what keeps the flame at that temperature.
    `enrichment` makes it ask at `oxygen` for what brings the oxidiser to that share of O2;
    `air_leak` makes it ask at `leak` for the false air that a furnace below ambient pressure
    draws in, and its oxygen counts towards `excess`.

    `upper_NO_fraction` is the equilibrium at the flame temperature, wet: an upper indication and
    no emission figure.  `dew_point_K` is that of water in the flue.
    """

    kind: ClassVar[str] = "burner"
    gives: ClassVar[tuple[str, ...]] = (
        "adiabatic_temperature_K",
        "flame_temperature_K",
        "dew_point_K",
        "upper_NO_fraction",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port("fuel", "material", Role.TAKES, many=True, main=True, means="what burns"),
        Port("oxidiser", "material", Role.CALLS, means="air or oxygen"),
        Port(
            "moderator",
            "material",
            Role.TAKES,
            many=True,
            optional=True,
            means="what keeps the flame cooler",
        ),
        Port(
            "oxygen",
            "material",
            Role.CALLS,
            optional=True,
            means="oxygen that enriches the oxidiser (with `enrichment`)",
        ),
        Port(
            "leak",
            "material",
            Role.CALLS,
            optional=True,
            means="air that leaks in (with `air_leak`)",
        ),
        HEAT_PORTS[2],
        Port("flue", "material", Role.OFFERS, main=True, means="the flue gas"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "O2 of all inlets = (1 + excess) * O2 needed by all combustibles",
        (
            "equilibrium: minimum of the Gibbs energy of the flowsheet's components "
            "at the temperature that closes energy"
        ),
        "flame_temperature, upper_NO_fraction: the same with radicals (O, H, OH, NO, ...)",
        "leak = air_leak * (fuel + oxidiser + moderator), in mol",
        "dew point: p_sat(T) = y_H2O p",
    )
    sources: ClassVar[tuple[str, ...]] = (
        (
            "species data: NASA polynomials (McBride, Gordon, Reno, NASA TM-4513, 1993) "
            "as shipped with Cantera"
        ),
    )

    model: Literal["equilibrium", "complete"] = Field(
        "equilibrium", description="what the flue holds"
    )
    temperature: Temperature | None = Field(
        None, description="flue temperature; the heat is given off"
    )
    flue_temperature: Temperature | None = Field(
        None, description="flue temperature kept by the moderator that is asked for"
    )
    requench: Temperature | None = Field(
        None, description="temperature down to which equilibrium holds when the flue is cooled"
    )
    enrichment: OpenFraction | None = Field(
        None, description="mole fraction of O2 to which oxygen enriches the oxidiser, 30 %"
    )
    air_leak: Annotated[float, measured("1", ge=0, le=1)] = Field(
        0.0,
        description="air that leaks in, mol per mol of all else that enters",
    )

    @model_validator(mode="after")
    def _one_temperature(self) -> Burner:
        if self.temperature is not None and self.flue_temperature is not None:
            raise PydanticCustomError(
                "burner",
                "'temperature' and 'flue_temperature' are both given, wanted one of them",
                {},
            )
        if self.model == "complete" and self.requench is not None:
            raise PydanticCustomError(
                "burner",
                "'requench' goes with model: equilibrium, "
                "complete combustion leaves nothing to requench",
                {},
            )
        return self

    def port_list(self) -> tuple[Port, ...]:
        moderator = Port(
            "moderator", "material", Role.CALLS, means="what keeps the flame at `flue_temperature`"
        )
        called = {"oxygen": self.enrichment is not None, "leak": self.air_leak > 0.0}
        ports = [port for port in self.ports if called.get(port.name, True)]
        ports = [replace(p, optional=False) if p.name in called else p for p in ports]
        if self.flue_temperature is not None:
            ports = [moderator if port.name == "moderator" else port for port in ports]
        return tuple(ports)

    def _left_in_flue(self, species: str, matter: Matter) -> set[str]:
        """At flame temperature everything of the same elements is there in traces."""
        if self.model == "complete":
            return set()
        place = matter.index[species]
        shared = ((matter.formula > 0) & (matter.formula[:, [place]] > 0)).any(axis=0)
        return {matter.components[i] for i in np.flatnonzero(shared)}

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        if self.model == "complete":
            return super().destinations(inlet, species, outlets, matter)
        made = self._left_in_flue(species, matter)
        return [(o, name) for o in outlets for name in matter.components if name in made]

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        fire = self._fire(feeds, site)
        flue, heat = self._flue(fire, site)
        needs = [Duty.between("combustion", heat, fire.adiabatic, float(flue.temperature))]
        duties, _, drawn, given = self.settle(needs, site)
        drawn |= fire.drawn
        outlets: dict[str, Flow] = {"flue": flue, **given}
        results, cautions = self._report(fire, flue, site) if site.detail else ({}, ())
        return Outcome(
            outlets,
            drawn,
            duties,
            results=results,
            cautions=cautions,
            unmet=fire.unmet,
            inner=fire,
        )

    def _fire(self, feeds: Feeds, site: Site) -> _Fire:
        inlets, mixed = self._inlets(feeds), self._oxidiser(feeds)
        oxygen, oxidiser = Oxygen.at(self.excess, site.matter), mixed.with_leak(mixed.stream)
        fuel = [mixed.with_leak(stream) for stream in inlets["fuel"]]
        moderator = [mixed.with_leak(stream) for stream in inlets["moderator"]]
        given = sum(float(stream.total) for stream in inlets["fuel"])
        if self.flue_temperature is not None:
            fire = _moderated(self, fuel, oxidiser, moderator[0], oxygen, site)
        else:
            given += sum(float(stream.total) for stream in inlets["moderator"])
            amount, unmet = oxidiser_needed(oxygen, [*fuel, *moderator], oxidiser)
            entering = [*fuel, *moderator, oxidiser.scaled(amount)]
            fire = _Fire.of(self, entering, {"oxidiser": amount}, unmet, site)
        if not (self.enrichment or self.air_leak):
            return fire
        unmet = fire.unmet | ({"oxygen": mixed.why} if mixed.why else {})
        return replace(fire, drawn=mixed.called(fire.drawn, given), unmet=unmet)

    def _oxidiser(self, feeds: Feeds) -> Oxidiser:
        """What is served as oxidiser, enriched if wanted, with what leaks in beside it."""
        found = Oxidiser(material(feeds, "oxidiser"))
        if self.enrichment is not None:
            found = enriched(found.stream, material(feeds, "oxygen"), self.enrichment)
        if self.air_leak > 0.0:
            found = replace(found, leak=self.air_leak, air=material(feeds, "leak"))
        return found

    def flue_of(
        self, flows: Array, level: float, pressure: float, matter: Matter
    ) -> tuple[Array, Array]:
        """Composition of the flue at a temperature, and its slopes by what enters."""
        if self.model == "complete" or not flows.any():
            conversion = burnt(matter)
            return np.maximum(conversion @ flows, 0.0), conversion
        found = equilibrate(matter, flows, level, pressure)
        return found.flows, found.by_feed

    def _flue(self, fire: _Fire, site: Site) -> tuple[Stream, float]:
        """The flue and the heat into the burner (zero if adiabatic)."""
        matter, pressure = site.matter, fire.pressure
        if self.temperature is None or not fire.flows.any():
            level = fire.adiabatic
            if self.requench is not None and level > self.requench and fire.flows.any():
                flows, _ = self.flue_of(fire.flows, self.requench, pressure, matter)
            else:
                flows = fire.burnt
            return Stream.from_enthalpy(matter, flows, fire.enthalpy, pressure, level), 0.0
        frozen = max(self.temperature, min(self.requench or 0.0, fire.adiabatic))
        flows, _ = self.flue_of(fire.flows, frozen, pressure, matter)
        flue = Stream.at(matter, flows, self.temperature, pressure)
        return flue, float(flue.enthalpy) - fire.enthalpy

    def _report(
        self, fire: _Fire, flue: Stream, site: Site
    ) -> tuple[dict[str, float], tuple[Caution, ...]]:
        results = {"adiabatic_temperature_K": fire.adiabatic}
        if not fire.flows.any():
            return results, ()
        hottest, flame = flame_state(site.matter, fire.flows, fire.enthalpy, fire.pressure)
        results["flame_temperature_K"] = hottest
        results["upper_NO_fraction"] = nitric_oxide(flame)
        results |= flue_results(flue)
        cautions = []
        if hottest > 1900.0:
            text = (
                f"flame at {hottest:.0f} K: above 1900 K refractories and nitrogen oxides "
                "need care; more moderator or excess cools it"
            )
            cautions.append(Caution("hot-flame", text))
        left = float(flue.lhv)
        burnt_lhv = float(fire.flows @ site.matter.lhv)
        if burnt_lhv > 0.0 and left > 1e-3 * burnt_lhv:
            text = (
                f"{100 * left / burnt_lhv:.2g} % of the fuel's LHV is left in the flue "
                "as CO and H2 and stays there when it is cooled; "
                "'requench' says down to where it burns out"
            )
            cautions.append(Caution("frozen-flue", text))
        return results, tuple(cautions)

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        if self.temperature is not None or self.requench is not None or outcome.unmet:
            return {}
        if self.enrichment is not None or self.air_leak > 0.0:
            return {}
        fire, flue = outcome.inner, outcome.outlets["flue"]
        if (
            not fire.flows.any()
            or not isinstance(flue, Stream)
            or flue.water.any()
            or fire.drawn["oxidiser"] <= 0.0
        ):
            return {}
        return _slopes(self, feeds, fire, flue, site)


@dataclass(frozen=True, slots=True)
class _Fire:
    """Everything that enters a burner, and what it becomes without loss of heat."""

    flows: Array  # entering [mol/s]
    enthalpy: float  # entering [W]
    pressure: float
    burnt: Array  # flue at the adiabatic temperature [mol/s]
    adiabatic: float  # [K]
    drawn: dict[str, float | Any]
    unmet: dict[str, str]
    found: Equilibrium | None = None  # the adiabatic equilibrium, if one was looked for

    @staticmethod
    def of(
        burner: Burner,
        entering: list[Stream],
        drawn: dict[str, float],
        unmet: dict[str, str],
        site: Site,
    ) -> _Fire:
        matter = site.matter
        flows = np.sum([s.flows for s in entering], axis=0)
        enthalpy = float(sum(s.enthalpy for s in entering))
        pressure = min(float(s.pressure) for s in entering)
        if not flows.any():
            return _Fire(flows, enthalpy, pressure, flows, site.ambient, dict(drawn), unmet)
        if burner.model == "complete":
            out = np.maximum(burnt(matter) @ flows, 0.0)
            level = float(Stream.from_enthalpy(matter, out, enthalpy, pressure, 1500.0).temperature)
            return _Fire(flows, enthalpy, pressure, out, level, dict(drawn), unmet)
        found = equilibrate_adiabatic(matter, flows, enthalpy, pressure, guess=_FLAME)
        level = found.temperature
        return _Fire(flows, enthalpy, pressure, found.flows, level, dict(drawn), unmet, found)


def _moderated(
    burner: Burner,
    fuel: list[Stream],
    oxidiser: Stream,
    moderator: Stream,
    oxygen: Oxygen,
    site: Site,
) -> _Fire:
    """Find the moderator that brings the adiabatic flue to its wanted temperature.

    Newton on its amount m, the oxidiser following from the linear oxygen balance; the residual is
    the enthalpy of the flue at the wanted temperature less what enters.
    """
    matter, level = site.matter, burner.flue_temperature
    assert level is not None
    given = joined(fuel, matter) if len(fuel) > 1 else fuel[0]
    pressure = min(float(s.pressure) for s in (given, oxidiser, moderator))
    brings = -float(oxygen.weights @ oxidiser.flows)
    base, unmet = oxidiser_needed(oxygen, [given], oxidiser)
    follows = float(oxygen.weights @ moderator.flows) / brings if brings > 0.0 else 0.0
    per_mol = moderator.flows + follows * oxidiser.flows
    per_enthalpy = float(moderator.enthalpy) + follows * float(oxidiser.enthalpy)
    flows = given.flows + base * oxidiser.flows
    enthalpy = float(given.enthalpy) + base * float(oxidiser.enthalpy)
    amount = 0.0
    if flows.any():
        amount = _moderator_needed(
            burner, flows, enthalpy, per_mol, per_enthalpy, level, pressure, matter
        )
    if amount < 0.0:
        unmet, amount = {**unmet, "moderator": _stays_below(level)}, 0.0
    drawn = {"oxidiser": base + amount * follows, "moderator": amount}
    entering = [given, oxidiser.scaled(drawn["oxidiser"]), moderator.scaled(amount)]
    if amount == 0.0:
        return _Fire.of(burner, entering, drawn, unmet, site)
    all_flows = np.sum([s.flows for s in entering], axis=0)
    total = float(sum(s.enthalpy for s in entering))
    out, _ = burner.flue_of(all_flows, level, pressure, matter)
    return _Fire(all_flows, total, pressure, out, level, dict(drawn), unmet)


def _stays_below(level: float) -> str:
    return (
        f"overfull, the flame stays below {level - 273.15:.4g} degC without any moderator: "
        "lower 'flue_temperature'"
    )


def _moderator_needed(
    burner: Burner,
    flows: Array,
    enthalpy: float,
    per_mol: Array,
    per_enthalpy: float,
    level: float,
    pressure: float,
    matter: Matter,
) -> float:
    amount = 0.0
    for _ in range(_MOST_STEPS):
        out, by_feed = burner.flue_of(flows + amount * per_mol, level, pressure, matter)
        partial = matter.gas_partial(out, level, pressure)[0]
        residual = matter.gas_enthalpy(out, level, pressure) - enthalpy - amount * per_enthalpy
        slope = float(partial @ (by_feed @ per_mol)) - per_enthalpy
        if slope == 0.0:
            return -1.0
        step = -residual / slope
        if amount == 0.0 and step < 0.0:
            return step
        amount = max(amount + step, 0.0)
        if abs(step) <= 1e-13 * max(amount, float(flows.sum())):
            break
    return amount


def _slopes(
    burner: Burner, feeds: Feeds, fire: _Fire, flue: Stream, site: Site
) -> dict[str, dict[str, Array]]:
    """Derivatives of an adiabatic burner: what is called follows implicitly from its balances."""
    matter = site.matter
    size = len(matter.components)
    weights = np.append(Oxygen.at(burner.excess, matter).weights, 0.0)
    block = _flue_block(burner, fire, matter)
    served = {port: material(feeds, port) for port in fire.drawn}
    one = {port: np.append(s.flows, s.enthalpy) for port, s in served.items()}
    rows = [weights]
    if "moderator" in fire.drawn:
        if fire.drawn["moderator"] <= 0.0:
            return {}
        _, by_feed = burner.flue_of(fire.flows, fire.adiabatic, fire.pressure, matter)
        partial = enthalpy_slopes(flue)[0]
        rows.append(np.append(partial @ by_feed, -1.0))  # d(flue enthalpy at T - what enters)
    called = list(fire.drawn)
    columns = np.column_stack([one[port] for port in called])
    gain = -np.linalg.solve(np.array(rows) @ columns, np.array(rows))  # d amounts / d what enters
    entering = np.eye(size + 1) + columns @ gain
    slopes: dict[str, dict[str, Array]] = {}
    for port in ("fuel", "moderator", "oxidiser"):
        if not arriving(feeds, port):
            continue
        factor = float(fire.drawn[port]) if port in fire.drawn else 1.0
        slopes[port] = {"flue": factor * block @ entering}
        for row, name in enumerate(called):
            slopes[port][f"drawn:{name}"] = factor * gain[row][None, :]
    return slopes


def _flue_block(burner: Burner, fire: _Fire, matter: Matter) -> Array:
    """Slopes of the flue by all that enters, energy closed."""
    size = len(matter.components)
    block = np.zeros((size + 1, size + 1))
    block[size, size] = 1.0
    if burner.model == "complete":
        block[:size, :size] = burnt(matter)
        return block
    found = fire.found or equilibrate_adiabatic(
        matter, fire.flows, fire.enthalpy, fire.pressure, guess=fire.adiabatic
    )
    block[:size, :size] = found.by_feed
    block[:size, size] = found.by_enthalpy
    return block
