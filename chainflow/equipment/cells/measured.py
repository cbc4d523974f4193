"""A cell known by measurement: voltage by current density at one or several temperatures.

SI throughout: current density [A/m2], voltage [V], temperature [K], pressure [Pa]. Between points
of one temperature a monotone cubic (Fritsch and Carlson, SIAM J. Numer. Anal. 17 (1980) 238),
between temperatures straight; outside the temperatures the nearest curve holds, above the highest
current density the last slope goes on, below the lowest the curve goes to the reversible voltage.
"""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache
from itertools import pairwise
from math import inf
from typing import Annotated, Any

from pydantic import (
    AfterValidator,
    BaseModel,
    BeforeValidator,
    ConfigDict,
    Field,
    ValidationInfo,
    WithJsonSchema,
    model_validator,
)
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import CurrentDensity, Temperature, Voltage
from chainflow.equipment.cells.curve_file import CurveFault, read_curve
from chainflow.equipment.cells.losses import Losses, Share, VoltageCurve
from chainflow.thermo.electrochemistry import nernst_shift, reversible_voltage
from chainflow.thermo.water import saturation_pressure


class Branch(BaseModel):
    """Points measured at one temperature, current density rising."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    temperature: Temperature | None = Field(None, description="temperature of the cell")
    current_density: tuple[CurrentDensity, ...] = Field(description="rising")
    voltage: tuple[Voltage, ...] = Field(description="of one cell, one for each current density")

    @model_validator(mode="after")
    def _rising(self) -> Branch:
        trouble = _trouble(self.current_density, self.voltage)
        if trouble:
            raise PydanticCustomError("curve", "{text}", {"text": trouble})
        return self


def _trouble(densities: Sequence[float], voltages: Sequence[float]) -> str:
    if len(densities) != len(voltages):
        return (
            f"{len(densities)} current densities and {len(voltages)} voltages are given, "
            "wanted as many of the one as of the other"
        )
    if len(densities) < 2:
        return f"{len(densities)} point is given, wanted at least two at each temperature"
    for (i, j), (u, v) in zip(pairwise(densities), pairwise(voltages), strict=True):
        if not j > i:
            return (
                f"{j / 1e4:.6g} A/cm2 follows {i / 1e4:.6g} A/cm2, wanted rising current densities"
            )
        if v < u:
            return (
                f"the voltage falls from {u:.6g} V to {v:.6g} V at {j / 1e4:.6g} A/cm2, "
                "wanted a curve that rises"
            )
    return ""


def _branches(given: Any, info: ValidationInfo) -> Any:
    """Read a file that is named; relative to the folder of the flowsheet if there is one."""
    if isinstance(given, dict):
        return (given,)
    if not isinstance(given, str):
        return given
    folder = (info.context or {}).get("folder", "")
    try:
        return read_curve(given, folder)
    except CurveFault as fault:
        raise PydanticCustomError("curve", "{text}", {"text": str(fault)}) from None


def _together(branches: tuple[Branch, ...]) -> tuple[Branch, ...]:
    """Return the branches by rising temperature, if they fit together."""
    levels = [branch.temperature for branch in branches]
    if not branches:
        raise PydanticCustomError("curve", "the curve has no points", {})
    if len(branches) > 1 and (None in levels or len(set(levels)) < len(levels)):
        text = "several curves are given, wanted one for each temperature and each with its own"
        raise PydanticCustomError("curve", "{text}", {"text": text})
    return tuple(sorted(branches, key=lambda branch: branch.temperature or 0.0))


MeasuredCurves = Annotated[
    tuple[Branch, ...],
    BeforeValidator(_branches),
    AfterValidator(_together),
    WithJsonSchema(
        {
            "type": ["string", "object", "array"],
            "description": "a CSV file with units in its headings, as 'current density [A/cm2]', "
            "'voltage [V]', 'temperature [degC]'; or maps with lists of these",
        }
    ),
]


@dataclass(frozen=True, slots=True)
class MeasuredCurve(VoltageCurve):
    """A measured cell in its state."""

    branches: tuple[Branch, ...]
    temperature: float
    reversible: float
    faraday: float
    limit: float = inf

    @staticmethod
    def at(
        branches: tuple[Branch, ...], temperature: float, pressure: float, faraday: float
    ) -> MeasuredCurve:
        """Return the cell at a temperature and pressure."""
        dry = pressure - saturation_pressure(temperature)
        reversible = reversible_voltage(temperature) + nernst_shift(temperature, dry, dry)
        return MeasuredCurve(branches, temperature, reversible, faraday)

    def losses(self, density: float) -> Losses:
        """The reversible voltage and the sum of all losses."""
        return Losses(self.reversible, unsplit=self.voltage(density) - self.reversible)

    def voltage(self, density: float) -> float:
        """The voltage [V]."""
        found = self.branches
        levels = [branch.temperature or self.temperature for branch in found]
        place = bisect_right(levels, self.temperature)
        if place == 0 or place == len(found):
            return self._on(found[max(place - 1, 0)], density)
        low, high = levels[place - 1], levels[place]
        share = (self.temperature - low) / (high - low)
        cold, warm = (self._on(found[i], density) for i in (place - 1, place))
        return cold + share * (warm - cold)

    def _on(self, branch: Branch, density: float) -> float:
        densities, voltages = branch.current_density, branch.voltage
        if densities[0] > 0.0 and voltages[0] > self.reversible:
            densities, voltages = (0.0, *densities), (self.reversible, *voltages)
        return _interpolated(densities, voltages, density)

    def share(self, density: float) -> Share:
        """Where the hydrogen goes; none into the oxygen."""
        return Share(self.faraday, 0.0)

    def outside(self, density: float) -> str:
        """Say how a state lies outside the measurements; empty if it does not."""
        highest = max(branch.current_density[-1] for branch in self.branches)
        if density > highest * (1.0 + 1e-9):
            return (
                f"{density / 1e4:.4g} A/cm2 is above the {highest / 1e4:.4g} A/cm2 "
                "that were measured: the last slope goes on"
            )
        levels = [b.temperature for b in self.branches if b.temperature is not None]
        if levels and not levels[0] - 0.5 <= self.temperature <= levels[-1] + 0.5:
            return (
                f"{self.temperature - 273.15:.4g} degC is outside the "
                f"{levels[0] - 273.15:.4g} to {levels[-1] - 273.15:.4g} degC that were measured: "
                "the nearest curve holds"
            )
        return ""


def _interpolated(
    densities: tuple[float, ...], voltages: tuple[float, ...], density: float
) -> float:
    slopes = _slopes(densities, voltages)
    if density >= densities[-1]:
        return voltages[-1] + slopes[-1] * (density - densities[-1])
    place = max(bisect_right(densities, density) - 1, 0)
    width = densities[place + 1] - densities[place]
    t = (density - densities[place]) / width
    if t < 0.0:
        return voltages[0] + slopes[0] * (density - densities[0])
    left, right = voltages[place], voltages[place + 1]
    return (
        (1.0 + 2.0 * t) * (1.0 - t) ** 2 * left
        + t * (1.0 - t) ** 2 * width * slopes[place]
        + t**2 * (3.0 - 2.0 * t) * right
        + t**2 * (t - 1.0) * width * slopes[place + 1]
    )


@lru_cache(maxsize=64)
def _slopes(densities: tuple[float, ...], voltages: tuple[float, ...]) -> tuple[float, ...]:
    """Slopes at the points that keep the cubic monotone; at the ends those of the end pieces."""
    widths = [b - a for a, b in pairwise(densities)]
    pieces = [(b - a) / w for (a, b), w in zip(pairwise(voltages), widths, strict=True)]
    inner = []
    for (w, x), (d, e) in zip(pairwise(widths), pairwise(pieces), strict=True):
        first, second = 2.0 * x + w, x + 2.0 * w
        inner.append(0.0 if d * e <= 0.0 else (first + second) / (first / d + second / e))
    return (pieces[0], *inner, pieces[-1])
