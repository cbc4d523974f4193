"""Where matter comes into the plant and where things leave it: supply, product, vent.

SI throughout: flows [mol/s], temperature [K], pressure [Pa].
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any, ClassVar

import numpy as np
from pydantic import Field

from chainflow.basis.quantities import Flow as FlowSetting
from chainflow.basis.quantities import Pressure, Temperature
from chainflow.equipment.base import Array, Equipment, Flow, Outcome, Port, Role, Site
from chainflow.equipment.origins import (
    MATERIAL_INTENSITY,
    ORIGIN,
    MaterialIntensity,
    Origin,
)
from chainflow.equipment.ports import Feeds
from chainflow.equipment.shares import Shares, fractions, resolved
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream


class Supply(Equipment):
    """Matter bought from outside, at a composition, temperature and pressure.

    With `flow` it offers that much; without, it serves whatever the receiver asks for.
    """

    kind: ClassVar[str] = "supply"
    family: ClassVar[str] = "boundary"
    ports: ClassVar[tuple[Port, ...]] = (
        Port("outlet", "material", Role.SERVES, main=True, means="what is bought"),
    )

    composition: Shares = Field(description="mole fractions; one may be 'rest'")
    temperature: Temperature = Field(description="temperature of what is bought")
    pressure: Pressure = Field(description="absolute pressure of what is bought")
    flow: FlowSetting | None = Field(None, description="molar, mass or normal-volume flow offered")
    origin: Origin | None = Field(None, description=ORIGIN)
    carbon_intensity: MaterialIntensity | None = Field(None, description=MATERIAL_INTENSITY)

    def port_list(self) -> tuple[Port, ...]:
        if self.flow is None:
            return self.ports
        return (Port("outlet", "material", Role.OFFERS, main=True, means="what is bought"),)

    def component_names(self) -> Iterator[tuple[tuple[str, ...], str]]:
        return ((("composition", name), name) for name in self.composition)

    def origins(self) -> dict[str, tuple[str, ...]]:
        present = tuple(name for name, share in resolved(self.composition).items() if share > 0)
        return {"outlet": present}

    def sample(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> dict[str, Flow]:
        shares = fractions(self.composition, site.matter)
        return {"outlet": Stream.at(site.matter, shares, self.temperature, self.pressure)}

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        one = self.sample(feeds, asked, site)["outlet"]
        assert isinstance(one, Stream)
        if self.flow is None:
            return Outcome({"outlet": one.scaled(asked.get("outlet", 0.0))})
        per_mol = float(one.mass_flow) if self.flow.per == "kg" else 1.0
        return Outcome({"outlet": one.scaled(self.flow.value / per_mol)})


class Product(Equipment):
    """What leaves the plant and is useful: fuel, power, heat."""

    kind: ClassVar[str] = "product"
    family: ClassVar[str] = "boundary"
    ports: ClassVar[tuple[Port, ...]] = (
        Port("inlet", "any", Role.TAKES, many=True, main=True, means="what is useful"),
    )

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        return Outcome({})


class Vent(Equipment):
    """What leaves the plant and is lost."""

    kind: ClassVar[str] = "vent"
    family: ClassVar[str] = "boundary"
    ports: ClassVar[tuple[Port, ...]] = (
        Port("inlet", "any", Role.TAKES, many=True, main=True, means="what is lost"),
    )

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        return Outcome({})


def amounts(named: Mapping[str, float], matter: Matter) -> Array:
    """A vector over the components from amounts by name; shape (components,)."""
    vector = np.zeros(len(matter.components))
    for name, value in named.items():
        vector[matter.index[name]] = value
    return vector
