"""What enters and leaves a stack for the current that passes.

SI throughout: flows [mol/s], temperature [K], pressure [Pa]. `gross` is the hydrogen that the
current would make, `Share` says how much of it leaves where; what is lost was burnt to water again
or never made. Liquid-fed cells: both gases leave saturated with water (ideal gas, IAPWS saturation
pressure), and what else is dissolved in the water leaves with the oxygen. Steam-fed cells: the
product is at shift equilibrium at the stack's temperature, the oxygen joins the sweep gas.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from typing import NamedTuple

import numpy as np

from chainflow.equipment.base import Array, Duty, Site
from chainflow.equipment.boundary import amounts
from chainflow.equipment.cells.losses import Share
from chainflow.equipment.cells.solid_oxide import Conversions
from chainflow.equipment.cooling import cooling_duties
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream
from chainflow.thermo.water import saturation_pressure

Blocks = dict[str, Array]


class Made(NamedTuple):
    """What a stack gives and asks for."""

    gases: dict[str, Stream]
    drawn: dict[str, float]
    heating: list[Duty]  # brings what enters to the stack
    heated: float  # enthalpy of what enters once it is as warm [W]

    @property
    def leaving(self) -> float:
        """Enthalpy of what leaves [W]."""
        return float(sum(gas.enthalpy for gas in self.gases.values()))


@dataclass(frozen=True, slots=True)
class LiquidFed:
    """Gases of a stack fed with liquid water; `water` is one mol of the feed."""

    water: Stream
    matter: Matter
    temperature: float
    pressure: float  # of the hydrogen side
    oxygen_pressure: float

    @property
    def unmet(self) -> str:
        """Why the feed cannot be used; empty if it can."""
        if self._reacting > 0.0:
            return ""
        return "what is served at 'water' holds too little H2O to be electrolysed"

    @property
    def _moisture(self) -> tuple[float, float]:
        """Water per mol of dry gas at saturation, hydrogen and oxygen side [-]."""
        vapour = saturation_pressure(self.temperature)
        return vapour / (self.pressure - vapour), vapour / (self.oxygen_pressure - vapour)

    @property
    def _reacting(self) -> float:
        """Water per mol of feed left when what is dissolved has taken its moisture along."""
        pure = float(self.water.flow("H2O"))
        return pure - (float(self.water.total) - pure) * self._moisture[1]

    def _amount(self, made: Share) -> float:
        """Feed for what is made [mol/s]: reaction and the moisture of both gases."""
        in_hydrogen, in_oxygen = self._moisture
        split = made.net + made.crossed
        moist = in_hydrogen * made.net + in_oxygen * (made.crossed + 0.5 * split)
        return (split + moist) / self._reacting

    def made(self, gross: float, share: Share, site: Site) -> Made:
        """Return gases, feed and heating for a current."""
        made = Share(gross * share.net, gross * share.crossed)
        if self.unmet:
            made = Share(0.0, 0.0)
        amount = self._amount(made) if not self.unmet else 0.0
        fed = amount * self.water.flows
        hot = Stream.at(self.matter, fed, self.temperature, self.oxygen_pressure)
        warmed = float(hot.enthalpy) - amount * float(self.water.enthalpy)
        start = float(self.water.temperature)
        duty = Duty.between("water to stack temperature", warmed, start, self.temperature)
        gases = self._gases(made, fed)
        return Made(gases, {"water": amount}, [duty], float(hot.enthalpy))

    def _gases(self, made: Share, fed: Array) -> dict[str, Stream]:
        matter, place = self.matter, self.matter.index["H2O"]
        in_hydrogen, in_oxygen = self._moisture
        oxygen = fed.copy()
        oxygen[place] = 0.0
        oxygen += self._with_oxygen(made)
        oxygen[place] = float(oxygen.sum()) * in_oxygen
        hydrogen = amounts({"H2": made.net, "H2O": made.net * in_hydrogen}, matter)
        level = self.temperature
        return {
            "hydrogen": Stream.gaseous(matter, hydrogen, level, self.pressure),
            "oxygen": Stream.gaseous(matter, oxygen, level, self.oxygen_pressure),
        }

    def _with_oxygen(self, made: Share) -> Array:
        return amounts({"O2": 0.5 * (made.net + made.crossed), "H2": made.crossed}, self.matter)

    def by_power(self, made: Made, growth: float, change: Share) -> Blocks | None:
        """Slopes by the power, from those of what is made; None where there is no hydrogen."""
        hydrogen, oxygen = made.gases["hydrogen"], made.gases["oxygen"]
        if not hydrogen.flow("H2") > 0.0:
            return None
        amount = self._amount(change)
        place, in_oxygen = self.matter.index["H2O"], self._moisture[1]
        rise = amount * self.water.flows
        rise[place] = 0.0
        rise += self._with_oxygen(change)
        rise[place] = float(rise.sum()) * in_oxygen
        partial = self._partial(oxygen)
        more = change.net / float(hydrogen.flow("H2"))
        return {
            "drawn:water": np.array([[amount]]),
            "hydrogen": more * np.append(hydrogen.flows, hydrogen.enthalpy)[:, None],
            "oxygen": np.append(rise, partial @ rise)[:, None],
        }

    def by_water(self, made: Made) -> Blocks | None:
        """Slopes by what one mol of the feed is: its amount, and what leaves with the oxygen."""
        size, place = len(self.matter.components), self.matter.index["H2O"]
        moisture, amount = self._moisture[1], made.drawn["water"]
        share = np.full(size, -moisture)
        share[place] = 1.0
        by_flow = -amount / self._reacting * share
        block = amount * np.eye(size) + np.outer(self.water.flows, by_flow)
        block[place] = 0.0
        block[place] = moisture * block.sum(axis=0)
        partial = self._partial(made.gases["oxygen"])
        none = np.zeros((size + 1, 1))
        return {
            "drawn:water": np.append(by_flow, 0.0)[None, :],
            "oxygen": np.hstack([np.vstack([block, partial @ block]), none]),
        }

    def _partial(self, oxygen: Stream) -> Array:
        matter = self.matter
        return matter.gas_partial(oxygen.gas, self.temperature, self.oxygen_pressure).enthalpy


@dataclass(frozen=True, slots=True)
class SteamFed:
    """Gases of a stack fed with steam, CO2 or both; `feed` and `sweep` are one mol each."""

    feed: Stream
    sweep: Stream | None
    found: Conversions
    ratio: float  # sweep per O2 made
    matter: Matter
    entry: float  # temperature at which gases enter the cells [K]
    temperature: float
    pressure: float
    unmet: str = ""

    @property
    def net(self) -> float:
        """Hydrogen that leaves per hydrogen the current could make."""
        return float(self.found.product[self.matter.index["H2"]]) / self.found.oxygen

    def made(self, gross: float, share: Share, site: Site) -> Made:
        """Return gases, feeds and heating for a current; `gross` is oxygen atoms taken out."""
        matter, level, pressure = self.matter, self.temperature, self.pressure
        amount = gross / self.found.oxygen
        entering = [("feed", self.feed, amount)]
        oxygen = amounts({"O2": 0.5 * gross}, matter)
        drawn = {"water": amount}
        if self.sweep is not None:
            drawn["sweep"] = 0.5 * gross * self.ratio
            entering.append(("sweep", self.sweep, drawn["sweep"]))
            oxygen = oxygen + drawn["sweep"] * self.sweep.flows
        heating, heated = [], 0.0
        for name, one, size in entering:
            cold = one.scaled(size)
            hot = Stream.gaseous(matter, cold.flows, self.entry, pressure)
            heating += cooling_duties(f"{name} to stack temperature", cold, hot, site)
            heated += float(hot.enthalpy)
        gases = {
            "hydrogen": Stream.gaseous(matter, amount * self.found.product, level, pressure),
            "oxygen": Stream.gaseous(matter, oxygen, level, pressure),
        }
        return Made(gases, drawn, heating, heated)

    def by_power(self, made: Made, growth: float, change: Share) -> Blocks | None:
        """Slopes by the power: everything grows with the oxygen taken out, `growth` relative."""
        blocks = {
            name: growth * np.append(gas.flows, gas.enthalpy)[:, None]
            for name, gas in made.gases.items()
        }
        return blocks | {f"drawn:{n}": np.array([[growth * a]]) for n, a in made.drawn.items()}

    def by_water(self, made: Made) -> Blocks | None:
        """No closed form: the voltage and the equilibrium follow the feed."""
        return None


@cache
def hydrogen_mass() -> float:
    """Molar mass of hydrogen [kg/mol], the one of every stream."""
    return float(Matter.of(("H2",)).molar_mass[0])
