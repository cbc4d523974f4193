"""What is in a line: how much of what, in which phases, how hot, at which pressure?

A `Stream` is immutable and holds molar flows per phase [mol/s], temperature [K], pressure [Pa] and
the enthalpy flow [W] (formation enthalpies included). The last axis is components, axes before it
are cases. Enthalpy is stored because a boiling stream is not fixed by temperature and pressure.
Phases: gas, liquid water with what Henry's law dissolves in it, and `liquid`, the oil: an ideal
solution of hydrocarbons (`chainflow.thermo.three_phases`). One pure component may also be a
liquefied gas, or colder than the gas data (`chainflow.thermo.liquefied`).
"""

from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache
from typing import TYPE_CHECKING, Any, cast

import numpy as np

from chainflow.basis.constants import T_REFERENCE
from chainflow.thermo import liquefied
from chainflow.thermo.components import Array, Matter
from chainflow.thermo.phases import Phases, find_phases, phases_at
from chainflow.thermo.species import LOWEST_TEMPERATURE
from chainflow.thermo.validity import StateError, some, without_round_off

if TYPE_CHECKING:
    from chainflow.thermo.exergy import Environment

Value = float | Array  # one case, or an array of cases
DISSOLVED = ("CO2",)
_KEPT = 128  # streams made in each way


@dataclass(frozen=True, slots=True, eq=False)
class Stream:
    """Flows by phase and the state they are in; made by the class methods below."""

    matter: Matter
    gas: Array  # (..., components) [mol/s]
    water: Array  # (..., components) [mol/s], liquid water and what is dissolved in it
    liquid: Array  # (..., components) [mol/s], hydrocarbons
    temperature: Value  # (...) [K]
    pressure: Value  # (...) [Pa]
    enthalpy: Value  # (...) [W]

    @classmethod
    def at(
        cls,
        matter: Matter,
        flows: Array,
        temperature: Value,
        pressure: Value,
        dissolved: tuple[str, ...] = DISSOLVED,
    ) -> "Stream":
        """Return the stream at a temperature [K] and pressure [Pa], phases found.

        `flows` [mol/s] has shape (..., components); temperature and pressure are broadcast over
        the cases. Raises `StateError` for negative flows and states outside the data.
        """
        flows = np.asarray(flows, dtype=float)
        if flows.ndim > 1 or _several(temperature, pressure):
            make = _per_case(lambda n, t, p: cls.at(matter, n, t, p, dissolved))
            return cast(Stream, make(flows, temperature, pressure))
        return _at(matter, flows.tobytes(), float(temperature), float(pressure), dissolved)

    @classmethod
    def liquefied(
        cls, matter: Matter, flows: Array, temperature: float, pressure: float
    ) -> "Stream":
        """Return one pure component as a liquefied gas (see `chainflow.thermo.liquefied`)."""
        clean = without_round_off(_own(flows), matter.components)
        cold = _cold_at(matter, clean, temperature, pressure)
        if cold is None:
            raise StateError(
                "a liquefied gas has to be one pure component of "
                f"{', '.join(liquefied.LIQUEFIABLE)}: separate the others before"
            )
        return cls._of(matter, cold, pressure)

    @classmethod
    def gaseous(cls, matter: Matter, flows: Array, temperature: Value, pressure: Value) -> "Stream":
        """Return the stream as a gas without looking for liquid."""
        flows = np.asarray(flows, dtype=float)
        if flows.ndim > 1 or _several(temperature, pressure):
            make = _per_case(lambda n, t, p: cls.gaseous(matter, n, t, p))
            return cast(Stream, make(flows, temperature, pressure))
        return _gaseous(matter, flows.tobytes(), float(temperature), float(pressure))

    @classmethod
    def from_enthalpy(
        cls,
        matter: Matter,
        flows: Array,
        enthalpy: Value,
        pressure: Value,
        guess: Value | None = None,
        dissolved: tuple[str, ...] = DISSOLVED,
    ) -> "Stream":
        """Return the stream whose enthalpy [W] is given; temperature and phases are found.

        Boiling water is split so that the enthalpy is met. Without flow the temperature is the
        guess, or 298.15 K. Raises `StateError` if no temperature of the data has this enthalpy.
        """
        flows = np.asarray(flows, dtype=float)
        if flows.ndim > 1 or _several(enthalpy, pressure):
            start: Value = np.nan if guess is None else guess
            make = _per_case(
                lambda n, h, p, t: cls.from_enthalpy(
                    matter, n, h, p, None if np.isnan(t) else t, dissolved
                )
            )
            return cast(Stream, make(flows, enthalpy, pressure, start))
        start = T_REFERENCE if guess is None else float(guess)
        raw = flows.tobytes()
        return _from_enthalpy(matter, raw, float(enthalpy), float(pressure), start, dissolved)

    @classmethod
    def empty(
        cls, matter: Matter, temperature: float = T_REFERENCE, pressure: float = 101325.0
    ) -> "Stream":
        """Return a stream without flow."""
        nothing = matter.nothing
        return cls._of(matter, Phases(nothing, nothing, nothing, temperature, 0.0), pressure)

    @classmethod
    def _of(cls, matter: Matter, phases: Phases, pressure: float) -> "Stream":
        gas, water, liquid, temperature, enthalpy = phases
        gas.setflags(write=False)
        water.setflags(write=False)
        liquid.setflags(write=False)
        return cls(matter, gas, water, liquid, temperature, pressure, enthalpy)

    @classmethod
    def stack(cls, streams: Sequence["Stream"]) -> "Stream":
        """Return several streams of the same matter as one with a case axis in front."""
        if not streams:
            raise ValueError("nothing to stack: give at least one stream")
        matter = streams[0].matter
        if any(stream.matter is not matter for stream in streams):
            raise ValueError("streams with different components cannot be stacked")
        fields = ("gas", "water", "liquid", "temperature", "pressure", "enthalpy")
        arrays = [np.stack([getattr(s, field) for s in streams]) for field in fields]
        for array in arrays:
            array.setflags(write=False)
        return cls(matter, *arrays)

    def case(self, place: int) -> "Stream":
        """Return one case of a stacked stream."""
        temperature, pressure, enthalpy = (
            _plain(np.asarray(values)[place])
            for values in (self.temperature, self.pressure, self.enthalpy)
        )
        gas, water, liquid = self.gas[place], self.water[place], self.liquid[place]
        return Stream(self.matter, gas, water, liquid, temperature, pressure, enthalpy)

    @property
    def cases(self) -> tuple[int, ...]:
        """Shape of the cases; () for a single one."""
        return self.gas.shape[:-1]

    @property
    def flows(self) -> Array:
        """Flows of all phases together [mol/s], shape (..., components)."""
        nothing = self.matter.nothing
        if self.water is nothing and self.liquid is nothing:
            return self.gas
        return self.gas + self.water + self.liquid

    @property
    def total(self) -> Value:
        """Flow of all phases together [mol/s]."""
        flows = self.flows
        return sum(flows.tolist()) if flows.ndim == 1 else _plain(flows.sum(axis=-1))

    @property
    def phase_totals(self) -> dict[str, Value]:
        """Flow of each phase [mol/s]."""
        phases = {"gas": self.gas, "water": self.water, "liquid": self.liquid}
        return {name: _plain(flows.sum(axis=-1)) for name, flows in phases.items()}

    @property
    def mass_flow(self) -> Value:
        """Mass flow [kg/s]."""
        return _plain(self.flows @ self.matter.molar_mass)

    @property
    def lhv(self) -> Value:
        """Lower heating value of the combustibles at 25 degC [W].

        What is in the oil burns from the liquid: its heat of vaporisation is taken off.
        """
        return _plain(self.flows @ self.matter.lhv - self._vaporisation)

    @property
    def hhv(self) -> Value:
        """Upper heating value of the combustibles at 25 degC [W], the oil as a liquid."""
        return _plain(self.flows @ self.matter.hhv - self._vaporisation)

    @property
    def _vaporisation(self) -> Value:
        """Heat that would vaporise the oil at 25 degC [W]."""
        if self.matter.oil is None or self.liquid is self.matter.nothing:
            return 0.0
        return _plain(self.liquid @ self.matter.oil.vaporisation)

    def flow(self, name: str) -> Value:
        """Return the flow of one component in all phases [mol/s]; zero if it is not in use."""
        place = self.matter.index.get(name)
        return _plain(self.total * 0.0 if place is None else self.flows[..., place])

    def fraction(self, name: str) -> Value:
        """Return the mole fraction of a component over all phases; zero without flow."""
        return _ratio(self.flow(name), self.total)

    def dry_fraction(self, name: str) -> Value:
        """Return the mole fraction with water left out; zero if nothing but water is there."""
        dry = self.total - self.flow("H2O")
        return _ratio(0.0 * dry if name == "H2O" else self.flow(name), dry)

    @property
    def entropy(self) -> Value:
        """Entropy flow [W/K]."""
        return self._each(Stream._entropy_of_one)

    def _entropy_of_one(self) -> float:
        temperature, pressure = float(self.temperature), float(self.pressure)
        if is_cold(self):
            enthalpy = float(self.enthalpy)
            return liquefied.cold_entropy(self.matter, self.flows, enthalpy, pressure)
        entropy = self.matter.gas_entropy(self.gas, temperature, pressure)
        entropy += self.matter.water_entropy(self.water, temperature, pressure)
        return entropy + self.matter.oil_entropy(self.liquid, temperature)

    @property
    def volume_flow(self) -> Value:
        """Volume flow of the gas [m3/s]."""
        return self._each(
            lambda s: s.matter.gas_volume(s.gas, float(s.temperature), float(s.pressure))
        )

    def _each(self, kernel: Any) -> Value:
        """Apply a kernel for one case to every case."""
        if not self.cases:
            return float(kernel(self))
        return np.array([self.case(i)._each(kernel) for i in range(self.cases[0])])

    def exergy(self, environment: "Environment | None" = None) -> Value:
        """Return physical plus chemical exergy [W]; see `chainflow.thermo.exergy`."""
        from chainflow.thermo.exergy import STANDARD_ENVIRONMENT, stream_exergy

        return stream_exergy(self, environment or STANDARD_ENVIRONMENT)

    def scaled(self, factor: Value) -> "Stream":
        """Return the same state with every flow multiplied; `factor` may have the case shape."""
        each = np.asarray(factor)[..., np.newaxis] if np.ndim(factor) else factor
        gas, water, liquid = (self.gas * each, self.water * each, self.liquid * each)
        for flows in (gas, water, liquid):
            flows.setflags(write=False)
        enthalpy = self.enthalpy * factor
        return Stream(self.matter, gas, water, liquid, self.temperature, self.pressure, enthalpy)

    def at_pressure(self, pressure: Value, dissolved: tuple[str, ...] = DISSOLVED) -> "Stream":
        """Return the stream let down to another pressure [Pa] at constant enthalpy (a valve)."""
        if not self.cases and float(self.pressure) == pressure:
            return self
        return Stream.from_enthalpy(
            self.matter, self.flows, self.enthalpy, pressure, self.temperature, dissolved
        )


# The same state is often asked for several times in a row: by a piece, by the heat it is booked
# with, by its slopes.  Streams do not change, so the last ones are kept.


@lru_cache(maxsize=_KEPT)
def _at(
    matter: Matter, raw: bytes, temperature: float, pressure: float, dissolved: tuple[str, ...]
) -> Stream:
    clean = without_round_off(np.frombuffer(raw), matter.components)
    if temperature < LOWEST_TEMPERATURE:
        cold = _cold_at(matter, clean, temperature, pressure)
        if cold is not None:
            return Stream._of(matter, cold, pressure)
    return Stream._of(matter, phases_at(matter, clean, temperature, pressure, dissolved), pressure)


@lru_cache(maxsize=_KEPT)
def _gaseous(matter: Matter, raw: bytes, temperature: float, pressure: float) -> Stream:
    clean = without_round_off(np.frombuffer(raw), matter.components)
    enthalpy = matter.gas_enthalpy(clean, temperature, pressure)
    nothing = matter.nothing
    return Stream._of(matter, Phases(clean, nothing, nothing, temperature, enthalpy), pressure)


@lru_cache(maxsize=_KEPT)
def _from_enthalpy(
    matter: Matter,
    raw: bytes,
    enthalpy: float,
    pressure: float,
    start: float,
    dissolved: tuple[str, ...],
) -> Stream:
    clean = without_round_off(np.frombuffer(raw), matter.components)
    cold = liquefied.cold_by_enthalpy(matter, clean, enthalpy, pressure)
    if cold is not None:
        return Stream._of(matter, Phases(*liquefied.cold_flows(matter, clean, cold)), pressure)
    if start < LOWEST_TEMPERATURE and not some(clean):
        return Stream.empty(matter, start, pressure)
    found = find_phases(matter, clean, enthalpy, pressure, start, dissolved)
    return Stream._of(matter, found, pressure)


def _per_case(make: Any) -> Any:
    """Return a maker of stacked streams: it broadcasts its arguments and loops over the cases."""

    def looped(flows: Array, *values: Value) -> Stream:
        cases = np.broadcast_shapes(flows.shape[:-1], *(np.shape(value) for value in values))
        flows = np.broadcast_to(flows, (*cases, flows.shape[-1]))
        spread = [np.broadcast_to(value, cases) for value in values]
        return Stream.stack(
            [
                make(flows[i], *(v[i] if len(cases) > 1 else float(v[i]) for v in spread))
                for i in range(cases[0])
            ]
        )

    return looped


def _own(flows: Array) -> Array:
    """Return the flows as an array that nobody else can change."""
    array = np.asarray(flows, dtype=float)
    return array.copy() if array.flags.writeable else array


def _several(first: Value, second: Value) -> bool:
    """Return whether one of two values holds several cases."""
    if type(first) is float and type(second) is float:
        return False
    return bool(np.ndim(first) or np.ndim(second))


def _plain(value: Any) -> Value:
    if isinstance(value, float):  # a number of numpy is one too
        return float(value)
    return float(value) if np.ndim(value) == 0 else cast(Array, value)


def _ratio(part: Value, whole: Value) -> Value:
    if np.ndim(whole) == 0:
        return float(part) / float(whole) if whole else 0.0
    return np.divide(part, whole, out=np.zeros_like(whole), where=np.asarray(whole) != 0.0)


def _cold_at(matter: Matter, flows: Array, temperature: float, pressure: float) -> Phases | None:
    """Return a pure flow below the gas data or as a liquid; None for mixtures."""
    name = liquefied.only_component(matter, flows)
    if name is not None:
        state = liquefied.cold_at(name, temperature, pressure)
        return Phases(*liquefied.cold_flows(matter, flows, state))
    nothing = matter.nothing
    return None if some(flows) else Phases(flows, nothing, nothing, temperature, 0.0)


def is_cold(stream: Stream) -> bool:
    """Return whether the stream is a gas below the data, or a liquefied gas."""
    if float(stream.temperature) < LOWEST_TEMPERATURE:
        return True
    if stream.liquid is stream.matter.nothing or not some(stream.liquid):
        return False
    return liquefied.only_component(stream.matter, stream.liquid) is not None
