"""The reactor for any reactions: stated conversions or extents, or equilibrium of named species.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat [W].
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from typing import ClassVar

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import (
    Temperature,
)
from chainflow.equipment.base import (
    Array,
)
from chainflow.equipment.reactions import Reaction, parse_equation
from chainflow.equipment.reactor_base import Product, ReactorBase, exchanging, share_element
from chainflow.thermo.components import Matter


class Reactor(ReactorBase):
    """Any reactions at stated conversions or extents, or the equilibrium of named species.

    Several conversions all refer to the feed.
    """

    kind: ClassVar[str] = "reactor"
    formulas: ClassVar[tuple[str, ...]] = (
        "extent_r = conversion_r * feed_key / |nu_key|",
        "product = feed + sum_r nu_r * extent_r",
    )

    reactions: tuple[Reaction, ...] | None = Field(
        None, description="[{equation: CO2 + 3 H2 -> CH3OH + H2O, conversion: {CO2: 20 %}}]"
    )
    equilibrium: tuple[str, ...] | None = Field(
        None, description="species that come to equilibrium, [H2, CO2, CH3OH, H2O]"
    )
    temperature: Temperature | None = Field(None, description="temperature of the product")

    @model_validator(mode="after")
    def _one_chemistry(self) -> Reactor:
        if (self.reactions is None) == (self.equilibrium is None):
            raise PydanticCustomError("reactor", "give one of 'reactions' and 'equilibrium'", {})
        return self

    def component_names(self) -> Iterator[tuple[tuple[str, ...], str]]:
        for place, name in enumerate(self.equilibrium or ()):
            yield ("equilibrium", str(place)), name
        for place, reaction in enumerate(self.reactions or ()):
            for name in parse_equation(reaction.equation):
                yield ("reactions", str(place), "equation"), name
            for name in reaction.conversion or {}:
                yield ("reactions", str(place), "conversion", name), name

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        for place, reaction in enumerate(self.reactions or ()):
            for path, text in reaction.faults(matter):
                yield ("reactions", str(place), *path), text

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        if self.equilibrium is not None:
            return exchanging(species, self.equilibrium, outlets, matter)
        made = {species}
        for reaction in self.reactions or ():
            numbers = reaction.numbers
            if numbers.get(species, 0.0) < 0.0:
                made |= {
                    name
                    for name, number in numbers.items()
                    if number > 0.0 and share_element(species, name, matter)
                }
        return [(o, name) for o in outlets for name in matter.components if name in made]

    def equilibrium_species(self, matter: Matter) -> tuple[str, ...] | None:
        return self.equilibrium

    @property
    def burns_oxygen(self) -> bool:
        return any(reaction.numbers.get("O2", 0.0) < 0.0 for reaction in self.reactions or ())

    def stated(self, flows: Array, matter: Matter) -> tuple[Reaction, ...]:
        return self.reactions or ()

    def convert(self, flows: Array, matter: Matter) -> Product:
        by_feed, out = np.eye(len(flows)), flows.copy()
        for reaction in self.reactions or ():
            vector = reaction.vector(matter)
            row = reaction.by_feed(matter)
            by_feed = by_feed + np.outer(vector, row)
            out = out + vector * reaction.extent_of(flows, matter)
        if (out >= -1e-12 * flows.sum()).all():
            return Product(np.maximum(out, 0.0), by_feed, {})
        return self._too_much(flows, out, matter)

    def _too_much(self, flows: Array, out: Array, matter: Matter) -> Product:
        """More is asked than there is: react as far as the feed allows and say so."""
        change = out - flows
        worst = int(np.argmin(out))
        short = change < 0.0
        share = float(min(1.0, (flows[short] / -change[short]).min()))
        name = matter.components[worst]
        text = (
            f"the reactions use {-change[worst]:.6g} mol/s of {name}, "
            f"the feed has {flows[worst]:.6g}: lower a conversion or extent"
        )
        return Product(np.maximum(flows + share * change, 0.0), None, {"feed": text})
