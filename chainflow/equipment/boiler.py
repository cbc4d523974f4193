"""How much steam can a hot stream, or heat, raise?

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat [W].
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Mapping
from dataclasses import replace
from typing import Annotated, Any, ClassVar, NamedTuple

import numpy as np
from pydantic import Field

from chainflow.basis.quantities import Pressure, PressureDrop, Temperature, measured
from chainflow.equipment.base import (
    HEAT_PORTS,
    Caution,
    Duty,
    Equipment,
    Flow,
    Heat,
    Outcome,
    Port,
    Role,
    Site,
    material,
)
from chainflow.equipment.exchange import cold_kinks, hot_kinks, least_on, stream_curve
from chainflow.equipment.ports import Feeds, arriving
from chainflow.equipment.pressures import lower_feed
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream
from chainflow.thermo.water import CRITICAL_PRESSURE, saturation_temperature

_NO_HEAT = Heat(0.0, 298.15, 298.15, 298.15)
_BESIDE = 1e-12  # relative, just above the level of isothermal heat


class _HotSide(NamedTuple):
    """What gives the heat: how much above a temperature [W], its kinks, ends and total."""

    above: Callable[[float], float]
    kinks: list[float]
    hottest: float
    total: float


class _PerMol(NamedTuple):
    """What one mol of feed water becomes, and the heat it needs above a temperature [W s/mol]."""

    steam: Stream
    blowdown: Stream
    need: Callable[[float], float]
    kinks: list[float]
    hottest: float
    coldest: float
    whole: float


class Boiler(Equipment):
    """Raises steam from a hot stream or from heat that arrives; feed water is called for.

    The amount is the largest that keeps the hot side `approach` above water and steam everywhere:
    usually the pinch is where boiling begins.  Steam leaves `superheat` above saturation.  Of heat
    that is not all used the colder rest is given to the `heat` outlet or to the ambient.  The
    enthalpy of steam is that of every gas (Redlich-Kwong): saturated steam takes 1.5 % too much
    heat at 10 bar and 3.5 % at 40 bar, and gives it back where it condenses.
    """

    kind: ClassVar[str] = "boiler"
    family: ClassVar[str] = "heat"
    gives: ClassVar[tuple[str, ...]] = (
        "steam_mol_s",
        "steam_kg_s",
        "duty_W",
        "saturation_K",
        "pinch_K",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port("hot", "material", Role.TAKES, optional=True, main=True, means="the hot stream"),
        Port("heat", "heat", Role.TAKES, many=True, optional=True, means="or heat that arrives"),
        Port("water", "material", Role.CALLS, means="feed water, at the boiler's pressure"),
        Port("steam", "material", Role.OFFERS, main=True, means="the steam"),
        Port("hot_out", "material", Role.OFFERS, optional=True, means="the hot stream, cooled"),
        Port("blowdown", "material", Role.OFFERS, optional=True, means="boiling water drawn off"),
        HEAT_PORTS[2],
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "water = least over T of [heat given above T] / [heat one mol needs above T - approach]",
        "blowdown share of the feed water leaves boiling",
    )
    sources: ClassVar[tuple[str, ...]] = (
        "saturation pressure: Wagner and Pruss, J. Phys. Chem. Ref. Data 31 (2002) 387",
        "default approach and blowdown: common practice, no source",
    )

    pressure: Pressure = Field(description="pressure of the steam, absolute")
    superheat: Annotated[float, measured("K", ge=0, difference=True)] = Field(
        0.0, description="temperature of the steam above saturation"
    )
    approach: Annotated[float, measured("K", gt=0, difference=True)] = Field(
        10.0, description="smallest temperature difference"
    )
    blowdown: Annotated[float, measured("1", ge=0, lt=1)] = Field(
        0.0, description="share of the feed water that is drawn off boiling"
    )
    hot_limit: Temperature | None = Field(
        None, description="the hot stream is not cooled below this"
    )
    pressure_drop: PressureDrop = Field(0.0, description="pressure lost by the hot stream")

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        if matter.water is None:
            yield ("kind",), "a boiler needs H2O among the components"
        if self.pressure >= CRITICAL_PRESSURE:
            yield (
                ("pressure",),
                (
                    f"water does not boil at {self.pressure / 1e5:.4g} bar, its critical "
                    "pressure is "
                    f"{CRITICAL_PRESSURE / 1e5:.4g} bar: lower the pressure"
                ),
            )

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        if inlet == "hot":
            return [(o, species) for o in outlets if o == "hot_out"]
        drawn = species == "H2O" and self.blowdown > 0.0
        return [(o, species) for o in outlets if o == "steam" or (o == "blowdown" and drawn)]

    def outlet_pressures(self, inlets: Mapping[str, tuple[float, ...]]) -> dict[str, float]:
        hot = min(inlets.get("hot", (float("inf"),)))
        own = {"steam": self.pressure, "blowdown": self.pressure}
        return own | {"hot_out": hot - self.pressure_drop}

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        water = {port: levels for port, levels in inlets.items() if port == "water"}
        return lower_feed(water, self.pressure, "put a pump between")

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        water = material(feeds, "water")
        hot = material(feeds, "hot") if arriving(feeds, "hot") else None
        heats = [h for h in arriving(feeds, "heat") if isinstance(h, Heat)]
        given = Heat.total(heats) if heats else None
        unmet = self._unmet(hot, given)
        side = self._hot_side(hot, given)
        one = self._per_mol(water, site.matter)
        amount, pinch = (0.0, side.hottest) if unmet else self._amount(side, one)
        heat = amount * one.whole
        outlets: dict[str, Flow] = {
            "steam": one.steam.scaled(amount),
            "blowdown": one.blowdown.scaled(amount),
        }
        if hot is not None:
            outlets["hot_out"] = self._cooled(hot, 0.0 if given is not None else heat)
        beside = replace(site, inlets=site.inlets - {"heat"})  # `heat` is taken, not called
        duties, _, drawn, left = self.settle(self._duties(given, heat), beside)
        return Outcome(
            {**outlets, **left},
            drawn | {"water": amount},
            duties,
            results={
                "steam_mol_s": amount * float(one.steam.total),
                "steam_kg_s": amount * float(one.steam.mass_flow),
                "duty_W": heat,
                "saturation_K": saturation_temperature(self.pressure),
                "pinch_K": pinch,
            },
            cautions=self._cautions(side, one, amount) if site.detail else (),
            unmet=unmet,
        )

    def _unmet(self, hot: Stream | None, given: Heat | None) -> dict[str, str]:
        if hot is not None and given is not None:
            text = "a boiler takes a hot stream or heat, not both: use two boilers"
            return {"heat": text}
        return {}

    def _hot_side(self, hot: Stream | None, given: Heat | None) -> _HotSide:
        if given is not None:
            return _of_heat(given)
        if hot is None or float(hot.total) == 0.0:
            return _of_heat(_NO_HEAT)
        pressure = float(hot.pressure) - self.pressure_drop
        curve, start = stream_curve(hot, pressure), float(hot.enthalpy)
        floor = self.hot_limit or 0.0

        def above(level: float) -> float:
            return max(start - curve(max(level, floor)), 0.0)

        kinks = [*hot_kinks(hot, pressure), floor]
        return _HotSide(above, kinks, float(hot.temperature), float(hot.total))

    def _per_mol(self, water: Stream, matter: Matter) -> _PerMol:
        """One mol of feed water from its own temperature to steam and blowdown."""
        boiling = saturation_temperature(self.pressure)
        drawn = np.zeros_like(water.flows)
        drawn[matter.water] = self.blowdown * water.flows[matter.water]
        flows = water.flows - drawn
        level = boiling + self.superheat
        steam = Stream.gaseous(matter, flows, level, self.pressure)
        enthalpy = matter.water_enthalpy(drawn, boiling, self.pressure)
        blowdown = Stream(
            matter, matter.nothing, drawn, matter.nothing, boiling, self.pressure, enthalpy
        )
        warm = stream_curve(water, self.pressure)
        end, start = float(steam.enthalpy) + enthalpy, float(water.enthalpy)

        def need(temperature: float) -> float:
            if temperature >= level:
                return 0.0
            if temperature >= boiling:
                return float(steam.enthalpy) - matter.gas_enthalpy(
                    flows, temperature, self.pressure
                )
            return end - (warm(temperature) if temperature > float(water.temperature) else start)

        kinks = cold_kinks(water, self.pressure)
        return _PerMol(steam, blowdown, need, kinks, level, float(water.temperature), end - start)

    def _amount(self, side: _HotSide, one: _PerMol) -> tuple[float, float]:
        """Feed water [mol/s] and the hot side's temperature at the pinch [K]."""
        top = one.hottest + self.approach
        if side.total <= 0.0 or side.hottest < top * (1.0 - _BESIDE) or one.whole <= 0.0:
            return 0.0, side.hottest
        low = min(one.coldest + self.approach, top)
        kinks = [*side.kinks, *(t + self.approach for t in one.kinks)]

        def reach(level: float) -> float:
            need = one.need(level - self.approach)
            return side.above(level) / need if need > 1e-9 * one.whole else np.inf

        pinch, amount = least_on(reach, low, top, kinks)
        return amount, pinch

    def _cooled(self, hot: Stream, heat: float) -> Stream:
        pressure = float(hot.pressure) - self.pressure_drop
        if heat == 0.0 and self.pressure_drop == 0.0:
            return hot
        return Stream.from_enthalpy(
            hot.matter, hot.flows, float(hot.enthalpy) - heat, pressure, float(hot.temperature)
        )

    def _duties(self, given: Heat | None, used: float) -> list[Duty]:
        """The heat taken in, and its colder rest."""
        if given is None:
            return []
        taken = Duty("heat taken in", given.rate, given.start, given.end, given.mean, "heat")
        duties = [replace(taken, curve=given.parts)]
        for piece in _falling(given):
            gone = min(max(used, 0.0), piece.rate)
            used -= gone
            share = gone / piece.rate if piece.rate > 0.0 else 0.0
            turn = piece.hottest - share * (piece.hottest - piece.coldest)
            duties.append(Duty.between("heat left over", gone - piece.rate, turn, piece.coldest))
        return duties

    def _cautions(self, side: _HotSide, one: _PerMol, amount: float) -> tuple[Caution, ...]:
        if amount > 0.0 or side.total <= 0.0:
            return ()
        text = (
            f"the hot side at {side.hottest - 273.15:.4g} degC is not {self.approach:g} K above "
            f"the steam at {one.hottest - 273.15:.4g} degC: no steam is raised"
        )
        return (Caution("hot-not-hot", text),)


def _falling(given: Heat) -> list[Heat]:
    """The pieces of a heat flow, the hottest first."""
    return sorted(given.pieces, key=lambda piece: (-piece.hottest, -piece.coldest))


def _of_heat(given: Heat) -> _HotSide:
    """Heat whose every piece is spread evenly between two temperatures, or all at one."""

    def above(level: float) -> float:
        return sum(_above(piece, level) for piece in given.pieces)

    ends = [end for piece in given.pieces for end in (piece.coldest, piece.hottest)]
    kinks = [*ends, *(end * (1.0 + _BESIDE) for end in ends)]
    return _HotSide(above, kinks, given.hottest, max(given.rate, 0.0))


def _above(piece: Heat, level: float) -> float:
    if level <= piece.coldest:
        return piece.rate
    if level >= piece.hottest:
        return 0.0
    return piece.rate * (piece.hottest - level) / (piece.hottest - piece.coldest)
