"""How the heat needs of one piece of equipment are met, and where the heat it gives off goes.

SI throughout: heat [W], positive into the equipment; temperatures [K].  A need is a `Duty` with
`met_by` still open.  The order is: the equipment's own heat where it is hot enough, the ambient
(free below, worthless at and below), a linked `power` or `heat` port, and what is left is bought.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from chainflow.equipment.ports import Heat, Part, mean_temperature, scaled_parts

_TEMPERATURE_SLACK = 1e-6  # [K], so that heat at 593.15 K serves a need up to 593.15 K


@dataclass(frozen=True, slots=True)
class Duty:
    """Heat into (+) or out of (-) a piece of equipment [W], between two temperatures [K].

    Where it is not spread evenly between them, `curve` says how: parts ``(heat, start, end, mean)``
    from its start to its end that add up to it.
    """

    purpose: str
    heat: float
    start: float
    end: float
    mean: float
    met_by: str = ""  # power, heat, own, ambient, bought
    curve: tuple[Part, ...] = ()
    usable: bool = False  # given off above the ambient where a line could take it

    @staticmethod
    def between(
        purpose: str, heat: float, start: float, end: float, *, mean: float = 0.0, met_by: str = ""
    ) -> Duty:
        """A duty spread evenly from `start` to `end` unless its mean temperature is known."""
        return Duty(purpose, heat, start, end, mean or mean_temperature(start, end), met_by)

    @property
    def hottest(self) -> float:
        return max(self.start, self.end)

    @property
    def coldest(self) -> float:
        return min(self.start, self.end)

    def part(self, heat: float, met_by: str) -> Duty:
        """The same duty for a part of its heat."""
        curve = scaled_parts(self.curve, heat / self.heat) if self.curve else ()
        return replace(self, heat=heat, met_by=met_by, curve=curve)

    @property
    def flow(self) -> Heat:
        """The heat as a flow with a positive rate, whichever way it goes."""
        sign = 1.0 if self.heat >= 0.0 else -1.0
        parts = scaled_parts(self.curve, sign)
        return Heat(sign * self.heat, self.start, self.end, self.mean, parts)


@dataclass(frozen=True, slots=True)
class Settled:
    """The duties with how each is met, what is asked of the ports, and the heat that is offered."""

    duties: tuple[Duty, ...]
    power: float  # asked at the `power` port [W]
    heat: Heat | None  # asked at the `heat` inlet
    offered: Heat | None  # given to the `heat` outlet


def settle(
    needs: Sequence[Duty], ambient: float, inlets: frozenset[str], outlets: frozenset[str]
) -> Settled:
    """Say how each duty is met.

    Parameters
    ----------
    needs : duties with `met_by` open; those that carry one already are kept as they are.
    ambient : temperature of the surroundings [K].
    inlets, outlets : the names of the linked ports.
    """
    done = [duty for duty in needs if duty.met_by]
    wanted, given, own = _meet_own([duty for duty in needs if not duty.met_by and duty.heat != 0.0])
    done += own
    asked: list[Duty] = []
    for duty in wanted:
        free, rest = _cut_at(duty, ambient)
        if free is not None:
            done.append(replace(free, met_by="ambient"))
        if rest is not None:
            how = "heat" if "heat" in inlets else "power" if "power" in inlets else "bought"
            asked.append(replace(rest, met_by=how))
    leaving: list[Duty] = []
    for duty in given:
        cold, warm = _cut_at(duty, ambient)
        if cold is not None:
            at_ambient = cold.coldest >= ambient - _TEMPERATURE_SLACK
            done.append(replace(cold, met_by="ambient" if at_ambient else "bought"))
        if warm is not None:
            way = "heat" if "heat" in outlets else "ambient"
            leaving.append(replace(warm, met_by=way, usable=True))
    offered = [duty.flow for duty in leaving if duty.met_by == "heat"]
    called = [duty.flow for duty in asked if duty.met_by == "heat"]
    level = needs[0].start if needs else ambient
    none = Heat(0.0, level, level, level)
    return Settled(
        duties=tuple(done + asked + leaving),
        power=float(sum(d.heat for d in asked if d.met_by == "power")),
        heat=(Heat.total(called) if called else none) if "heat" in inlets else None,
        offered=(Heat.total(offered) if offered else none) if "heat" in outlets else None,
    )


def _meet_own(needs: Sequence[Duty]) -> tuple[list[Duty], list[Duty], list[Duty]]:
    """Use heat given off for needs of the same equipment, where all of it is hot enough."""
    wanted = sorted((d for d in needs if d.heat > 0.0), key=lambda d: -d.hottest)
    given = sorted((d for d in needs if d.heat < 0.0), key=lambda d: -d.coldest)
    own: list[Duty] = []
    for i, need in enumerate(wanted):
        for j, source in enumerate(given):
            if source.heat == 0.0 or source.coldest < need.hottest - _TEMPERATURE_SLACK:
                continue
            used = min(need.heat, -source.heat)
            if used == 0.0:
                continue
            own += [need.part(used, "own"), source.part(-used, "own")]
            need = need.part(need.heat - used, "")
            given[j] = source.part(source.heat + used, "")
        wanted[i] = need
    return [d for d in wanted if d.heat > 0.0], [d for d in given if d.heat < 0.0], own


def _cut_at(duty: Duty, ambient: float) -> tuple[Duty | None, Duty | None]:
    """The part of a duty at or below the ambient temperature, and the part above it.

    A duty with a curve has been cut there already; another that is not loses its curve.
    """
    if duty.coldest >= ambient - _TEMPERATURE_SLACK:
        return (duty, None) if duty.hottest <= ambient + _TEMPERATURE_SLACK else (None, duty)
    if duty.hottest <= ambient + _TEMPERATURE_SLACK:
        return duty, None
    share = (ambient - duty.coldest) / (duty.hottest - duty.coldest)
    entropy = duty.heat / duty.mean
    low_heat = duty.heat * share
    low_mean = mean_temperature(duty.coldest, ambient)
    high_heat = duty.heat - low_heat
    high_entropy = entropy - low_heat / low_mean
    high_mean = high_heat / high_entropy if high_entropy * high_heat > 0.0 else duty.mean
    high_mean = min(max(high_mean, ambient), duty.hottest)
    rising = duty.end > duty.start
    low_ends = (duty.start, ambient) if rising else (ambient, duty.end)
    high_ends = (ambient, duty.end) if rising else (duty.start, ambient)
    return (
        Duty(duty.purpose, low_heat, *low_ends, low_mean),
        Duty(duty.purpose, high_heat, *high_ends, high_mean),
    )
