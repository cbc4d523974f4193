"""A train of adiabatic beds: what each does, and what keeps it below its limit.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat and work [W].  Each bed is fed at
one temperature and comes to the equilibrium of its outlet.  A bed that would pass its limit gets
back a part of its own product, cooled to the inlet's temperature, or steam.  Recycled product
changes no element ratio, so the product at the limit is known beforehand and the recycle follows
from the energy balance in closed form:

    r = (H_fed - H_product) / (H_product - H_cooled - w)     per mol of product that goes on

with the work w of the blower that makes up the bed's pressure drop, small against the pressure:
``w = V dp / efficiency``.  A bed takes some 0.8 ms, so a train of three takes longer than 2 ms: it
is as many reactors, each with an equilibrium at its limit and, below it, a search for its
temperature; steam costs more, since its amount is searched for.
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace

import numpy as np

from chainflow.equipment.base import Array, Caution, Duty, Site
from chainflow.equipment.cooling import cooling_duties
from chainflow.equipment.junctions import joined
from chainflow.equipment.ports import mean_temperature
from chainflow.thermo.components import Matter
from chainflow.thermo.equilibrium import equilibrate, equilibrate_adiabatic
from chainflow.thermo.stream_slopes import enthalpy_slopes
from chainflow.thermo.streams import DISSOLVED, Stream
from chainflow.thermo.water import condenses, water_split

_MOST_STEPS = 60
_CLOSE = 1e-8  # a step this small ends the search: the error after it is its square
_MOST_STEAM = 1e3  # mol of steam per mol of gas at which the search for it gives up


@dataclass(frozen=True, slots=True)
class TrainSettings:
    """What all beds of a train have in common."""

    beds: int
    inlet: float  # [K]
    limit: float | None  # [K]
    held_by_steam: bool
    approach: float  # [K]
    drop: float  # [Pa], of each bed
    knock_out: float | None  # [K]
    only_before_last: bool
    blower_efficiency: float
    species: tuple[str, ...]  # that react

    def knocks_out_after(self, bed: int) -> bool:
        """Whether water is taken out behind a bed, counted from 1."""
        if self.knock_out is None or bed >= self.beds:
            return False
        return bed == self.beds - 1 or not self.only_before_last


@dataclass(frozen=True, slots=True)
class Bed:
    """What one bed does."""

    product: Stream  # what goes on, recycle not counted
    fed: Stream  # fresh gas and steam at the inlet's temperature
    recycle: float = 0.0  # mol recycled per mol of fresh gas
    steam: float = 0.0  # [mol/s]
    work: float = 0.0  # of the blower [W]
    duties: tuple[Duty, ...] = ()
    why: str = ""  # why steam does not hold it


@dataclass(slots=True)
class Train:
    """What all beds do, in order."""

    beds: list[Bed] = field(default_factory=list)
    duties: list[Duty] = field(default_factory=list)
    liquids: list[Stream] = field(default_factory=list)

    @property
    def steam(self) -> float:
        return sum(bed.steam for bed in self.beds)

    @property
    def work(self) -> float:
        return sum(bed.work for bed in self.beds)

    @property
    def why(self) -> str:
        return next((bed.why for bed in self.beds if bed.why), "")

    @property
    def liquid(self) -> Stream:
        """All water that was taken out, at the pressure behind the last bed."""
        pressure, first = float(self.beds[-1].product.pressure), self.liquids[0]
        if any(float(stream.pressure) != pressure for stream in self.liquids):
            return joined(self.liquids, first.matter, pressure)
        water = np.sum([stream.water for stream in self.liquids], axis=0)
        enthalpy = sum(float(stream.enthalpy) for stream in self.liquids)
        return replace(first, water=water, enthalpy=enthalpy)


def run_train(feed: Stream, steam: Stream | None, settings: TrainSettings, site: Site) -> Train:
    """Pass a feed through the beds.

    `steam` is one mol/s of what is served to hold the beds, None if they are held by recycle.
    """
    train, gas = Train(), feed
    for number in range(1, settings.beds + 1):
        bed = _bed(number, gas, steam, settings, site)
        train.beds.append(bed)
        train.duties += bed.duties
        gas = bed.product
        if settings.knocks_out_after(number):
            gas = _knocked_out(number, gas, settings, site, train)
    return train


def _bed(
    number: int, gas: Stream, steam: Stream | None, settings: TrainSettings, site: Site
) -> Bed:
    matter, pressure = site.matter, float(gas.pressure)
    fed = Stream.at(matter, gas.flows, settings.inlet, pressure)
    end = pressure - settings.drop
    if settings.limit is None or not fed.flows.any():
        return _adiabatic(number, gas, fed, end, settings, site)
    held = _at_limit(fed.flows, end, settings, matter)
    if float(held.enthalpy) >= float(fed.enthalpy):
        return _adiabatic(number, gas, fed, end, settings, site)
    if steam is None:
        return _recycled(number, gas, fed, held, settings, site)
    return _steamed(number, gas, steam, end, settings, site)


def _brought(number: int, gas: Stream, fed: Stream, site: Site) -> list[Duty]:
    cools = float(gas.temperature) > float(fed.temperature)
    purpose = f"cooling before bed {number}" if cools else f"heating before bed {number}"
    if cools or gas.water.any() or fed.water.any():
        return cooling_duties(purpose, gas, fed, site)
    start, end = float(gas.temperature), float(fed.temperature)
    heat = float(fed.enthalpy) - float(gas.enthalpy)
    entropy = float(fed.entropy) - float(gas.entropy)
    mean = heat / entropy if heat * entropy > 0.0 else mean_temperature(start, end)
    return [Duty(purpose, heat, start, end, min(max(mean, start), end))]


def _adiabatic(
    number: int, gas: Stream, fed: Stream, end: float, settings: TrainSettings, site: Site
) -> Bed:
    """A bed that needs nothing to stay below its limit."""
    matter, enthalpy = site.matter, float(fed.enthalpy)
    if not fed.flows.any():
        product = Stream.at(matter, fed.flows, settings.inlet, end)
        return Bed(product, fed, duties=tuple(_brought(number, gas, fed, site)))
    found = equilibrate_adiabatic(
        matter, fed.flows, enthalpy, end, settings.species, settings.approach, settings.limit
    )
    product = Stream.from_enthalpy(matter, found.flows, enthalpy, end, found.temperature)
    return Bed(product, fed, duties=tuple(_brought(number, gas, fed, site)))


def _at_limit(flows: Array, pressure: float, settings: TrainSettings, matter: Matter) -> Stream:
    """What flows become at the limit's temperature."""
    limit = settings.limit
    assert limit is not None
    found = equilibrate(matter, flows, limit, pressure, settings.species, limit + settings.approach)
    return Stream.at(matter, found.flows, limit, pressure)


def _recycled(
    number: int, gas: Stream, fed: Stream, held: Stream, settings: TrainSettings, site: Site
) -> Bed:
    """A bed held at its limit by its own cooled product."""
    end = float(held.pressure)
    cold = Stream.at(site.matter, held.flows, settings.inlet, end)
    blown = float(cold.volume_flow) * settings.drop / settings.blower_efficiency
    surplus = float(fed.enthalpy) - float(held.enthalpy)
    share = surplus / (float(held.enthalpy) - float(cold.enthalpy) - blown)
    if share < 0.0:
        return Bed(held, fed, why=f"bed {number}: the blower heats more than the cooler takes out")
    back = cooling_duties(
        f"cooling the recycle of bed {number}", held.scaled(share), cold.scaled(share), site
    )
    return Bed(
        held,
        fed,
        recycle=share * float(held.total) / float(fed.total),
        work=share * blown,
        duties=(*_brought(number, gas, fed, site), *back),
    )


def _steamed(
    number: int, gas: Stream, steam: Stream, end: float, settings: TrainSettings, site: Site
) -> Bed:
    """A bed held at its limit by steam; Newton on its amount, the energy balance as residual."""
    matter, pressure = site.matter, min(float(gas.pressure), float(steam.pressure))
    amount, total, why = 0.0, float(gas.total), f"bed {number}: no amount of steam is enough"
    for _ in range(_MOST_STEPS):
        flows = gas.flows + amount * steam.flows
        entering, by_flow = _gas_or_wet(matter, flows, settings.inlet, pressure)
        limit = settings.limit
        assert limit is not None
        found = equilibrate(matter, flows, limit, end, settings.species, limit + settings.approach)
        partial = matter.gas_partial(found.flows, limit, end).enthalpy
        residual = float(found.flows @ partial) - entering
        slope = float(partial @ (found.by_feed @ steam.flows)) - float(by_flow @ steam.flows)
        if slope <= 0.0 or amount > _MOST_STEAM * total:
            break
        step = -residual / slope
        amount = max(amount + step, 0.0)
        if abs(step) <= _CLOSE * (total + amount):
            why = ""
            break
    if why:
        alone = Stream.at(matter, gas.flows, settings.inlet, float(gas.pressure))
        return replace(_adiabatic(number, gas, alone, end, settings, site), why=why)
    arriving = joined((gas, steam.scaled(amount)), matter, pressure)
    fed = Stream.at(matter, arriving.flows, settings.inlet, pressure)
    held = _at_limit(fed.flows, end, settings, matter)
    product = Stream.from_enthalpy(matter, held.flows, float(fed.enthalpy), end, settings.limit)
    duties = tuple(_brought(number, arriving, fed, site))
    return Bed(product, fed, steam=amount, duties=duties)


def _gas_or_wet(
    matter: Matter, flows: Array, temperature: float, pressure: float
) -> tuple[float, Array]:
    """Enthalpy [W] of what a bed is fed with, and its slopes by flow [J/mol]."""
    if condenses(matter, flows, temperature, pressure, DISSOLVED):
        fed = Stream.at(matter, flows, temperature, pressure)
        return float(fed.enthalpy), enthalpy_slopes(fed)[0]
    partial = matter.gas_partial(flows, temperature, pressure).enthalpy
    return float(flows @ partial), partial


def _knocked_out(
    number: int, gas: Stream, settings: TrainSettings, site: Site, train: Train
) -> Stream:
    """Cool the gas behind a bed, note the condensate, and return what goes on."""
    matter, level, pressure = site.matter, settings.knock_out, float(gas.pressure)
    assert level is not None
    cooled = Stream.at(matter, gas.flows, level, pressure)
    train.duties += cooling_duties(f"cooling and condensing behind bed {number}", gas, cooled, site)
    vapour, water = water_split(matter, gas.flows, level, pressure, ("CO2",))
    dry = Stream.gaseous(matter, vapour, level, pressure)
    nothing = np.zeros_like(water)
    enthalpy = float(cooled.enthalpy) - float(dry.enthalpy)
    train.liquids.append(Stream(matter, nothing, water, nothing, level, pressure, enthalpy))
    return dry


def train_cautions(train: Train, settings: TrainSettings) -> list[Caution]:
    """What is doubtful about the beds themselves."""
    cautions = []
    recycled = [str(k) for k, bed in enumerate(train.beds, 1) if bed.recycle > 0.0]
    if recycled and settings.drop == 0.0:
        text = (
            f"the recycle of bed {', '.join(recycled)} is free of work because the beds lose no "
            "pressure: give a 'pressure_drop'"
        )
        cautions.append(Caution("drop-free-recycle", text))
    wet = [str(k) for k, bed in enumerate(train.beds, 1) if float(bed.fed.water.sum()) > 0.0]
    if wet:
        text = (
            f"liquid water reaches bed {', '.join(wet)} at {settings.inlet - 273.15:.4g} degC: "
            "raise 'bed_inlet'"
        )
        cautions.append(Caution("wet-bed", text))
    return cautions
