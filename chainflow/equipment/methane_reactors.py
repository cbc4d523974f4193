"""Shift and methanation: the two reactors between CO2, CO and methane.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat [W].  Both come to the
equilibrium of their gas, or reach a stated conversion; oxygen burns on their catalysts.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from typing import Annotated, ClassVar, Literal

from pydantic import Field

from chainflow.basis.quantities import (
    Fraction,
    TemperatureDifference,
    measured,
)
from chainflow.equipment.base import (
    Array,
    Caution,
)
from chainflow.equipment.reactions import Reaction
from chainflow.equipment.reactor_base import TRACE, Product, ReactorBase, exchanging, share_of
from chainflow.equipment.reactors import Reactor
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream

_SHIFT = ("H2", "H2O", "CO", "CO2")
_METHANATION = (*_SHIFT, "CH4")
_OXYGEN = ("O2",)  # burns on every one of these catalysts
_NICKEL_CARBONYL_BELOW = 473.15  # [K], with CO over nickel; common practice, no source


class ShiftReactor(ReactorBase):
    """Reverse water-gas shift, CO2 + H2 = CO + H2O, with or without methane, at equilibrium.

    With an `approach` the equilibrium constants are taken that much below the outlet temperature
    (the reaction takes heat in).  `conversion` of CO2 (of CO if there is no CO2) replaces it.
    """

    kind: ClassVar[str] = "shift-reactor"
    formulas: ClassVar[tuple[str, ...]] = (
        "minimum of the Gibbs energy of H2 H2O CO CO2 (CH4), constants at T - approach",
    )

    temperature: Annotated[float, measured("K", ge=573.15, le=1573.15)] | None = Field(
        None, description="temperature of the product"
    )
    methane: Literal["formed", "excluded"] = Field(
        "formed", description="whether the catalyst lets methane form"
    )
    approach: TemperatureDifference = Field(
        0.0, description="distance from equilibrium in temperature"
    )
    conversion: Fraction | None = Field(
        None, description="stated conversion of CO2 instead of equilibrium"
    )

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        return _needs(
            matter,
            _METHANATION if self.methane == "formed" and self.conversion is None else _SHIFT,
            "the shift",
        )

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        reacting = _METHANATION if self.methane == "formed" and self.conversion is None else _SHIFT
        return exchanging(species, (*reacting, *_OXYGEN), outlets, matter)

    def equilibrium_species(self, matter: Matter) -> tuple[str, ...] | None:
        if self.conversion is not None:
            return None
        return _there(matter, _METHANATION if self.methane == "formed" else _SHIFT)

    @property
    def shift_of_temperature(self) -> float:
        return -self.approach

    def convert(self, flows: Array, matter: Matter) -> Product:
        return _converted(
            flows, matter, self.conversion or 0.0, ("CO2 + H2 -> CO + H2O", "CO + H2O -> CO2 + H2")
        )


class MethanationReactor(ReactorBase):
    """Methanation of CO2 and CO with the shift beside it, at equilibrium, cooled or adiabatic.

    With an `approach` the equilibrium constants are taken that much above the outlet temperature
    (the reaction gives heat off).  `conversion` of CO2 (of CO if there is no CO2) replaces it.
    """

    kind: ClassVar[str] = "methanation-reactor"
    formulas: ClassVar[tuple[str, ...]] = (
        "CO2 + 4 H2 = CH4 + 2 H2O, CO + 3 H2 = CH4 + H2O",
        "minimum of the Gibbs energy, constants at T + approach",
    )
    sources: ClassVar[tuple[str, ...]] = (
        *ReactorBase.sources,
        "window of nickel catalysts: Roensch et al., Fuel 166 (2016) 276 (from memory)",
    )

    temperature: Annotated[float, measured("K", ge=423.15, le=1273.15)] | None = Field(
        None, description="temperature of the product"
    )
    approach: TemperatureDifference = Field(
        0.0, description="distance from equilibrium in temperature"
    )
    conversion: Fraction | None = Field(
        None, description="stated conversion of CO2 instead of equilibrium"
    )

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        return _needs(
            matter,
            ("H2", "H2O", "CO2", "CH4") if self.conversion is not None else _METHANATION,
            "methanation",
        )

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        return exchanging(species, (*_METHANATION, *_OXYGEN), outlets, matter)

    def equilibrium_species(self, matter: Matter) -> tuple[str, ...] | None:
        return None if self.conversion is not None else _there(matter, _METHANATION)

    @property
    def shift_of_temperature(self) -> float:
        return self.approach

    def convert(self, flows: Array, matter: Matter) -> Product:
        return _converted(
            flows,
            matter,
            self.conversion or 0.0,
            ("CO2 + 4 H2 -> CH4 + 2 H2O", "CO + 3 H2 -> CH4 + H2O"),
        )

    def _window(self, level: float) -> Iterator[Caution]:
        if level > 973.15:
            yield Caution(
                "above-catalyst-window",
                f"{level - 273.15:.4g} degC is above the 700 degC "
                "that high-temperature nickel catalysts stand",
            )
        elif level > 823.15:
            yield Caution(
                "above-catalyst-window",
                f"{level - 273.15:.4g} degC is above the 550 degC of ordinary nickel catalysts",
            )
        elif level < 473.15:
            yield Caution(
                "below-catalyst-window",
                f"{level - 273.15:.4g} degC is below the 200 degC "
                "where nickel catalysts start to work",
            )

    def _traces(self, feed: Stream, product: Stream) -> Iterator[Caution]:
        coldest = min(float(feed.temperature), float(product.temperature))
        monoxide = max(share_of(feed, "CO"), share_of(product, "CO"))
        if monoxide > TRACE and coldest < _NICKEL_CARBONYL_BELOW:
            text = (
                f"{100 * monoxide:.2g} % CO can meet nickel at {coldest - 273.15:.4g} degC: below "
                "about 200 degC very toxic nickel carbonyl forms; preheat the feed before the "
                "catalyst"
            )
            yield Caution("nickel-carbonyl", text)


def _converted(flows: Array, matter: Matter, share: float, equations: tuple[str, str]) -> Product:
    """One reaction by the conversion of CO2, or its CO twin where there is no CO2."""
    carbon_dioxide = flows[matter.index["CO2"]] > 0.0 or "CO" not in matter.index
    key, equation = ("CO2", equations[0]) if carbon_dioxide else ("CO", equations[1])
    reactor = Reactor(reactions=(Reaction(equation=equation, conversion={key: share}),))
    return reactor.convert(flows, matter)


def _there(matter: Matter, reacting: tuple[str, ...]) -> tuple[str, ...]:
    """The reacting species, and oxygen where it is a component."""
    return tuple(name for name in (*reacting, *_OXYGEN) if name in matter.index)


def _needs(
    matter: Matter, names: tuple[str, ...], what: str
) -> Iterator[tuple[tuple[str, ...], str]]:
    missing = [name for name in names if name not in matter.index]
    if missing:
        yield ("kind",), f"{what} needs {', '.join(missing)} among the components"
