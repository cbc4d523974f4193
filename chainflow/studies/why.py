"""Why is the efficiency what it is: where is most lost, and which settings matter most?

Losses are told twice: in points of all that goes in, rung by rung, and as exergy destroyed in each
piece of equipment. What matters comes from the solver's own derivatives
(`chainflow.studies.sensitivities`): the change of the overall efficiency for one per cent of a
setting, or for 10 K of a temperature, everything else and all holds kept.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from chainflow.accounts.efficiency import Rung
from chainflow.accounts.exergy import exergy_destroyed
from chainflow.accounts.plant import PlantAccount, plant_account
from chainflow.accounts.worth import of_light
from chainflow.basis.faults import UsageFault
from chainflow.basis.formatting import format_quantity
from chainflow.flowsheet.movable import Lever, is_allowed
from chainflow.solver.solution import Solution
from chainflow.studies.sensitivities import Sensitivities, sensitivities

_MOST_PIECES = 5
_MOST_SETTINGS = 3
_RELATIVE_STEP = 0.01
_WARMER = 10.0  # [K]
_NO_MATTER = 1e-6  # relative change of the efficiency that is not worth a word
_NO_POINTS = 5e-5  # of what goes in, not worth a word


@dataclass(frozen=True, slots=True)
class RungLoss:
    """What is lost between two cuts, as a share of all that goes in; negative where it grows."""

    start: str
    end: str
    share: float


@dataclass(frozen=True, slots=True)
class PieceLoss:
    """Exergy destroyed in one piece of equipment [W], and its share of all exergy that goes in."""

    equipment: str
    destroyed: float
    share: float


@dataclass(frozen=True, slots=True)
class Matter:
    """What a usual step of one setting does to the efficiency."""

    setting: Lever
    step: float  # SI
    slope: float  # of the efficiency, per SI unit
    effect: float  # relative change of the efficiency for the step
    is_knob: bool

    @property
    def name(self) -> str:
        """How the file writes it: ``$field`` for a knob, else the address."""
        return f"${self.setting.name}" if self.is_knob else self.setting.name


@dataclass(frozen=True, slots=True)
class Why:
    """The reasons behind one efficiency of a solved flowsheet."""

    of: str  # "overall" or "sunlight_to_fuel"
    basis: str
    efficiency: float
    rungs: tuple[RungLoss, ...]  # in the order of the chain
    pieces: tuple[PieceLoss, ...]  # largest first, all of them
    settings: tuple[Matter, ...]  # largest first, all that can be moved
    left_out: dict[str, str]

    def sentences(self) -> tuple[str, ...]:
        """Return the reasons in plain sentences."""
        return tuple(self._sentences())

    def _sentences(self) -> Iterator[str]:
        lost = [rung for rung in self.rungs if abs(rung.share) >= _NO_POINTS]
        if lost:
            parts = [_points(rung) for rung in sorted(lost, key=lambda rung: -rung.share)]
            yield f"Of 100 points {self.basis} that go in, {_listed(parts)}."
        most = [piece for piece in self.pieces[:_MOST_PIECES] if piece.share >= _NO_POINTS]
        if most:
            parts = [
                f"{piece.equipment} ({format_quantity(piece.destroyed, 'W')}, "
                f"{100 * piece.share:.3g} %)"
                for piece in most
            ]
            yield f"Of the exergy that goes in, most is destroyed in {_listed(parts)}."
        what = f"the {self.of.replace('_', ' ')} efficiency"
        for matter in self.settings[:_MOST_SETTINGS]:
            yield _moving(matter, what, self.efficiency)

    def as_data(self) -> dict[str, Any]:
        """Return everything as plain data; shares are of what goes in."""
        return {
            "of": self.of,
            "basis": self.basis,
            "efficiency": self.efficiency,
            "sentences": list(self.sentences()),
            "lost": [{"from": r.start, "to": r.end, "share": r.share} for r in self.rungs],
            "destroyed": [
                {"equipment": p.equipment, "exergy_W": p.destroyed, "share": p.share}
                for p in self.pieces
            ],
            "settings": [
                {
                    "setting": matter.setting.name,
                    "knob": matter.is_knob,
                    "value": matter.setting.value,
                    "unit": matter.setting.unit,
                    "slope": matter.slope,
                    "elasticity": matter.slope * matter.setting.value / self.efficiency,
                    "step": matter.step,
                    "relative_change": matter.effect,
                }
                for matter in self.settings
            ],
            "left_out": dict(self.left_out),
        }


def why(solution: Solution) -> Why:
    """Return the reasons behind the efficiency of a solution.

    The overall efficiency is explained; where nothing is delivered, that of sunlight to fuel.
    Raises `UsageFault` if the plant has neither.
    """
    account, basis = plant_account(solution), solution.flowsheet.basis
    found = account.efficiency
    for of, values in (("overall", found.overall), ("sunlight_to_fuel", found.sunlight_to_fuel)):
        value = values[basis]
        if value:
            slopes = sensitivities(solution, f"plant.efficiency.{of}.{basis}")
            return Why(
                of,
                basis,
                value,
                tuple(rung_losses(found.rungs, basis)),
                tuple(_pieces(solution, account)),
                tuple(_settings(slopes, solution)),
                dict(slopes.left_out),
            )
    raise UsageFault("nothing useful comes out and no fuel is made: there is no efficiency")


def rung_losses(rungs: tuple[Rung, ...], basis: str) -> Iterator[RungLoss]:
    """Yield what each rung loses as a share of all that goes in; with the end they make one."""
    left = 1.0
    for rung in rungs:
        after = left * (rung.ratio[basis] or 0.0)
        yield RungLoss(rung.start, rung.end, left - after)
        left = after


def _pieces(solution: Solution, account: PlantAccount) -> Iterator[PieceLoss]:
    light = of_light(account.sunlight, solution.flowsheet.environment)
    entering = (light + account.bought.worth).exergy
    lost = sorted(exergy_destroyed(solution).items(), key=lambda pair: -pair[1])
    for name, value in lost:
        if value > 0.0 and entering > 0.0:
            yield PieceLoss(name, value, value / entering)


def _settings(found: Sensitivities, solution: Solution) -> list[Matter]:
    (efficiency,), (slopes,) = found.values, found.slopes
    matters = []
    for one, slope in zip(found.by, slopes.tolist(), strict=True):
        step = _WARMER if one.unit == "K" else _RELATIVE_STEP * abs(one.value)
        if not is_allowed(solution.flowsheet, one, step):
            step = -step  # it stands at the end of its range
        effect = slope * step / efficiency
        if abs(effect) > _NO_MATTER:
            is_knob = one.name in solution.flowsheet.knob_places
            matters.append(Matter(one, step, slope, effect, is_knob))
    return sorted(matters, key=lambda matter: -abs(matter.effect))


def _points(rung: RungLoss) -> str:
    points, way = 100 * rung.share, f"from {rung.start} to {rung.end}"
    return f"{points:.3g} are lost {way}" if points > 0.0 else f"{-points:.3g} are won {way}"


def _moving(matter: Matter, what: str, efficiency: float) -> str:
    one, effect = matter.setting, matter.effect
    by = f"{_WARMER:g} K" if one.unit == "K" else "1 %"
    ends = f"from {_value(one, 0.0)} to {_value(one, matter.step)}"
    moving = "Raising" if matter.step > 0.0 else "Lowering"
    does = "raises" if effect > 0.0 else "lowers"
    points = f"{100 * effect * efficiency:+.2g} points"
    return (
        f"{moving} {matter.name} by {by} ({ends}) {does} {what} by "
        f"{100 * abs(effect):.2g} % ({points})."
    )


def _value(one: Lever, more: float) -> str:
    return format_quantity(one.value + more, one.unit, digits=5, difference=one.difference)


def _listed(parts: list[str]) -> str:
    """Return parts with commas and an "and"."""
    return parts[0] if len(parts) == 1 else f"{', '.join(parts[:-1])} and {parts[-1]}"
