"""The steps of a pass: small functions from variables to variables.

A piece of equipment is one step; a store is two (its state, then what it makes up and lets out);
equipment that a call passes through is two (its state per mol, then its amounts).  Every step can
give the derivatives of what it writes by what it reads: closed forms where the equipment has them,
differences on that step alone elsewhere.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from chainflow.basis.faults import NotSolved
from chainflow.equipment.base import Equipment, Outcome, Site
from chainflow.equipment.junctions import joined
from chainflow.equipment.ports import ANY_NAME, Flow, Heat, times
from chainflow.flowsheet.addresses import HeldResult
from chainflow.solver.scaling import added, scaled_rows, scaling
from chainflow.solver.variables import ENTHALPY_SCALE, HEAT_NUMBERS, Variable
from chainflow.thermo.components import Matter
from chainflow.thermo.streams import Stream
from chainflow.thermo.validity import StateError

Values = dict[str, Flow]
Blocks = dict[tuple[str, str], np.ndarray]  # (written, read) -> block
_STEP = 1e-6  # relative step of differences


@dataclass(frozen=True, slots=True)
class Source:
    """Where a flow at an inlet, or an amount at an outlet, comes from: a variable or a constant."""

    key: str = ""
    constant: Flow | None = None
    amount: Source | None = None  # how much of it, for a called line that is looked at as a whole

    def of(self, values: Mapping[str, Flow]) -> Flow:
        """The flow or amount itself, among the values of a pass."""
        flow = values[self.key] if self.constant is None else self.constant
        if self.amount is None:
            return flow
        factor = self.amount.of(values)
        assert isinstance(factor, float)
        return times(flow, factor)

    @property
    def keys(self) -> tuple[str, ...]:
        """Variables that it reads."""
        return ((self.key,) if self.key else ()) + (
            self.amount.keys if self.amount is not None else ()
        )


@dataclass
class Step:
    """One function of the pass."""

    name: str
    variables: Mapping[str, Variable]  # all of the program, by key
    matter: Matter
    reads: tuple[str, ...] = ()
    writes: tuple[str, ...] = ()
    runs: int = 0  # how often the equipment was run

    def run(self, values: Mapping[str, Flow]) -> Values:
        """Compute what is written."""
        raise NotImplementedError  # every step gives its own

    def closed_forms(self, values: Mapping[str, Flow]) -> dict[str, Blocks]:  # noqa: ARG002 - for subclasses
        """Blocks by variable read, for those whose derivatives are known."""
        return {}

    def blocks(self, values: Mapping[str, Flow], written: Values) -> Blocks:
        """All derivatives of what is written by what is read."""
        known = self.closed_forms(values)
        kept = self.memory()
        found: Blocks = {}
        for key in self.reads:
            found |= known[key] if key in known else self.differences(key, values, written)
        self.remember(kept)
        return found

    def memory(self) -> Any:
        """What the last run left behind; differences must not change it."""
        return None

    def remember(self, kept: Any) -> None:
        """Put back what `memory` gave."""

    def differences(self, key: str, values: Mapping[str, Flow], written: Values) -> Blocks:
        """One-sided differences by one variable; none for matter that does not flow."""
        variable = self.variables[key]
        value = values[key]
        base = variable.pack(value)
        start = {w: self.variables[w].pack(written[w]) for w in self.writes}
        found = {(w, key): np.zeros((len(start[w]), variable.size)) for w in self.writes}
        if isinstance(value, Stream) and float(value.total) == 0.0:
            return found
        guess = float(value.temperature) if isinstance(value, Stream) else None
        used = HEAT_NUMBERS * len(value.pieces) if isinstance(value, Heat) else variable.size
        for column in range(used):
            step = step_of(variable, base, column)
            changed = base.copy()
            changed[column] += step
            moved = self.run({**values, key: variable.unpack(changed, self.matter, guess)})
            for w in self.writes:
                found[w, key][:, column] = (self.variables[w].pack(moved[w]) - start[w]) / step
        return found


def step_of(variable: Variable, base: np.ndarray, column: int) -> float:
    if variable.form == "matter":
        total = float(base[:-1].sum())
        return _STEP * total * (ENTHALPY_SCALE if column == variable.size - 1 else 1.0)
    size = abs(float(base[column]))
    return _STEP * (size if size > 0.0 else 1.0)


@dataclass
class EquipmentStep(Step):
    """One piece of equipment: flows at its outlets, amounts it asks for, results that are held."""

    equipment: Equipment | None = None
    site: Site | None = None
    feeds: dict[str, tuple[Source, ...]] = field(default_factory=dict)
    many: frozenset[str] = frozenset()  # inlets that take any number of lines
    asked: dict[str, tuple[Source, ...]] = field(default_factory=dict)
    settings: tuple[tuple[tuple[str, ...], str], ...] = ()  # (path, variable)
    outlets: dict[str, str] = field(default_factory=dict)  # outlet -> variable
    drawn: dict[str, str] = field(default_factory=dict)  # inlet -> variable
    results: dict[str, HeldResult] = field(default_factory=dict)  # by variable
    outcome: Outcome | None = None
    twin: EquipmentStep | None = None  # the step whose settled equipment this one runs
    _used: tuple[Any, Any, Equipment] | None = None
    # how the equipment calls what is read: each line, and its port
    _names: dict[str, list[tuple[str, str]]] | None = None
    _spots: dict[tuple[str, str], Any] = field(default_factory=dict)  # index of each block

    def inputs(
        self, values: Mapping[str, Flow]
    ) -> tuple[dict[str, Any], dict[str, Any], Equipment]:
        """Feeds, amounts asked and the equipment with its held settings, for these values."""
        feeds: dict[str, Any] = {}
        for port, sources in self.feeds.items():
            flows = tuple(source.of(values) for source in sources)
            feeds[port] = flows if port in self.many else flows[0]
        asked = {
            port: added([source.of(values) for source in sources])
            for port, sources in self.asked.items()
        }
        piece = self.equipment if self.twin is None else self.twin.equipment
        assert piece is not None
        for path, key in self.settings:
            number = values[key]
            assert isinstance(number, float)
            piece = piece.with_setting(path, number)
        return feeds, asked, piece

    def run(self, values: Mapping[str, Flow]) -> Values:
        """Run the equipment; its outcome is kept for the derivatives."""
        assert self.site is not None
        feeds, asked, piece = self.inputs(values)
        self.runs += 1
        outcome = piece.operate(feeds, asked, self.site)
        self.outcome, self._used = outcome, (feeds, asked, piece)
        return self._written(outcome)

    def _written(self, outcome: Outcome) -> Values:
        written: Values = {key: outcome.outlets[port] for port, key in self.outlets.items()}
        written |= {key: outcome.drawn[port] for port, key in self.drawn.items()}
        written |= {key: held.of(outcome) for key, held in self.results.items()}
        return written

    def memory(self) -> Any:
        """The last outcome and what it came from."""
        return self.outcome, self._used

    def remember(self, kept: Any) -> None:
        """Put back an outcome and what it came from."""
        self.outcome, self._used = kept

    def closed_forms(self, values: Mapping[str, Flow]) -> dict[str, Blocks]:  # noqa: ARG002 - as in Step
        """The slopes that the equipment knows, at its last run."""
        assert self.site is not None and self._used is not None and self.outcome is not None
        feeds, asked, piece = self._used
        slopes = piece.slopes(feeds, asked, self.site, self.outcome)
        given = {label for column in slopes.values() for label in column}
        if not slopes or any(result.label not in given for result in self.results.values()):
            return {}
        labels = self._labels()
        known = {}
        for key, names in labels.items():
            columns = [slopes.get(name, slopes.get(port)) for name, port in names]
            if all(column is not None for column in columns):
                known[key] = self._summed(key, [column for column in columns if column is not None])
        return known

    def _labels(self) -> dict[str, list[tuple[str, str]]]:
        """How the equipment calls each variable that is read: one line alone, or any at its port.

        Heat asked by several lines at one outlet is one flow there, whose parts are not theirs.
        """
        if self._names is not None:
            return self._names
        labels: dict[str, list[tuple[str, str]]] = {}
        for port, sources in self.feeds.items():
            for number, source in enumerate(sources, start=1):
                line = port if number == 1 else f"{port}#{number}"
                labels.setdefault(source.key, []).append((line, port))
        for port, sources in self.asked.items():
            label = f"asked:{port}"
            for source in sources:
                heat = source.key and self.variables[source.key].form == "heat"
                spread = heat and len(sources) > 1
                labels.setdefault(source.key, []).append(("", "") if spread else (label, label))
        for path, key in self.settings:
            label = f"settings:{'.'.join(path)}"
            labels.setdefault(key, []).append((label, label))
        labels.pop("", None)
        self._names = labels
        return labels

    def _summed(self, key: str, columns: Sequence[Mapping[str, np.ndarray]]) -> Blocks:
        blocks: Blocks = {}
        for written, label in self._outputs():
            spot = self._spot(written, key)
            block: np.ndarray | None = None
            for column in columns:
                if label in column:
                    part = self._fitted(written, key, column[label])[spot]
                    block = part if block is None else block + part
            if block is not None:
                blocks[written, key] = block
        return blocks

    def _fitted(self, written: str, read: str, block: np.ndarray) -> np.ndarray:
        """A block with rows and columns for all the parts that heat can have."""
        missing = [
            self.variables[key].size - size if self.variables[key].form == "heat" else 0
            for key, size in zip((written, read), block.shape, strict=True)
        ]
        return np.pad(block, [(0, more) for more in missing]) if any(missing) else block

    def _outputs(self) -> list[tuple[str, str]]:
        """Each variable that is written, with what the equipment calls it."""
        drawn = [(w, f"drawn:{port}") for port, w in self.drawn.items()]
        held = [(w, result.label) for w, result in self.results.items()]
        return [*((w, port) for port, w in self.outlets.items()), *drawn, *held]

    def _spot(self, written: str, read: str) -> Any:
        """Where a block's numbers stand in the matrix over all components."""
        spot = self._spots.get((written, read))
        if spot is None:
            rows = self.variables[written].rows(self.matter)
            spot = np.ix_(rows, self.variables[read].rows(self.matter))
            self._spots[written, read] = spot
        return spot


@dataclass
class StoreStateStep(EquipmentStep):
    """What one mol of a store's draws is, or of another server whose state can change."""

    state: str = ""  # the variable written

    def run(self, values: Mapping[str, Flow]) -> Values:
        """Ask the server what one mol of it is."""
        assert self.site is not None
        feeds, asked, piece = self.inputs(values)
        self.runs += 1
        self._used = (feeds, asked, piece)
        sample = piece.sample(feeds, asked, self.site)
        return {self.state: sample[ANY_NAME]}

    def closed_forms(self, values: Mapping[str, Flow]) -> dict[str, Blocks]:
        """The slopes of a store's state, which it calls an outlet."""
        self.outlets = {"state": self.state}
        self.outcome = Outcome({})
        return super().closed_forms(values)


@dataclass
class ThroughStep(EquipmentStep):
    """Equipment that a call passes through, run on one mol/s of what its server gives."""

    main_inlet: str = ""
    main_outlet: str = ""

    def operate(self, values: Mapping[str, Flow]) -> Outcome:
        """Run the equipment, unless it ran on the very same sample before."""
        assert self.site is not None
        feeds, asked, piece = self.inputs(values)
        if self.outcome is not None and self._used is not None:
            before, _, same = self._used
            if same is piece and all(before[port] is flow for port, flow in feeds.items()):
                return self.outcome
        self.runs += 1
        self.outcome = piece.operate(feeds, asked, self.site)
        self._used = (feeds, asked, piece)
        return self.outcome

    def outlet(self, outcome: Outcome) -> Stream:
        """The main outlet for one mol/s at the main inlet."""
        stream = outcome.outlets[self.main_outlet]
        assert isinstance(stream, Stream)
        return stream

    def sample_slopes(self) -> dict[str, np.ndarray] | None:
        """Closed forms by what one mol of the main inlet is, on full vectors."""
        assert self.site is not None and self._used is not None and self.outcome is not None
        feeds, asked, piece = self._used
        return piece.slopes(feeds, asked, self.site, self.outcome).get(self.main_inlet)

    @property
    def sample_key(self) -> str:
        """The variable of the sample, empty if it is a constant."""
        return self.feeds[self.main_inlet][0].key


@dataclass
class ThroughStateStep(ThroughStep):
    """What one mol of the outlet is, where a call passes through."""

    state: str = ""

    def run(self, values: Mapping[str, Flow]) -> Values:
        """The main outlet, brought to one mol."""
        outlet = self.outlet(self.operate(values))
        total = float(outlet.total)
        return {self.state: outlet.scaled(1.0 / total) if total > 0.0 else outlet}

    def closed_forms(self, values: Mapping[str, Flow]) -> dict[str, Blocks]:
        """Slopes of one mol of the outlet by one mol of the inlet."""
        slopes = self.sample_slopes() if self.sample_key else None
        if slopes is None:
            return {}
        outlet = self.outlet(self.operate(values))
        total = float(outlet.total)
        block = slopes[self.main_outlet]
        one = np.append(outlet.flows, outlet.enthalpy) / total
        block = (block - np.outer(one, block[:-1].sum(axis=0))) / total
        spot = self._spot(self.state, self.sample_key)
        return {self.sample_key: {(self.state, self.sample_key): block[spot]}}


@dataclass
class ThroughAmountStep(ThroughStep):
    """What equipment that a call passes through asks and gives, scaled to what is asked of it."""

    amount: Source = field(default_factory=Source)  # asked at the main outlet [mol/s]

    def _factor(self, values: Mapping[str, Flow], outcome: Outcome) -> tuple[float, float]:
        """Amount at the main inlet per mol/s of the sample, and what one mol becomes."""
        wanted = self.amount.of(values)
        total = float(self.outlet(outcome).total)
        assert isinstance(wanted, float)
        return (wanted / total if total > 0.0 else 0.0), total

    def run(self, values: Mapping[str, Flow]) -> Values:
        """Outlets and amounts for what is asked at the main outlet."""
        outcome = self.operate(values)
        factor, _ = self._factor(values, outcome)
        written: Values = {
            key: times(outcome.outlets[port], factor) for port, key in self.outlets.items()
        }
        for port, key in self.drawn.items():
            whole = port == self.main_inlet
            written[key] = factor if whole else times(outcome.drawn[port], factor)
        return written

    def closed_forms(self, values: Mapping[str, Flow]) -> dict[str, Blocks]:
        """Everything is proportional to the amount; the sample acts through the equipment."""
        known: dict[str, Blocks] = {}
        key, wanted = self.amount.key, self.amount.of(values)
        if key and isinstance(wanted, float) and wanted != 0.0:
            written = self.run(values)
            known[key] = {
                (w, key): self._fitted(w, key, scaling(written[w], self.variables[w])[:, None])
                / wanted
                for w in self.writes
            }
        slopes = self.sample_slopes() if self.sample_key else None
        if slopes is not None and self.sample_key != key:
            known[self.sample_key] = self._by_sample(values, slopes)
        return known

    def _by_sample(self, values: Mapping[str, Flow], slopes: Mapping[str, np.ndarray]) -> Blocks:
        outcome = self.operate(values)
        factor, total = self._factor(values, outcome)
        by_factor = -factor / total * slopes[self.main_outlet][:-1].sum(axis=0)
        blocks: Blocks = {}
        for port, w in (*self.outlets.items(), *((p, k) for p, k in self.drawn.items())):
            inlet = self.drawn.get(port) == w
            if inlet and port == self.main_inlet:
                block = by_factor[None, :]
            else:
                value = outcome.drawn[port] if inlet else outcome.outlets[port]
                label = f"drawn:{port}" if inlet else port
                block = np.outer(scaling(value), by_factor)
                if label in slopes:
                    block = block + scaled_rows(value, factor) * slopes[label]
            block = self._fitted(w, self.sample_key, block)
            blocks[w, self.sample_key] = block[self._spot(w, self.sample_key)]
        return blocks


@dataclass
class ResultStep(Step):
    """The number that a hold looks at, from what passes a port."""

    sources: tuple[Source, ...] = ()
    get: Callable[[Flow], float] | None = None
    key: str = ""

    def run(self, values: Mapping[str, Flow]) -> Values:
        """Read the number; what is not to be had (nothing flows) counts as zero."""
        assert self.get is not None
        flows = [source.of(values) for source in self.sources]
        streams = [flow for flow in flows if isinstance(flow, Stream)]
        whole = joined(streams, self.matter) if streams else added(flows)
        number = self.get(whole)
        return {self.key: number if np.isfinite(number) else 0.0}


def outside_the_data(name: str, problem: StateError) -> NotSolved:
    """What is said where a piece of equipment meets a state that the data do not describe."""
    return NotSolved("outside-the-data", f"{name}: {problem}", {"equipment": name})


__all__ = [
    "EquipmentStep",
    "ResultStep",
    "Source",
    "Step",
    "StoreStateStep",
    "ThroughAmountStep",
    "ThroughStateStep",
    "Values",
    "outside_the_data",
]
