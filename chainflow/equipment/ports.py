"""Ports of equipment, the flows that pass them, and who sets the amount of each.

Every port says who decides how much goes through it (`Role`); that is all there is to know about
degrees of freedom.  A flow is a `Stream` of matter, a `Heat` flow, or a plain number [W] for
electric power and light.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from enum import Enum

import numpy as np

from chainflow.thermo.streams import Stream

ANY_NAME = "*"  # the name of a port family: the lines of a flowsheet choose the names


class Role(Enum):
    """Who sets the amount at a port."""

    OFFERS = "offers"  # outlet: the sender decides
    SERVES = "serves"  # outlet: the receiver decides
    TAKES = "takes"  # inlet: accepts what arrives
    CALLS = "calls"  # inlet: asks for what it needs

    @property
    def is_inlet(self) -> bool:
        return self in (Role.TAKES, Role.CALLS)


@dataclass(frozen=True, slots=True)
class Port:
    """One inlet or outlet of a kind of equipment."""

    name: str
    content: str  # "material", "power", "heat", "light" or "any"
    role: Role
    many: bool = False  # takes, or serves, any number of lines
    optional: bool = False  # may stay without a line
    main: bool = False  # may be left out when a line is written
    means: str = ""

    @property
    def is_inlet(self) -> bool:
        return self.role.is_inlet

    @property
    def any_name(self) -> bool:
        return self.name == ANY_NAME


@dataclass(frozen=True, slots=True)
class Heat:
    """A flow of heat [W] given off (or needed) between two temperatures [K].

    `mean` is the entropy-mean temperature: rate / (entropy that goes with it) [K].
    """

    rate: float
    start: float
    end: float
    mean: float

    @staticmethod
    def between(rate: float, start: float, end: float) -> Heat:
        """Heat spread evenly over the temperatures from `start` to `end`."""
        return Heat(rate, start, end, mean_temperature(start, end))

    @staticmethod
    def total(parts: Sequence[Heat]) -> Heat:
        """All of `parts` as one flow: from the hottest start to the coldest end."""
        flowing = [part for part in parts if part.rate != 0.0]
        if not flowing:
            return parts[0] if parts else Heat(0.0, 298.15, 298.15, 298.15)
        if len(flowing) == 1:
            return flowing[0]
        rate = sum(part.rate for part in flowing)
        entropy = sum(part.rate / part.mean for part in flowing)
        hottest = max(max(part.start, part.end) for part in flowing)
        coldest = min(min(part.start, part.end) for part in flowing)
        if rate == 0.0 or entropy == 0.0:
            return Heat(rate, hottest, coldest, mean_temperature(hottest, coldest))
        start, end = (
            (hottest, coldest) if flowing[0].start >= flowing[0].end else (coldest, hottest)
        )
        return Heat(rate, start, end, rate / entropy)

    def scaled(self, factor: float) -> Heat:
        return Heat(self.rate * factor, self.start, self.end, self.mean)


Flow = Stream | Heat | float
Feeds = Mapping[str, Flow | tuple[Flow, ...]]


def mean_temperature(start: float, end: float) -> float:
    """Entropy-mean temperature [K] of heat spread evenly from `start` to `end` [K]."""
    if abs(start - end) < 1e-6 * start:
        return 0.5 * (start + end)
    return float((start - end) / np.log(start / end))


def arriving(feeds: Feeds, port: str) -> tuple[Flow, ...]:
    """All flows that arrive at an inlet, none if nothing is linked to it."""
    flow = feeds.get(port)
    if flow is None:
        return ()
    return flow if isinstance(flow, tuple) else (flow,)


def as_number(flow: Flow) -> float:
    """A flow that is one number: power [W], light [W] or an amount [mol/s]."""
    assert not isinstance(flow, Stream | Heat)
    return float(flow)
