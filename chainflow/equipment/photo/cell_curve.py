"""Which voltage does a solar cell give whose curve was measured?

SI throughout: voltage [V], current density [A/m2], resistance [ohm m2]. Points come from a CSV file
with units in its headings, or as lists, in any order and either sign convention of the current;
they are cleaned as those of a photoelectrode (`chainflow.equipment.photo.measured_points`) and
joined by straight lines between short and open circuit. What lies beyond either is left out.

In other light the curve is moved as in procedure 1 of IEC 60891 at an equal temperature,
``J_2 = J_1 + (r - 1) J_sc`` and ``V_2 = V_1 - R_s (J_2 - J_1)`` with the ratio r of the light (M);
r is that of the photons that reach the junction which gets the fewest.
"""

from __future__ import annotations

from bisect import bisect_left
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache
from typing import Annotated, NamedTuple

from pydantic import BeforeValidator, Field, WithJsonSchema

from chainflow.basis.quantities import Voltage, measured
from chainflow.equipment.csv_points import CurveFault, Form, Wanted
from chainflow.equipment.photo.measured_points import (
    SCATTER,
    CurvePoint,
    FilePoints,
    from_file,
    levelled,
    merged,
    per_area,
    require_curve,
)

FALL = 1e-7  # [1/V], of the short-circuit current: what a flat piece falls at least, our own
_NEAR = 1e-9  # relative
_LEAST = 1e-3  # [A/m2], a current that counts as none
_NOTHING = 1e-6  # of the largest current, beyond open circuit: no light fell on the cell
_CURVE = Form(
    {
        "voltage": Wanted("V", "a voltage in V"),
        "current_density": Wanted("A/m2", "a current density in mA/cm2"),
    },
    "voltage [V], current density [mA/cm2]",
    ": divide by the area of the cell",
)


class CellCurve(FilePoints):
    """A measured curve of one solar cell in the light."""

    voltage: tuple[Voltage, ...] = Field(description="of one cell with all its junctions")
    current_density: tuple[Annotated[float, measured("A/m2")], ...] = Field(
        description="of the cell's own area, one for each voltage; either sign convention"
    )

    def cleaned(self) -> CellPoints:
        """Return the curve from short to open circuit. Raises `CurveFault`."""
        return _cleaned(self.voltage, self.current_density, self.places, self.prefix)


CellCurveSetting = Annotated[
    CellCurve,
    BeforeValidator(from_file(_CURVE, CellCurve)),
    WithJsonSchema({"type": ["string", "object"], "description": f"a CSV file: {_CURVE.example}"}),
]


class CellPoints(NamedTuple):
    """Voltages [V] that rise and current densities [A/m2] that fall."""

    voltages: tuple[float, ...]
    densities: tuple[float, ...]

    @property
    def short(self) -> float:
        """The current density at short circuit, or at the first voltage [A/m2]."""
        return self.densities[0]


@dataclass(frozen=True, slots=True)
class MeasuredCell:
    """A measured cell in its light; currents are of the device's aperture."""

    points: CellPoints
    ratio: float  # light per light it was measured in
    count: int  # equal cells in series
    part: float  # of the aperture that all of them have
    series: float  # of one cell, by its area [ohm m2]

    @property
    def light(self) -> float:
        """The current density at short circuit in its light [A/m2]."""
        return self.ratio * self.points.short * self.part / self.count

    @property
    def limit(self) -> float:
        """The current density that it does not exceed [A/m2]."""
        return self.light

    def voltage(self, density: float) -> float:
        """The voltage [V] at a current density up to the limit."""
        volts, _ = self._at(self._measured(density))
        return self.count * (volts + self.series * (1.0 - self.ratio) * self.points.short)

    def steepness(self, density: float) -> float:
        """Change of the voltage by the current density [V m2/A]; never above zero."""
        _, slope = self._at(self._measured(density))
        return self.count**2 / self.part * slope

    def by_light(self, density: float) -> float:
        """Change of the voltage by the light current [V m2/A]."""
        return -self.steepness(density) - self.count**2 / self.part * self.series

    def stray(self, density: float) -> str:
        """Say how a current lies outside what was measured; empty if it does not."""
        wanted, near = self._measured(density), _NEAR * self.points.short
        if wanted < self.points.densities[-1] - near:
            return "less current than the last measured point of the cell: its voltage is kept"
        if wanted >= self.points.short - near and self.points.voltages[0] > 0.0:
            return "below the first measured voltage of the cell: its current is kept"
        return ""

    def _measured(self, density: float) -> float:
        """The current density of the measured curve that stands for one of the device [A/m2]."""
        return density * self.count / self.part + (1.0 - self.ratio) * self.points.short

    def _at(self, density: float) -> tuple[float, float]:
        """Voltage [V] and its slope [V m2/A] on the measured curve."""
        volts, densities = self.points
        if density >= densities[0]:
            return volts[0], 0.0
        if density < densities[-1]:
            return volts[-1], 0.0
        place = bisect_left(densities, -density, key=lambda value: -value)
        high, low = densities[place - 1], densities[place]
        slope = (volts[place] - volts[place - 1]) / (low - high)
        return volts[place] + slope * (density - low), slope


# --- how points become a curve -------------------------------------------------------------------


@lru_cache(maxsize=64)
def _cleaned(
    voltages: tuple[float, ...],
    densities: tuple[float, ...],
    places: tuple[str, ...],
    prefix: str,
) -> CellPoints:
    require_curve("voltages", voltages, densities, prefix)
    if max(voltages) <= 0.0:
        raise CurveFault(
            f"{prefix}{places[voltages.index(min(voltages))]}: no voltage is above zero, wanted "
            "those at which the cell gives power: turn the sign of the voltages"
        )
    points = _between_circuits(_turned(voltages, densities, places), prefix)
    highest = max(point.density for point in points)
    # from the highest voltage to the lowest, so that currents rise
    ordered = merged(points, highest, -1.0, prefix)
    level = levelled([point.density for point in ordered])
    for point, value in zip(ordered, level, strict=True):
        if abs(point.density - value) > SCATTER * highest:
            raise CurveFault(
                f"{prefix}{point.place}: {per_area(point.density)} at {-point.drive:.4g} V is out "
                f"of line with its neighbours ({per_area(value)}), wanted a current that falls as "
                "the voltage rises"
            )
    falling = [(-point.drive, value) for point, value in zip(ordered, level, strict=True)][::-1]
    return _trimmed(falling, prefix)


def _turned(
    voltages: Sequence[float], densities: Sequence[float], places: Sequence[str]
) -> list[CurvePoint]:
    """Return points by falling voltage, with the current at short circuit positive."""
    _, nearest = min(zip(voltages, densities, strict=True), key=lambda pair: abs(pair[0]))
    sign = -1.0 if nearest < 0.0 else 1.0
    triples = zip(voltages, densities, places, strict=True)
    return sorted(CurvePoint(-v, sign * j, place) for v, j, place in triples)


def _between_circuits(points: list[CurvePoint], prefix: str) -> list[CurvePoint]:
    """Leave out what lies behind the first point beyond short and beyond open circuit."""
    least = max((-p.drive for p in points if p.drive >= 0.0), default=-points[-1].drive)
    inside = [point for point in points if -point.drive >= least]
    highest = max(point.density for point in inside)
    if highest <= max(_LEAST, _NOTHING * max(abs(point.density) for point in inside)):
        raise CurveFault(
            f"{prefix}no current flows at short circuit, wanted the curve in the light"
        )
    first, last = inside[-1], inside[0]
    if last.density > first.density + SCATTER * highest:
        raise CurveFault(
            f"{prefix}{last.place}: the current grows with the voltage, wanted one that falls: "
            "turn the sign of the voltages"
        )
    backward = [-p.drive for p in inside if p.density < -SCATTER * highest]
    most = min(backward, default=-inside[0].drive)
    return [point for point in inside if -point.drive <= most]


def _trimmed(falling: list[tuple[float, float]], prefix: str) -> CellPoints:
    """Return the curve between no voltage and no current, falling everywhere."""
    start, short = falling[0][0], falling[0][1]
    steep = [(v, j - FALL * short * (v - start)) for v, j in falling]
    if steep[0][0] < 0.0 < steep[-1][0]:
        second = next(i for i, (v, _) in enumerate(steep) if v >= 0.0)
        (v, j), (w, k) = steep[second - 1], steep[second]
        steep = [(0.0, j + (k - j) * v / (v - w)), *(p for p in steep[second:] if p[0] > 0.0)]
    end = next((i for i, (_, j) in enumerate(steep) if j <= 0.0), None)
    if end == 0 or steep[-1][0] <= 0.0:
        raise CurveFault(f"{prefix}no current flows at any voltage above zero: it gives no power")
    if end is not None:
        (v, j), (w, k) = steep[end - 1], steep[end]
        opened = v + (w - v) * j / (j - k)
        steep = [*steep[: end if opened > v else end - 1], (opened, 0.0)]
    return CellPoints(tuple(v for v, _ in steep), tuple(j for _, j in steep))
