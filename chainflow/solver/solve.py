"""Solve a checked flowsheet: structure first, then the loops, then the audit."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from contextlib import contextmanager
from dataclasses import dataclass, replace

from chainflow.basis.faults import Fault, NotSolved
from chainflow.equipment.ports import rate_of
from chainflow.equipment.power import Switchboard
from chainflow.flowsheet.network import Flowsheet, Hold
from chainflow.solver.audit import audit
from chainflow.solver.finishing import Finish
from chainflow.solver.idle_heat import part_idle_heat
from chainflow.solver.inventories import Conditional, check_inventories, find_presence
from chainflow.solver.newton import FLOOR, Closed, Newton, short_of_power
from chainflow.solver.order import Order, order_steps
from chainflow.solver.pressures import Pressures, settle_pressures
from chainflow.solver.program import build_program
from chainflow.solver.recycles import drop_free_recycles
from chainflow.solver.solution import Balance, HoldResult, Solution
from chainflow.thermo.streams import Stream
from chainflow.thermo.validity import StateError

_SOLVED = 1e-9  # largest relative balance error of what is called solved
_ROUND_OFF = 1e-9
_SAME = 1e-9  # relative: results of a hold this close do not count as moved
_MET = 1e-6  # relative: a held result further off is not met
_NEVER_CLOSED = ("not-converged", "grows", "undetermined")


@dataclass(frozen=True)
class Structure:
    """What is known of a flowsheet before anything is solved."""

    flowsheet: Flowsheet
    pressures: Pressures
    loops: tuple[tuple[str, ...], ...]  # equipment of each loop of information
    tears: tuple[str, ...]  # variables at which the loops are cut
    remarks: tuple[Fault, ...]


def inspect(flowsheet: Flowsheet) -> Structure:
    """The structure of a flowsheet; raises like `solve_flowsheet` for what its structure shows."""
    prepared = Prepared(flowsheet)
    return Structure(
        flowsheet,
        prepared.pressures,
        _equipment_of(prepared.order, flowsheet),
        tuple(prepared.order.tears),
        (*flowsheet.remarks, *prepared.remarks),
    )


def solve_flowsheet(flowsheet: Flowsheet) -> Solution:
    """The steady state of a flowsheet.

    Raises
    ------
    FlowsheetFault
        If its pressures cannot be.
    NotSolved
        If it has no steady state, is short of something, or its loops do not close.
    """
    return Prepared(flowsheet).solve()


def with_open_holds(flowsheet: Flowsheet) -> Flowsheet:
    """The flowsheet with every held setting in the middle of its range.

    Structure is judged there: at an end, a share of zero seems to let nothing through.
    """
    pieces = dict(flowsheet.equipment)
    for hold in flowsheet.holds:
        middle = 0.5 * (hold.low + hold.high)
        pieces[hold.piece] = pieces[hold.piece].with_setting(hold.path, middle)
    return replace(flowsheet, equipment=pieces)


@contextmanager
def _states_explained() -> Iterator[None]:
    """A state outside the data that no step has named is no steady state either."""
    try:
        yield
    except StateError as problem:
        raise NotSolved("outside-the-data", str(problem)) from problem


class Prepared:
    """Structure of one topology, ready to be solved; build it once and solve it often."""

    def __init__(self, flowsheet: Flowsheet) -> None:
        self.flowsheet = flowsheet
        self.pressures = settle_pressures(flowsheet)
        opened = with_open_holds(flowsheet)
        presence = find_presence(opened)
        self.conditional = check_inventories(opened, presence)
        with _states_explained():
            self.program = build_program(flowsheet, self.pressures, presence)
        part_idle_heat(self.program)
        self.order = order_steps(self.program)
        self.remarks = tuple(drop_free_recycles(flowsheet, self.pressures))

    def solve(self) -> Solution:
        with _states_explained():
            closed = self._closed()
            self._judge_holds(closed)
            finish = Finish(self.program, closed.values)
            self._judge(finish, closed)
            balance = audit(finish)
        self._refuse_imbalance(balance)
        return Solution(
            self.flowsheet,
            finish.outcomes,
            finish.feeds,
            finish.streams,
            balance,
            closed.passes,
            sum(step.runs for step in self.program.steps),
            self._hold_results(closed),
            (*self.flowsheet.remarks, *self.remarks),
            closed.error,
            finish.pieces,
            closed.values,
        )

    def _closed(self) -> Closed:
        """Close the loops; name an inventory that needs a store's surplus and never gets it."""
        try:
            return self.close()
        except NotSolved as problem:
            if problem.code not in _NEVER_CLOSED:
                raise
            if not self.conditional:
                self._refuse_out_of_reach(problem)
                raise
            first = self.conditional[0]
            stores = {"stores": list(first.stores)}
            raise NotSolved(first.code, first.text, stores) from problem

    def close(self, fixed: Mapping[str, float] | None = None) -> Closed:
        """Close the loops, with some held settings fixed instead of solved."""
        fixed = fixed or {}
        return Newton(self.program, self.order, dict(fixed)).solve()

    # --- holds -------------------------------------------------------------------------------

    def _hold_results(self, closed: Closed) -> tuple[HoldResult, ...]:
        return tuple(
            HoldResult(
                h.text,
                h.at,
                _number(closed, result),
                h.unit,
                h.by,
                _number(closed, setting),
                h.by_unit,
                h.difference,
                h.by_difference,
            )
            for h, setting, result in self.program.holds
        )

    def _judge_holds(self, closed: Closed) -> None:
        for hold, setting, result in self.program.holds:
            why = closed.aside.get(setting)
            if why == "unable":
                raise self._unable(hold, setting, result, closed)
            if why == "bound":
                raise self._out_of_reach(hold, setting, result, closed)
        self._refuse_misses(closed)

    def _refuse_misses(self, closed: Closed) -> None:
        """Settings that stand still may have met nothing: two of them may move the same."""
        missed = [
            (hold, _number(closed, result))
            for hold, _, result in self.program.holds
            if abs(closed.misses.get(result, 0.0)) > _MET
        ]
        if not missed:
            return
        comes = " and ".join(
            f"{hold.text} comes to {_reached(now, hold)} where {_reached(hold.at, hold)} is wanted"
            for hold, now in missed
        )
        if len(missed) > 1:
            text = (
                f"holds that cannot be met together: {comes}; what is moved does the same to "
                "all of them: leave one out, or move another setting"
            )
        else:
            text = f"hold {comes}: {missed[0][0].by} moves it no nearer; begin at another value"
        raise NotSolved("holds-at-odds", text, {"holds": [hold.text for hold, _ in missed]})

    def _unable(self, hold: Hold, setting: str, result: str, closed: Closed) -> NotSolved:
        """A setting that moves nothing where it stands: here only, or anywhere in its range?"""
        here = _number(closed, result)
        reached = self._probed(hold, setting, result)
        moved = [r for r in reached.values() if r == r and abs(r - here) > _SAME * abs(here or r)]
        stuck = f"hold {hold.text}: moving {hold.by} changes nothing there"
        if not moved:
            text = (
                f"{stuck} (it stays at {_reached(here, hold)}): "
                "aim at a result that the setting can move, or let something flow"
            )
            return NotSolved("hold-unable", text, {"hold": hold.text})
        if _all_on_one_side([here, *moved], hold.at):
            return _beyond_reach(hold, reached)
        text = (
            f"{stuck} at {_set(_number(closed, setting), hold)}, though it is "
            f"{_listed(hold, reached)}: begin nearer, or narrow 'within' to where it moves"
        )
        return NotSolved("hold-unable", text, {"hold": hold.text})

    def _out_of_reach(self, hold: Hold, setting: str, result: str, closed: Closed) -> NotSolved:
        """A setting ended at one end of its range: say what comes out at both ends."""
        here = _number(closed, setting)
        there = hold.high if abs(here - hold.low) < abs(here - hold.high) else hold.low
        reached = {here: _number(closed, result)}
        return _beyond_reach(hold, reached | self._reached(setting, result, (there,)))

    def _refuse_out_of_reach(self, problem: NotSolved) -> None:
        """Where loops do not close because a hold cannot be met, say that instead."""
        for hold, setting, result in self.program.holds:
            reached = self._probed(hold, setting, result)
            if all(r == r for r in reached.values()) and _all_on_one_side(
                list(reached.values()), hold.at
            ):
                raise _beyond_reach(hold, reached) from problem

    def _probed(self, hold: Hold, setting: str, result: str) -> dict[float, float]:
        """What is reached at the ends and in the middle of a setting's range."""
        return self._reached(setting, result, (hold.low, 0.5 * (hold.low + hold.high), hold.high))

    def _reached(self, setting: str, result: str, values: tuple[float, ...]) -> dict[float, float]:
        """The result at values of the setting, not a number where there is no steady state."""
        reached = {}
        for value in values:
            try:
                reached[value] = _number(self.close({setting: value}), result)
            except NotSolved:
                reached[value] = float("nan")
        return reached

    # --- judgement ---------------------------------------------------------------------------

    def _judge(self, finish: Finish, closed: Closed) -> None:
        for name, outcome in finish.outcomes.items():
            for port, why in outcome.unmet.items():
                code = (
                    "overfull"
                    if why.startswith("overfull")
                    else "heat-short"
                    if port == "shortage"
                    else "no-answer"
                )
                raise NotSolved(code, f"{name}.{port}: {why}", {"equipment": name, "port": port})
        for name, piece in self.flowsheet.equipment.items():
            if isinstance(piece, Switchboard):
                self._judge_switchboard(finish, name)
        for conditional in self.conditional:
            self._judge_conditional(finish, conditional)
        if closed.error > FLOOR:
            raise NotSolved(
                "not-converged",
                f"the loops are closed to {closed.error:.1e} only",
                {"error": closed.error},
            )

    def _judge_switchboard(self, finish: Finish, name: str) -> None:
        rest = finish.outcomes[name].outlets["rest"]
        assert isinstance(rest, float)
        supplied = sum(f for f in _numbers(finish.feeds[name].get("supply", ())))
        if rest < -_ROUND_OFF * max(supplied, 1e-300):
            raise short_of_power(name, -rest)
        if rest > _ROUND_OFF * supplied and not self.flowsheet.line_from(name, "rest"):
            text = (
                f"{name} has {rest / 1e3:.6g} kW left and nowhere to go: "
                f"link '{name}.rest' to a user, a grid or a vent"
            )
            raise NotSolved("surplus-power", text, {"switchboard": name, "surplus_W": rest})

    def _judge_conditional(self, finish: Finish, conditional: Conditional) -> None:
        """An inventory that leaves only with a store's surplus needs that surplus."""
        for name in conditional.stores:
            rest = finish.outcomes[name].outlets.get("rest")
            if isinstance(rest, Stream) and float(rest.total) > 0.0:
                return
        raise NotSolved(conditional.code, conditional.text, {"stores": list(conditional.stores)})

    def _refuse_imbalance(self, balance: Balance) -> None:
        for what, error in (("elements", balance.elements), ("energy", balance.energy)):
            if not error <= _SOLVED:
                worst = max(
                    balance.by_equipment,
                    key=lambda n: balance.by_equipment[n][what == "energy"],
                    default="the plant",
                )
                text = (
                    f"{what} balance only to {error:.1e} (wanted {_SOLVED:.0e}), "
                    f"worst at {worst}: please report this flowsheet"
                )
                raise NotSolved("not-balanced", text, {"error": error, "equipment": worst})


def _all_on_one_side(values: list[float], wanted: float) -> bool:
    return all(v < wanted for v in values) or all(v > wanted for v in values)


def _listed(hold: Hold, reached: Mapping[float, float]) -> str:
    """What comes out at both ends of what was tried."""
    return " and ".join(
        f"{_reached(reached[value], hold)} with {hold.by} at {_set(value, hold)}"
        for value in (min(reached), max(reached))
    )


def _beyond_reach(hold: Hold, reached: Mapping[float, float]) -> NotSolved:
    text = (
        f"hold {hold.text}: {_reached(hold.at, hold)} is out of reach: it is "
        f"{_listed(hold, reached)}; widen 'within' or change what is wanted"
    )
    ends = [(value, reached[value]) for value in (min(reached), max(reached))]
    details = {
        "hold": hold.text,
        "wanted": hold.at,
        "ends": [[value, None if r != r else r] for value, r in ends],
    }
    return NotSolved("hold-out-of-reach", text, details)


def _numbers(flows: object) -> list[float]:
    parts = flows if isinstance(flows, tuple) else (flows,)
    return [rate_of(f) for f in parts if not isinstance(f, Stream)]


def _number(closed: Closed, key: str) -> float:
    value = closed.values[key]
    assert isinstance(value, float)
    return value


def _reached(value: float, hold: Hold) -> str:
    return _shown(value, hold.unit, hold.difference)


def _set(value: float, hold: Hold) -> str:
    return _shown(value, hold.by_unit, hold.by_difference)


def _shown(value: float, unit: str, difference: bool) -> str:
    from chainflow.basis.quantities import format_quantity

    known = value == value
    return format_quantity(value, unit, difference=difference) if known else "not to be had"


def _equipment_of(order: Order, flowsheet: Flowsheet) -> tuple[tuple[str, ...], ...]:
    loops = []
    for members in order.loops:
        names = {key.split(".")[0].split("~")[0] for key in members}
        loops.append(tuple(name for name in flowsheet.equipment if name in names))
    return tuple(loops)


__all__ = ["Structure", "inspect", "solve_flowsheet"]
