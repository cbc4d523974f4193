"""The fuel cell: power from hydrogen (or, hot, from carbon monoxide and methane too) and air.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat and power [W]. The cells are in
`chainflow.equipment.cells.fuel_cells`; this module is the kind: settings, balance, results.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from typing import Annotated, Any, ClassVar, Literal, NamedTuple

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.constants import FARADAY
from chainflow.basis.quantities import (
    Area,
    CurrentDensity,
    OpenFraction,
    Pressure,
    Temperature,
    measured,
)
from chainflow.equipment.base import (
    HEAT_PORTS,
    Array,
    Duty,
    Equipment,
    Outcome,
    Port,
    Role,
    Site,
    material,
)
from chainflow.equipment.cells import fuel_cells, solid_oxide
from chainflow.equipment.cells.fuel_cell_report import report
from chainflow.equipment.cells.fuel_cells import PemFuelCell, SolidOxideFuelCell, Used, Working
from chainflow.equipment.cells.losses import LOSS_RESULTS, Losses
from chainflow.equipment.cooling import cooling_duties
from chainflow.equipment.junctions import joined
from chainflow.equipment.ports import Feeds, arriving
from chainflow.equipment.pressures import lower_feed
from chainflow.equipment.reactor_base import exchanging
from chainflow.thermo.components import Matter
from chainflow.thermo.saturation import saturation_pressure
from chainflow.thermo.streams import Stream

_NAMES = {"pem": "pem", "solid-oxide": "solid_oxide"}


class _Curve(NamedTuple):
    """What the sizing needs of a cell: its curve, or why there is none."""

    curve: fuel_cells.PemFuelCurve | fuel_cells.SolidOxideFuelCurve | None
    trouble: str = ""


class FuelCell(Equipment):
    """Turns hydrogen and air into power; the solid-oxide model takes CO and methane as well.

    It uses the fuel that arrives. With `current_density` the cell area follows, with `cell_area`
    (or `rating`, the power at full load and its current density) the current density does.
    """

    kind: ClassVar[str] = "fuel-cell"
    family: ClassVar[str] = "electrolysis"
    makes: ClassVar[bool] = True
    burns: ClassVar[bool] = True
    gives: ClassVar[tuple[str, ...]] = (
        "fuel_W",
        "direct_current_W",
        "voltage_V",
        *LOSS_RESULTS,
        "current_A",
        "current_density_A_m2",
        "cell_area_m2",
        "load",
        "stack_efficiency_LHV",
        "stack_efficiency_HHV",
        "efficiency_LHV",
        "efficiency_HHV",
        "stack_heat_W",
        "cooling_W",
        "inverter_loss_W",
        "auxiliaries_W",
        "carbon_activity",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port("fuel", "material", Role.TAKES, main=True, many=True, means="hydrogen or fuel gas"),
        Port("oxidiser", "material", Role.CALLS, means="air or oxygen"),
        HEAT_PORTS[1],
        HEAT_PORTS[2],
        Port(
            "spent_fuel", "material", Role.OFFERS, optional=True, means="what is left of the fuel"
        ),
        Port(
            "exhaust",
            "material",
            Role.OFFERS,
            optional=True,
            means="what is left of the air, with the water made (pem)",
        ),
        Port("power", "power", Role.OFFERS, main=True, means="electric power"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "power = direct current * (inverter - auxiliaries)",
        "voltage = reversible - activation - ohmic - concentration",
        (
            "pem: activation RT/(alpha z F) asinh((i + leak) / 2 i0), i0 by oxygen pressure; "
            "hydrogen that crosses (leak) is burnt"
        ),
        (
            "pem, mark-v and mann-2000: -(xi1 + xi2 T + xi3 T ln C_O2 + xi4 T ln I), ohmic "
            "by the published resistivity, -B ln(1 - i / limiting)"
        ),
        (
            "solid-oxide: current density * integral of resistance / (local reversible "
            "voltage - voltage) over what is used = 1"
        ),
        "oxidiser = air_ratio * oxygen used / oxygen share",
        (
            "heat = enthalpy of what leaves - enthalpy of what enters at stack temperature + "
            "direct current"
        ),
    )
    sources: ClassVar[tuple[str, ...]] = (
        *fuel_cells.SOURCES,
        *solid_oxide.SOURCES,
        (
            "certainty: R read, r read as restated by others, C computed or cross-checked, M "
            "from memory"
        ),
    )

    model: Literal["pem", "solid-oxide"] = Field(description="kind of cells")
    pem: PemFuelCell | None = Field(None, description="numbers of the cells (model: pem)")
    solid_oxide: SolidOxideFuelCell | None = Field(
        None, description="numbers of the cells (model: solid-oxide)"
    )
    temperature: Temperature = Field(description="stack temperature; both gases leave at it")
    pressure: Pressure = Field(description="stack pressure, absolute")
    air_ratio: Annotated[float, measured("1", ge=1.05, le=20)] = Field(
        2.0, description="oxygen brought per oxygen used"
    )
    inverter: OpenFraction = Field(1.0, description="alternating per direct current")
    auxiliaries: Annotated[float, measured("1", ge=0, le=0.9)] = Field(
        0.0, description="power of blowers, pumps and controls per direct current"
    )
    current_density: CurrentDensity | None = Field(
        None, description="at which the cells work; with 'rating' the one at full load"
    )
    cell_area: Area | None = Field(None, description="active area of all cells together")
    rating: Annotated[float, measured("W", gt=0)] | None = Field(
        None, description="power given at full load"
    )

    @model_validator(mode="before")
    @classmethod
    def _with_cell(cls, given: Any) -> Any:
        word = given.get("model") if isinstance(given, dict) else None
        name = _NAMES.get(word) if isinstance(word, str) else None
        if name is None or given.get(name) is not None:
            return given
        return {**given, name: {}}

    @model_validator(mode="after")
    def _fits(self) -> FuelCell:
        trouble = self._trouble()
        if trouble:
            raise PydanticCustomError("fuel-cell", "{text}", {"text": trouble})
        return self

    def _trouble(self) -> str:
        other = "solid_oxide" if self.model == "pem" else "pem"
        if getattr(self, other) is not None:
            return f"'{other}' is of another model than {self.model}: remove it or change 'model'"
        if self.auxiliaries >= self.inverter:
            return "'auxiliaries' take all that the 'inverter' gives: lower them"
        if self.current_density is None and self.cell_area is None:
            return "wanted 'current_density' (the area follows) or 'cell_area' (the current does)"
        if self.current_density is not None and self.cell_area is not None:
            return "'current_density' and 'cell_area' are given: the fuel settles one of them"
        if self.current_density == 0.0:
            return "'current_density' is zero, wanted more"
        limit = self.pem.limiting_current if self.pem is not None else np.inf
        if (self.current_density or 0.0) >= limit:
            return (
                f"'current_density' is {(self.current_density or 0.0) / 1e4:.4g} A/cm2, wanted "
                f"less than the limiting current of {limit / 1e4:.4g} A/cm2"
            )
        return ""

    # --- structure ---------------------------------------------------------------------------

    def material_outlets(self) -> tuple[str, ...]:
        return ("spent_fuel", "exhaust")

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        names = ["H2", "O2", "H2O"]
        if self.model == "solid-oxide" and {"CO", "CH4", "CO2"} & set(matter.index):
            names += ["CO", "CO2"]
        missing = [name for name in names if name not in matter.index]
        if missing:
            yield ("kind",), f"a fuel cell needs {', '.join(missing)} among the components"
        module = fuel_cells if self.model == "pem" else solid_oxide
        low, high = module.COLDEST, module.HOTTEST
        if not low <= self.temperature <= high:
            yield (
                ("temperature",),
                (
                    f"temperature is {self.temperature - 273.15:.4g} degC, model "
                    f"{self.model} works "
                    f"from {low - 273.15:.4g} to {high - 273.15:.4g} degC"
                ),
            )
        elif self.model == "pem" and saturation_pressure(self.temperature) >= 0.95 * self.pressure:
            yield (
                ("temperature",),
                (
                    f"at {self.temperature - 273.15:.4g} degC and "
                    f"{self.pressure / 1e5:.4g} bar the "
                    "water boils and leaves no room for the gases: lower the temperature or raise "
                    "the pressure"
                ),
            )

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        outlets = set(outlets)
        if inlet == "oxidiser":
            return self._of_air(species, outlets, matter)
        if self.model == "pem":
            found = [("spent_fuel", species)]
            found += [("exhaust", "H2O")] if species == "H2" else []
        else:
            found = exchanging(species, solid_oxide.SPECIES, ("spent_fuel",), matter)
            found += [("spent_fuel", n) for n in ("H2O", "CO2") if species in ("H2", "CO", "CH4")]
        return [pair for pair in found if pair[0] in outlets and pair[1] in matter.index]

    def _of_air(self, species: str, outlets: set[str], matter: Matter) -> list[tuple[str, str]]:
        found = [("exhaust", species)]
        if species == "O2" and self.model == "pem":
            found.append(("exhaust", "H2O"))
        if species == "O2" and self.model == "solid-oxide":
            found += [("spent_fuel", name) for name in ("H2O", "CO2", "CO")]
        return [pair for pair in found if pair[0] in outlets and pair[1] in matter.index]

    def outlet_pressures(self, inlets: Mapping[str, tuple[float, ...]]) -> dict[str, float]:
        return dict.fromkeys(self.material_outlets(), self.pressure)

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        return lower_feed(inlets, self.pressure)

    # --- physics -----------------------------------------------------------------------------

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        matter = site.matter
        streams = [f for f in arriving(feeds, "fuel") if isinstance(f, Stream)]
        fuel = joined(streams, matter, self.pressure)
        one, used = material(feeds, "oxidiser"), self._used(fuel.flows, matter)
        share = float(one.fraction("O2"))
        unmet: dict[str, str] = {}
        if share <= 1e-6 and used.oxygen > 0.0:
            unmet["oxidiser"] = "what is served there brings no oxygen: serve air or oxygen"
            used = Used(fuel.flows, 0.0, 0.0)
        amount = self.air_ratio * used.oxygen / share if used.oxygen > 0.0 else 0.0
        air = one.scaled(amount)
        at = self._working(fuel.flows, used, air.flows, share, matter)
        if at.trouble:
            unmet["fuel"] = at.trouble
        return self._outcome(feeds, (fuel, air, used), at, amount, unmet, site)

    def _used(self, fuel: Array, matter: Matter) -> Used:
        if self.pem is not None:
            return fuel_cells.hydrogen_used(self.pem.fuel_use, fuel, matter)
        assert self.solid_oxide is not None
        return fuel_cells.fuel_burnt(
            self.solid_oxide.fuel_use, fuel, matter, self.temperature, self.pressure
        )

    def _curve(self, fuel: Array, used: Used, air: Array, share: float, matter: Matter) -> _Curve:
        level, pressure = self.temperature, self.pressure
        if self.pem is not None:
            pressures = fuel_cells.pem_pressures(fuel, used, air, matter, level, pressure)
            return _Curve(self.pem.curve(level, *pressures))
        assert self.solid_oxide is not None
        cell = fuel_cells.solid_oxide_cell(
            self.solid_oxide, fuel, used, self.air_ratio, share, matter, level, pressure
        )
        if cell is None:
            text = (
                "the fuel holds too little steam and would turn to soot: add steam or raise "
                "'solid_oxide.recirculation'"
            )
            return _Curve(None, text)
        return _Curve(fuel_cells.SolidOxideFuelCurve(cell))

    def _working(
        self, fuel: Array, used: Used, air: Array, share: float, matter: Matter
    ) -> Working:
        """Current density and area for what is used; no power where there is no answer."""
        if used.oxygen <= 0.0:
            return Working(Losses(0.0), 0.0, self.current_density or 0.0, self.cell_area or 0.0)
        curve, trouble = self._curve(fuel, used, air, share, matter)
        if curve is None:
            return Working(Losses(0.0), 0.0, 0.0, 0.0, trouble)
        most = 4.0 * FARADAY * used.oxygen  # [A], crossing hydrogen included
        area = self._area(curve)
        if area is None:
            density = self.current_density or 0.0
            current = most * density / (density + curve.leak)
            area = current / density
        else:
            density = max(most / area - curve.leak, 0.0)
            current = density * area
        if density >= curve.limit:
            text = (
                f"the fuel asks for {density / 1e4:.4g} A/cm2, the cells' limit is "
                f"{curve.limit / 1e4:.4g} A/cm2: more 'cell_area' or less fuel"
            )
            return Working(Losses(0.0), current, density, area, text)
        losses = curve.losses(density)
        if losses.total >= losses.reversible:
            trouble = (
                f"at {density / 1e4:.4g} A/cm2 the cells give no voltage: lower the current "
                "density or enlarge 'cell_area'"
            )
        return Working(losses, current, density, area, trouble)

    def _area(
        self, curve: fuel_cells.PemFuelCurve | fuel_cells.SolidOxideFuelCurve
    ) -> float | None:
        if self.rating is None or self.current_density is None:
            return self.cell_area
        losses = curve.losses(self.current_density)
        direct = self.rating / (self.inverter - self.auxiliaries)
        return direct / (self.current_density * max(losses.reversible - losses.total, 1e-3))

    def _outcome(
        self,
        feeds: Feeds,
        through: tuple[Stream, Stream, Used],
        at: Working,
        amount: float,
        unmet: dict[str, str],
        site: Site,
    ) -> Outcome:
        fuel, air, used = through
        level, around = self.temperature, site.ambient
        gases = self._gases(used, air, site.matter)
        heating, heated = self._heating(fuel, air, site)
        leaving = float(sum(gas.enthalpy for gas in gases.values()))
        heat = leaving - heated + at.direct
        losses = at.direct * (1.0 - self.inverter), at.direct * self.auxiliaries
        needs = [
            *heating,
            Duty.between("stack", heat, self.entry, level),
            Duty("inverter loss", -losses[0], around, around, around, "ambient"),
            Duty("auxiliaries", -losses[1], around, around, around, "ambient"),
        ]
        kept = [d for d in needs if d.heat != 0.0 or d.purpose == "stack"]
        duties, _, drawn, given = self.settle(kept, site)
        power = at.direct * (self.inverter - self.auxiliaries)
        results, cautions = report(self, fuel, used, at, heat, site) if site.detail else ({}, ())
        return Outcome(
            {**gases, "power": power, **given},
            drawn | {"oxidiser": amount},
            duties,
            power=-power,
            results=results,
            cautions=cautions,
            unmet=unmet,
        )

    @property
    def entry(self) -> float:
        """Temperature at which fuel and air enter the cells [K]."""
        return (self.solid_oxide.entry if self.solid_oxide else None) or self.temperature

    def _heating(self, fuel: Stream, air: Stream, site: Site) -> tuple[list[Duty], float]:
        """Duties that bring fuel and air to the cells, and their enthalpy there."""
        heating: list[Duty] = []
        heated = 0.0
        for name, cold in (("fuel", fuel), ("air", air)):
            hot = Stream.at(site.matter, cold.flows, self.entry, self.pressure)
            heating += cooling_duties(f"{name} to stack temperature", cold, hot, site)
            heated += float(hot.enthalpy)
        return heating, heated

    def _gases(self, used: Used, air: Stream, matter: Matter) -> dict[str, Stream]:
        exhaust = air.flows.copy()
        exhaust[matter.index["O2"]] = max(exhaust[matter.index["O2"]] - used.oxygen, 0.0)
        exhaust[matter.index["H2O"]] += used.water
        level, pressure = self.temperature, self.pressure
        return {
            "spent_fuel": Stream.at(matter, used.spent, level, pressure),
            "exhaust": Stream.at(matter, exhaust, level, pressure),
        }
