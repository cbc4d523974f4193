"""Ports of equipment, the flows that pass them, and who sets the amount of each.

Every port says who decides how much goes through it (`Role`); that is all there is to know about
degrees of freedom.  A flow is a `Stream` of matter, a `Heat` flow, `Light`, or a plain number [W]
for electric power.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from enum import Enum
from itertools import pairwise
from math import log
from typing import Any

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
    content: str  # "material", "power", "heat", "light", "heat or power" or "any"
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


Part = tuple[float, float, float, float]  # rate [W], start, end, entropy-mean temperature [K]
MOST_PARTS = 24  # of one heat flow; the closest of more are joined


def scaled_parts(parts: Sequence[Part], factor: float) -> tuple[Part, ...]:
    """The same parts with another amount of heat in each."""
    return tuple((rate * factor, start, end, mean) for rate, start, end, mean in parts)


@dataclass(frozen=True, slots=True)
class Heat:
    """A flow of heat [W] given off (or needed) between two temperatures [K].

    `mean` is the entropy-mean temperature: rate / (entropy that goes with it) [K].  Heat that is
    not spread evenly over its temperatures comes in `parts` that are; they add up to it.
    """

    rate: float
    start: float
    end: float
    mean: float
    parts: tuple[Part, ...] = ()

    @staticmethod
    def between(rate: float, start: float, end: float) -> Heat:
        """Heat spread evenly over the temperatures from `start` to `end`."""
        return Heat(rate, start, end, mean_temperature(start, end))

    @staticmethod
    def total(flows: Sequence[Heat]) -> Heat:
        """All of `flows` as one: from the hottest start to the coldest end, shapes kept."""
        flowing = [flow for flow in flows if flow.rate != 0.0]
        if not flowing:
            return flows[0] if flows else Heat(0.0, 298.15, 298.15, 298.15)
        if len(flowing) == 1:
            return flowing[0]
        rate = sum(flow.rate for flow in flowing)
        entropy = sum(flow.rate / flow.mean for flow in flowing)
        hottest = max(flow.hottest for flow in flowing)
        coldest = min(flow.coldest for flow in flowing)
        if rate == 0.0 or entropy == 0.0:
            return Heat(rate, hottest, coldest, mean_temperature(hottest, coldest))
        falls = flowing[0].start >= flowing[0].end
        start, end = (hottest, coldest) if falls else (coldest, hottest)
        pieces = [piece for flow in flowing for piece in flow.pieces if piece.rate != 0.0]
        return Heat(rate, start, end, rate / entropy, _as_parts(pieces, falls=falls))

    @property
    def hottest(self) -> float:
        """The higher of its two temperatures [K]."""
        return max(self.start, self.end)

    @property
    def coldest(self) -> float:
        """The lower of its two temperatures [K]."""
        return min(self.start, self.end)

    @property
    def pieces(self) -> tuple[Heat, ...]:
        """Its parts as flows of their own, each spread evenly; itself if it has none."""
        return tuple(Heat(*part) for part in self.parts) if self.parts else (self,)

    def scaled(self, factor: float) -> Heat:
        """The same heat in another amount."""
        parts = scaled_parts(self.parts, factor)
        return Heat(self.rate * factor, self.start, self.end, self.mean, parts)


def _as_parts(pieces: Sequence[Heat], *, falls: bool) -> tuple[Part, ...]:
    """The parts of a flow; where there are too many the closest are joined."""
    if len(pieces) <= MOST_PARTS:
        return tuple((piece.rate, piece.start, piece.end, piece.mean) for piece in pieces)
    ordered = sorted(pieces, key=lambda piece: (-piece.hottest, -piece.coldest))
    parts: list[Part] = []
    for group in closest_groups([(piece.hottest, piece.coldest) for piece in ordered], MOST_PARTS):
        members = [ordered[i] for i in group]
        hottest = max(piece.hottest for piece in members)
        coldest = min(piece.coldest for piece in members)
        rate = sum(piece.rate for piece in members)
        entropy = sum(piece.rate / piece.mean for piece in members)
        ends = (hottest, coldest) if falls else (coldest, hottest)
        parts.append((rate, *ends, rate / entropy))
    return tuple(parts)


def closest_groups(ends: Sequence[tuple[float, float]], most: int) -> list[list[int]]:
    """Group neighbours of a falling row of temperature spans until at most `most` are left.

    The two neighbours that together span the least are joined first.
    """
    groups = [([i], hot, cold) for i, (hot, cold) in enumerate(ends)]
    while len(groups) > most:
        spans = [max(a[1], b[1]) - min(a[2], b[2]) for a, b in pairwise(groups)]
        at = spans.index(min(spans))
        (first, hot, cold), (second, other_hot, other_cold) = groups[at : at + 2]
        groups[at : at + 2] = [(first + second, max(hot, other_hot), min(cold, other_cold))]
    return [members for members, _, _ in groups]


@dataclass(frozen=True, slots=True)
class Light:
    """Sunlight on an aperture, with the weather around it.

    `rate` [W] is all that falls on the aperture and is what adds up in a balance; `irradiance`
    [W/m2] is that in its plane, so that ``rate / irradiance`` is the aperture.  `direct` [0 to 1]
    is the share of it that comes straight from the sun, the only part that can be concentrated.
    `air` [K] and `wind` [m/s] say how warm what stands in it gets.  The shape of the spectrum is
    always that of ASTM G173-03, global, whatever the irradiance.  In a batch each number may be an
    array over the cases.
    """

    rate: float
    irradiance: float
    direct: float
    air: float
    wind: float

    @property
    def area(self) -> float:
        """Aperture [m2] that it falls on; zero in the dark, where no rate tells it."""
        dark = np.asarray(self.irradiance) <= 0.0
        area = np.where(dark, 0.0, self.rate / np.where(dark, 1.0, self.irradiance))
        return as_given(area)

    def scaled(self, factor: float) -> Light:
        """The same light on `factor` times the aperture."""
        return replace(self, rate=self.rate * factor)

    @property
    def cases(self) -> int | None:
        """How many cases a batch of it holds; None if it is one case alone."""
        return next((len(x) for x in map(np.asarray, self.numbers) if x.ndim == 1), None)

    def case(self, i: int) -> Light:
        """One case of a batch; what is the same in all cases stays as it is."""
        found = (np.asarray(x) for x in self.numbers)
        return Light(*(float(x if x.ndim == 0 else x[i]) for x in found))

    @property
    def numbers(self) -> tuple[float, float, float, float, float]:
        """Its five numbers in the order above."""
        return self.rate, self.irradiance, self.direct, self.air, self.wind


Flow = Stream | Heat | Light | float
Feeds = Mapping[str, Flow | tuple[Flow, ...]]


def as_given(numbers: np.ndarray) -> Any:
    """One case as a plain number, a batch as its array."""
    return float(numbers) if np.ndim(numbers) == 0 else numbers


def mean_temperature(start: float, end: float) -> float:
    """Entropy-mean temperature [K] of heat spread evenly from `start` to `end` [K]."""
    if abs(start - end) < 1e-6 * start:
        return 0.5 * (start + end)
    return (start - end) / log(start / end)


def arriving(feeds: Feeds, port: str) -> tuple[Flow, ...]:
    """All flows that arrive at an inlet, none if nothing is linked to it."""
    flow = feeds.get(port)
    if flow is None:
        return ()
    return flow if isinstance(flow, tuple) else (flow,)


def as_number(flow: Flow) -> float:
    """A flow that is one number: power [W] or an amount [mol/s]."""
    assert not isinstance(flow, Stream | Heat | Light)
    return float(flow)


def rate_of(flow: Flow) -> float:
    """The energy flow [W] of power, light or heat; zero for matter."""
    if isinstance(flow, Stream):
        return 0.0
    return flow.rate if isinstance(flow, Heat | Light) else float(flow)


def times(flow: Flow, factor: float) -> Flow:
    """The same flow in `factor` times the amount."""
    return flow.scaled(factor) if isinstance(flow, Stream | Heat | Light) else flow * factor
