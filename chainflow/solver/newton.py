"""Closing the loops: Newton on the torn variables, holds in the same system.

One pass evaluates the steps in order; with derivatives it counts once too.  The Newton step is the
error estimate.  A start from empty loops is passed on until nothing more wakes up; where Newton
stalls, Anderson's mixing (depth 5) takes over for some passes.  Deterministic throughout.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from chainflow.basis.faults import NotSolved
from chainflow.equipment.ports import Flow, Light, as_number, rate_of
from chainflow.solver.damping import damped
from chainflow.solver.holding import Holding
from chainflow.solver.linear import Linear, Singular
from chainflow.solver.mixing import anderson
from chainflow.solver.nodes import Blocks, EquipmentStep, Step, Values, outside_the_data
from chainflow.solver.order import Order
from chainflow.solver.program import Program
from chainflow.solver.starts import initial_state
from chainflow.solver.variables import ENTHALPY_SCALE, Variable
from chainflow.thermo.streams import Stream
from chainflow.thermo.validity import StateError

CLOSED = 1e-10  # largest relative Newton step of a solved loop
FLOOR = 1e-8  # a step that does not shrink any more is accepted below this
_RESIDUAL = 1e-8
_MOST_PASSES = 60
_SMALL = 1e-6  # of the stream total: flows below it count as this much
_SETTLED = 1e-2  # step below which discrete choices stay as they are
_STALLED = 6  # passes without halving the residual
_MIXED_PASSES, _DEPTH = 15, 5
_WARM_PASSES = 10
_SHORT_PASSES = 5
_MOST_HALVINGS = 4
_GROWN = 1e8
_LEAK = 1e-12  # share of every torn variable that gets lost where the equations are singular
_GROWTH = 1e3  # of the largest flow of a pass: to what a flow may grow in one step


@dataclass
class Closed:
    """What closing the loops ended with."""

    values: Values
    passes: int = 0
    error: float = 0.0
    # holds set aside: setting -> "bound" or "unable"
    aside: dict[str, str] = field(default_factory=dict)
    # relative misses of held results
    misses: dict[str, float] = field(default_factory=dict)


@dataclass
class _State:
    """The torn values, what the pass made of them, and how far apart they are."""

    torn: Values
    values: Values
    back: Values  # the torn variables as the pass computed them
    residual: np.ndarray
    plant: dict[str, float]  # the largest flow [mol/s] and the largest power [W] of the pass


class Newton:
    """One solve of one program."""

    def __init__(
        self, program: Program, order: Order, fixed: dict[str, float] | None = None
    ) -> None:
        self.program, self.order = program, order
        self.variables, self.matter = program.variables, program.flowsheet.matter
        self.fixed = fixed or {}  # settings kept at a value instead of being solved
        self.passes = 0
        self.most = np.inf  # [mol/s], what a flow may grow to in the next step
        self.constants: Values = {}
        self.at_first: dict[str, float] | None = None  # plant sizes when Newton begins
        self.places: dict[str, slice] = {}
        at = 0
        for key in order.tears:
            self.places[key] = slice(at, at + self.variables[key].size)
            at += self.variables[key].size
        self.size = at
        solved_for = [parts for parts in program.holds if parts[1] not in self.fixed]
        self.holding = Holding(solved_for, self.places, self.size)

    # --- passes ------------------------------------------------------------------------------

    def solve(self) -> Closed:
        """Close all loops; NotSolved says why not."""
        self.constants = self.run(self.order.before, {})
        if not self.order.tears:
            self.passes = 1
            return Closed(self.run(self.order.after, self.constants), 1)
        closed = self._iterate(self.warm(self.start()))
        closed.values = self.run(self.order.after, closed.values)
        closed.passes = self.passes
        return closed

    def run(self, steps: list[Step], values: Values) -> Values:
        """The values with what the steps make of them."""
        values = dict(values)
        for step in steps:
            try:
                values |= step.run(values)
            except StateError as problem:
                raise outside_the_data(step.name, problem) from problem
        return values

    def evaluate(self, torn: Values, *, blocks: Blocks | None = None) -> _State:
        """Evaluate the loop once, with derivatives if `blocks` is given to be filled."""
        self.passes += 1
        values: Values = {**self.constants, **torn}
        back: Values = {}
        for step in self.order.loop:
            try:
                written = step.run(values)
                if blocks is not None:
                    blocks |= step.blocks(values, written)
            except StateError as problem:
                raise outside_the_data(step.name, problem) from problem
            for key, value in written.items():
                if key in torn:
                    back[key] = value
                else:
                    values[key] = value
        residual = np.zeros(self.size)
        for key in torn:
            if key in back:
                residual[self.places[key]] = self._pack(key, back[key]) - self._pack(key, torn[key])
        plant = self._plant_sizes(values)
        self.most = _GROWTH * max(plant["material"], plant["power"] / ENTHALPY_SCALE) or np.inf
        return _State(torn, values, back, residual, plant)

    def _pack(self, key: str, value: Flow) -> np.ndarray:
        return self.variables[key].pack(value)

    # --- the start ---------------------------------------------------------------------------

    def start(self) -> Values:
        """Torn values to begin with: settings as written, stores with their contents, no flow."""
        settings = self.program.settings
        torn: Values = {}
        for key in self.order.tears:
            variable = self.variables[key]
            if key in settings:
                hold = settings[key]
                own = self.program.flowsheet.equipment[hold.piece].setting(hold.path)
                torn[key] = self.fixed.get(key, min(max(own, hold.low), hold.high))
            elif key.endswith("~state"):
                torn[key] = initial_state(self.program, key)
            elif variable.rate:
                torn[key] = self._supply_of(key)
            elif variable.form == "matter":
                torn[key] = Stream.empty(self.matter, pressure=variable.pressure)
            else:
                torn[key] = variable.unpack(variable.idle, self.matter)
        return torn

    def _supply_of(self, key: str) -> float:
        """A switchboard's rest as if nobody asked."""
        step = next(s for s in self.order.loop if key in s.writes)
        assert isinstance(step, EquipmentStep)
        known = [
            source.of(self.constants)
            for source in step.feeds.get("supply", ())
            if source.key in self.constants
        ]
        return float(sum(as_number(power) for power in known))

    def warm(self, torn: Values) -> Values:
        """Pass on until no further torn variable wakes up."""
        awake = -1
        for _ in range(_WARM_PASSES):
            state = self.evaluate(torn)
            torn = {key: self._substituted(key, state) for key in torn}
            now = sum(int((self._pack(key, value) > 0.0).sum()) for key, value in torn.items())
            if now <= awake:
                break
            awake = now
        return torn

    def _substituted(self, key: str, state: _State) -> Flow:
        if key not in state.back:
            return state.torn[key]
        old, new = state.torn[key], state.back[key]
        if self.variables[key].form == "number" and not as_number(new) > 0.0:
            return 0.05 * as_number(old)
        return new

    # --- Newton ------------------------------------------------------------------------------

    def _iterate(self, torn: Values) -> Closed:
        best, bad, before = np.inf, 0, np.inf
        short = 0
        settled = mixed = leaked = False
        come_from: tuple[Values, np.ndarray] | None = None
        while self.passes < _MOST_PASSES:
            state, blocks = self._evaluate_near(torn, come_from)
            torn, scales = state.torn, self.scales(state)
            step = self._step(state, blocks)
            if step is None and not leaked:  # what has no way out here may condense further on
                step, leaked, come_from = self._step(state, blocks, _LEAK), True, None
                if step is not None:
                    torn = self._moved(torn, step[0])
                    continue
            if step is None and not mixed:  # perhaps only singular here
                torn, mixed, come_from = self._mix(torn), True, None
                continue
            if step is None:
                raise self._undetermined()
            change, aside = step
            error = _largest(change, scales)
            shown = self.holding.shown(state.residual, state.values, aside)
            residual = _largest(shown, scales)
            if error < _SETTLED and not settled:
                settled = self._settle()
                if settled:
                    best = np.inf
            if (error < CLOSED and residual < _RESIDUAL) or (
                error < FLOOR and error > 0.3 * before
            ):
                return self._finish(state, change, error, aside)
            before = error if error < FLOOR else np.inf
            self._refuse_growth(state)
            short = self._short_so_far(short, state, change)
            best, bad = (residual, 0) if residual < 0.5 * best else (best, bad + 1)
            if bad >= _STALLED:
                torn, best, bad, come_from = self._mix(torn), np.inf, 0, None
                continue
            come_from = (torn, change)
            torn = self._moved(torn, change)
        raise self._not_converged(state, scales)

    def _evaluate_near(
        self, torn: Values, come_from: tuple[Values, np.ndarray] | None
    ) -> tuple[_State, Blocks]:
        """Evaluate with derivatives; a step that leaves the data is halved a few times."""
        for halving in range(1, _MOST_HALVINGS + 2):
            blocks: Blocks = {}
            try:
                return self.evaluate(torn, blocks=blocks), blocks
            except NotSolved:
                if come_from is None or halving > _MOST_HALVINGS:
                    raise
                before, change = come_from
                torn = self._moved(before, 0.5**halving * change)
        raise AssertionError("the loop above returns or raises")

    def _finish(
        self, state: _State, change: np.ndarray, error: float, aside: dict[str, str]
    ) -> Closed:
        last = self.evaluate(self._moved(state.torn, change))
        misses = self.holding.misses(last.values)
        return Closed({**last.values, **last.torn}, error=error, aside=aside, misses=misses)

    def _moved(self, torn: Values, change: np.ndarray) -> Values:
        settings = self.program.settings
        return {
            key: value
            if key in self.fixed
            else damped(
                self.variables[key],
                value,
                change[self.places[key]],
                self.matter,
                settings.get(key),
                self.most,
            )
            for key, value in torn.items()
        }

    def _step(
        self, state: _State, blocks: Blocks, leak: float = 0.0
    ) -> tuple[np.ndarray, dict[str, str]] | None:
        """The Newton change of all torn numbers, and the holds that are set aside this time.

        None where the equations of the loop are singular.
        """
        right = state.residual.copy()
        for key in self.program.settings:
            right[self.places[key]] = 0.0
        try:
            watched = self.holding.results
            linear = Linear(
                self.order.loop, blocks, self.order.tears, watched, self.variables, leak
            )
            change, seen = linear.solve(right)
            step = self.holding.step(linear, state.torn, state.values, change, seen)
        except Singular:
            return None
        return step if np.isfinite(step[0]).all() else None

    def _undetermined(self) -> NotSolved:
        text = (
            f"the loop through {self._names()} has no single steady state: "
            "something in it is neither fixed nor let out; "
            "open a purge or put a store with a draw into it"
        )
        return NotSolved("undetermined", text, {"tears": self.order.tears})

    # --- sizes -------------------------------------------------------------------------------

    def scales(self, state: _State) -> np.ndarray:
        """What counts as large, for every torn number."""
        plant = state.plant
        scales = np.ones(self.size)
        for key in self.order.tears:
            scales[self.places[key]] = self._scale(self.variables[key], state, plant)
        return scales

    def _plant_sizes(self, values: Values) -> dict[str, float]:
        matter = max(
            (float(v.total) for v in values.values() if isinstance(v, Stream)), default=0.0
        )
        numbers = [
            abs(rate_of(v))
            for k, v in values.items()
            if isinstance(v, float | Light)
            and k in self.variables
            and self.variables[k].content in ("power", "light", "heat")
        ]
        return {"material": matter, "power": max(numbers, default=0.0)}

    def _scale(self, variable: Variable, state: _State, plant: dict[str, float]) -> np.ndarray:
        key = variable.key
        numbers = self._pack(key, state.torn[key])
        if key in self.program.settings:
            hold = self.program.settings[key]
            return np.array([hold.high - hold.low])
        if variable.form == "matter":
            total = max(float(numbers[:-1].sum()), 1e-12 * plant["material"])
            flows = np.maximum(np.abs(numbers[:-1]), _SMALL * total)
            return np.append(flows, max(abs(numbers[-1]), total * ENTHALPY_SCALE))
        size = plant["material" if variable.content == "material" else "power"]
        return np.maximum(np.abs(numbers), _SMALL * size)

    # --- trouble -----------------------------------------------------------------------------

    def _names(self) -> str:
        names = list(
            dict.fromkeys(
                key.split(".")[0].split("~")[0]
                for key in self.order.tears
                if not key.startswith("hold ")
            )
        )
        return ", ".join(names) or "the holds"

    def _settle(self) -> bool:
        """Fix discrete choices; whether any was open."""
        changed = False
        for step in self.order.loop:
            if (
                isinstance(step, EquipmentStep)
                and step.equipment is not None
                and step.outcome is not None
            ):
                piece = step.equipment.settled(step.outcome)
                changed |= piece is not step.equipment
                step.equipment = piece
        return changed

    def _refuse_growth(self, state: _State) -> None:
        sizes = {k: float(v.total) for k, v in state.values.items() if isinstance(v, Stream)}
        if self.at_first is None:  # a hold may move all that enters: then nothing is constant
            self.at_first = self._plant_sizes({**self.constants, **state.values})
        power = self.at_first["power"] / ENTHALPY_SCALE
        limit = _GROWN * max(self.at_first["material"], power, 1e-9)
        key = max(sizes, key=sizes.__getitem__, default="")
        if key and sizes[key] > limit:
            raise NotSolved(
                "grows",
                f"what is in '{key}' grows without end ({sizes[key]:.3g} mol/s): "
                "open a purge or clean the feed",
                {"stream": key},
            )

    def _short_so_far(self, short: int, state: _State, change: np.ndarray) -> int:
        """Count passes in which a switchboard's rest wants to be below zero; short after five."""
        for key in self.order.tears:
            if not self.variables[key].rate:
                continue
            wanted = as_number(state.torn[key]) + float(change[self.places[key]][0])
            if wanted >= 0.0:
                continue
            if short + 1 < _SHORT_PASSES:
                return short + 1
            at_zero = self.evaluate({**state.torn, key: 0.0})
            missing = -as_number(at_zero.back[key])
            raise short_of_power(key.split(".")[0], missing)
        return 0

    def _mix(self, torn: Values) -> Values:
        """Anderson's mixing of the last passes; settings stay."""
        points: list[np.ndarray] = []
        images: list[np.ndarray] = []
        for _ in range(_MIXED_PASSES):
            if self.passes >= _MOST_PASSES:
                break
            state = self.evaluate(torn)
            scales = self.scales(state)
            points.append(np.concatenate([self._pack(key, torn[key]) for key in self.order.tears]))
            images.append(points[-1] + state.residual)
            points, images = points[-_DEPTH - 1 :], images[-_DEPTH - 1 :]
            torn = self._moved(torn, anderson(points, images, scales) - points[-1])
        return torn

    def _not_converged(self, state: _State, scales: np.ndarray) -> NotSolved:
        worst: list[tuple[float, str]] = []
        for key in self.order.tears:
            part = state.residual[self.places[key]] / scales[self.places[key]]
            worst.append((float(np.abs(part).max()), key))
        worst.sort(reverse=True)
        listed = ", ".join(f"'{key}' by {size:.2g}" for size, key in worst[:3])
        text = (
            f"the loop through {self._names()} is not closed after {self.passes} passes; "
            f"still moving (relative): {listed}. "
            "Look for an inventory with almost no way out, "
            "or for two settings that want different things"
        )
        return NotSolved("not-converged", text, {"residuals": {key: size for size, key in worst}})


def short_of_power(name: str, missing: float) -> NotSolved:
    """What is said of a switchboard that cannot serve everybody."""
    text = (
        f"{name} is short of {missing / 1e3:.6g} kW with everybody served and nothing at 'rest': "
        f"link '{name}.shortage' to a grid, give it more supply, or make the users smaller"
    )
    return NotSolved("short-of-power", text, {"switchboard": name, "short_W": missing})


def _largest(change: np.ndarray, scales: np.ndarray) -> float:
    """Largest relative size; what has no scale counts only if it moves."""
    if not np.isfinite(change).all():
        return float("inf")
    moving = change != 0.0
    return float((np.abs(change[moving]) / np.maximum(scales[moving], 1e-300)).max(initial=0.0))
