"""Stores: the two-way pins that close cycles.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat and work [W].  In steady state a
store fills no inventory: what is asked beyond what returns is made up, what returns beyond what is
asked leaves through `rest`.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from typing import Annotated, Any, ClassVar

import numpy as np
from pydantic import Field

from chainflow.basis.constants import GAS_CONSTANT, T_REFERENCE
from chainflow.basis.quantities import OpenFraction, Pressure, Temperature, measured
from chainflow.equipment import keeping
from chainflow.equipment.base import (
    HEAT_PORTS,
    Array,
    Caution,
    Duty,
    Equipment,
    Flow,
    Outcome,
    Port,
    Role,
    Site,
)
from chainflow.equipment.junctions import joined
from chainflow.equipment.origins import (
    MATERIAL_INTENSITY,
    ORIGIN,
    MaterialIntensity,
    Origin,
)
from chainflow.equipment.ports import ANY_NAME, Feeds, arriving
from chainflow.equipment.pressures import lower_feed
from chainflow.equipment.shares import Shares, fractions, resolved
from chainflow.thermo.components import Matter
from chainflow.thermo.stream_slopes import enthalpy_slopes
from chainflow.thermo.streams import Stream

_ROUND_OFF = 1e-14  # of what is asked


@dataclass(frozen=True, slots=True)
class Turnover:
    """What a store does with what comes and is asked; all [mol/s], vectors over components."""

    returned: Array
    asked: float  # by draws
    made_up: float
    surplus: float  # of what draws get
    state: Array  # mole fractions of the draws
    refused: Array  # leaves through `rest` whatever is asked (pure stores)
    net: float


class Store(Equipment):
    """Keeps what returns and serves what is asked, at its own temperature and pressure.

    With N = asked - returned: N > 0 is made up (through `make_up`, or from outside with the
    composition `contents`), N < 0 leaves through `rest`; `net` = -N.  Returned and made up are
    mixed.  `pure: true` is an idealisation: draws are pure contents, all else leaves through
    `rest`; the minimum work of that separation is reported.
    """

    kind: ClassVar[str] = "store"
    family: ClassVar[str] = "stores"
    gives: ClassVar[tuple[str, ...]] = (
        "top_up_mol_s",
        "net_mol_s",
        "minimum_work_W",
        "top_up_enthalpy_W",
        *keeping.RESULTS,
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port(
            "returns",
            "material",
            Role.TAKES,
            many=True,
            main=True,
            optional=True,
            means="what comes in",
        ),
        Port(
            "make_up",
            "material",
            Role.CALLS,
            optional=True,
            means="asked when more is drawn than returns",
        ),
        *HEAT_PORTS,
        Port(
            ANY_NAME, "material", Role.SERVES, optional=True, means="each draw by a name of its own"
        ),
        Port(
            "rest",
            "material",
            Role.OFFERS,
            optional=True,
            means="what returns beyond what is drawn",
        ),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "N = asked - returned; made up = max(N, 0); rest = max(-N, 0); net = -N",
        "state = (returned + made up) / their total",
        (
            "energy is the lower heating value; with vessel: times mass share, or inside per "
            "outside volume"
        ),
        "working share = 1 - density at `least_pressure` / density",
    )
    sources: ClassVar[tuple[str, ...]] = (
        (
            "densities: Reynolds, Thermodynamic Properties in SI, 1979, as in Cantera (pure); "
            "Redlich-Kwong else"
        ),
        "vessel figures: practice, from memory; cavern loss 0.04 %/a: UK consultancy, 2022 (read)",
    )

    contents: Shares = Field(
        description="what is kept, and what is bought if no `make_up` is linked"
    )
    temperature: Temperature = Field(description="temperature of the store")
    pressure: Pressure = Field(description="pressure of the store, absolute")
    pure: bool = Field(False, description="idealisation: draws are pure contents")
    phase: keeping.StoredPhase = Field(
        "auto", description="liquid: a liquefied gas; auto: what the gas model says"
    )
    vessel: keeping.Vessel | None = Field(
        None, description="vessel whose usual figures are taken for masses, volumes and losses"
    )
    inventory: Annotated[float, measured("kg", ge=0)] | None = Field(
        None, description="mass kept, for the size of the vessel; no balance depends on it"
    )
    least_pressure: Annotated[float, measured("Pa", ge=0)] | None = Field(
        None, description="pressure that stays when it is empty: cushion of a cavern"
    )
    mass_share: OpenFraction | None = Field(
        None, description="fluid per fluid and vessel, by mass (default: that of `vessel`)"
    )
    volume_share: OpenFraction | None = Field(
        None, description="inside per outside volume (default: that of `vessel`)"
    )
    loss: Annotated[float, measured("1/s", ge=0)] | None = Field(
        None, description="contents lost per time, 0.1 %/d (default: that of `vessel`)"
    )
    origin: Origin | None = Field(None, description=ORIGIN)
    carbon_intensity: MaterialIntensity | None = Field(None, description=MATERIAL_INTENSITY)

    def component_names(self) -> Iterator[tuple[tuple[str, ...], str]]:
        return ((("contents", name), name) for name in self.contents)

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        if self.phase != "liquid":
            return
        present = [name for name, share in resolved(self.contents).items() if share > 0.0]
        if len(present) > 1:
            yield (
                ("contents",),
                f"a liquefied gas has to be pure, these are {', '.join(present)}: name one",
            )
        yield from keeping.liquid_faults(present[0], self.temperature, self.pressure)

    def material_outlets(self) -> tuple[str, ...]:
        return ("rest", ANY_NAME)

    def origins(self) -> dict[str, tuple[str, ...]]:
        present = tuple(name for name, share in resolved(self.contents).items() if share > 0)
        return {ANY_NAME: present}

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        kept = resolved(self.contents).get(species, 0.0) > 0.0
        return [(o, species) for o in outlets if o == "rest" or kept or not self.pure]

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        return lower_feed(inlets, self.pressure, "put a compressor or pump between")

    def turnover(self, feeds: Feeds, asked: Mapping[str, float], site: Site) -> Turnover:
        """Who gives and who gets how much."""
        returns = [f.flows for f in arriving(feeds, "returns") if isinstance(f, Stream)]
        returned = np.sum(returns, axis=0) if returns else np.zeros(len(site.matter.components))
        fresh = self._fresh(feeds, site)
        drawn = float(sum(asked.values()))
        if self.pure:
            return self._pure_turnover(returned, fresh, drawn, site)
        balance = _less(drawn, float(returned.sum()))
        made_up, surplus = max(balance, 0.0), max(-balance, 0.0)
        mixed = returned + made_up * fresh
        total = float(mixed.sum())
        state = mixed / total if total > 0.0 else fresh
        return Turnover(returned, drawn, made_up, surplus, state, np.zeros_like(state), -balance)

    def _pure_turnover(self, returned: Array, fresh: Array, drawn: float, site: Site) -> Turnover:
        contents = fractions(self.contents, site.matter)
        kept = _amount_of(contents, returned)
        balance = _less(drawn, kept)
        per_mol = _amount_of(contents, fresh)
        made_up = max(balance, 0.0) / per_mol if per_mol > 0.0 else 0.0
        refused = returned - kept * contents + made_up * (fresh - per_mol * contents)
        return Turnover(
            returned,
            drawn,
            made_up,
            max(-balance, 0.0),
            contents,
            np.maximum(refused, 0.0),
            -balance,
        )

    def _fresh(self, feeds: Feeds, site: Site) -> Array:
        make_up = arriving(feeds, "make_up")
        if make_up and isinstance(make_up[0], Stream):
            return make_up[0].flows / make_up[0].total
        return fractions(self.contents, site.matter)

    def _stream(self, flows: Array, site: Site) -> Stream:
        if self.phase == "liquid" and "H2O" not in self.contents:
            return keeping.as_liquid(site.matter, flows, self.temperature, self.pressure)
        return Stream.at(site.matter, flows, self.temperature, self.pressure)

    def bought(self, matter: Matter) -> Stream:
        """One mol/s of `contents` as it is bought, at the store's own state."""
        return self._stream(fractions(self.contents, matter), Site(matter))

    def sample(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> dict[str, Flow]:
        return {ANY_NAME: self._stream(self.turnover(feeds, asked, site).state, site)}

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        turn = self.turnover(feeds, asked, site)
        one = self._stream(turn.state, site)
        outlets: dict[str, Flow] = {
            name: one.scaled(float(amount)) for name, amount in asked.items()
        }
        leaving = turn.surplus * turn.state + turn.refused
        outlets["rest"] = self._stream(leaving, site) if self.pure else one.scaled(turn.surplus)
        entering = self._entering(feeds, turn, site)
        heat = sum(float(s.enthalpy) for s in outlets.values() if isinstance(s, Stream)) - sum(
            float(s.enthalpy) for s in entering
        )
        duties, _, drawn, given = self.settle([self._duty(entering, heat, site)], site)
        if "make_up" in feeds:
            drawn["make_up"] = turn.made_up
        results = {"top_up_mol_s": turn.made_up, "net_mol_s": turn.net}
        idealisations: tuple[Caution, ...] = ()
        if self.pure:
            results["minimum_work_W"] = self._minimum_work(turn, outlets, entering)
            text = (
                "draws are pure contents at no cost; the separation would take "
                f"at least {results['minimum_work_W'] / 1e3:.4g} kW"
            )
            idealisations = (Caution("pure-store", text),)
        if "make_up" not in feeds:
            results["top_up_enthalpy_W"] = turn.made_up * float(
                self._stream(fractions(self.contents, site.matter), site).enthalpy
            )
        if site.detail:
            results |= self._kept(one)
        return Outcome(
            {**outlets, **given},
            drawn,
            duties,
            power=sum(d.heat for d in duties if d.met_by == "power"),
            results=results,
            idealisations=idealisations,
            cautions=self._cautions(one, entering) if site.detail else (),
        )

    def _cautions(self, one: Stream, entering: list[Stream]) -> tuple[Caution, ...]:
        gas = sum(float(s.gas.sum()) for s in entering)
        if not one.liquid.any() or gas <= 1e-3 * sum(float(s.total) for s in entering):
            return ()
        text = (
            f"{gas:.4g} mol/s arrive as a gas and are liquefied here by cold that is bought: put "
            "a liquefier before the store"
        )
        return (Caution("liquefied-in-store", text),)

    def _kept(self, one: Stream) -> dict[str, float]:
        """Phase, density, energy and vessel of what one mol of the draws is."""
        vessel = keeping.vessel_of(
            self.vessel, self.mass_share, self.volume_share, self.loss, self.least_pressure
        )
        return keeping.kept_results(one, vessel, self.inventory)

    def _entering(self, feeds: Feeds, turn: Turnover, site: Site) -> list[Stream]:
        returns = [f for f in arriving(feeds, "returns") if isinstance(f, Stream)]
        make_up = arriving(feeds, "make_up")
        if make_up and isinstance(make_up[0], Stream):
            fresh = make_up[0].scaled(turn.made_up)
        else:
            fresh = self._stream(fractions(self.contents, site.matter), site).scaled(turn.made_up)
        return [*returns, fresh]

    def _duty(self, entering: list[Stream], heat: float, site: Site) -> Duty:
        start = self.temperature
        if self.phase == "liquid":  # most of the heat is that of condensation
            return Duty.between("to store temperature", heat, start, start)
        linked = site.inlets & {"heat", "power"} or "heat" in site.outlets
        if (site.detail or linked) and sum(float(s.total) for s in entering) > 0.0:
            start = float(joined(entering, site.matter, self.pressure).temperature)
        return Duty.between("to store temperature", heat, start, self.temperature)

    def _minimum_work(
        self, turn: Turnover, outlets: Mapping[str, Flow], entering: list[Stream]
    ) -> float:
        """Least work [W] to part what was mixed, at 25 degC and one pressure (ideal mixing)."""
        after = [s.flows for s in outlets.values() if isinstance(s, Stream)]
        before = np.sum([s.flows for s in entering], axis=0)
        return GAS_CONSTANT * T_REFERENCE * (_unmixing([before]) - _unmixing(after))

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        if self.pure or "heat" in site.outlets or site.inlets & {"heat", "power"}:
            return {}
        if self.phase == "liquid":  # no other component can be in it
            return {}
        return _StoreSlopes(self, feeds, asked, site, outcome).all()


class _StoreSlopes:
    """Derivatives of a store on one branch of its kink, the sign of N."""

    def __init__(
        self, store: Store, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> None:
        self.store, self.feeds, self.asked, self.site, self.outcome = (
            store,
            feeds,
            asked,
            site,
            outcome,
        )
        self.turn = store.turnover(feeds, asked, site)
        self.one = store._stream(self.turn.state, site)
        self.partial = self._partial_enthalpies()

    def _partial_enthalpies(self) -> Array:
        return enthalpy_slopes(self.one)[0]

    def all(self) -> dict[str, dict[str, Array]]:
        turn, size = self.turn, len(self.turn.state)
        total = float(
            (turn.returned + turn.made_up * self.store._fresh(self.feeds, self.site)).sum()
        )
        short = 1.0 if turn.made_up > 0.0 else 0.0
        fresh = self.store._fresh(self.feeds, self.site)
        by_return = np.eye(size) - short * np.outer(fresh, np.ones(size))  # d mixed / d returned
        by_asked = short * fresh
        scale = 1.0 / total if total > 0.0 else 0.0
        state_return = scale * (by_return - np.outer(turn.state, by_return.sum(axis=0)))
        state_asked = scale * (by_asked - turn.state * by_asked.sum())
        slopes = {
            "returns": self._column(
                np.hstack([state_return, np.zeros((size, 1))]),
                np.append((1.0 - short) * np.ones(size), 0.0),
                np.append(-short * np.ones(size), 0.0),
            )
        }
        for name in self.asked:
            column = self._column(
                state_asked[:, None], np.array([-(1.0 - short)]), np.array([short])
            )
            column[name] = column[name] + self._full(self.turn.state)[:, None]
            slopes[f"asked:{name}"] = column
        return slopes

    def _full(self, flows: Array) -> Array:
        return np.append(flows, float(self.partial @ flows))

    def _column(self, state: Array, surplus: Array, made_up: Array) -> dict[str, Array]:
        """Blocks for one input from d state, d surplus and d made up."""
        full_state = np.vstack([state, self.partial @ state])
        one = self._full(self.turn.state)
        column = {
            "rest": self.turn.surplus * full_state + np.outer(one, surplus),
            "state": full_state,
            "own:net_mol_s": (surplus - made_up)[None, :],
        }
        for name, amount in self.asked.items():
            column[name] = float(amount) * full_state
        if "make_up" in self.feeds:
            column["drawn:make_up"] = made_up[None, :]
        return column


def _less(asked: float, returned: float) -> float:
    """Return the difference of two amounts; nothing where it is round-off of sums of flows."""
    difference = asked - returned
    return difference if abs(difference) > _ROUND_OFF * asked else 0.0


def _amount_of(contents: Array, flows: Array) -> float:
    """How much of a mixture `contents` can be made of `flows`."""
    needed = contents > 0.0
    return float((flows[needed] / contents[needed]).min())


def _unmixing(streams: Iterable[Array]) -> float:
    """Sum of -n ln x over streams [mol/s]."""
    total = 0.0
    for flows in streams:
        there = flows[flows > 0.0]
        if there.size:
            total -= float((there * np.log(there / there.sum())).sum())
    return total
