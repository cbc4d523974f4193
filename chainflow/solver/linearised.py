"""How does everything in a solved flowsheet move when one setting moves, holds kept?

At the solution every variable x is what its step makes of the others, x = f(x, s), and held results
stand still.  With the derivatives A = df/dx of all steps (closed forms where equipment has them,
central differences on one step alone elsewhere) the implicit function theorem gives

    dy/ds = g_s + g_x (1 - A)^-1 f_s      for any result y = g(x, s).

One factorisation serves all settings, and one *adjoint* solve serves one result: the weights
w = (1 - A)^-T g_x say what a push on any variable is worth.  Nothing is solved again.  A setting
acts on its own equipment (f_s, by differences on it alone) and, if it is a pressure or belongs to
what is served, on the equipment that gets the new pressure or the new mol.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from chainflow.basis.faults import FlowsheetFault, NotSolved
from chainflow.equipment.ports import Flow
from chainflow.flowsheet.movable import Lever, is_allowed, moved
from chainflow.flowsheet.network import Flowsheet
from chainflow.solver.finishing import Finish
from chainflow.solver.inventories import find_presence
from chainflow.solver.linear import Singular
from chainflow.solver.nodes import EquipmentStep, Source, Step, Values
from chainflow.solver.nudging import condenses, is_bent, lever_step, step_of, still_gas
from chainflow.solver.pressures import Pressures, inlet_pressures, settle_pressures
from chainflow.solver.program import Program, build_program
from chainflow.solver.solution import Solution
from chainflow.solver.solve import with_open_holds
from chainflow.thermo.streams import Stream
from chainflow.thermo.validity import StateError

_ENDS = (0.0, 1.0)  # values at which a way may open that was closed

Results = Callable[[Solution], np.ndarray]


class Unmovable(ValueError):
    """A setting that cannot be moved; the text says why."""


@dataclass(frozen=True, slots=True)
class _Side:
    """The flowsheet with one setting moved, and what that touches at once."""

    by: float
    program: Program
    values: Values
    steps: tuple[int, ...]  # places of the steps that it touches
    pieces: tuple[str, ...]  # equipment that it touches


class Linearised:
    """A solved flowsheet as a linear system around its solution.

    Raises `Singular` if the loops do not fix their variables there.
    """

    def __init__(self, solution: Solution) -> None:
        self.solution = solution
        self.flowsheet = replace(solution.flowsheet, equipment=dict(solution.pieces))
        self.matter = self.flowsheet.matter
        self.presence = find_presence(with_open_holds(solution.flowsheet))
        self.pressures = settle_pressures(self.flowsheet)
        self.program = build_program(self.flowsheet, self.pressures, self.presence)
        self.variables = self.program.variables
        self.values: Values = dict(solution.values)
        self.places: dict[str, slice] = {}
        at = 0
        for key, variable in self.variables.items():
            self.places[key] = slice(at, at + variable.size)
            at += variable.size
        self.size = at
        self._written = [step.run(self.values) for step in self.program.steps]
        self._factors = self._factorised()
        self.finish = Finish(self.program, self.values)
        self._readers = self._equipment_by_variable()
        self._bends: dict[str, tuple[str, ...]] = {}  # variables at which results bend, and readers

    # --- the system --------------------------------------------------------------------------

    def _factorised(self) -> Any:  # scipy's factors carry no types
        from scipy.sparse import coo_matrix
        from scipy.sparse.linalg import splu

        held = self.program.settings
        plain = [key for key in self.variables if key not in held]
        diagonal = np.concatenate([np.arange(self.size)[self.places[key]] for key in plain])
        rows, columns, data = [diagonal], [diagonal], [np.ones(len(diagonal))]
        for step, written in zip(self.program.steps, self._written, strict=True):
            for (out, read), block in self._blocks(step, written).items():
                row = np.arange(self.size)[self.places[out]]
                column = np.arange(self.size)[self.places[read]]
                rows.append(np.repeat(row, len(column)))
                columns.append(np.tile(column, len(row)))
                data.append(-block.ravel())
        for _, setting, result in self.program.holds:  # a held result does not move
            rows.append(np.array([self.places[setting].start]))
            columns.append(np.array([self.places[result].start]))
            data.append(np.ones(1))
        entries = (np.concatenate(data), (np.concatenate(rows), np.concatenate(columns)))
        try:
            return splu(coo_matrix(entries, shape=(self.size, self.size)).tocsc())
        except RuntimeError:
            raise Singular("the equations of the loops are singular at the solution") from None

    def _blocks(self, step: Step, written: Values) -> dict[tuple[str, str], np.ndarray]:
        """Derivatives of what a step writes by what it reads."""
        known = step.closed_forms(self.values)
        kept = step.memory()
        found: dict[tuple[str, str], np.ndarray] = {}
        for key in step.reads:
            found |= known[key] if key in known else self._differences(step, key, written)
        step.remember(kept)
        return found

    def _differences(
        self, step: Step, key: str, written: Values
    ) -> dict[tuple[str, str], np.ndarray]:
        start = {w: self.variables[w].pack(written[w]) for w in step.writes}
        found = {(w, key): np.zeros((len(start[w]), self.variables[key].size)) for w in step.writes}
        at = np.cumsum([0, *(len(start[w]) for w in step.writes)])

        def packed(run: Values) -> np.ndarray:
            return np.concatenate([self.variables[w].pack(run[w]) for w in step.writes])

        def moved_by(value: Flow) -> np.ndarray:
            return packed(step.run({**self.values, key: value}))

        for column, slope in self._slopes_by(key, moved_by, packed(written), []):
            for place, w in enumerate(step.writes):
                found[w, key][:, column] = slope[at[place] : at[place + 1]]
        return found

    def _slopes_by(
        self,
        key: str,
        outcome: Callable[[Flow], np.ndarray],
        still: np.ndarray,
        bent: list[int],
    ) -> Iterator[tuple[int, np.ndarray]]:
        """Slopes of an outcome by each number of a variable: (column, slope).

        Central differences; one-sided where a number cannot go lower, or where one side of a state
        is not described (a saturated vapour a little colder).  Matter that does not flow has none.
        Numbers by which the outcome bends are noted in `bent`.
        """
        variable, value = self.variables[key], self.values[key]
        if isinstance(value, Stream) and float(value.total) == 0.0:
            return
        base = variable.pack(value)
        for column in range(variable.size):
            step = step_of(variable, base, column)
            lowest = variable.form == "matter" and column < variable.size - 1
            ends = [(0.0, still)]
            for by in (step,) if lowest and base[column] < step else (-step, step):
                changed = base.copy()
                changed[column] += by
                try:
                    nudged = self._unpacked(key, changed, variable.pressure)
                    ends.append((by, outcome(nudged)))
                except (NotSolved, StateError):
                    continue
            low, high = min(ends, key=_by), max(ends, key=_by)
            if high[0] > low[0]:
                if len(ends) == 3 and is_bent(low[1], still, high[1]):
                    bent.append(column)
                yield column, (high[1] - low[1]) / (high[0] - low[0])

    def _unpacked(self, key: str, numbers: np.ndarray, pressure: float) -> Flow:
        variable, value = self.variables[key], self.values[key]
        if not isinstance(value, Stream):
            return variable.unpack(numbers, self.matter)
        variable = replace(variable, pressure=pressure)
        found = variable.unpack(numbers, self.matter, float(value.temperature))
        assert isinstance(found, Stream)
        return still_gas(value, found) if condenses(value, found) else found

    def _equipment_by_variable(self) -> dict[str, tuple[str, ...]]:
        readers: dict[str, list[str]] = {}
        for name in self.flowsheet.equipment:
            for key in self.finish.reads(name):
                readers.setdefault(key, []).append(name)
        return {key: tuple(names) for key, names in readers.items()}

    # --- results -----------------------------------------------------------------------------

    def solution_of(self, finish: Finish) -> Solution:
        """The solution behind a finish that was run in part anew."""
        return replace(
            self.solution,
            flowsheet=replace(self.solution.flowsheet, equipment=dict(finish.flowsheet.equipment)),
            outcomes=finish.outcomes,
            feeds=finish.feeds,
            streams=finish.streams,
            pieces=finish.pieces,
        )

    def gradient(self, results: Results) -> np.ndarray:
        """Slopes of the results by all variables, settings kept; shape (results, numbers)."""
        start = results(self.solution_of(self.finish))
        found = np.zeros((len(start), self.size))
        for key, names in self._readers.items():
            if key not in self.variables or not self._is_felt(key, names, results, start):
                continue

            def outcome(value: Flow, key: str = key, names: tuple[str, ...] = names) -> np.ndarray:
                return results(self._nudged(key, value, names))

            bent: list[int] = []
            for column, slope in self._slopes_by(key, outcome, start, bent):
                found[:, self.places[key].start + column] = slope
            if bent:  # it counts by the way it really goes, see `along_bends`
                found[:, self.places[key]] = 0.0
                self._bends[key] = names
        return found

    def along_bends(self, pushed: np.ndarray, results: Results) -> np.ndarray:
        """What a push does to the results through variables at which they bend.

        A store that takes back just what fits it neither heats nor cools: a bend for each number
        of what returns alone, none for all of them as they go together.
        """
        found = np.zeros(len(results(self.solution_of(self.finish))))
        way = self._factors.solve(pushed) if self._bends else pushed
        for key, names in self._bends.items():
            variable, value = self.variables[key], self.values[key]
            base, by = variable.pack(value), way[self.places[key]]
            steps = np.array([step_of(variable, base, c) for c in range(variable.size)])
            most = float((np.abs(by) / steps).max())
            if most == 0.0:
                continue
            ends = [
                results(
                    self._nudged(key, self._unpacked(key, base + side, variable.pressure), names)
                )
                for side in (-by / most, by / most)
            ]
            found += (ends[1] - ends[0]) * (0.5 * most)
        return found

    def _is_felt(
        self, key: str, names: tuple[str, ...], results: Results, start: np.ndarray
    ) -> bool:
        """Whether any result changes at all if all numbers of a variable change, unevenly."""
        variable, value = self.variables[key], self.values[key]
        if isinstance(value, Stream) and float(value.total) == 0.0:
            return False
        base = variable.pack(value)
        uneven = 1.0 + 0.37 * np.arange(variable.size)
        steps = np.array([step_of(variable, base, c) for c in range(variable.size)])
        for sign in (1.0, -1.0):  # on a kink only one side may be felt
            try:
                probe = self._unpacked(key, base + sign * uneven * steps, variable.pressure)
                if (results(self._nudged(key, probe, names)) != start).any():
                    return True
            except (NotSolved, StateError):
                return True
        return False

    def _nudged(self, key: str, value: Flow, names: tuple[str, ...]) -> Solution:
        finish = self.finish.again(self.program, {**self.values, key: value}, names)
        return self.solution_of(finish)

    def weights(self, gradient: np.ndarray) -> np.ndarray:
        """What a push on any variable is worth to each result; shape as `gradient`."""
        return np.array([self._factors.solve(row, trans="T") for row in gradient])

    # --- settings ----------------------------------------------------------------------------

    def push(self, lever: Lever, results: Results) -> tuple[np.ndarray, np.ndarray]:
        """What a setting or knob does at once: to all variables, and to the results.

        Returns
        -------
        f_s, g_s : shapes (variables' numbers,) and (results,), per SI unit of the setting.

        Raises
        ------
        Unmovable
            If it can be moved in no direction, or if moving it opens a way that was closed.
        """
        sides = self._sides(lever)
        pushed = np.zeros(self.size)
        for place in lever.holds:
            pushed[self.places[self.program.holds[place][1]]] = 1.0
        for place in sorted({place for side, _ in sides for place in side.steps}):
            runs = [(self._run(side, place), weight) for side, weight in sides]
            for key in self.program.steps[place].writes:
                pack = self.variables[key].pack
                pushed[self.places[key]] = sum(weight * pack(run[key]) for run, weight in runs)
        seen = [weight * results(self._sided(side)) for side, weight in sides]
        return pushed, np.sum(seen, axis=0)

    def _run(self, side: _Side, place: int) -> Values:
        return side.program.steps[place].run(side.values) if side.by else self._written[place]

    def _sided(self, side: _Side) -> Solution:
        return self.solution_of(self.finish.again(side.program, side.values, side.pieces))

    def _sides(self, lever: Lever) -> tuple[tuple[_Side, float], ...]:
        """The flowsheet moved, and with which weights the ends make a slope of second order."""
        if lever.elsewhere:
            raise Unmovable(f"it also stands at {', '.join(lever.elsewhere)}")
        step = lever_step(lever)
        allowed = [by for by in (-step, step) if is_allowed(self.flowsheet, lever, by)]
        if not allowed:
            raise Unmovable("it cannot be moved alone: what stands beside it must follow")
        ends = lever.value in _ENDS or len(allowed) == 1
        if len(allowed) == 2:
            low, high = (self._side(lever, by, look=ends) for by in allowed)
            return (low, -0.5 / step), (high, 0.5 / step)
        (by,) = allowed
        still = _Side(0.0, self.program, self.values, (), ())
        near = self._side(lever, by, look=ends)
        if not is_allowed(self.flowsheet, lever, 2.0 * by):
            return (still, -1.0 / by), (near, 1.0 / by)
        far = self._side(lever, 2.0 * by, look=ends)
        return (still, -1.5 / by), (near, 2.0 / by), (far, -0.5 / by)

    def _side(self, lever: Lever, by: float, *, look: bool) -> _Side:
        flowsheet = moved(self.flowsheet, lever, by)
        names = tuple(dict.fromkeys(setting.piece for setting in lever.settings))
        for name in names:
            if flowsheet.equipment[name].port_list() != self.flowsheet.equipment[name].port_list():
                raise Unmovable(f"moving it gives {name} other ports")
        if look:
            presence = find_presence(with_open_holds(flowsheet))
            if presence.species != self.presence.species:
                raise Unmovable("moving it opens or closes a way for a substance")
        try:
            if any(self._is_structural(flowsheet, name) for name in names):
                return self._structural_side(flowsheet, names, by)
        except (FlowsheetFault, NotSolved, StateError) as problem:
            raise Unmovable(f"moving it ends at a state that cannot be: {problem}") from None
        program = self._with_pieces(flowsheet, names)
        mine = tuple(i for i, s in enumerate(self.program.steps) if _is_of(s, names))
        return _Side(by, program, self.values, mine, names)

    def _is_structural(self, flowsheet: Flowsheet, name: str) -> bool:
        """Whether a changed piece gives another pressure or another mol to those around it."""
        arriving = inlet_pressures(self.flowsheet, self.pressures, name)
        before = self.flowsheet.equipment[name].outlet_pressures(arriving)
        after = flowsheet.equipment[name].outlet_pressures(arriving)
        return before != after or any(line.called for line in self.flowsheet.out_of(name))

    def _with_pieces(self, flowsheet: Flowsheet, names: tuple[str, ...]) -> Program:
        """The program with other equipment in its steps."""
        pieces = flowsheet.equipment
        steps = [
            replace(step, equipment=pieces[step.name], outcome=None, _used=None)
            if isinstance(step, EquipmentStep) and step.name in names
            else step
            for step in self.program.steps
        ]
        return replace(self.program, flowsheet=flowsheet, steps=steps)

    def _structural_side(self, flowsheet: Flowsheet, names: tuple[str, ...], by: float) -> _Side:
        pressures: Pressures = settle_pressures(flowsheet)
        program = build_program(flowsheet, pressures, self.presence)
        values, other = self._repressed(program)
        touched = tuple(
            place
            for place, (old, new) in enumerate(zip(self.program.steps, program.steps, strict=True))
            if _is_of(old, names) or other & set(old.reads) or _other_constants(old, new)
        )
        spots = {
            spot
            for spot, source in self.program.states.items()
            if _differ(source, program.states[spot])
        }
        pieces = tuple(
            piece
            for piece in flowsheet.equipment
            if piece in names
            or other & self.finish.reads(piece)
            or any(
                line.called and spots & {(line.source, line.outlet), (line.source, "*")}
                for line in flowsheet.into(piece)
            )
        )
        return _Side(by, program, values, touched, pieces)

    def _repressed(self, program: Program) -> tuple[Values, set[str]]:
        """The values at the pressures of another program, and which of them are others."""
        values, other = dict(self.values), set[str]()
        for key, variable in self.variables.items():
            value, level = self.values[key], program.variables[key].pressure
            if isinstance(value, Stream) and level != variable.pressure:
                other.add(key)
                if float(value.total) > 0.0:
                    values[key] = self._unpacked(key, variable.pack(value), level)
                else:
                    values[key] = Stream.empty(self.matter, pressure=level)
        return values, other


def _by(end: tuple[float, np.ndarray]) -> float:
    return end[0]


def _is_of(step: Step, names: tuple[str, ...]) -> bool:
    return isinstance(step, EquipmentStep) and step.name in names


def _sources(step: Step) -> list[Source]:
    if isinstance(step, EquipmentStep):
        return [s for sources in (*step.feeds.values(), *step.asked.values()) for s in sources]
    return list(getattr(step, "sources", ()))


def _other_constants(old: Step, new: Step) -> bool:
    return any(_differ(a, b) for a, b in zip(_sources(old), _sources(new), strict=True))


def _differ(old: Source, new: Source) -> bool:
    """Whether two constants are not the same to the last bit."""
    a, b = old.constant, new.constant
    if isinstance(a, Stream) and isinstance(b, Stream):
        same = bool((a.flows == b.flows).all()) and float(a.enthalpy) == float(b.enthalpy)
        return not (same and float(a.pressure) == float(b.pressure))
    return a != b


__all__ = ["Linearised", "Results", "Unmovable"]
