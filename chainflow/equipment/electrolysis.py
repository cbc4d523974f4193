"""Electrolysis: how much hydrogen, oxygen, moisture and heat a stack gives, and at which voltage.

SI throughout: power [W], flows [mol/s], temperature [K], pressure [Pa], voltage [V]. The models of
the cells are in `chainflow.equipment.cells`, their published numbers in
`chainflow.equipment.published`; this module is the kind: settings, sizing, balance, results.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, replace
from typing import Annotated, Any, ClassVar, Literal

from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.constants import FARADAY
from chainflow.basis.quantities import (
    Area,
    CurrentDensity,
    Fraction,
    OpenFraction,
    Pressure,
    Temperature,
    measured,
)
from chainflow.basis.quantities import Flow as FlowSetting
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
    rate,
)
from chainflow.equipment.cells import solid_oxide, stack_report
from chainflow.equipment.cells.alkaline import AlkalineCell
from chainflow.equipment.cells.gases import LiquidFed, Made, SteamFed, hydrogen_mass
from chainflow.equipment.cells.losses import LOSS_RESULTS, Curve
from chainflow.equipment.cells.measured import MeasuredCurve, MeasuredCurves
from chainflow.equipment.cells.pem import PemCell
from chainflow.equipment.cells.sizing import ConstantCurve, Sizing, Working
from chainflow.equipment.cells.solid_oxide import SolidOxideCell
from chainflow.equipment.cells.stack_formulas import FORMULAS, SOURCES
from chainflow.equipment.cells.stack_settings import (
    MODELS,
    missing_components,
    sizing_trouble,
    temperature_trouble,
    with_cell,
    wrong_for_model,
)
from chainflow.equipment.ports import Feeds
from chainflow.equipment.pressures import lower_feed
from chainflow.equipment.reactor_base import exchanging
from chainflow.thermo.components import Matter
from chainflow.thermo.electrochemistry import reversible_voltage
from chainflow.thermo.streams import Stream

_ROUND_OFF = 1e-14  # relative
_SWEEP = Port(
    "sweep",
    "material",
    Role.CALLS,
    optional=True,
    means="gas that carries the oxygen away (model solid-oxide); without it pure oxygen leaves",
)


@dataclass(frozen=True, slots=True)
class _Stack:
    """The cells in their state and what is fed to them."""

    curve: Curve
    gases: LiquidFed | SteamFed | None
    unmet: dict[str, str]


class Electrolyser(Equipment):
    """Splits water (or, hot, steam and CO2) with direct current: H2O -> H2 + 1/2 O2.

    It takes the power that arrives, or, with `hydrogen` or both `cell_area` and `current_density`
    set, calls for the power it needs. With an area known (`cell_area`, or `rating` with
    `current_density`), a part load moves along the curve of the cells.
    """

    kind: ClassVar[str] = "electrolyser"
    family: ClassVar[str] = "electrolysis"
    makes: ClassVar[bool] = True
    gives: ClassVar[tuple[str, ...]] = (
        "hydrogen_mol_s",
        "hydrogen_kg_s",
        "water_kg_s",
        "direct_current_W",
        "voltage_V",
        *LOSS_RESULTS,
        "thermoneutral_V",
        "current_A",
        "current_density_A_m2",
        "cell_area_m2",
        "load",
        "stack_energy_use_J_kg",
        "fence_energy_use_J_kg",
        "stack_efficiency_LHV",
        "stack_efficiency_HHV",
        "fence_efficiency_LHV",
        "fence_efficiency_HHV",
        "water_use",
        "faraday_efficiency",
        "hydrogen_in_oxygen",
        "stack_heat_W",
        "cooling_W",
        "rectifier_loss_W",
        "auxiliaries_W",
        "conversion_per_pass",
        "carbon_activity",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port(
            "power",
            "power",
            Role.TAKES,
            main=True,
            many=True,
            means="alternating or direct current before the rectifier, auxiliaries included",
        ),
        Port(
            "water",
            "material",
            Role.CALLS,
            means="water for the reaction and for the moisture of both gases; "
            "steam, CO2 or both for model solid-oxide",
        ),
        _SWEEP,
        Port(
            "hydrogen",
            "material",
            Role.OFFERS,
            main=True,
            means="hydrogen, saturated with water; hot with the steam left (solid-oxide)",
        ),
        Port(
            "oxygen",
            "material",
            Role.OFFERS,
            optional=True,
            means="oxygen, saturated with water; with the sweep gas (solid-oxide)",
        ),
        HEAT_PORTS[1],
        HEAT_PORTS[2],
    )
    formulas: ClassVar[tuple[str, ...]] = FORMULAS
    sources: ClassVar[tuple[str, ...]] = SOURCES

    model: Literal["specific-energy", "voltage", "pem", "alkaline", "solid-oxide", "measured"] = (
        Field("specific-energy", description="how power becomes hydrogen")
    )
    energy_use: Annotated[float, measured("J/kg", gt=0)] | None = Field(
        None, description="direct current at the stack per mass of hydrogen"
    )
    voltage: Annotated[float, measured("V", gt=0)] | None = Field(
        None, description="voltage of one cell (model: voltage)"
    )
    pem: PemCell | None = Field(None, description="numbers of the cells (model: pem)")
    alkaline: AlkalineCell | None = Field(
        None, description="numbers of the cells (model: alkaline)"
    )
    solid_oxide: SolidOxideCell | None = Field(
        None, description="numbers of the cells (model: solid-oxide)"
    )
    curve: MeasuredCurves | None = Field(
        None,
        description="CSV file beside the flowsheet with units in its headings, or maps with lists "
        "'current_density', 'voltage' and a 'temperature' (model: measured)",
    )
    faraday_efficiency: OpenFraction | None = Field(
        None, description="hydrogen per hydrogen that the current could make (model: measured; 1)"
    )
    rectifier: OpenFraction = Field(1.0, description="direct current per power drawn by it")
    auxiliaries: Annotated[float, measured("1", ge=0, le=2)] = Field(
        0.0, description="power of pumps, cooling and controls per direct current"
    )
    temperature: Temperature = Field(description="stack temperature; both gases leave at it")
    pressure: Pressure = Field(description="stack pressure, absolute")
    hydrogen: FlowSetting | None = Field(
        None, description="dry hydrogen wanted at the outlet; the stack then calls for power"
    )
    current_density: CurrentDensity | None = Field(
        None, description="at which the cells work; with 'rating' the one at full load"
    )
    cell_area: Area | None = Field(None, description="active area of all cells together")
    rating: Annotated[float, measured("W", gt=0)] | None = Field(
        None, description="power drawn at full load"
    )
    minimum_load: Fraction | None = Field(
        None, description="least power drawn, as a share of 'rating'"
    )

    @model_validator(mode="before")
    @classmethod
    def _with_cell(cls, given: Any) -> Any:
        return with_cell(given)

    @model_validator(mode="after")
    def _fits(self) -> Electrolyser:
        trouble = wrong_for_model(self) or sizing_trouble(self)
        if trouble:
            raise PydanticCustomError("electrolyser", "{text}", {"text": trouble})
        return self

    # --- structure ---------------------------------------------------------------------------

    @property
    def calls_for_power(self) -> bool:
        """Whether the settings say how much is made."""
        both = self.cell_area is not None and self.current_density is not None
        return self.hydrogen is not None or both

    def port_list(self) -> tuple[Port, ...]:
        ports = tuple(p for p in self.ports if p is not _SWEEP or self.model == "solid-oxide")
        if not self.calls_for_power:
            return ports
        called = Port(
            "power",
            "power",
            Role.CALLS,
            optional=True,
            main=True,
            means="power for the hydrogen wanted",
        )
        return (called, *ports[1:])

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        missing = missing_components(self.model, matter)
        if missing:
            yield ("kind",), missing
        trouble = temperature_trouble(self)
        if trouble:
            yield ("temperature",), trouble

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        if self.model == "solid-oxide":
            return self._hot_destinations(inlet, species, outlets, matter)
        if species == "H2O":
            made = [("hydrogen", "H2"), ("hydrogen", "H2O"), ("oxygen", "O2"), ("oxygen", "H2O")]
            made += [("oxygen", "H2")] if MODELS[self.model].leaks else []
            return [pair for pair in made if pair[0] in outlets]
        return [("oxygen", species)] if "oxygen" in outlets else []

    def _hot_destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> list[tuple[str, str]]:
        if inlet == "sweep":
            return [("oxygen", species)] if "oxygen" in outlets else []
        found: list[tuple[str, str]] = []
        if "hydrogen" in outlets:
            found += exchanging(species, solid_oxide.SPECIES, ("hydrogen",), matter)
        if "oxygen" in outlets and species in ("H2O", "CO2"):
            found.append(("oxygen", "O2"))
        return found

    @property
    def _oxygen_pressure(self) -> float:
        return (self.pem.oxygen_pressure if self.pem else None) or self.pressure

    def outlet_pressures(self, inlets: Mapping[str, tuple[float, ...]]) -> dict[str, float]:
        return {"hydrogen": self.pressure, "oxygen": self._oxygen_pressure}

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        return lower_feed(inlets, self._oxygen_pressure)

    # --- physics -----------------------------------------------------------------------------

    @property
    def drawn(self) -> float:
        """Power drawn per direct current."""
        return 1.0 / self.rectifier + self.auxiliaries

    def sizing(self, density: float | None = None) -> Sizing:
        """What the settings say of the stack's size."""
        known = self.current_density if density is None else density
        return Sizing(self.drawn, known, self.cell_area, self.rating)

    def _stack(self, feeds: Feeds, site: Site) -> _Stack:
        if self.solid_oxide is not None:
            return self._hot_stack(self.solid_oxide, feeds, site)
        gases = LiquidFed(
            material(feeds, "water"),
            site.matter,
            self.temperature,
            self.pressure,
            self._oxygen_pressure,
        )
        return _Stack(self.liquid_curve(), gases, {"water": gases.unmet} if gases.unmet else {})

    def liquid_curve(self) -> Curve:
        """The voltage of a cell by current density, for all models but solid-oxide."""
        if self.pem is not None:
            return self.pem.curve(self.temperature, self.pressure)
        if self.alkaline is not None:
            return self.alkaline.curve(self.temperature, self.pressure)
        if self.curve is not None:
            net = self.faraday_efficiency or 1.0
            return MeasuredCurve.at(self.curve, self.temperature, self.pressure, net)
        constant = self.voltage
        if constant is None:
            assert self.energy_use is not None
            constant = self.energy_use * hydrogen_mass() / (2.0 * FARADAY)
        return ConstantCurve(reversible_voltage(self.temperature), constant)

    def _hot_stack(self, cell: SolidOxideCell, feeds: Feeds, site: Site) -> _Stack:
        feed, matter = material(feeds, "water"), site.matter
        sweep = material(feeds, "sweep") if "sweep" in feeds else None
        found = solid_oxide.converted(cell, feed.flows, matter, self.temperature, self.pressure)
        if found is None:
            text = "what is served at 'water' holds too little H2O or CO2 to be electrolysed"
            return _Stack(ConstantCurve(1.0, 1.0), None, {"water": text})
        entry = cell.entry or self.temperature
        gases = SteamFed(
            feed, sweep, found, cell.sweep_ratio, matter, entry, self.temperature, self.pressure
        )
        share = float(sweep.fraction("O2")) if sweep is not None else 1.0
        ratio = cell.sweep_ratio if sweep is not None else 0.0
        pressures = solid_oxide.oxygen_pressure(share, ratio, self.pressure)
        along = solid_oxide.along(
            cell, found.gas, found.oxygen_along, pressures, self.temperature, 1.0
        )
        return _Stack(solid_oxide.SolidOxideCurve(along, gases.net), gases, {})

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        stack = self._stack(feeds, site)
        if stack.gases is None:
            return self._idle(feeds, stack.unmet, site)
        sizing = self.sizing(self._neutral_density(stack, site))
        at = self._working(sizing, stack.curve, feeds)
        made = stack.gases.made(at.gross, at.share, site)
        heat = _without_round_off(made.leaving, -made.heated, -at.direct)
        power = at.direct * self.drawn
        duties, drawn, given = self._settled(at, made, heat, site)
        results, cautions = (
            stack_report.report(self, stack, at, made, heat, feeds, site)
            if site.detail
            else ({}, ())
        )
        return Outcome(
            {**made.gases, **given},
            drawn | ({"power": power} if self.calls_for_power else {}),
            duties,
            power=power,
            results=results,
            cautions=cautions,
            unmet=stack.unmet,
            inner=(stack, sizing, at, made),
        )

    def _idle(self, feeds: Feeds, unmet: dict[str, str], site: Site) -> Outcome:
        """Nothing is made of a feed that cannot be used."""
        power = 0.0 if self.calls_for_power else max(rate(feeds, "power"), 0.0)
        level = self.temperature
        nothing = Stream.empty(site.matter, level, self.pressure)
        lost = Duty("stack", -power, level, level, level, "ambient")
        drawn: dict[str, Any] = {"water": 0.0}
        drawn |= {"power": 0.0} if self.calls_for_power else {}
        drawn |= {"sweep": 0.0} if "sweep" in feeds else {}
        gases = {"hydrogen": nothing, "oxygen": nothing}
        return Outcome(dict(gases), drawn, (lost,), power=power, unmet=unmet)

    def _neutral_density(self, stack: _Stack, site: Site) -> float | None:
        """Current density at which a solid-oxide stack neither takes nor gives heat [A/m2]."""
        if self.solid_oxide is None or not self.solid_oxide.thermoneutral:
            return None
        assert isinstance(stack.gases, SteamFed)
        assert isinstance(stack.curve, solid_oxide.SolidOxideCurve)
        one = stack.gases.made(1.0, stack.curve.share(0.0), replace(site, detail=False))
        return stack.curve.cell.density((one.leaving - one.heated) / (2.0 * FARADAY))

    def _working(self, sizing: Sizing, curve: Curve, feeds: Feeds) -> Working:
        if self.hydrogen is not None:
            per = hydrogen_mass() if self.hydrogen.per == "kg" else 1.0
            return sizing.by_hydrogen(curve, self.hydrogen.value / per)
        if self.calls_for_power:
            return sizing.as_given(curve)
        # below zero only while a plant that is short is being solved
        return sizing.by_power(curve, max(rate(feeds, "power"), 0.0))

    def _settled(
        self, at: Working, made: Made, heat: float, site: Site
    ) -> tuple[tuple[Duty, ...], dict[str, Any], dict[str, Any]]:
        """Duties, what is asked for and the heat given off."""
        level, around = self.temperature, site.ambient
        entry = (self.solid_oxide.entry if self.solid_oxide else None) or level
        losses = (
            ("rectifier loss", at.direct * (1.0 / self.rectifier - 1.0)),
            ("auxiliaries", at.direct * self.auxiliaries),
        )
        needs = [
            *made.heating,
            Duty.between("stack", heat, entry, level),
            *(Duty(name, -loss, around, around, around, "ambient") for name, loss in losses),
        ]
        # `power` feeds the cells, not a heater
        beside = replace(site, inlets=site.inlets - {"power"})
        kept = [d for d in needs if d.heat != 0.0 or d.purpose == "stack"]
        duties, _, drawn, given = self.settle(kept, beside)
        return duties, drawn | made.drawn, given

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        if outcome.unmet or site.inlets & {"heat"} or "heat" in site.outlets:
            return {}
        stack, sizing, at, made = outcome.inner
        by_water = None if sizing.follows_curve and self.solid_oxide else stack.gases.by_water(made)
        known = {} if by_water is None else {"water": by_water}
        if self.calls_for_power:
            return known
        found = sizing.slopes(stack.curve, at)
        if found is None:
            return known
        growth, change = found
        by_power = stack.gases.by_power(made, growth / at.gross, change)
        return known if by_power is None else known | {"power": by_power}


def _without_round_off(*terms: float) -> float:
    """Return a sum, or zero where it is nothing but the round-off of its terms."""
    total = sum(terms)
    return total if abs(total) > _ROUND_OFF * sum(abs(term) for term in terms) else 0.0
