"""What does a route keep, in which vessel, and how large is that for a given energy?

SI. Energy per mass and volume is the heating value of a fuel (the lower one on exergy too) and the
electricity of a battery.
"""

from __future__ import annotations

from dataclasses import dataclass

from chainflow.accounts.fuel import fuel_lines
from chainflow.equipment.battery import Battery
from chainflow.equipment.stores import Store
from chainflow.solver.solution import Solution
from chainflow.thermo.streams import Stream


@dataclass(frozen=True, slots=True)
class Kept:
    """What is kept and in what: energy per mass and volume of content, and with the vessel.

    SI; None where nothing is known of a vessel.
    """

    store: str
    content: str
    phase: str | None  # None for electricity
    temperature: float | None
    pressure: float | None
    per_mass: float  # [J/kg]
    per_volume: float  # [J/m3]
    vessel: str | None
    per_mass_with_vessel: float | None
    per_volume_with_vessel: float | None

    def sizes(self, energy: float) -> dict[str, float | None]:
        """Return masses [kg] and volumes [m3] for an energy [J]."""

        def over(density: float | None) -> float | None:
            return energy / density if density else None

        return {
            "mass_kg": over(self.per_mass),
            "volume_m3": over(self.per_volume),
            "mass_with_vessel_kg": over(self.per_mass_with_vessel),
            "volume_with_vessel_m3": over(self.per_volume_with_vessel),
        }


def kept_in(solution: Solution, basis: str) -> Kept | None:
    """Return what the largest store of the fuel kept holds, or a battery."""
    pieces = solution.flowsheet.equipment
    held: dict[str, float] = {}
    for key in fuel_lines(solution).kept:
        name, flow = key.partition(".")[0], solution.stream(key).flow
        if isinstance(pieces[name], Store) and isinstance(flow, Stream):
            held[name] = held.get(name, 0.0) + float(flow.lhv)
    if held:
        return _in_store(solution, max(held, key=held.__getitem__), basis)
    batteries = [name for name, piece in pieces.items() if isinstance(piece, Battery)]
    return _in_battery(solution, batteries[0]) if batteries else None


def _in_store(solution: Solution, name: str, basis: str) -> Kept | None:
    store, results = solution.pieces[name], solution.outcomes[name].results
    stream = solution.stream(f"{name}.rest").flow if f"{name}.rest" in _keys(solution) else None
    if not isinstance(store, Store) or not results.get("energy_J_kg"):
        return None
    upper = 1.0
    if basis == "HHV" and isinstance(stream, Stream) and float(stream.lhv) > 0.0:
        upper = float(stream.hhv) / float(stream.lhv)
    with_vessel = store.vessel is not None or store.mass_share is not None
    return Kept(
        store=name,
        content=max(store.contents, key=lambda c: _share(store.contents[c])),
        phase="liquid" if results.get("share_liquid", 0.0) > 0.5 else "gas",
        temperature=store.temperature,
        pressure=store.pressure,
        per_mass=upper * results["energy_J_kg"],
        per_volume=upper * results["energy_J_m3"],
        vessel=store.vessel,
        per_mass_with_vessel=upper * results["energy_with_vessel_J_kg"] if with_vessel else None,
        per_volume_with_vessel=upper * results["energy_with_vessel_J_m3"] if with_vessel else None,
    )


def _share(value: object) -> float:
    return value if isinstance(value, float) else 0.5


def _keys(solution: Solution) -> set[str]:
    return {stream.key for stream in solution.streams}


def _in_battery(solution: Solution, name: str) -> Kept:
    results, piece = solution.outcomes[name].results, solution.pieces[name]
    assert isinstance(piece, Battery)
    by_mass, by_volume = piece.mass_share is not None, piece.volume_share is not None
    return Kept(
        store=name,
        content="electricity",
        phase=None,
        temperature=None,
        pressure=None,
        per_mass=results["energy_J_kg"],
        per_volume=results["energy_J_m3"],
        vessel="housing" if by_mass or by_volume else None,
        per_mass_with_vessel=results["energy_with_housing_J_kg"] if by_mass else None,
        per_volume_with_vessel=results["energy_with_housing_J_m3"] if by_volume else None,
    )
