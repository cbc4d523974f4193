"""Where lines meet and part: mixer, blend to a ratio, splitter.

SI throughout: flows [mol/s], enthalpy [W], pressure [Pa].  All are adiabatic.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from typing import Annotated, Any, ClassVar

import numpy as np
from pydantic import (
    AllowInfNan,
    BaseModel,
    ConfigDict,
    Field,
    FiniteFloat,
    PositiveFloat,
    field_validator,
    model_validator,
)
from pydantic_core import PydanticCustomError

from chainflow.basis.names import name_trouble
from chainflow.equipment.base import (
    Array,
    Equipment,
    Flow,
    Heat,
    Light,
    Outcome,
    Port,
    Role,
    Site,
    material,
)
from chainflow.equipment.boundary import amounts
from chainflow.equipment.ports import ANY_NAME, Feeds, arriving, as_number, times
from chainflow.equipment.shares import Shares, resolved
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream

PositiveNumber = Annotated[PositiveFloat, AllowInfNan(False)]
_PRESSURE_SPREAD = 0.10  # inlets may differ by this share of the highest


def joined(streams: Iterable[Stream], matter: Matter, pressure: float | None = None) -> Stream:
    """Streams mixed adiabatically at the lowest of their pressures (or at `pressure`) [Pa]."""
    streams = tuple(streams)
    level = pressure if pressure is not None else min(float(s.pressure) for s in streams)
    if len(streams) == 1:
        return streams[0].at_pressure(level)
    flows = np.sum([s.flows for s in streams], axis=0)
    enthalpy = float(sum(s.enthalpy for s in streams))
    total = float(flows.sum())
    guess = (
        sum(float(s.total) * float(s.temperature) for s in streams) / total if total > 0 else None
    )
    return Stream.from_enthalpy(matter, flows, enthalpy, level, guess)


def spread_faults(inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
    """Inlets whose pressures differ too much to be joined without a valve."""
    known = [(p, port) for port, pressures in inlets.items() for p in pressures if np.isfinite(p)]
    if known and (max(known)[0] - min(known)[0]) > _PRESSURE_SPREAD * max(known)[0]:
        (low, _), (high, port) = min(known), max(known)
        yield (
            port,
            (
                f"inlets are at {low / 1e5:.4g} bar and {high / 1e5:.4g} bar, wanted within 10 %: "
                "put a valve, pump or compressor before one of them"
            ),
        )


class Mixer(Equipment):
    """Adiabatic mixing at the lowest inlet pressure."""

    kind: ClassVar[str] = "mixer"
    family: ClassVar[str] = "junctions"
    ports: ClassVar[tuple[Port, ...]] = (
        Port("inlet", "material", Role.TAKES, many=True, main=True, means="what is mixed"),
        Port("outlet", "material", Role.OFFERS, main=True, means="the mixture"),
    )

    let_down: bool = Field(
        False, description="let inlets that differ by more than 10 % be let down"
    )

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        if not self.let_down:
            for port, text in spread_faults(inlets):
                yield port, f"{text}, or say 'let_down: true'"

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        return Outcome({"outlet": joined(_streams(feeds, "inlet"), site.matter)})

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        return {"inlet": {"outlet": np.eye(len(site.matter.components) + 1)}}


class Module(BaseModel):
    """A ratio of sums of components, such as (H2 - CO2) / (CO + CO2)."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    over: dict[str, FiniteFloat] = Field(description="components and factors above the line")
    under: dict[str, FiniteFloat] = Field(description="components and factors below the line")
    value: PositiveNumber = Field(description="value wanted at the outlet")


class Blend(Equipment):
    """Adds so much of what `trim` gets that the outlet has a wanted ratio.

    The amount called follows from a linear balance: with w the weights of the ratio (over minus
    value times under), ``amount = - w.n(main) / w.y(trim)``.
    """

    kind: ClassVar[str] = "blend"
    family: ClassVar[str] = "junctions"
    ports: ClassVar[tuple[Port, ...]] = (
        Port("main", "material", Role.TAKES, many=True, main=True, means="what arrives"),
        Port("trim", "material", Role.CALLS, means="what is asked for to reach the ratio"),
        Port("outlet", "material", Role.OFFERS, main=True, means="the blend"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "amount = -w.n(main) / w.y(trim), w = over - value * under",
    )

    ratio: dict[str, PositiveNumber] | None = Field(
        None, description="two components and their parts, {H2: 4, CO2: 1}"
    )
    module: Module | None = Field(None, description="ratio of sums: over, under, value")
    let_down: bool = Field(
        False, description="let inlets that differ by more than 10 % be let down"
    )

    @model_validator(mode="after")
    def _one_ratio(self) -> Blend:
        if (self.ratio is None) == (self.module is None):
            raise PydanticCustomError(
                "blend",
                "give one of 'ratio' and 'module', such as ratio: {example}",
                {"example": "{H2: 4, CO2: 1}"},
            )
        if self.ratio is not None and len(self.ratio) != 2:
            raise PydanticCustomError(
                "blend",
                "ratio wants two components and names {count}: one inlet can trim one ratio",
                {"count": len(self.ratio)},
            )
        return self

    def component_names(self) -> Iterator[tuple[tuple[str, ...], str]]:
        if self.ratio is not None:
            yield from ((("ratio", name), name) for name in self.ratio)
        if self.module is not None:
            yield from ((("module", "over", name), name) for name in self.module.over)
            yield from ((("module", "under", name), name) for name in self.module.under)

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        if not self.let_down:
            for port, text in spread_faults(inlets):
                yield port, f"{text}, or say 'let_down: true'"

    def weights(self, matter: Matter) -> Array:
        """Weights whose sum over the outlet is zero when the ratio is met; shape (components,)."""
        if self.module is not None:
            return amounts(self.module.over, matter) - self.module.value * amounts(
                self.module.under, matter
            )
        assert self.ratio is not None
        (first, a), (second, b) = self.ratio.items()
        return amounts({first: 1.0 / a}, matter) - amounts({second: 1.0 / b}, matter)

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        mains, trim = _streams(feeds, "main"), material(feeds, "trim")
        weights = self.weights(site.matter)
        wanted = -float(sum(weights @ s.flows for s in mains))
        brought = float(weights @ trim.flows)
        unmet: dict[str, str] = {}
        if abs(brought) < 1e-9 * np.abs(weights).max():
            unmet["trim"] = (
                "what is served there changes nothing in the ratio: serve something that holds "
                "one of its components"
            )
            amount = 0.0
        else:
            amount = wanted / brought
            if amount < -1e-12 * sum(float(s.total) for s in mains):
                unmet["trim"] = (
                    f"overfull, 'main' already brings so much of it that {-amount:.6g} mol/s would "
                    "have to be taken out: feed less of it, or trim with the other component"
                )
        amount = max(amount, 0.0)
        level = min(float(s.pressure) for s in (*mains, trim))
        outlet = joined((*mains, trim.scaled(amount)), site.matter, level)
        return Outcome({"outlet": outlet}, {"trim": amount}, unmet=unmet)

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        trim = material(feeds, "trim")
        weights = np.append(self.weights(site.matter), 0.0)
        brought = float(weights[:-1] @ trim.flows)
        amount = as_number(outcome.drawn["trim"])
        one = np.append(trim.flows, trim.enthalpy)
        active = 1.0 if amount > 0.0 and brought != 0.0 else 0.0
        by_main = -active * weights / (brought or 1.0)  # d amount / d main
        by_trim = amount * by_main
        eye = np.eye(len(one))
        return {
            "main": {"outlet": eye + np.outer(one, by_main), "drawn:trim": by_main[None, :]},
            "trim": {
                "outlet": amount * eye + np.outer(one, by_trim),
                "drawn:trim": by_trim[None, :],
            },
        }


class Splitter(Equipment):
    """Parts any flow into shares that add up to one; every outlet has the inlet's state."""

    kind: ClassVar[str] = "splitter"
    family: ClassVar[str] = "junctions"
    ports: ClassVar[tuple[Port, ...]] = (
        Port("inlet", "any", Role.TAKES, main=True, means="what is parted"),
        Port(ANY_NAME, "any", Role.OFFERS, optional=True, means="one for each name in `shares`"),
    )

    shares: Shares = Field(description="share of each outlet, {recycle: 95 %, purge: rest}")

    @field_validator("shares")
    @classmethod
    def _names(cls, shares: dict[str, Any]) -> dict[str, Any]:
        for name in shares:
            if trouble := name_trouble(name):
                raise PydanticCustomError("splitter", "{trouble}", {"trouble": trouble})
        return shares

    def port_list(self) -> tuple[Port, ...]:
        means = "its share of the inlet"
        return (
            self.ports[0],
            *(Port(name, "any", Role.OFFERS, optional=True, means=means) for name in self.shares),
        )

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        shares = resolved(self.shares)
        return [(outlet, species) for outlet in outlets if shares.get(outlet, 0.0) > 0.0]

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        (inlet,) = arriving(feeds, "inlet")
        outlets: dict[str, Flow] = {
            name: times(inlet, share) for name, share in resolved(self.shares).items()
        }
        return Outcome(outlets)

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        (inlet,) = arriving(feeds, "inlet")
        return {"inlet": {n: _part(inlet, share) for n, share in resolved(self.shares).items()}}


def _part(flow: Flow, share: float) -> Array:
    """Slopes of a share of a flow: the amount is parted, heat and light keep their state."""
    if isinstance(flow, Stream):
        return share * np.eye(len(flow.matter.components) + 1)
    if isinstance(flow, Heat):
        return np.diag([share, 1.0, 1.0, 1.0] * len(flow.pieces))
    return np.diag([share, *[1.0] * (4 if isinstance(flow, Light) else 0)])


def _streams(feeds: Feeds, port: str) -> tuple[Stream, ...]:
    return tuple(flow for flow in arriving(feeds, port) if isinstance(flow, Stream))
