"""The shift between CO2 and CO, with or without methane beside it.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat [W].
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from typing import Annotated, ClassVar, Literal

from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import Fraction, measured
from chainflow.equipment.base import Array, Port
from chainflow.equipment.called_feeds import OXYGEN_PORT, FedReactor
from chainflow.equipment.catalysis import (
    METHANATION,
    OXYGEN,
    SHIFT,
    Approach,
    converted,
    missing_components,
    stated_reaction,
    those_there,
)
from chainflow.equipment.reactions import Reaction
from chainflow.equipment.reactor_base import Product, ReactorBase, exchanging
from chainflow.thermo.components import Matter

_STATED = ("CO2 + H2 -> CO + H2O", "CO + H2O -> CO2 + H2")


class ShiftReactor(FedReactor):
    """Reverse water-gas shift, CO2 + H2 = CO + H2O, with or without methane, at equilibrium.

    With an `approach` the equilibrium constants are taken that much below the outlet temperature
    (the reaction takes heat in); 0 to 20 K over nickel and 20 to 60 K over other catalysts are
    common practice (certainty M).  `conversion` of CO2 (of CO if there is no CO2) replaces it.
    The heat comes by `power`, by `heat`, or, `autothermal`, from the oxygen that is called.
    Carbon activities are reported for the feed, the product, and the product as it is cooled
    through the window of metal dusting without reacting.
    """

    kind: ClassVar[str] = "shift-reactor"
    ports: ClassVar[tuple[Port, ...]] = (*ReactorBase.ports, OXYGEN_PORT)
    formulas: ClassVar[tuple[str, ...]] = (
        "minimum of the Gibbs energy of H2 H2O CO CO2 (CH4), constants at T - approach",
        "autothermal: enthalpy of feed and oxygen = enthalpy of the product at `temperature`",
        "carbon activity: chemical potential of C from 2 CO - CO2, CH4 - 2 H2, CO + H2 - H2O",
    )
    sources: ClassVar[tuple[str, ...]] = (
        *ReactorBase.sources,
        "window of metal dusting, 450 to 800 degC: common practice, no source (M)",
    )

    temperature: Annotated[float, measured("K", ge=573.15, le=1573.15)] | None = Field(
        None, description="temperature of the product"
    )
    methane: Literal["formed", "excluded"] = Field(
        "formed", description="whether the catalyst lets methane form"
    )
    approach: Approach = Field(0.0, description="distance from equilibrium in temperature")
    conversion: Fraction | None = Field(
        None, description="stated conversion of CO2 instead of equilibrium"
    )

    @model_validator(mode="after")
    def _oxygen_burns_to_equilibrium(self) -> ShiftReactor:
        if self.autothermal and self.conversion is not None:
            raise PydanticCustomError(
                "reactor",
                "'autothermal' and 'conversion' are both given: oxygen burns to equilibrium, "
                "leave 'conversion' out",
                {},
            )
        return self

    @property
    def _reacting(self) -> tuple[str, ...]:
        formed = self.methane == "formed" and self.conversion is None
        return METHANATION if formed else SHIFT

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        needed = (*self._reacting, *(OXYGEN if self.autothermal else ()))
        yield from missing_components(matter, needed, "the shift")

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        return exchanging(species, (*self._reacting, *OXYGEN), outlets, matter)

    def equilibrium_species(self, matter: Matter) -> tuple[str, ...] | None:
        return None if self.conversion is not None else those_there(matter, self._reacting)

    @property
    def shift_of_temperature(self) -> float:
        return -self.approach

    def stated(self, flows: Array, matter: Matter) -> tuple[Reaction, ...]:
        if self.conversion is None:
            return ()
        return (stated_reaction(flows, matter, self.conversion, _STATED),)

    def convert(self, flows: Array, matter: Matter) -> Product:
        return converted(flows, matter, *self.stated(flows, matter))
