"""What burning needs and makes: the common part of burner and engine.

Flows [mol/s].  The oxidiser is called so that the oxygen of all inlets together is (1 + excess)
times what their combustibles need.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from functools import lru_cache
from typing import Annotated, ClassVar

import numpy as np
from pydantic import Field

from chainflow.basis.quantities import measured
from chainflow.equipment.base import (
    Array,
    Equipment,
)
from chainflow.equipment.junctions import spread_faults
from chainflow.equipment.ports import Feeds, arriving
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream

Excess = Annotated[float, measured("1", ge=0.0, le=20.0)]


@lru_cache(maxsize=16)
def oxygen_demand(matter: Matter) -> Array:
    """Oxygen needed to burn one mol of each component [mol/mol]; zero for what does not burn."""
    atoms = {element: matter.formula[row] for row, element in enumerate(matter.elements)}
    zero = np.zeros(len(matter.components))
    demand = atoms.get("C", zero) + 0.25 * atoms.get("H", zero) - 0.5 * atoms.get("O", zero)
    demand = np.where(matter.lhv > 0.0, demand, 0.0)
    demand.setflags(write=False)
    return demand


@lru_cache(maxsize=16)
def burnt(matter: Matter) -> Array:
    """What complete combustion makes of each component, columns by component, oxygen negative."""
    result = np.eye(len(matter.components))
    demand = oxygen_demand(matter)
    atoms = {element: matter.formula[row] for row, element in enumerate(matter.elements)}
    for place in np.flatnonzero(matter.lhv > 0.0):
        column = np.zeros(len(matter.components))
        for product, element, per_atom in (("CO2", "C", 1.0), ("H2O", "H", 0.5), ("N2", "N", 0.5)):
            count = float(atoms[element][place]) if element in atoms else 0.0
            if count:
                column[matter.index[product]] += per_atom * count
        column[matter.index["O2"]] -= demand[place]
        result[:, place] = column
    result.setflags(write=False)
    return result


@dataclass(frozen=True, slots=True)
class Oxygen:
    """Linear oxygen balance: weights whose sum over what enters is zero at the wanted excess."""

    weights: Array  # per component, (1 + excess) * demand - oxygen

    @staticmethod
    def at(excess: float, matter: Matter) -> Oxygen:
        weights = (1.0 + excess) * oxygen_demand(matter)
        weights[matter.index["O2"]] -= 1.0
        return Oxygen(weights)


class Combustion(Equipment):
    """Common part of burner and engine."""

    family: ClassVar[str] = "combustion"
    makes: ClassVar[bool] = True
    burns: ClassVar[bool] = True

    excess: Excess = Field(
        0.0, description="oxygen beyond what is needed, counting oxygen already there"
    )

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        wanted = {"O2", "H2O"} | ({"CO2"} if "C" in matter.elements else set())
        if "N" in matter.elements:
            nitrogen = matter.formula[matter.elements.index("N")]
            wanted |= {"N2"} if nitrogen[matter.lhv > 0].any() else set()
        missing = sorted(wanted - set(matter.components))
        if missing:
            yield ("kind",), f"combustion needs {', '.join(missing)} among the components"

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        return spread_faults(inlets)

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        place = matter.index[species]
        made = {species} | {
            name
            for name in ("H2O", "CO2", "N2")
            if matter.lhv[place] > 0.0
            and name in matter.index
            and (
                (matter.formula[:, matter.index[name]] > 0)
                & (matter.formula[:, place] > 0)
                & _not_oxygen(matter)
            ).any()
        }
        if matter.lhv[place] > 0.0:
            made |= self._left_in_flue(species, matter)
        if species == "O2":
            made |= {n for n in ("H2O", "CO2") if n in matter.index}
        return [(o, name) for o in outlets for name in matter.components if name in made]

    def _left_in_flue(self, species: str, matter: Matter) -> set[str]:
        return set()

    def _inlets(self, feeds: Feeds) -> dict[str, list[Stream]]:
        ports = ("fuel", "oxidiser", "moderator")
        return {p: [f for f in arriving(feeds, p) if isinstance(f, Stream)] for p in ports}


def _not_oxygen(matter: Matter) -> Array:
    return np.array([element != "O" for element in matter.elements])


def oxidiser_needed(
    oxygen: Oxygen, given: list[Stream], oxidiser: Stream
) -> tuple[float, dict[str, str]]:
    """Amount [mol/s] of oxidiser for what is given, and why there is none."""
    need = float(sum(oxygen.weights @ s.flows for s in given))
    brings = -float(oxygen.weights @ oxidiser.flows)
    if brings <= 1e-9:
        return 0.0, (
            {"oxidiser": "what is served there brings no oxygen: serve air or oxygen"}
            if need > 0.0
            else {}
        )
    amount = need / brings
    scale = float(sum(np.abs(oxygen.weights) @ s.flows for s in given))
    if need < -1e-9 * scale and need < 0.0:
        text = (
            f"overfull, the other inlets already bring {-amount:.6g} mol/s of oxidiser more than "
            "the excess allows: raise 'excess' or let less oxygen in there"
        )
        return 0.0, {"oxidiser": text}
    return max(amount, 0.0), {}
