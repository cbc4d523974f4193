"""Liquefying one component of a gas.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], work and heat [W].
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from typing import Annotated, Any, ClassVar

import numpy as np
from pydantic import Field

from chainflow.basis.quantities import OpenFraction, Pressure, measured
from chainflow.equipment.base import (
    HEAT_PORTS,
    Array,
    Caution,
    Duty,
    Equipment,
    Outcome,
    Port,
    Role,
    Site,
    material,
)
from chainflow.equipment.ports import Feeds
from chainflow.equipment.published.idealhy_2013 import EFFICIENCIES
from chainflow.thermo import spin
from chainflow.thermo.components import Matter
from chainflow.thermo.liquefied import (
    LIQUEFIABLE,
    ColdState,
    cold_flows,
    critical_point,
    saturated,
)
from chainflow.thermo.streams import Stream

_TRACE = 1e-4  # mole share of other components from which they deserve a caution


class Liquefier(Equipment):
    """Liquefies one component, boiling at `pressure`, for its ideal work over an efficiency.

    The ideal work is the rise of the real-gas exergy.  Other components leave at `rejected`, warm
    and at the feed's pressure.  `boil_off` is the share of the liquid that evaporates before it is
    handed on and leaves as cold vapour.  With `conversion: false` hydrogen stays normal: it then
    takes less work, but the liquid turns to para and boils away by itself; the enthalpy that is
    handed on is that of normal hydrogen, so whatever finds its equilibrium finds it boiled.
    """

    kind: ClassVar[str] = "liquefier"
    family: ClassVar[str] = "compression"
    gives: ClassVar[tuple[str, ...]] = (
        "ideal_work_W",
        "work_W",
        "ideal_work_J_kg",
        "work_J_kg",
        "boiling_K",
        "density_kg_m3",
        "boil_off_mol_s",
        "share_para",
        "conversion_heat_J_kg",
        "vaporisation_heat_J_kg",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port("inlet", "material", Role.TAKES, main=True, means="the gas"),
        Port("power", "power", Role.CALLS, optional=True, means="electric power"),
        HEAT_PORTS[2],
        Port("liquid", "material", Role.OFFERS, main=True, means="the boiling liquid"),
        Port("boil_off", "material", Role.OFFERS, optional=True, means="cold saturated vapour"),
        Port("rejected", "material", Role.OFFERS, optional=True, means="the other components"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        (
            "ideal work = exergy(liquid) + exergy(boil_off) + exergy(rejected) - exergy(inlet), "
            "environment at ambient"
        ),
        "work = ideal work / efficiency",
        "ortho-para: rotational levels E_J = B J(J+1) - D [J(J+1)]^2, B 59.336, D 0.0457 1/cm",
    )
    sources: ClassVar[tuple[str, ...]] = (
        "reference fluids: Reynolds, Thermodynamic Properties in SI, 1979, as in Cantera",
        (
            "hydrogen efficiency 25 % (20 to 30 % today, 44 % concept): Stolzenburg et al., "
            "IDEALHY, 2013 (energy read, efficiency computed)"
        ),
        "other efficiencies: from memory or common practice",
    )

    component: str = Field("H2", description=f"component to liquefy: {', '.join(LIQUEFIABLE)}")
    pressure: Pressure = Field(1.3e5, description="pressure of the boiling liquid, absolute")
    efficiency: OpenFraction | None = Field(
        None, description="ideal work per electric work (default: by component)"
    )
    conversion: bool = Field(True, description="hydrogen is converted to its equilibrium")
    boil_off: Annotated[float, measured("1", ge=0, lt=1)] = Field(
        0.0, description="share of the liquid that evaporates before it is handed on"
    )

    def component_names(self) -> Iterator[tuple[tuple[str, ...], str]]:
        yield ("component",), self.component

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        if self.component not in LIQUEFIABLE:
            yield (
                ("component",),
                (
                    f"{self.component} cannot be liquefied here: choose one of "
                    f"{', '.join(LIQUEFIABLE)}"
                ),
            )
            return
        critical = critical_point(self.component)[1]
        if self.pressure >= critical:
            yield (
                ("pressure",),
                (
                    f"{self.component} does not boil at {self.pressure / 1e5:.4g} bar, its "
                    "critical "
                    f"pressure is {critical / 1e5:.4g} bar: lower the pressure"
                ),
            )

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        mine = ("liquid", "boil_off") if species == self.component else ("rejected",)
        return [(outlet, species) for outlet in outlets if outlet in mine]

    def outlet_pressures(self, inlets: Mapping[str, tuple[float, ...]]) -> dict[str, float]:
        feed = min(inlets.get("inlet", (float("inf"),)))
        return {"liquid": self.pressure, "boil_off": self.pressure, "rejected": feed}

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        inlet, matter = material(feeds, "inlet"), site.matter
        flows = np.zeros_like(inlet.flows)
        flows[matter.index[self.component]] = inlet.flow(self.component)
        liquid = saturated(self.component, self.pressure, 0.0, converted=self.conversion)
        vapour = saturated(self.component, self.pressure, 1.0, converted=self.conversion)
        parts = {
            "liquid": self._stream(matter, (1.0 - self.boil_off) * flows, liquid),
            "boil_off": self._stream(matter, self.boil_off * flows, vapour),
            "rejected": Stream.at(
                matter, inlet.flows - flows, float(inlet.temperature), float(inlet.pressure)
            ),
        }
        amount = float(flows.sum())
        ideal = self._ideal_work(inlet, parts["rejected"], amount, (liquid, vapour), site.ambient)
        work = max(ideal, 0.0) / (self.efficiency or EFFICIENCIES[self.component])
        heat = sum(float(s.enthalpy) for s in parts.values()) - float(inlet.enthalpy) - work
        level = site.ambient
        duties, _, drawn, given = self.settle(
            [Duty("heat rejected", heat, level, level, level)], site
        )
        mass = amount * float(matter.molar_mass[matter.index[self.component]])
        results = self._results(liquid, vapour, ideal, work, mass)
        return Outcome(
            {**parts, **given},
            drawn | {"power": work},
            duties,
            power=work,
            results=results | {"boil_off_mol_s": self.boil_off * amount},
            cautions=self._cautions(inlet) if site.detail else (),
        )

    def _stream(self, matter: Matter, flows: Array, state: ColdState) -> Stream:
        gas, water, liquid, level, enthalpy = cold_flows(matter, flows, state)
        for array in (gas, liquid):
            array.setflags(write=False)
        return Stream(matter, gas, water, liquid, level, self.pressure, enthalpy)

    def _ideal_work(
        self,
        inlet: Stream,
        rejected: Stream,
        amount: float,
        states: tuple[ColdState, ColdState],
        ambient: float,
    ) -> float:
        """Rise of ``H - T0 S`` [W]; reversible, heat only to the ambient."""
        each = [s.enthalpy - ambient * s.entropy for s in states]
        cold = amount * ((1.0 - self.boil_off) * each[0] + self.boil_off * each[1])
        warm = float(rejected.enthalpy) - ambient * float(rejected.entropy)
        return cold + warm - (float(inlet.enthalpy) - ambient * float(inlet.entropy))

    def _results(
        self, liquid: ColdState, vapour: ColdState, ideal: float, work: float, mass: float
    ) -> dict[str, float]:
        per_mass = 1.0 / _molar_mass(self.component)
        results = {
            "ideal_work_W": ideal,
            "work_W": work,
            "ideal_work_J_kg": ideal / mass if mass > 0.0 else 0.0,
            "work_J_kg": work / mass if mass > 0.0 else 0.0,
            "boiling_K": liquid.temperature,
            "density_kg_m3": liquid.density,
            "vaporisation_heat_J_kg": (vapour.enthalpy - liquid.enthalpy) * per_mass,
        }
        if self.component == "H2":
            end = spin.equilibrium(liquid.temperature)
            now = end if self.conversion else spin.normal(liquid.temperature)
            results["share_para"] = now.para_share
            results["conversion_heat_J_kg"] = (now.enthalpy - end.enthalpy) * per_mass
        return results

    def _cautions(self, inlet: Stream) -> tuple[Caution, ...]:
        found = []
        if self.component == "H2" and not self.conversion:
            text = (
                "unconverted liquid hydrogen turns to para by itself and gives off more heat "
                "than evaporates it: it boils away within days; set conversion: true"
            )
            found.append(Caution("unconverted-hydrogen", text))
        total = float(inlet.total)
        others = total - float(inlet.flow(self.component))
        if total > 0.0 and others > _TRACE * total:
            text = (
                f"{100 * others / total:.3g} % of the feed is not {self.component}: it freezes in "
                "a real plant; purify the feed before it"
            )
            found.append(Caution("impure-feed", text))
        return tuple(found)


def _molar_mass(name: str) -> float:
    return float(Matter.of((name,)).molar_mass[0])
