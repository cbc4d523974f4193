"""The alkaline cell: a published empirical curve, or a physical model of its parts.

SI throughout: current density [A/m2], voltage [V], temperature [K], pressure [Pa], length [m].
The empirical curve was measured at 7 bar, which is within its numbers: at another pressure the
difference of Nernst's terms is added, and activation never falls below zero. The physical model
adds two electrodes partly covered by bubbles, the gaps filled with bubbly lye, and the diaphragm.
Hydrogen in oxygen is a flux that does not depend on the current (diffusion and mixing of the lye,
after the structure of Haug et al., Int. J. Hydrogen Energy 42 (2017) 9406) and grows with pressure.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from math import inf, log, log10
from typing import Annotated, Any, Literal

from pydantic import BaseModel, ConfigDict, Field, model_validator

from chainflow.basis.constants import FARADAY, GAS_CONSTANT
from chainflow.basis.quantities import Length, measured
from chainflow.equipment.cells.losses import Losses, Share, VoltageCurve, activation
from chainflow.equipment.cells.pem import (
    AreaResistance,
    LimitingCurrent,
    completed,
)
from chainflow.equipment.published import (
    abdin_2017,
    gilliam_2007,
    hammoudi_2012,
    henao_2014,
    leroy_1980,
    ulleberg_1998,
    ulleberg_2003,
)
from chainflow.thermo.electrochemistry import nernst_shift, reversible_voltage
from chainflow.thermo.water import saturation_pressure

COLDEST, HOTTEST = 293.15, 363.15  # [K], beyond which the published curves are refused
HIGHEST_DENSITY = ulleberg_1998.HIGHEST_DENSITY
SOURCES = (
    ulleberg_1998.SOURCE,
    ulleberg_2003.SOURCE,
    gilliam_2007.SOURCE,
    leroy_1980.SOURCE,
    henao_2014.SOURCE,
    abdin_2017.SOURCE,
    hammoudi_2012.SOURCE,
)
SETS: dict[str, dict[str, float]] = {
    "ulleberg-1998": ulleberg_1998.NUMBERS,
    "ulleberg-2003": ulleberg_2003.NUMBERS,
}
# 2 % hydrogen in oxygen at a fifth of 0.3 A/cm2 and 7 bar: a trade figure of 20 % minimum load (R)
_LEAK_AT_7_BAR = 0.02 * 0.2 * 3000.0 / (4.0 * FARADAY)  # [mol/(m2 s)]
_LEAK = _LEAK_AT_7_BAR / 7e5  # [mol/(m2 s Pa)]
_KOH_MASS = 56.1056e-3  # [kg/mol]

_N = ulleberg_1998.NUMBERS
_F = ulleberg_1998.FARADAY

Lye = Annotated[float, measured("1", ge=0.1, le=0.45)]
Ohm = Annotated[float, measured("ohm*m2")]
OhmSlope = Annotated[float, measured("ohm*m2/K")]
OhmBend = Annotated[float, measured("ohm*m2/K2")]
Volt = Annotated[float, measured("V")]
VoltSlope = Annotated[float, measured("V/K")]
VoltBend = Annotated[float, measured("V/K2")]
PerDensity = Annotated[float, measured("m2/A")]
PerDensityK = Annotated[float, measured("m2*K/A")]
PerDensityK2 = Annotated[float, measured("m2*K2/A")]
SquaredDensity = Annotated[float, measured("A2/m4", ge=0)]
SquaredDensityK = Annotated[float, measured("A2/(m4*K)")]
NetShare = Annotated[float, measured("1", gt=0, le=1)]
NetShareK = Annotated[float, measured("1/K")]
LeakPressure = Annotated[float, measured("mol/(m2*s*Pa)", ge=0)]

Electrode = Callable[[float], tuple[float, float]]
_KINETICS: dict[str, tuple[Electrode, Electrode]] = {
    "henao-2014": (henao_2014.anode, henao_2014.cathode),
    "abdin-2017": (abdin_2017.anode, abdin_2017.cathode),
}


class AlkalineCell(BaseModel):
    """Numbers of an alkaline electrolyser; temperatures in the coefficients count in degC."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    method: Literal["empirical", "physical"] = Field(
        "empirical", description="the published curve, or electrodes, lye, diaphragm and bubbles"
    )
    set: Literal["ulleberg-1998", "ulleberg-2003"] = Field(
        "ulleberg-1998", description="published numbers of the empirical curve"
    )
    r1: Ohm = Field(_N["r1"], description="resistance")
    r2: OhmSlope = Field(_N["r2"], description="resistance per degC")
    r3: OhmBend = Field(_N["r3"], description="resistance per degC squared")
    s1: Volt = Field(_N["s1"], description="activation per decade")
    s2: VoltSlope = Field(_N["s2"], description="activation per decade and degC")
    s3: VoltBend = Field(_N["s3"], description="activation per decade and degC squared")
    t1: PerDensity = Field(_N["t1"], description="activation, by current density")
    t2: PerDensityK = Field(_N["t2"], description="activation, by current density, over degC")
    t3: PerDensityK2 = Field(_N["t3"], description="the same over degC squared")
    f11: SquaredDensity = Field(_F["f11"] * 100.0, description="Faraday efficiency, f1 at 0 degC")
    f12: SquaredDensityK = Field(_F["f12"] * 100.0, description="rise of f1 per degC")
    f21: NetShare = Field(_F["f21"], description="Faraday efficiency, f2 at 0 degC")
    f22: NetShareK = Field(_F["f22"], description="rise of f2 per degC")
    lye: Lye = Field(0.30, description="mass share of KOH in the lye")
    gap: Length = Field(1.25e-3, description="between electrode and diaphragm; 0 mm for zero gap")
    kinetics: Literal["henao-2014", "abdin-2017"] = Field(
        "henao-2014", description="published electrodes of the physical model"
    )
    roughness: Annotated[float, measured("1", gt=0, le=1e6)] = Field(
        1.0, description="factor on both exchange currents"
    )
    diaphragm_resistance: AreaResistance | None = Field(
        None, description="instead of the published one by temperature"
    )
    limiting_current: LimitingCurrent = Field(
        hammoudi_2012.LIMITING_CURRENT, description="current density of full bubble cover"
    )
    hydrogen_leak: LeakPressure = Field(
        _LEAK, description="hydrogen into the oxygen by area and pressure, whatever the current"
    )

    @model_validator(mode="before")
    @classmethod
    def _of_set(cls, given: Any) -> Any:
        return completed(given, SETS, "ulleberg-1998")

    def curve(self, temperature: float, pressure: float) -> EmpiricalCurve | PhysicalCurve:
        """Return the cell at a temperature and pressure."""
        if self.method == "physical":
            return self._physical(temperature, pressure)
        standard = reversible_voltage(temperature)
        return EmpiricalCurve(
            self,
            temperature - 273.15,
            standard + _rise(temperature, pressure),
            _rise(temperature, ulleberg_1998.PRESSURE),
            self.hydrogen_leak * pressure,
        )

    def _physical(self, temperature: float, pressure: float) -> PhysicalCurve:
        molar = gilliam_2007.molarity(self.lye, temperature)
        molal = self.lye / (_KOH_MASS * (1.0 - self.lye))
        vapour = leroy_1980.vapour_pressure(molal, temperature)
        dry = pressure - vapour
        activity = vapour / saturation_pressure(temperature)
        lowered = GAS_CONSTANT * temperature / (2.0 * FARADAY) * log(activity)
        reversible = reversible_voltage(temperature) + nernst_shift(temperature, dry, dry)
        diaphragm = self.diaphragm_resistance
        if diaphragm is None:
            diaphragm = hammoudi_2012.diaphragm_resistance(temperature)
        anode, cathode = (electrode(temperature) for electrode in _KINETICS[self.kinetics])
        return PhysicalCurve(
            self,
            temperature,
            pressure,
            vapour,
            reversible - lowered,
            anode,
            cathode,
            2.0 * self.gap / gilliam_2007.conductivity(molar, temperature),
            diaphragm,
            self.hydrogen_leak * pressure,
        )

    def share(self, density: float, leak: float, temperature: float) -> Share:
        """Where the hydrogen goes; `leak` is the flux into the oxygen [mol/(m2 s)]."""
        warmth = temperature - 273.15
        f1 = self.f11 + self.f12 * warmth
        if density <= 0.0:
            return Share(0.0, 0.0)
        net = density**2 / (f1 + density**2) * min(self.f21 + self.f22 * warmth, 1.0)
        return Share(net, min(leak * 2.0 * FARADAY / density, 1.0 - net))


def _rise(temperature: float, pressure: float) -> float:
    """Return what the pressure adds to the reversible voltage over 1 bar [V]."""
    dry = pressure - saturation_pressure(temperature)
    return nernst_shift(temperature, dry, dry)


@dataclass(frozen=True, slots=True)
class EmpiricalCurve(VoltageCurve):
    """An alkaline cell after the published curve."""

    cell: AlkalineCell
    celsius: float
    reversible: float  # [V]
    within: float  # what the pressure of the published stack adds to its reversible voltage [V]
    leak: float  # [mol/(m2 s)]
    limit: float = inf

    def losses(self, density: float) -> Losses:
        """The voltage by its parts."""
        cell, t = self.cell, self.celsius
        slope = cell.s1 + cell.s2 * t + cell.s3 * t**2
        steep = cell.t1 + cell.t2 / t + cell.t3 / t**2
        active = slope * log10(max(steep, 0.0) * density + 1.0)
        resistance = cell.r1 + cell.r2 * t + cell.r3 * t**2
        return Losses(self.reversible, max(active - self.within, 0.0), resistance * density)

    def share(self, density: float) -> Share:
        """Where the hydrogen goes."""
        return self.cell.share(density, self.leak, self.celsius + 273.15)


@dataclass(frozen=True, slots=True)
class PhysicalCurve(VoltageCurve):
    """An alkaline cell by its parts; each electrode as (transfer number, exchange current)."""

    cell: AlkalineCell
    temperature: float
    pressure: float
    vapour: float  # [Pa] over the lye
    reversible: float  # [V]
    anode: tuple[float, float]
    cathode: tuple[float, float]
    gaps: float  # both gaps without bubbles [ohm m2]
    diaphragm: float  # [ohm m2]
    leak: float  # [mol/(m2 s)]
    limit: float = inf

    def losses(self, density: float) -> Losses:
        """The voltage by its parts."""
        cover = hammoudi_2012.bubble_cover(
            density, self.temperature, self.pressure, self.vapour, self.cell.limiting_current
        )
        anode, cathode = (
            activation(
                density,
                exchange * self.cell.roughness * (1.0 - cover),
                transfer,
                self.temperature,
            )
            for transfer, exchange in (self.anode, self.cathode)
        )
        gaps = self.gaps / (1.0 - 2.0 / 3.0 * cover) ** 1.5
        return Losses(
            self.reversible,
            anode + cathode,
            density * (gaps + self.diaphragm),
            anode=anode,
            cathode=cathode,
        )

    def share(self, density: float) -> Share:
        """Where the hydrogen goes."""
        return self.cell.share(density, self.leak, self.temperature)
