"""Where does the carbon come from and go to, and how much carbon dioxide does the plant answer for?

Carbon [mol/s of C], carbon dioxide [kg/s].

* *Carbon efficiency* = carbon in the fuel kept / (that + carbon that leaves the making part
  otherwise, before or after the fuel is made); what the use of the fuel lets go is not held
  against its making.
* *Closure*: carbon that leaves less carbon that enters, relative to what passes through the fuel.
* *Emission* = power bought x its intensity + mass bought x its intensity + 44.01 g for every mol of
  fossil carbon bought. Fossil carbon counts in full where it is bought, whoever burns it later and
  whether it is caught again or not; carbon from the air or from plants counts nothing. Where an
  origin or intensity is missing the emission is not known, and what is missing is named.
* *Intensity* = emission of the making part per LHV of fuel kept, and of the whole plant per power
  delivered. Building the plant is left out.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from chainflow.accounts.deliveries import Deliveries
from chainflow.accounts.fuel import fuel_lines
from chainflow.accounts.leaving import fuel_kept, matter_leaving, matter_sold
from chainflow.accounts.purchases import Purchases
from chainflow.accounts.using import PARTS, part_of, using_part
from chainflow.equipment.boundary import Supply
from chainflow.equipment.power import Grid
from chainflow.equipment.stores import Store
from chainflow.solver.solution import Solution
from chainflow.thermo.streams import Stream

KWH = 3.6e6  # [J]
CO2_MASS = 44.0095e-3  # [kg/mol], of 12.011 and 15.9994 g/mol: IUPAC standard atomic weights
_ROUND_OFF = 1e-9  # of the largest stream's carbon: how far the loops close


@dataclass(frozen=True, slots=True)
class CarbonAccount:
    """All carbon of a plant [mol/s], and its carbon dioxide [kg/s]."""

    entering: dict[str, float]  # by who gets it from outside
    from_air: float
    leaving: dict[str, float]  # by the sending port
    sold: float
    fuel_made: float
    fuel_kept: float
    lost_in_making: float
    emitted: dict[str, float]  # [kg/s] by part of the plant
    unknown: tuple[str, ...]  # bought without origin or intensity
    fuel_lhv: float  # [W]
    power: float  # [W] delivered

    @property
    def efficiency(self) -> float | None:
        """Carbon in the fuel kept per carbon that is in it or lost in making and keeping it."""
        whole = self.fuel_kept + self.lost_in_making
        return self.fuel_kept / whole if self.fuel_kept > 0.0 else None

    @property
    def closure(self) -> float | None:
        """Carbon in less carbon out, relative to what passes."""
        entering = sum(self.entering.values()) + self.from_air
        leaving = sum(self.leaving.values()) + self.sold
        size = max(entering, leaving, self.fuel_made)
        return abs(entering - leaving) / size if size > 0.0 else None

    def emission(self, *parts: str) -> float | None:
        """Carbon dioxide that these parts answer for [kg/s]; None if something is not known."""
        if self.unknown:
            return None
        return sum(self.emitted[part] for part in parts)

    def as_data(self) -> dict[str, Any]:
        """Return everything as plain data."""
        whole = self.emission(*PARTS)
        return {
            "entering_mol_s": dict(self.entering),
            "from_air_mol_s": self.from_air,
            "leaving_mol_s": dict(self.leaving),
            "sold_mol_s": self.sold,
            "fuel_made_mol_s": self.fuel_made,
            "fuel_kept_mol_s": self.fuel_kept,
            "efficiency": self.efficiency,
            "closure": self.closure,
            "emitted_kg_s": whole,
            "intensity": {
                "fuel_kg_kWh": _per_kwh(self.emission("making"), self.fuel_lhv),
                "power_kg_kWh": _per_kwh(whole, self.power),
            },
            "unknown": list(self.unknown),
        }


def _per_kwh(emission: float | None, rate: float) -> float | None:
    return emission / rate * KWH if emission is not None and rate > 0.0 else None


def carbon_account(solution: Solution, bought: Purchases, delivered: Deliveries) -> CarbonAccount:
    """Return the carbon of a solution."""
    taken = [stream for outcome in solution.outcomes.values() for stream in outcome.taken]
    using = using_part(solution)
    leaving = {s.key: carbon_in(flow) for s, flow in matter_leaving(solution)}
    lines = fuel_lines(solution)
    streams = [(s.key, s.flow) for s in solution.streams if isinstance(s.flow, Stream)]
    least = _ROUND_OFF * max((carbon_in(flow) for _, flow in streams), default=0.0)
    items = list(_emissions(solution, bought, least, using))
    return CarbonAccount(
        entering={n: carbon_in(s) for n, s in bought.material.items() if carbon_in(s) > least},
        from_air=sum(map(carbon_in, taken)),
        leaving={key: flow for key, flow in leaving.items() if flow > least},
        sold=sum(carbon_in(flow) for _, flow in matter_sold(solution)),
        fuel_made=sum(carbon_in(flow) for key, flow in streams if key in lines.made),
        fuel_kept=sum(carbon_in(flow) for key, flow in streams if key in lines.kept),
        lost_in_making=sum(
            flow
            for key, flow in leaving.items()
            if key.partition(".")[0] not in using and key not in (*lines.kept, *lines.staying)
        ),
        emitted={part: sum(m or 0.0 for _, p, m in items if p == part) for part in PARTS},
        unknown=tuple(dict.fromkeys(what for what, _, mass in items if mass is None)),
        fuel_lhv=fuel_kept(solution),
        power=delivered.power_total,
    )


def carbon_in(stream: Stream) -> float:
    """Return the carbon in a stream [mol/s]."""
    matter = stream.matter
    if "C" not in matter.elements:
        return 0.0
    return float(matter.formula[matter.elements.index("C")] @ stream.flows)


def _emissions(
    solution: Solution, bought: Purchases, least: float, using: frozenset[str]
) -> Iterator[tuple[str, str, float | None]]:
    """Yield what is bought, for which part, and its carbon dioxide [kg/s]; None if not known."""
    pieces = solution.flowsheet.equipment
    for name, power in bought.power.items():
        piece = pieces[name]
        grid = piece.carbon_intensity if isinstance(piece, Grid) else None
        mass = None if grid is None else grid * power
        yield f"power of {name}", part_of(name, using), mass
    for name, _ in bought.heat:
        yield f"heat of {name}", part_of(name, using), None
    for name, stream in bought.material.items():
        piece = pieces[name]
        if isinstance(piece, Supply | Store):
            mass = _of_material(piece, stream, least)
            yield f"material of {name}", part_of(name, using), mass


def _of_material(piece: Supply | Store, stream: Stream, least: float) -> float | None:
    """Return the carbon dioxide that comes with what is bought [kg/s]; None if not known."""
    carbon = carbon_in(stream)
    mass = (piece.carbon_intensity or 0.0) * float(stream.mass_flow)
    if carbon <= least:
        return mass
    if piece.origin is None:
        return None
    return mass + (carbon * CO2_MASS if piece.origin == "fossil" else 0.0)
