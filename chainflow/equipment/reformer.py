"""The reformer: methane and heavier gases with steam or oxygen to hydrogen and carbon monoxide.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat [W].
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import replace
from functools import lru_cache
from typing import Annotated, ClassVar

import numpy as np
from pydantic import Field

from chainflow.basis.quantities import measured
from chainflow.equipment.base import Array, Caution, Port, Role, Site, material
from chainflow.equipment.called_feeds import OXYGEN_PORT, Call, Fed, FedReactor
from chainflow.equipment.catalysis import METHANATION, OXYGEN, Approach, missing_components
from chainflow.equipment.junctions import joined
from chainflow.equipment.ports import Feeds
from chainflow.equipment.reactor_base import ReactorBase, exchanging
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream

_TUBES_STAND = 1223.15  # [K], 950 degC, heated tubes of nickel alloys; common practice, no source
_ELEMENTS = frozenset("CHO")


class Reformer(FedReactor):
    """Reforming with steam, heated from outside or autothermal, to equilibrium.

    `steam` is called so that the water of feed and steam is `steam_to_carbon` times the carbon of
    all components but CO and CO2; without that setting nothing is called and the feed reacts as
    it comes.  Heavier components of carbon, hydrogen and oxygen are in the equilibrium.  With an
    `approach` the constants are taken that much below the outlet temperature (the reaction takes
    heat in); 5 to 20 K are common practice (certainty M).
    """

    kind: ClassVar[str] = "reformer"
    followed: ClassVar[tuple[str, ...]] = ("CH4", "CO2")
    gives: ClassVar[tuple[str, ...]] = (
        *(name for name in FedReactor.gives if name != "conversion_CO"),
        "conversion_CH4",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        *ReactorBase.ports,
        Port(
            "steam",
            "material",
            Role.CALLS,
            optional=True,
            means="steam for `steam_to_carbon`",
        ),
        OXYGEN_PORT,
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "CH4 + H2O = CO + 3 H2, CO + H2O = CO2 + H2, and the like for heavier components",
        "minimum of the Gibbs energy of all components of C, H and O, constants at T - approach",
        "steam: H2O of feed and steam = steam_to_carbon * carbon that is not CO or CO2",
        "autothermal: enthalpy of feed, steam and oxygen = that of the product at `temperature`",
    )
    sources: ClassVar[tuple[str, ...]] = (
        *ReactorBase.sources,
        "window of metal dusting, 450 to 800 degC: common practice, no source (M)",
    )

    temperature: Annotated[float, measured("K", ge=573.15, le=1773.15)] | None = Field(
        None, description="temperature of the product"
    )
    steam_to_carbon: Annotated[float, measured("1", gt=0, le=20)] | None = Field(
        None, description="mol of water per mol of carbon to be reformed; 2 to 4 are common"
    )
    approach: Approach = Field(0.0, description="distance from equilibrium in temperature")

    def port_list(self) -> tuple[Port, ...]:
        return tuple(
            replace(port, optional=False) if port.name == "steam" else port
            for port in super().port_list()
            if port.name != "steam" or self.steam_to_carbon is not None
        )

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        needed = (*METHANATION, *(OXYGEN if self.autothermal else ()))
        yield from missing_components(matter, needed, "reforming")

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        return exchanging(species, self.equilibrium_species(matter), outlets, matter)

    def equilibrium_species(self, matter: Matter) -> tuple[str, ...]:
        return _made_of_reforming_elements(matter)

    @property
    def shift_of_temperature(self) -> float:
        return -self.approach

    def fed(self, feeds: Feeds, site: Site) -> Fed:
        feed, matter = material(feeds, "feed"), site.matter
        if self.steam_to_carbon is None:
            return Fed(feed)
        steam = material(feeds, "steam")
        weights = self._weights(matter, self.steam_to_carbon)
        need, brings = float(weights @ feed.flows), -float(weights @ steam.flows)
        amount, unmet = need / brings if brings > 0.0 else 0.0, {}
        if need != 0.0 and brings <= 0.0:
            unmet = {"steam": "what is served there brings no water to spare: serve steam"}
        elif amount < -1e-9 * float(feed.total):
            unmet = {"steam": _too_wet(-amount)}
        amount = max(amount, 0.0)
        pressure = min(float(feed.pressure), float(steam.pressure))
        entering = joined((feed, steam.scaled(amount)), matter, pressure)
        call = Call("steam", steam, amount, np.append(weights, 0.0), ("feed", "steam"))
        return Fed(entering, (call,), unmet)

    @staticmethod
    def _weights(matter: Matter, steam_to_carbon: float) -> Array:
        """Water that each component calls for, less the water that it is [mol/mol]."""
        weights = steam_to_carbon * matter.formula[matter.elements.index("C")]
        for name in ("CO", "CO2"):
            weights[matter.index[name]] = 0.0
        weights[matter.index["H2O"]] -= 1.0
        return weights

    def _window(self, level: float) -> Iterator[Caution]:
        if not self.autothermal and level > _TUBES_STAND:
            yield Caution(
                "above-tube-window",
                f"{level - 273.15:.4g} degC is above the 950 degC that heated tubes stand (common "
                "practice): burn oxygen inside, or look for another design",
            )

    def _traces(self, feed: Stream, product: Stream) -> Iterator[Caution]:
        if float(feed.water.sum()) > 1e-9 * float(feed.total):
            yield Caution(
                "wet-feed",
                "feed and steam together hold liquid water: preheat the feed before the steam "
                "joins it",
            )


def _too_wet(surplus: float) -> str:
    return (
        f"overfull, the feed already brings {surplus:.6g} mol/s of steam more than "
        "'steam_to_carbon' asks for: raise it, leave it out, or take water out of the feed"
    )


@lru_cache(maxsize=16)
def _made_of_reforming_elements(matter: Matter) -> tuple[str, ...]:
    return tuple(
        name
        for place, name in enumerate(matter.components)
        if all(
            element in _ELEMENTS
            for element, count in zip(matter.elements, matter.formula[:, place], strict=True)
            if count > 0.0
        )
    )
