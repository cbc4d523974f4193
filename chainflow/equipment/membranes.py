"""A gas membrane: what passes it, what stays, and at which temperature both leave.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], area [m2], permeance [mol/(m2 s Pa)].
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from typing import Annotated, Any, ClassVar, Literal

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import Area, Pressure, PressureDrop, measured
from chainflow.basis.units import resolve
from chainflow.equipment.base import (
    Array,
    Caution,
    Equipment,
    Outcome,
    Port,
    Role,
    Site,
    material,
)
from chainflow.equipment.parting import at_one_temperature
from chainflow.equipment.permeation import cross_flow, well_mixed
from chainflow.equipment.ports import Feeds
from chainflow.equipment.pressures import lower_feed
from chainflow.equipment.published.polyimide_ranges import PERMEANCES, PLASTICISES_ABOVE
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream

Permeance = Annotated[float, measured("mol/(m2*s*Pa)", ge=0)]
_MODELS = {"cross-flow": cross_flow, "well-mixed": well_mixed}
_ALL_PASSED = 1e-6  # share of the feed left below which the area is far too large


class Membrane(Equipment):
    """Lets gases pass by their permeances, from the feed's pressure to `permeate_pressure`.

    `cross-flow` (plug flow along the feed side, permeate drawn off where it passes) or `well-mixed`
    on both sides.  Components without a permeance do not pass; without any, a generic polyimide is
    taken.  No heat is exchanged: both outlets leave at the one temperature that closes the energy.
    """

    kind: ClassVar[str] = "membrane"
    family: ClassVar[str] = "separation"
    gives: ClassVar[tuple[str, ...]] = (
        "stage_cut",
        "area_m2",
        "flux_mol_m2_s",
        "outlet_K",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port("feed", "material", Role.TAKES, main=True, means="the gas"),
        Port("permeate", "material", Role.OFFERS, optional=True, means="what passes"),
        Port("retentate", "material", Role.OFFERS, main=True, means="what stays"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "flux_i = permeance_i * (x_i * p_feed - y_i * permeate_pressure)",
        (
            "cross-flow: dn_i = -flux_i dA with y_i = flux_i / sum(flux), Dormand-Prince steps "
            "with "
            "error control"
        ),
        "well-mixed: flux at the retentate's x, y of the whole permeate",
    )
    sources: ClassVar[tuple[str, ...]] = (
        "default permeances: generic polyimide, own choice inside ranges from memory",
        "integration: Dormand and Prince, J. Comp. Appl. Math. 6 (1980) 19",
    )

    area: Area = Field(description="membrane area")
    permeate_pressure: Pressure = Field(description="pressure of what passes, absolute")
    permeance: dict[str, Permeance] | None = Field(
        None, description="permeance of each component that passes, {H2: 150 GPU}"
    )
    model: Literal["cross-flow", "well-mixed"] = Field(
        "cross-flow", description="how both sides flow"
    )
    pressure_drop: PressureDrop = Field(0.0, description="pressure lost by the retentate")

    @model_validator(mode="after")
    def _something_passes(self) -> Membrane:
        if self.permeance is not None and not any(self.permeance.values()):
            raise PydanticCustomError(
                "membrane", "nothing passes: give at least one permeance above zero", {}
            )
        return self

    def component_names(self) -> Iterator[tuple[tuple[str, ...], str]]:
        return ((("permeance", name), name) for name in self.permeance or {})

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        if not self._permeances(matter).any():
            yield (
                ("permeance",),
                "no component of this plant has a permeance: give them, as {H2: 150 GPU}",
            )

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        passes = self._permeances(matter)[matter.index[species]] > 0.0
        return [(o, species) for o in outlets if o == "retentate" or passes]

    def outlet_pressures(self, inlets: Mapping[str, tuple[float, ...]]) -> dict[str, float]:
        level = min(inlets.get("feed", (float("inf"),)))
        return {"permeate": self.permeate_pressure, "retentate": level - self.pressure_drop}

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        yield from lower_feed(
            inlets, self.permeate_pressure, "put a compressor before it, or lower permeate_pressure"
        )

    def _permeances(self, matter: Matter) -> Array:
        """Permeances in the order of the components; shape (components,)."""
        if self.permeance is not None:
            return matter.vector(self.permeance)
        unit = resolve("GPU")
        known = {k: unit.to_si(v) for k, v in PERMEANCES.items() if k in matter.index}
        return matter.vector(known)

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        feed, matter = material(feeds, "feed"), site.matter
        gas, pressure = feed.gas, float(feed.pressure)
        left = _MODELS[self.model](
            gas.tolist(),
            self._permeances(matter).tolist(),
            self.area,
            pressure,
            self.permeate_pressure,
        )
        passed = np.maximum(gas - np.array(left), 0.0)
        stays = feed.flows - passed
        parts = [(passed, self.permeate_pressure), (stays, pressure - self.pressure_drop)]
        permeate, retentate = at_one_temperature(
            matter, parts, float(feed.enthalpy), float(feed.temperature)
        )
        amount, total = float(passed.sum()), float(feed.total)
        return Outcome(
            {"permeate": permeate, "retentate": retentate},
            results={
                "stage_cut": amount / total if total > 0.0 else 0.0,
                "area_m2": self.area,
                "flux_mol_m2_s": amount / self.area if self.area > 0.0 else 0.0,
                "outlet_K": float(retentate.temperature),
            },
            cautions=self._cautions(feed, stays) if site.detail else (),
        )

    def _cautions(self, feed: Stream, stays: Array) -> tuple[Caution, ...]:
        found = []
        total = float(feed.total)
        if float(feed.water.sum()) > 1e-9 * total:
            text = (
                "liquid water arrives with the feed and stays with the retentate: put a "
                "condenser and a heater before the membrane"
            )
            found.append(Caution("liquid-at-membrane", text))
        if total > 0.0 and float(stays.sum()) < _ALL_PASSED * total:
            text = f"all of the feed passes: {self.area:.4g} m2 is too large for it"
            found.append(Caution("all-passes", text))
        partial = float(feed.fraction("CO2")) * float(feed.pressure)
        if self.permeance is None and partial > PLASTICISES_ABOVE:
            text = (
                f"{partial / 1e5:.4g} bar of CO2: a polyimide swells above some 3 bar and tells "
                "gases apart less well than the permeances of pure gases say"
            )
            found.append(Caution("membrane-swells", text))
        return tuple(found)


__all__ = ["Membrane"]
