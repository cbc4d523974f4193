"""What does a store hold: in which phase, how dense, how much energy, in which vessel?

Per mass and volume of fluid, and of fluid and vessel together.  [kg/m3], [J/kg], [J/m3], [1/s].
Densities of pure fluids are of reference quality (`chainflow.thermo.densities`), mixtures and other
gases take Redlich-Kwong.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Literal

import numpy as np

from chainflow.equipment.published.vessels_practice import VESSELS, VesselFigures
from chainflow.thermo.components import WATER_MOLAR_VOLUME, Array, Matter
from chainflow.thermo.densities import PURE_FLUIDS, pure_density
from chainflow.thermo.liquefied import LIQUEFIABLE, critical_point, saturation
from chainflow.thermo.streams import Stream
from chainflow.thermo.validity import StateError

Vessel = Literal[
    "hydrogen-350",
    "hydrogen-700",
    "hydrogen-tubes",
    "cng-steel",
    "cng-composite",
    "lng-trailer",
    "lng-tank",
    "liquid-hydrogen-trailer",
    "liquid-hydrogen-sphere",
    "salt-cavern",
    "liquid-tank",
]
StoredPhase = Literal["auto", "gas", "liquid"]
DAY = 86400.0
_PURE = 0.999  # mole fraction from which contents are taken as pure for their density
RESULTS = (
    "density_kg_m3",
    "share_liquid",
    "energy_J_kg",
    "energy_J_m3",
    "energy_with_vessel_J_kg",
    "energy_with_vessel_J_m3",
    "share_working",
    "inventory_kg",
    "working_kg",
    "cushion_kg",
    "volume_m3",
    "volume_with_vessel_m3",
    "vessel_kg",
    "share_lost_per_day",
    "loss_kg_s",
)


@dataclass(frozen=True, slots=True)
class Kept:
    """A vessel as it is used: figures with the user's own put in."""

    mass_share: float
    volume_share: float
    loss: float  # [1/s]
    least_pressure: float  # [Pa]


def vessel_of(
    name: Vessel | None,
    mass_share: float | None,
    volume_share: float | None,
    loss: float | None,
    least_pressure: float | None,
) -> Kept:
    """Return the figures of a vessel, each overridden by a number that is given."""
    base = VESSELS[name] if name else VesselFigures(1.0, 1.0, 0.0, 0.0, "")
    return Kept(
        base.mass_share if mass_share is None else mass_share,
        base.volume_share if volume_share is None else volume_share,
        base.loss if loss is None else loss,
        base.least_pressure if least_pressure is None else least_pressure,
    )


def density(stream: Stream) -> float:
    """Return the density of what is kept [kg/m3]; zero without flow."""
    mass, total = float(stream.mass_flow), float(stream.total)
    if total <= 0.0:
        return 0.0
    place = int(np.argmax(stream.flows))
    name = stream.matter.components[place]
    level, pressure = float(stream.temperature), float(stream.pressure)
    if float(stream.flows[place]) >= _PURE * total and name in PURE_FLUIDS:
        return _pure(name, level, pressure, liquid=bool(stream.liquid.any() or stream.water.any()))
    volume = stream.matter.gas_volume(stream.gas, level, pressure)
    volume += float(stream.water.sum()) * WATER_MOLAR_VOLUME
    if stream.liquid.any():
        volume += _oil_volume(stream)
    return mass / volume if volume > 0.0 else 0.0


def _pure(name: str, level: float, pressure: float, *, liquid: bool) -> float:
    """Density of a pure fluid; a boiling liquid is looked at a hair below its line."""
    if liquid:
        return pure_density(name, level * (1.0 - 1e-7), pressure)
    return pure_density(name, level, pressure)


def _oil_volume(stream: Stream) -> float:
    """Volume of liquid hydrocarbons [m3/s], at the molar volumes of their table."""
    oil = stream.matter.oil
    return 0.0 if oil is None else float(stream.liquid[oil.places] @ oil.volume)


def kept_results(stream: Stream, vessel: Kept, inventory: float | None) -> dict[str, float]:
    """Return all results about what a store keeps; amounts only if the inventory [kg] is given."""
    found = density(stream)
    mass = float(stream.mass_flow)
    energy = float(stream.lhv) / mass if mass > 0.0 else 0.0
    held = energy * vessel.mass_share
    working = 1.0 - _remaining(stream, vessel.least_pressure) / found if found > 0.0 else 1.0
    results = {
        "density_kg_m3": found,
        "share_liquid": _liquid_share(stream),
        "energy_J_kg": energy,
        "energy_J_m3": energy * found,
        "energy_with_vessel_J_kg": held,
        "energy_with_vessel_J_m3": energy * found * vessel.volume_share,
        "share_working": working,
        "share_lost_per_day": vessel.loss * DAY,
    }
    if inventory is not None and found > 0.0:
        volume = inventory / found
        results |= {
            "inventory_kg": inventory,
            "working_kg": inventory * working,
            "cushion_kg": inventory * (1.0 - working),
            "volume_m3": volume,
            "volume_with_vessel_m3": volume / vessel.volume_share,
            "vessel_kg": inventory * (1.0 / vessel.mass_share - 1.0),
            "loss_kg_s": inventory * vessel.loss,
        }
    return results


def _liquid_share(stream: Stream) -> float:
    total = float(stream.total)
    return float(stream.water.sum() + stream.liquid.sum()) / total if total > 0.0 else 0.0


def _remaining(stream: Stream, pressure: float) -> float:
    """Density of the gas that stays at the least pressure [kg/m3]; none of a liquid."""
    if pressure <= 0.0 or _liquid_share(stream) > 0.5 or pressure >= float(stream.pressure):
        return 0.0
    return density(Stream.gaseous(stream.matter, stream.flows, float(stream.temperature), pressure))


def liquid_faults(
    name: str, temperature: float, pressure: float
) -> Iterator[tuple[tuple[str, ...], str]]:
    """Return what is wrong with keeping a pure component as a liquid: (setting, sentence)."""
    if name == "H2O":
        return
    if name not in LIQUEFIABLE:
        yield (
            ("phase",),
            (
                f"{name} cannot be kept as a liquefied gas here: choose one of "
                f"{', '.join(LIQUEFIABLE)}"
            ),
        )
        return
    critical, highest = critical_point(name)
    if temperature >= critical:
        yield (
            ("temperature",),
            (
                f"{name} has no liquid at {temperature - 273.15:.4g} degC, above its critical "
                f"temperature of {critical - 273.15:.4g} degC: cool it, or keep it as a gas"
            ),
        )
    elif pressure >= highest:
        yield (
            ("pressure",),
            (
                f"{name} has no boiling liquid at {pressure / 1e5:.4g} bar, above its critical "
                f"pressure of {highest / 1e5:.4g} bar: lower the pressure, or leave out 'phase'"
            ),
        )
    elif temperature > saturation(name, pressure) * (1.0 + 1e-6):
        boiling = saturation(name, pressure)
        yield (
            ("temperature",),
            (
                f"{name} is a gas at {temperature - 273.15:.4g} degC and {pressure / 1e5:.4g} bar, "
                f"it boils at {boiling - 273.15:.4g} degC: lower the temperature or raise the "
                "pressure"
            ),
        )


def as_liquid(matter: Matter, flows: Array, temperature: float, pressure: float) -> Stream:
    """Return what is kept as a liquefied gas; nothing stays nothing."""
    if not flows.any():
        return Stream.empty(matter, temperature, pressure)
    try:
        boiling = saturation(matter.components[int(np.argmax(flows))], pressure)
    except StateError:
        boiling = temperature
    return Stream.liquefied(matter, flows, min(temperature, boiling), pressure)
