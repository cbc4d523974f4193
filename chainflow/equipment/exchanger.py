"""Heat from one stream to another, with the pinch inside found.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat [W].
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Annotated, Any, ClassVar

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import PressureDrop, Temperature, measured
from chainflow.equipment.base import Array, Caution, Equipment, Outcome, Port, Role, Site, material
from chainflow.equipment.exchange import cold_kinks, hot_kinks, least_on, stream_curve
from chainflow.equipment.ports import Feeds
from chainflow.thermo.components import Matter
from chainflow.thermo.stream_slopes import enthalpy_slopes
from chainflow.thermo.streams import Stream

_PLACES = 24  # where the temperature difference is looked at for the printed answer
_REACHED = 1e-9  # relative


class HeatExchanger(Equipment):
    """Passes heat from a hot to a cold stream in counter-flow.

    It passes as much as leaves the smallest temperature difference, wherever inside it is, at
    `approach`; with `hot_outlet`, `cold_outlet` or `duty` it passes what that takes, but never more
    than `approach` allows, and says so.
    """

    kind: ClassVar[str] = "heat-exchanger"
    family: ClassVar[str] = "heat"
    gives: ClassVar[tuple[str, ...]] = (
        "duty_W",
        "approach_K",
        "pinch_K",
        "conductance_W_K",
        "mean_difference_K",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port("hot", "material", Role.TAKES, main=True, means="the stream that is cooled"),
        Port("cold", "material", Role.TAKES, means="the stream that is heated"),
        Port("hot_out", "material", Role.OFFERS, main=True, means="the hot stream, cooled"),
        Port("cold_out", "material", Role.OFFERS, optional=True, means="the cold stream, heated"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "most heat = least over T of [H_hot(in) - H_hot(T) + H_cold(T - approach) - H_cold(in)]",
        "conductance = integral of dQ / (T_hot - T_cold)",
    )

    approach: Annotated[float, measured("K", gt=0, difference=True)] = Field(
        10.0, description="smallest temperature difference (common practice, no source)"
    )
    hot_outlet: Temperature | None = Field(None, description="temperature wanted at `hot_out`")
    cold_outlet: Temperature | None = Field(None, description="temperature wanted at `cold_out`")
    duty: Annotated[float, measured("W", ge=0)] | None = Field(
        None, description="heat wanted from hot to cold"
    )
    hot_pressure_drop: PressureDrop = Field(0.0, description="pressure lost by the hot stream")
    cold_pressure_drop: PressureDrop = Field(0.0, description="pressure lost by the cold stream")

    @model_validator(mode="after")
    def _one_aim(self) -> HeatExchanger:
        aims = [n for n in ("hot_outlet", "cold_outlet", "duty") if getattr(self, n) is not None]
        if len(aims) > 1:
            raise PydanticCustomError(
                "exchanger", "give at most one of {names}", {"names": ", ".join(aims)}
            )
        return self

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        mine = f"{inlet}_out"
        return [(outlet, species) for outlet in outlets if outlet == mine]

    def outlet_pressures(self, inlets: Mapping[str, tuple[float, ...]]) -> dict[str, float]:
        hot, cold = (min(inlets.get(name, (float("inf"),))) for name in ("hot", "cold"))
        return {"hot_out": hot - self.hot_pressure_drop, "cold_out": cold - self.cold_pressure_drop}

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        hot, cold = material(feeds, "hot"), material(feeds, "cold")
        low = float(hot.pressure) - self.hot_pressure_drop
        high = float(cold.pressure) - self.cold_pressure_drop
        most, pinch = self._most(hot, cold, low, high)
        wanted = self._wanted(hot, cold, low, high)
        heat = most if wanted is None else min(max(wanted, 0.0), most)
        hot_out = _moved(hot, -heat, low)
        cold_out = _moved(cold, heat, high)
        results = {"duty_W": heat, "pinch_K": pinch}
        if site.detail:
            results |= _profile(hot, cold, hot_out, cold_out, heat)
        return Outcome(
            {"hot_out": hot_out, "cold_out": cold_out},
            results=results,
            cautions=self._cautions(hot, cold, wanted, most),
            inner=wanted is not None and 0.0 < wanted < most,
        )

    def _most(
        self, hot: Stream, cold: Stream, hot_pressure: float, cold_pressure: float
    ) -> tuple[float, float]:
        """The most heat [W] and the hot side's temperature where the approach is smallest [K]."""
        low = float(cold.temperature) + self.approach
        high = float(hot.temperature)
        if high <= low or float(hot.total) == 0.0 or float(cold.total) == 0.0:
            return 0.0, high
        above, below = stream_curve(hot, hot_pressure), stream_curve(cold, cold_pressure)
        start_hot, start_cold = float(hot.enthalpy), float(cold.enthalpy)
        kinks = hot_kinks(hot, hot_pressure)
        kinks += [t + self.approach for t in cold_kinks(cold, cold_pressure)]

        def room(level: float) -> float:
            given = 0.0 if level == high else start_hot - above(level)
            taken = 0.0 if level == low else below(level - self.approach) - start_cold
            return given + taken

        pinch, heat = least_on(room, low, high, kinks)
        return max(heat, 0.0), pinch

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        hot, cold = material(feeds, "hot"), material(feeds, "cold")
        if not outcome.inner:  # the approach has the say: it may be anywhere inside
            return {}
        one = np.eye(len(site.matter.components) + 1)
        heat = {"hot": np.zeros_like(one), "cold": np.zeros_like(one)}  # [0, Q] by each side
        for side, stream, level, sign in (
            ("hot", hot, self.hot_outlet, -1.0),
            ("cold", cold, self.cold_outlet, 1.0),
        ):
            if level is None:
                continue
            pressure = float(stream.pressure) - getattr(self, f"{side}_pressure_drop")
            reached = Stream.at(site.matter, stream.flows, level, pressure)
            by_flow, by_level = enthalpy_slopes(reached)
            if not np.isfinite(by_level):
                return {}
            heat[side][-1] = sign * np.append(by_flow, -1.0)
        return {
            side: {
                "hot_out": (one if side == "hot" else 0.0) - heat[side],
                "cold_out": (one if side == "cold" else 0.0) + heat[side],
            }
            for side in ("hot", "cold")
        }

    def _wanted(
        self, hot: Stream, cold: Stream, hot_pressure: float, cold_pressure: float
    ) -> float | None:
        if self.duty is not None:
            return self.duty
        if self.hot_outlet is not None:
            return float(hot.enthalpy) - stream_curve(hot, hot_pressure)(self.hot_outlet)
        if self.cold_outlet is not None:
            return stream_curve(cold, cold_pressure)(self.cold_outlet) - float(cold.enthalpy)
        return None

    def _cautions(
        self, hot: Stream, cold: Stream, wanted: float | None, most: float
    ) -> tuple[Caution, ...]:
        if float(hot.total) == 0.0 or float(cold.total) == 0.0:
            return ()
        if float(hot.temperature) <= float(cold.temperature) + self.approach:
            text = (
                f"the hot stream at {float(hot.temperature) - 273.15:.4g} degC is not "
                f"{self.approach:g} K "
                f"above the cold one at {float(cold.temperature) - 273.15:.4g} degC: no heat passes"
            )
            return (Caution("hot-not-hot", text),)
        if wanted is not None and wanted > most * (1.0 + _REACHED):
            text = (
                f"{wanted / 1e3:.4g} kW are wanted, {most / 1e3:.4g} kW pass with an approach of "
                f"{self.approach:g} K"
            )
            return (Caution("pinched", text),)
        if wanted is not None and wanted < 0.0:
            text = "what is wanted would take heat from the cold to the hot stream: no heat passes"
            return (Caution("works-the-wrong-way", text),)
        return ()


def _moved(stream: Stream, heat: float, pressure: float) -> Stream:
    if heat == 0.0 and pressure == float(stream.pressure):
        return stream
    return Stream.from_enthalpy(
        stream.matter,
        stream.flows,
        float(stream.enthalpy) + heat,
        pressure,
        float(stream.temperature),
    )


def _profile(
    hot: Stream, cold: Stream, hot_out: Stream, cold_out: Stream, heat: float
) -> dict[str, float]:
    """Temperature differences from the cold end to the hot end, at even heat and at the kinks."""
    if heat <= 0.0:
        return {"approach_K": 0.0, "conductance_W_K": 0.0, "mean_difference_K": 0.0}
    low, high = float(hot_out.pressure), float(cold_out.pressure)
    shares = [float(share) for share in np.linspace(0.0, 1.0, _PLACES + 1)]
    for kink in hot_kinks(hot, low):
        shares.append((stream_curve(hot, low)(kink) - float(hot_out.enthalpy)) / heat)
    for kink in cold_kinks(cold, high):
        shares.append((stream_curve(cold, high)(kink) - float(cold_out.enthalpy)) / heat + 1.0)
    shares = sorted(share for share in shares if 0.0 <= share <= 1.0)
    gaps, warm, cool = [], hot_out, _moved(cold_out, -heat, high)
    for share in shares:  # from one place to the next, each a good guess for its neighbour
        warm = _moved(warm, float(hot_out.enthalpy) + heat * share - float(warm.enthalpy), low)
        taken = heat * (share - 1.0)
        cool = _moved(cool, float(cold_out.enthalpy) + taken - float(cool.enthalpy), high)
        gaps.append(float(warm.temperature) - float(cool.temperature))
    pieces = zip(shares, shares[1:], gaps, gaps[1:], strict=False)
    conductance = sum(heat * (end - start) / _log_mean(a, b) for start, end, a, b in pieces)
    return {
        "approach_K": min(gaps),
        "conductance_W_K": conductance,
        "mean_difference_K": heat / conductance,
    }


def _log_mean(one: float, other: float) -> float:
    """Logarithmic mean of two temperature differences [K]."""
    one, other = max(one, 1e-6), max(other, 1e-6)
    if abs(one - other) < 1e-9 * one:
        return one
    return float((one - other) / np.log(one / other))
