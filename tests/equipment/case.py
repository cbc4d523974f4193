"""One piece of equipment at given settings, with what arrives and what is asked of it.

A called inlet gets one mol/s of what its server gives; `asked` holds amounts at serving outlets.
"""

from dataclasses import dataclass, field

from chainflow.equipment.base import Equipment, Outcome, Site
from chainflow.equipment.ports import Flow, Role, arriving
from chainflow.equipment.register import kinds
from chainflow.equipment.stores import Store
from chainflow.thermo.streams import Stream
from tests.equipment.feeds import MATTER


@dataclass(frozen=True)
class Case:
    """One piece of equipment with what arrives, what is asked and which ports are linked."""

    name: str
    equipment: Equipment
    feeds: dict
    asked: dict
    site: Site
    extensive: tuple = ()  # paths of settings that are amounts
    ideal: str = ""  # the declared idealisation that lets it off the second law
    unmet: bool = False  # it has no answer on purpose
    jumps: tuple = ()  # components whose first trace changes the answer by a step

    def run(self, equipment=None, feeds=None, asked=None) -> Outcome:
        """What the equipment does, with some of the case replaced."""
        return (equipment or self.equipment).operate(
            self.feeds if feeds is None else feeds,
            self.asked if asked is None else asked,
            self.site,
        )

    @property
    def called(self):
        """Material inlets that ask for their amount."""
        return tuple(
            port for port in self.feeds if self.equipment.port(port, inlet=True).role is Role.CALLS
        )

    def arrives(self, outcome):
        """Every flow that comes in, called ones at the amount asked for, and what a store buys."""
        flows: list[Flow] = []
        for port in self.feeds:
            factor = outcome.drawn[port] if port in self.called else 1.0
            flows += [
                f.scaled(factor) if isinstance(f, Stream) else f for f in arriving(self.feeds, port)
            ]
        return [*flows, *self.bought(outcome)]

    def bought(self, outcome):
        """What is taken out of the surroundings, or what a store without make-up gets."""
        if outcome.taken:
            return list(outcome.taken)
        piece = self.equipment
        if not isinstance(piece, Store) or "make_up" in self.feeds:
            return []
        one = piece.bought(self.site.matter)
        return [one.scaled(outcome.results["top_up_mol_s"])]


@dataclass
class Collector:
    cases: list = field(default_factory=list)

    def add(
        self,
        label,
        kind,
        settings,
        feeds=None,
        asked=None,
        *,
        inlets=(),
        outlets=(),
        matter=MATTER,
        ambient=298.15,
        others=None,
        **marks,
    ):
        """Note one case; `inlets`, `outlets` name linked ports beside those that get something.

        `others` is equipment whose settings it has to know, by name.
        """
        feeds, asked = feeds or {}, asked or {}
        equipment = kinds()[kind].model_validate(settings).seeing(others or {})
        site = Site(
            matter,
            ambient,
            frozenset(feeds) | frozenset(inlets),
            frozenset(outlets) | frozenset(asked),
        )
        self.cases.append(Case(f"{kind}: {label}", equipment, feeds, asked, site, **marks))
