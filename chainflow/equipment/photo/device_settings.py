"""What is set of the parts of a photoelectrochemical device, and which settings go together?

Defaults are generic and our own; those that rest on ranges from memory (M) say so. Potentials are
against the reversible hydrogen electrode at the device's own temperature and pressure.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING, Annotated, Literal

from pydantic import BaseModel, ConfigDict, Field

from chainflow.basis.constants import ELEMENTARY_CHARGE
from chainflow.basis.quantities import (
    BandGap,
    OpenFraction,
    Voltage,
    measured,
)
from chainflow.equipment.cells.stack_settings import boiling_trouble, missing_components
from chainflow.equipment.csv_points import CurveFault
from chainflow.equipment.photo.cell_curve import CellCurveSetting
from chainflow.equipment.photo.circuit import Overpotential
from chainflow.equipment.photo.light_paths import current_above, current_at, light_paths
from chainflow.equipment.photo.measured_points import EfficiencyCurve, per_area
from chainflow.equipment.setting_numbers import stated
from chainflow.equipment.sun.photons import FULL_SUN
from chainflow.thermo.components import Matter

if TYPE_CHECKING:
    from chainflow.equipment.photoelectrode import Photoelectrode

COLDEST, HOTTEST = 273.15, 373.15  # [K], of aqueous electrolytes
Faults = Iterator[tuple[tuple[str, ...], str]]
Resistance = Annotated[float, measured("ohm*m2", ge=0)]


class ElectrodeShape(BaseModel):
    """Current by potential as a logistic step from the onset to a plateau."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    onset: Voltage = Field(description="potential at which current begins")
    half_wave: Voltage = Field(description="potential in the middle of the step")
    # 0.05 to 0.12 V is usual, common practice, no source
    width: Annotated[float, measured("V", gt=0, le=1)] = Field(
        0.08, description="how wide the step is; usually 0.05 to 0.12 V"
    )
    saturation: Annotated[float, measured("A/m2", gt=0)] | None = Field(
        None,
        description="plateau in 1000 W/m2, of the electrode's area; "
        "left out: from the quantum efficiency and the two factors",
    )


class DarkElectrode(BaseModel):
    """Overpotential of an electrode without light."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    tafel_slope: Annotated[float, measured("V", gt=0, le=0.5)] = Field(
        description="overpotential per decade of current"
    )
    exchange_current: Annotated[float, measured("A/m2", gt=0)] = Field(
        description="exchange current density, of the device's aperture"
    )

    @property
    def law(self) -> Overpotential:
        """The overpotential by the current."""
        return Overpotential(self.tafel_slope, self.exchange_current)


# M: platinum in acid 30 mV and 1e-3 A/cm2; oxygen electrodes 40 to 60 mV and 0.28 to 0.40 V at
# 10 mA/cm2 (McCrory et al., JACS 135 (2013) 16977), here 50 mV and 0.35 V
HYDROGEN_ELECTRODE = DarkElectrode(tafel_slope=0.030, exchange_current=10.0)
OXYGEN_ELECTRODE = DarkElectrode(tafel_slope=0.050, exchange_current=1e-5)


_OF_CURVE = ("measured_at", "measured_in")
_IN_CURVE = ("quantum_efficiency", "radiative_efficiency", "ideality", "shunt_resistance")


class SolarCell(BaseModel):
    """A solar cell behind the photoelectrode or beside it, in series with it."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    gaps: tuple[BandGap, ...] = Field(
        min_length=1, max_length=6, description="of its junctions, in the order light meets them"
    )
    place: Literal["behind", "beside"] = Field(
        "behind", description="behind it gets what the photoelectrode passes, beside all the light"
    )
    area: Annotated[float, measured("1", gt=0, lt=1)] | None = Field(
        None, description="share of the aperture that a cell beside takes (50 %)"
    )
    quantum_efficiency: OpenFraction = Field(
        0.9, description="electrons per photon that gets to a junction and lies above its gap"
    )
    # 0.02 to 1 % is usual for silicon, common practice, no source
    radiative_efficiency: OpenFraction = Field(
        1e-3, description="light sent out per recombination; sets the open-circuit voltage"
    )
    ideality: Annotated[float, measured("1", ge=1, le=3)] = Field(
        1.0, description="of the diode; leaves the open-circuit voltage in 1000 W/m2 as it is"
    )
    in_series: Annotated[int, Field(ge=1, le=20)] = Field(
        1, description="number of equal cells that share the area and are joined in series"
    )
    series_resistance: Resistance = Field(
        1e-4, description="of one cell, by its area; a measured curve is moved to other light by it"
    )
    shunt_resistance: Annotated[float, measured("ohm*m2", gt=0)] | None = Field(
        None, description="of one cell, by its area; left out: no current leaks"
    )
    curve: CellCurveSetting | None = Field(
        None,
        description="current by voltage of one cell in the light, measured at the device's "
        "temperature, in place of junctions as diodes; between short and open circuit",
    )
    measured_at: Annotated[float, measured("W/m2", gt=0)] | None = Field(
        None, description="irradiance of the measured curve (1000 W/m2)"
    )
    measured_in: Literal["sunlight", "passed-light"] = Field(
        "sunlight",
        description="whether the curve was measured in the sun or in the light that the "
        "photoelectrode passes on under that irradiance",
    )

    @property
    def beside(self) -> float:
        """The share of the aperture that a cell beside takes; zero behind."""
        return 0.0 if self.place == "behind" else 0.5 if self.area is None else self.area

    @property
    def trouble(self) -> str:
        """Say which settings do not go together; empty if all do."""
        given = stated(self)
        strange = [
            name for name in (_OF_CURVE if self.curve is None else _IN_CURVE) if name in given
        ]
        if strange and self.curve is None:
            return f"'cell.{strange[0]}' is of a measured 'cell.curve': remove it"
        if strange:
            return f"'cell.{strange[0]}' is already in the measured 'cell.curve': remove it"
        if self.place == "beside" and self.measured_in == "passed-light":
            return "'cell.measured_in' is of a cell behind, one beside stands in the sun: remove it"
        if self.place == "behind" and self.area is not None:
            return "'cell.area' is of a cell beside: write 'place: beside' or remove it"
        for upper, lower in zip(self.gaps, self.gaps[1:], strict=False):
            if lower >= upper:
                return (
                    f"'cell.gaps': {_volts(lower)} eV stands behind {_volts(upper)} eV, wanted "
                    "falling gaps in the order in which light meets them"
                )
        return ""


# --- what goes together --------------------------------------------------------------------------


def wrong_together(piece: Photoelectrode) -> str:
    """Say which settings do not go together; empty if all do."""
    if piece.shape is None and piece.curve is None:
        shape = "{onset: 0.4 V, half_wave: 0.7 V}"
        return f"'shape' is missing, as {shape}, or 'curve' with a measured one"
    if piece.shape is not None and piece.curve is not None:
        return "'shape' and 'curve' are both given: remove one of them"
    if piece.curve is not None:
        given = _given(piece, "quantum_efficiency", "separation", "catalyst")
        if given:
            return f"'{given[0]}' is already in the measured 'curve': remove it"
    elif piece.measured_at is not None:
        return "'measured_at' is of a measured 'curve': remove it"
    return _shape_trouble(piece) or _cell_trouble(piece) or _file_trouble(piece)


def _given(piece: Photoelectrode, *names: str) -> list[str]:
    return [name for name in names if getattr(piece, name) is not None]


def _shape_trouble(piece: Photoelectrode) -> str:
    shape, direction = piece.shape, piece.direction
    if shape is None:
        return ""
    if direction * (shape.half_wave - shape.onset) <= 0.0:
        word = "above" if direction > 0.0 else "below"
        return (
            f"'shape.half_wave' is {shape.half_wave:.4g} V and 'shape.onset' {shape.onset:.4g} V, "
            f"wanted a half-wave {word} the onset of a {piece.electrode}"
        )
    if shape.saturation is not None:
        given = _given(piece, "separation", "catalyst")
        if given:
            return f"'{given[0]}' is already in 'shape.saturation': remove one of them"
    return ""


def _cell_trouble(piece: Photoelectrode) -> str:
    cell = piece.cell
    if cell is None:
        return ""
    if cell.trouble:
        return cell.trouble
    if cell.place == "behind" and cell.gaps[0] >= piece.band_gap:
        return (
            f"'cell.gaps': {_volts(cell.gaps[0])} eV behind a photoelectrode of "
            f"{_volts(piece.band_gap)} eV gets hardly any light, wanted a lower gap"
        )
    return ""


def _file_trouble(piece: Photoelectrode) -> str:
    try:
        if piece.curve is not None:
            piece.curve.cleaned(piece.direction)
        if piece.cell is not None and piece.cell.curve is not None:
            piece.cell.curve.cleaned()
        if isinstance(piece.quantum_efficiency, EfficiencyCurve):
            piece.quantum_efficiency.sorted()
    except CurveFault as fault:
        return str(fault)
    return ""


def setting_faults(piece: Photoelectrode, matter: Matter) -> Faults:
    """Yield what is wrong with the settings as a whole: (path, sentence)."""
    missing = missing_components("photoelectrode", matter)
    if missing:
        yield ("kind",), missing
    yield from _state_faults(piece)
    yield from _current_faults(piece)
    yield from _cell_faults(piece)


def _state_faults(piece: Photoelectrode) -> Faults:
    level = piece.temperature
    if not COLDEST <= level <= HOTTEST:
        text = f"temperature is {level - 273.15:.4g} degC, wanted 0 to 100 degC: it works in water"
        yield ("temperature",), text
        return
    trouble = boiling_trouble(level, piece.pressure)
    if trouble:
        yield ("temperature",), trouble


def _current_faults(piece: Photoelectrode) -> Faults:
    """Refuse more electrons than photons."""
    inside = (1.0 - piece.reflection) * piece.absorption
    efficiency = piece.efficiency_points
    highest = efficiency if isinstance(efficiency, float) else max(efficiency[1])
    uses_it = piece.curve is None and (piece.shape is None or piece.shape.saturation is None)
    if uses_it and highest > inside + 1e-12:
        text = (
            f"the external quantum efficiency reaches {100 * highest:.4g} %, but only "
            f"{100 * inside:.4g} % of the photons are absorbed: lower it, 'reflection', or raise "
            "'absorption'"
        )
        yield ("quantum_efficiency",), text
    most = (
        FULL_SUN
        * light_paths(piece.band_gap, piece.reflection, piece.absorption, (), 0.0).electrode.photons
    )
    if piece.shape is not None and (piece.shape.saturation or 0.0) > most:
        text = _too_much(f"'shape.saturation' is {per_area(piece.shape.saturation or 0.0)}", most)
        yield ("shape", "saturation"), text
    if piece.curve is not None:
        reached = (
            piece.curve.cleaned(piece.direction).densities[-1]
            * FULL_SUN
            / (piece.measured_at or FULL_SUN)
        )
        if reached > most:
            reads = f"the curve reaches {per_area(reached)} in 1000 W/m2"
            yield ("curve",), _too_much(reads, most)


def _cell_faults(piece: Photoelectrode) -> Faults:
    """Refuse a measured cell that gives more current than photons or more volts than gaps."""
    cell = piece.cell
    if cell is None or cell.curve is None:
        return
    points = cell.curve.cleaned()
    level = cell.measured_at or FULL_SUN
    most = level * light_of_cell(piece)
    if points.short > most:
        text = (
            f"the curve reaches {per_area(points.short)} in {level:.4g} W/m2, but the photons that "
            f"its junctions get there give {per_area(most)} at most: check it, 'measured_at', "
            "'measured_in' and the gaps"
        )
        yield ("cell", "curve"), text
    gaps = sum(cell.gaps) / ELEMENTARY_CHARGE
    if points.voltages[-1] >= gaps:
        text = (
            f"the curve reaches {points.voltages[-1]:.4g} V, but the gaps of its junctions add up "
            f"to {gaps:.4g} V: give all 'gaps', and cells in series as 'in_series'"
        )
        yield ("cell", "curve"), text


def light_of_cell(piece: Photoelectrode) -> float:
    """Return the photons that a measured cell got where it was measured [A/W].

    Those of the junction that gets the fewest, by the cell's own area.
    """
    cell = piece.cell
    assert cell is not None
    if cell.measured_in == "passed-light":
        return min(taken.photons for taken in piece.paths.junctions) / (cell.beside or 1.0)
    above = [current_above(gap) for gap in cell.gaps]
    return min(high - low for high, low in zip(above, [0.0, *above], strict=False))


def _too_much(reads: str, most: float) -> str:
    return (
        f"{reads}, but the photons absorbed above 'band_gap' give {per_area(most)} at most: "
        "check it, the gap, 'reflection' and 'absorption'"
    )


def plateau(piece: Photoelectrode) -> float:
    """Return the current that the light makes at most, of the electrode's own area [A/W]."""
    if piece.shape is not None and piece.shape.saturation is not None:
        return piece.shape.saturation / FULL_SUN
    if piece.curve is not None:
        return piece.curve.cleaned(piece.direction).densities[-1] / (piece.measured_at or FULL_SUN)
    factors = (1.0 if piece.separation is None else piece.separation) * (
        1.0 if piece.catalyst is None else piece.catalyst
    )
    return factors * current_at(piece.efficiency_points, piece.band_gap)


def _volts(gap: float) -> str:
    return f"{gap / ELEMENTARY_CHARGE:.4g}"
