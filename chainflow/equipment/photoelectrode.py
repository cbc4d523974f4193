"""Photoelectrode: light and water to hydrogen and oxygen, with or without a solar cell in series.

SI throughout: light and power [W], flows [mol/s], temperature [K], pressure [Pa], voltage [V],
current density [A/m2] of the device's aperture, which is all that the light falls on. The parts are
in `chainflow.equipment.photo`; this module is the kind: settings, balance, slopes.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import replace
from math import inf
from typing import Annotated, Any, ClassVar, Literal, NamedTuple

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.constants import FARADAY
from chainflow.basis.quantities import (
    BandGap,
    OpenFraction,
    Pressure,
    Temperature,
    Voltage,
    measured,
)
from chainflow.equipment.base import (
    HEAT_PORTS,
    Array,
    Caution,
    Duty,
    Equipment,
    Light,
    Outcome,
    Port,
    Role,
    Site,
    light,
    material,
)
from chainflow.equipment.cells.gases import LiquidFed, Made
from chainflow.equipment.cells.losses import Share
from chainflow.equipment.photo import device_report
from chainflow.equipment.photo.cell_curve import MeasuredCell
from chainflow.equipment.photo.circuit import Circuit
from chainflow.equipment.photo.device_formulas import FORMULAS, SOURCES
from chainflow.equipment.photo.device_settings import (
    HYDROGEN_ELECTRODE,
    OXYGEN_ELECTRODE,
    DarkElectrode,
    ElectrodeShape,
    Resistance,
    SolarCell,
    light_of_cell,
    plateau,
    setting_faults,
    wrong_together,
)
from chainflow.equipment.photo.electrode_curves import (
    ElectrodeCurve,
    MeasuredElectrode,
    ShapedElectrode,
)
from chainflow.equipment.photo.junctions import Junction, Source
from chainflow.equipment.photo.light_paths import Paths, current_above, light_paths
from chainflow.equipment.photo.measured_points import (
    EfficiencyCurve,
    PhotoCurveSetting,
    QuantumEfficiency,
)
from chainflow.equipment.ports import Feeds
from chainflow.equipment.pressures import lower_feed
from chainflow.equipment.sun.photons import FULL_SUN
from chainflow.thermo.components import Matter
from chainflow.thermo.detailed_balance import emission, thermal_voltage
from chainflow.thermo.electrochemistry import nernst_shift, reversible_voltage
from chainflow.thermo.water import saturation_pressure

_POWER = Port(
    "power",
    "power",
    Role.CALLS,
    optional=True,
    means="electricity for the bias; without a line it is bought",
)


USUAL_EFFICIENCY = 0.8  # of a good absorber in the light it takes, our own


class Work(NamedTuple):
    """A device at work."""

    light: Light
    paths: Paths
    circuit: Circuit
    made: Made
    heat: float  # into the device, without what warms the water [W]

    @property
    def current(self) -> float:
        """The current of the whole device [A]."""
        return self.circuit.density * self.light.area


class Photoelectrode(Equipment):
    """Splits water with light: H2O -> H2 + 1/2 O2 at a photoanode or a photocathode.

    The light it passes goes on to a solar cell behind it, or a cell stands beside it; the same
    current flows through all, and the device works where the curves cross. It is as large as the
    light that falls on it. Gases that cross a separator are not counted: in dim light hydrogen in
    the oxygen can become flammable, so real devices have a separator and watch it.
    """

    kind: ClassVar[str] = "photoelectrode"
    family: ClassVar[str] = "electrolysis"
    makes: ClassVar[bool] = True
    gives: ClassVar[tuple[str, ...]] = device_report.RESULTS
    ports: ClassVar[tuple[Port, ...]] = (
        Port("light", "light", Role.TAKES, main=True, means="light on the device"),
        Port(
            "water",
            "material",
            Role.CALLS,
            means="water for the reaction and for the moisture of both gases",
        ),
        Port("hydrogen", "material", Role.OFFERS, main=True, means="saturated with water"),
        Port("oxygen", "material", Role.OFFERS, optional=True, means="saturated with water"),
        _POWER,
        HEAT_PORTS[1],
        HEAT_PORTS[2],
    )
    formulas: ClassVar[tuple[str, ...]] = FORMULAS
    sources: ClassVar[tuple[str, ...]] = SOURCES

    electrode: Literal["photoanode", "photocathode"] = Field(
        "photoanode", description="whether the lit electrode makes oxygen or hydrogen"
    )
    band_gap: BandGap = Field(description="of the photoelectrode")
    quantum_efficiency: QuantumEfficiency | None = Field(
        None,
        description="electrons per photon that arrives above the gap, before the two factors; "
        "a share or a CSV file by wavelength (80 %)",
    )
    separation: OpenFraction | None = Field(
        None, description="share of these charges that gets to the surface (100 %)"
    )
    catalyst: OpenFraction | None = Field(
        None, description="share of the charges at the surface that splits water (100 %)"
    )
    reflection: Annotated[float, measured("1", ge=0, lt=1)] = Field(
        0.05, description="light that does not get in"
    )
    absorption: OpenFraction = Field(
        0.95, description="share absorbed of what gets in and lies above the gap"
    )
    shape: ElectrodeShape | None = Field(
        None, description="current by potential in the light, as a step"
    )
    curve: PhotoCurveSetting | None = Field(
        None, description="current by potential in the light, measured"
    )
    measured_at: Annotated[float, measured("W/m2", gt=0)] | None = Field(
        None, description="irradiance of the measured curve (1000 W/m2)"
    )
    conduction_edge: Voltage | None = Field(
        None, description="conduction band edge, to check whether water can be split at all"
    )
    cell: SolarCell | None = Field(None, description="solar cell in series")
    bias: Annotated[float, measured("V", ge=0)] = Field(
        0.0, description="voltage that a power source adds"
    )
    counter_electrode: DarkElectrode | None = Field(
        None, description="left out: 30 mV and 1 mA/cm2 (hydrogen), 50 mV and 1 nA/cm2 (oxygen)"
    )
    dark_electrode: DarkElectrode | None = Field(
        None,
        description="the photoelectrode's own catalyst without light, only to say what the "
        "light supplies; defaults as for the counter-electrode",
    )
    electrolyte_resistance: Resistance = Field(
        5e-4, description="of the electrolyte and the separator, by the aperture"
    )
    faraday_efficiency: OpenFraction = Field(
        1.0, description="hydrogen per hydrogen that the current could make"
    )
    temperature: Temperature = Field(
        298.15, description="of device and solar cell; both gases leave at it"
    )
    pressure: Pressure = Field(1e5, description="pressure of both gases, absolute")

    @model_validator(mode="after")
    def _fits(self) -> Photoelectrode:
        trouble = wrong_together(self)
        if trouble:
            raise PydanticCustomError("photoelectrode", "{text}", {"text": trouble})
        return self

    # --- structure ---------------------------------------------------------------------------

    @property
    def direction(self) -> float:
        """The sign that makes a potential a driving one."""
        return 1.0 if self.electrode == "photoanode" else -1.0

    def port_list(self) -> tuple[Port, ...]:
        return self.ports if self.bias else tuple(p for p in self.ports if p is not _POWER)

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        return setting_faults(self, matter)

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        if species == "H2O":
            made = [("hydrogen", "H2"), ("hydrogen", "H2O"), ("oxygen", "O2"), ("oxygen", "H2O")]
            return [pair for pair in made if pair[0] in outlets]
        return [("oxygen", species)] if "oxygen" in outlets else []

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        return lower_feed(inlets, self.pressure)

    # --- physics -----------------------------------------------------------------------------

    @property
    def efficiency_points(self) -> float | tuple[tuple[float, ...], tuple[float, ...]]:
        """The quantum efficiency: constant, or by rising wavelength [m]."""
        given = self.quantum_efficiency
        if isinstance(given, EfficiencyCurve):
            return given.sorted()
        return USUAL_EFFICIENCY if given is None else given

    @property
    def reversible(self) -> float:
        """The voltage below which water cannot be split at this temperature and pressure [V]."""
        dry = self.pressure - float(saturation_pressure(self.temperature))
        return reversible_voltage(self.temperature) + nernst_shift(self.temperature, dry, dry)

    @property
    def dark_laws(self) -> tuple[DarkElectrode, DarkElectrode]:
        """Counter-electrode, and the photoelectrode's own catalyst without light."""
        usual = (HYDROGEN_ELECTRODE, OXYGEN_ELECTRODE)[:: 1 if self.direction > 0.0 else -1]
        return self.counter_electrode or usual[0], self.dark_electrode or usual[1]

    @property
    def paths(self) -> Paths:
        """Where the light goes."""
        gaps = self.cell.gaps if self.cell else ()
        beside = self.cell.beside if self.cell else 0.0
        return light_paths(self.band_gap, self.reflection, self.absorption, gaps, beside)

    def circuit(self, irradiance: float) -> Circuit:
        """Return the device in its light [W/m2]."""
        counter, _ = self.dark_laws
        return Circuit(
            self._electrode(irradiance),
            1.0 - (self.cell.beside if self.cell else 0.0),
            self._junctions(irradiance),
            counter.law,
            self.electrolyte_resistance,
            0.0 if self.direction > 0.0 else self.reversible,
            self.bias,
        )

    def _electrode(self, irradiance: float) -> ElectrodeCurve:
        if self.curve is not None:
            points = self.curve.cleaned(self.direction)
            return MeasuredElectrode(*points, irradiance / (self.measured_at or FULL_SUN))
        assert self.shape is not None
        onset, half = (self.direction * v for v in (self.shape.onset, self.shape.half_wave))
        return ShapedElectrode(onset, half, self.shape.width, plateau(self) * irradiance)

    def _junctions(self, irradiance: float) -> tuple[Source, ...]:
        cell = self.cell
        if cell is None:
            return ()
        if cell.curve is not None:
            return (self._measured_cell(cell, irradiance),)
        count, part = cell.in_series, cell.beside or 1.0
        level = cell.ideality * thermal_voltage(self.temperature)
        wide = count * count / part  # a cell has `part / count` of the aperture, `count` add up
        shunt = inf if cell.shunt_resistance is None else cell.shunt_resistance * wide
        found: list[Source] = []
        for taken in self.paths.junctions:
            full = FULL_SUN * current_above(taken.gap)
            dark = emission(taken.gap, self.temperature) / cell.radiative_efficiency
            dark = full * (dark / full) ** (1.0 / cell.ideality)
            made = cell.quantum_efficiency * taken.photons * irradiance / count
            series = cell.series_resistance * wide
            found.append(Junction(made, dark * part / count, level * count, series, shunt))
        return tuple(found)

    def _measured_cell(self, cell: SolarCell, irradiance: float) -> MeasuredCell:
        """A measured cell in its light: of all its junctions that with the fewest photons tells."""
        assert cell.curve is not None
        part = cell.beside or 1.0
        now = min(taken.photons for taken in self.paths.junctions) / part * irradiance
        then = light_of_cell(self) * (cell.measured_at or FULL_SUN)
        resistance = cell.series_resistance
        return MeasuredCell(cell.curve.cleaned(), now / then, cell.in_series, part, resistance)

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        arriving = light(feeds)
        gases = LiquidFed(
            material(feeds, "water"), site.matter, self.temperature, self.pressure, self.pressure
        )
        circuit = self.circuit(arriving.irradiance)
        current = circuit.density * arriving.area
        made = gases.made(current / (2.0 * FARADAY), Share(self.faraday_efficiency, 0.0), site)
        paths, power = self.paths, self.bias * current
        if gases.unmet:
            power, current = 0.0, 0.0
        absorbed = arriving.rate * (1.0 - paths.not_absorbed - paths.passed)
        heat = made.leaving - made.heated - absorbed - power
        work = Work(arriving, paths, circuit, made, heat)
        duties, drawn, given = self._settled(work, site)
        unmet = {"water": gases.unmet} if gases.unmet else self._unmet(arriving, circuit)
        results: dict[str, float] = {}
        cautions: tuple[Caution, ...] = ()
        if site.detail:
            results, cautions = device_report.report(self, work, material(feeds, "water"))
        return Outcome(
            {**made.gases, **given},
            drawn | ({"power": power} if self.bias else {}),
            duties,
            power=power,
            results=results,
            cautions=cautions,
            unmet=unmet,
            inner=(gases, work),
        )

    def _unmet(self, arriving: Light, circuit: Circuit) -> dict[str, str]:
        """Say that the curves do not cross, whatever the light."""
        if arriving.irradiance <= 0.0 or circuit.crosses:
            return {}
        if arriving.irradiance < FULL_SUN and self.circuit(FULL_SUN).crosses:
            return {}
        return {"hydrogen": device_report.no_crossing(circuit)}

    def _settled(
        self, work: Work, site: Site
    ) -> tuple[tuple[Duty, ...], dict[str, Any], dict[str, Any]]:
        """Duties, what is asked for and the heat given off."""
        level, around = self.temperature, site.ambient
        losses = (
            ("light not absorbed", work.paths.not_absorbed),
            ("light passed", work.paths.passed),
        )
        needs = [
            *(duty for duty in work.made.heating if duty.heat != 0.0),
            Duty.between("device", work.heat, level, level),
            *(
                Duty(name, -share * work.light.rate, around, around, around, "ambient")
                for name, share in losses
            ),
        ]
        beside = replace(site, inlets=site.inlets - {"power"})  # `power` is no heater
        duties, _, drawn, given = self.settle(needs, beside)
        return duties, drawn | work.made.drawn, given

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        if outcome.unmet or "heat" in site.inlets or "heat" in site.outlets:
            return {}
        gases, work = outcome.inner
        by_water = gases.by_water(work.made)
        known = {} if by_water is None else {"water": by_water}
        by_light = self._by_light(gases, work)
        if "power" in site.inlets and by_water is not None:
            size = len(site.matter.components) + 1
            known["water"] = {**by_water, "drawn:power": np.zeros((1, size))}
        return known if by_light is None else known | {"light": by_light}

    def _by_light(self, gases: LiquidFed, work: Work) -> dict[str, Array] | None:
        """Slopes by the watts and by the irradiance, which also says how large the device is."""
        arriving, circuit = work.light, work.circuit
        if not work.current > 0.0:
            return None
        power = circuit.by_electrode + circuit.by_cell - 1.0
        relative = np.array([1.0 / arriving.rate, power / arriving.irradiance, 0.0, 0.0, 0.0])
        gross = work.current / (2.0 * FARADAY)
        one = gases.by_power(work.made, 0.0, Share(gross * self.faraday_efficiency, 0.0))
        if one is None:
            return None
        found = {name: block * relative for name, block in one.items()}
        if self.bias:
            found["drawn:power"] = self.bias * work.current * relative[None, :]
        return found
