"""How much water does the plant take, against what its fuel must take?

Water [mol/s]. *Stoichiometric* is half the hydrogen atoms in the fuel made: all of a fuel's
hydrogen comes out of water, and what its making or its use gives back is the plant's to catch.
So 1 is a plant that gives nothing back and loses nothing; a closed cycle is near 0.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from chainflow.accounts.fuel import fuel_lines
from chainflow.accounts.leaving import fuel_kept, matter_leaving, matter_sold
from chainflow.accounts.purchases import Purchases
from chainflow.accounts.returned import consumed, topped_up_flow
from chainflow.solver.solution import Solution
from chainflow.thermo.streams import Stream

KWH = 3.6e6  # [J]
WATER_MASS = 18.0153e-3  # [kg/mol]


@dataclass(frozen=True, slots=True)
class WaterAccount:
    """All water of a plant [mol/s]."""

    consumed: float  # by reactions, piece by piece
    top_up: float
    bought: float
    leaving: dict[str, float]  # by the sending port
    stoichiometric: float
    closure: float | None  # hydrogen atoms in less out, relative to what the reactions use
    fuel_lhv: float  # [W]

    @property
    def per_stoichiometric(self) -> float | None:
        """Water topped up per what the fuel made must take."""
        return self.top_up / self.stoichiometric if self.stoichiometric > 0.0 else None

    def as_data(self) -> dict[str, Any]:
        """Return everything as plain data."""
        mass = self.top_up * WATER_MASS
        return {
            "consumed_mol_s": self.consumed,
            "top_up_mol_s": self.top_up,
            "bought_mol_s": self.bought,
            "leaving_mol_s": dict(self.leaving),
            "stoichiometric_mol_s": self.stoichiometric,
            "top_up_per_stoichiometric": self.per_stoichiometric,
            "top_up_kg_kWh_fuel": mass / self.fuel_lhv * KWH if self.fuel_lhv > 0.0 else None,
            "closure": self.closure,
        }


def water_account(solution: Solution, bought: Purchases) -> WaterAccount:
    """Return the water of a solution."""
    made = fuel_lines(solution).made
    streams = [s.flow for s in solution.streams if s.key in made and isinstance(s.flow, Stream)]
    used = consumed(solution, "H2O")
    taken = [stream for outcome in solution.outcomes.values() for stream in outcome.taken]
    entering = sum(hydrogen_in(stream) for stream in (*bought.material.values(), *taken))
    leaving = [*matter_leaving(solution), *matter_sold(solution)]
    gap = abs(entering - sum(hydrogen_in(stream) for _, stream in leaving))
    return WaterAccount(
        consumed=used,
        top_up=topped_up_flow(solution, "H2O"),
        bought=sum(float(stream.flow("H2O")) for stream in bought.material.values()),
        leaving={
            sent.key: float(stream.flow("H2O"))
            for sent, stream in matter_leaving(solution)
            if float(stream.flow("H2O")) > 0.0
        },
        stoichiometric=sum(
            hydrogen_in(stream) - 2.0 * float(stream.flow("H2O")) for stream in streams
        )
        / 2.0,
        closure=gap / (2.0 * used) if used > 0.0 else None,
        fuel_lhv=fuel_kept(solution),
    )


def hydrogen_in(stream: Stream) -> float:
    """Return the hydrogen atoms in a stream [mol/s]."""
    matter = stream.matter
    if "H" not in matter.elements:
        return 0.0
    return float(matter.formula[matter.elements.index("H")] @ stream.flows)
