"""Which heat meets which need, with the slopes of all that is left over and missing.

A plain function of heat flows [W] between temperatures [K].  Every need, the hottest first, takes
the coldest heat that is hot enough; what is met in all is then the most that can be (the problem
table of `chainflow.equipment.cascade` says the same), what is left over is as hot as it can be and
what is missing is missing at the lowest temperatures.

Numbers carry their slopes: an array whose first entry is the value, the others its slopes by
``[rate, start, end, mean]`` of every piece of heat, those given first.  Where the answer has a kink
the slopes are those of the side the numbers are on.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import NamedTuple

import numpy as np

from chainflow.equipment.ports import MOST_PARTS, Heat, closest_groups

SAME_LEVEL = 1e-6  # [K], so that heat at 593.15 K serves a need up to 593.15 K
_PIECE = 4  # numbers of a piece of heat
Number = np.ndarray  # (1 + slopes,)


class Left(NamedTuple):
    """Heat that is left over, or missing: a piece with the slopes of its numbers."""

    rate: Number
    hot: Number
    cold: Number
    mean: Number


@dataclass(frozen=True, slots=True)
class Matching:
    """What the needs get; temperatures are those the heat has, or must have, before the match."""

    missing: Number  # [W]
    wanted: tuple[Left, ...]  # heat that would meet what is missing, hottest first
    rest: tuple[Left, ...]  # heat left over, hottest first
    met: tuple[float, ...]  # of each piece of need [W]


@dataclass(slots=True)
class _Spread:
    """A piece of heat on the levels: where it is hot, where it is cold and how much of it."""

    rate: Number
    hot: Number
    cold: Number
    mean: Number
    first: int = 0  # level of its hot end
    last: int = 0  # level of its cold end


@dataclass(slots=True)
class _Slot:
    """All heat at one level, or between two: given, or needed."""

    heat: Number
    entropy: Number
    hot: Number
    cold: Number
    shares: list[tuple[int, float]] = field(default_factory=list)  # (piece, heat)


def match(
    given: Sequence[Heat], needed: Sequence[Heat], approach: float, *, slopes: bool = False
) -> Matching:
    """Match pieces of heat given off with pieces of heat needed, at least `approach` [K] apart.

    Both are positive rates spread evenly over their temperatures; others count as nothing.
    """
    size = _PIECE * (len(given) + len(needed)) if slopes else 0
    sources = [_spread(heat, i, size) for i, heat in enumerate(given)]
    sinks = [_spread(heat, len(given) + i, size) for i, heat in enumerate(needed)]
    shift = _constant(approach, size)
    levels = _levels(sources, sinks, shift)
    supply, demand = _slots(sources, levels), _slots(sinks, [level - shift for level in levels])
    return _matched(supply, demand, shift, len(needed))


# --- numbers with slopes -------------------------------------------------------------------------


def _constant(value: float, size: int) -> Number:
    number = np.zeros(1 + size)
    number[0] = value
    return number


def _product(a: Number, b: Number) -> Number:
    found = a * b[0] + b * a[0]
    found[0] = a[0] * b[0]
    return found


def _quotient(a: Number, b: Number) -> Number:
    ratio = a[0] / b[0]
    found = (a - ratio * b) / b[0]
    found[0] = ratio
    return found


def _log_ratio(a: Number, b: Number) -> Number:
    """The logarithm of a / b."""
    found = a / a[0] - b / b[0]
    found[0] = np.log(a[0] / b[0])
    return found


# --- levels and slots ----------------------------------------------------------------------------


def _spread(heat: Heat, number: int, size: int) -> _Spread:
    """A piece of heat as numbers with slopes; what is not positive counts as nothing."""
    flows = heat.rate >= 0.0
    values = (heat.rate if flows else 0.0, heat.start, heat.end, heat.mean)
    numbers = [_constant(value, size) for value in values]
    if size:
        for place, entry in enumerate(numbers):
            entry[1 + _PIECE * number + place] = 1.0 if flows or place else 0.0
    rate, start, end, mean = numbers
    hot, cold = (start, end) if start[0] >= end[0] else (end, start)
    return _Spread(rate, hot, cold, mean)


def _levels(sources: list[_Spread], sinks: list[_Spread], shift: Number) -> list[Number]:
    """Temperatures of the given heat where something begins or ends, the hottest first."""
    ends = [
        *((piece.hot, piece, True) for piece in sources),
        *((piece.cold, piece, False) for piece in sources),
        *((piece.hot + shift, piece, True) for piece in sinks),
        *((piece.cold + shift, piece, False) for piece in sinks),
    ]
    ends.sort(key=lambda end: -end[0][0])
    levels: list[Number] = []
    for level, piece, is_hot in ends:
        if not levels or levels[-1][0] - level[0] > SAME_LEVEL:
            levels.append(level)
        if is_hot:
            piece.first = len(levels) - 1
        else:
            piece.last = len(levels) - 1
    return levels


def _slots(pieces: list[_Spread], levels: list[Number]) -> dict[int, _Slot]:
    """Heat at each level (even place) and in the interval below it (odd place)."""
    slots: dict[int, _Slot] = {}
    for number, piece in enumerate(pieces):
        if piece.first == piece.last:
            entropy = _quotient(piece.rate, piece.mean)
            _add(slots, 2 * piece.first, number, piece.rate, entropy, (piece.hot, piece.cold))
            continue
        width, whole = piece.hot - piece.cold, _log_ratio(piece.hot, piece.cold)
        entropy = _quotient(piece.rate, piece.mean)
        for k in range(piece.first, piece.last):
            hot = piece.hot if k == piece.first else levels[k]
            cold = piece.cold if k + 1 == piece.last else levels[k + 1]
            heat = _product(piece.rate, _quotient(hot - cold, width))
            part = _product(entropy, _quotient(_log_ratio(hot, cold), whole))
            _add(slots, 2 * k + 1, number, heat, part, (hot, cold))
    return slots


def _add(
    slots: dict[int, _Slot],
    place: int,
    number: int,
    heat: Number,
    entropy: Number,
    ends: tuple[Number, Number],
) -> None:
    slot = slots.get(place)
    if slot is None:
        slots[place] = slot = _Slot(0.0 * heat, 0.0 * heat, *ends)
    slot.heat = slot.heat + heat
    slot.entropy = slot.entropy + entropy
    slot.shares.append((number, float(heat[0])))


# --- the match -----------------------------------------------------------------------------------


def _matched(
    supply: dict[int, _Slot], demand: dict[int, _Slot], shift: Number, pieces: int
) -> Matching:
    """Go down the levels: heat that is given is put on a pile, needs take it from the top."""
    pile: list[_Slot] = []
    missing = 0.0 * shift
    wanted: list[Left] = []
    met = [0.0] * pieces
    for place in sorted({*supply, *demand}):
        if place in supply:
            pile.append(supply[place])
        if place not in demand:
            continue
        slot = demand[place]
        short = _take(pile, slot.heat)
        asked = float(slot.heat[0])
        share = 1.0 - float(short[0]) / asked if asked > 0.0 else 0.0
        for number, heat in slot.shares:
            met[number] += share * heat
        missing = missing + short
        if short[0] > 0.0:
            mean = _quotient(slot.heat, slot.entropy) + shift
            wanted.append(Left(short, slot.hot + shift, slot.cold + shift, mean))
    rest = [
        Left(slot.heat, slot.hot, slot.cold, _quotient(slot.heat, slot.entropy))
        for slot in pile
        if slot.heat[0] > 0.0
    ]
    return Matching(missing, _joined(wanted), _joined(rest), tuple(met))


def _take(pile: list[_Slot], need: Number) -> Number:
    """Take heat from the top of the pile; what of the need is not met."""
    while pile:
        top = pile[-1]
        if top.heat[0] > need[0]:
            share = _quotient(need, top.heat)
            top.entropy = top.entropy - _product(share, top.entropy)
            top.heat = top.heat - need
            return 0.0 * need
        need = need - pile.pop().heat
    return need


def _joined(found: list[Left]) -> tuple[Left, ...]:
    """The closest of too many pieces are joined."""
    ends = [(float(piece.hot[0]), float(piece.cold[0])) for piece in found]
    joined = []
    for group in closest_groups(ends, MOST_PARTS):
        members = [found[i] for i in group]
        if len(members) == 1:
            joined.append(members[0])
            continue
        rate = sum((piece.rate for piece in members[1:]), members[0].rate)
        entropies = [_quotient(piece.rate, piece.mean) for piece in members]
        entropy = sum(entropies[1:], entropies[0])
        hot = max((piece.hot for piece in members), key=lambda level: float(level[0]))
        cold = min((piece.cold for piece in members), key=lambda level: float(level[0]))
        joined.append(Left(rate, hot, cold, _quotient(rate, entropy)))
    return tuple(joined)
