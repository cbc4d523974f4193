"""How much power does a photovoltaic field make of the light that falls on it?

SI throughout: light and power [W], current [A], voltage [V], temperature [K], area [m2].
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any, ClassVar, Literal, NamedTuple, Self

import numpy as np
from pydantic import BaseModel, ConfigDict, Field, PositiveInt, PrivateAttr, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import Fraction, OpenFraction
from chainflow.equipment.base import (
    Array,
    Duty,
    Equipment,
    Impossible,
    Light,
    Outcome,
    Port,
    Role,
    Site,
    light,
)
from chainflow.equipment.cases import matter_of
from chainflow.equipment.ports import Feeds, as_given
from chainflow.equipment.setting_numbers import stated
from chainflow.equipment.sun import cell_temperature, module
from chainflow.equipment.sun.cell_temperature import CellTemperature
from chainflow.equipment.sun.module import Module
from chainflow.equipment.sun.one_diode import Point

_ROUND_OFF = 1e-9  # relative
_OF_ONE_DIODE = ("module", "cell_temperature", "series", "strings", "converter", "coupling")


class Coupling(BaseModel):
    """The stack that hangs on the field without a converter between."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    load: str = Field(description="name of the electrolyser")
    cells: PositiveInt = Field(description="its cells in series; all of them share its cell_area")


class _Work(NamedTuple):
    """What a field does, by case; zero in the dark."""

    point: Point  # of the whole field
    maximum: Array  # power at best [W]
    open_voltage: Array  # [V]
    modules: Array
    temperature: Array  # of the cells [K]
    best_cells: Array | None
    found: Array  # whether it meets its load


class PvField(Equipment):
    """Photovoltaic field: light to direct-current power.

    `constant-efficiency` turns a share of the light into power. `one-diode` follows the modules: as
    many as the light's aperture holds (or `strings` of `series` modules, what falls beside them is
    lost), warmed by sun and air. They work at maximum power behind a converter or, with `coupling`,
    where their curve crosses that of the electrolyser which hangs on them directly. Crystalline
    modules: their response to the colour of the light is not followed.
    """

    kind: ClassVar[str] = "pv-field"
    family: ClassVar[str] = "sunlight"
    gives: ClassVar[tuple[str, ...]] = (
        "modules",
        "strings",
        "cell_temperature_K",
        "field_current_A",
        "field_voltage_V",
        "open_voltage_V",
        "maximum_power_W",
        "conversion",
        "converter_loss_W",
        "coupling_loss",
        "best_cells",
    )
    ports: ClassVar[tuple[Port, ...]] = (
        Port("light", "light", Role.TAKES, main=True, means="light on the field"),
        Port("power", "power", Role.OFFERS, main=True, means="direct-current power"),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "power = efficiency * light (constant-efficiency)",
        "I = IL - I0 (exp((V + I Rs) / a) - 1) - (V + I Rs) / Rsh (one-diode, each module)",
        "modules = light / irradiance / module.area",
        "coupling_loss = 1 - power / maximum_power",
    )
    sources: ClassVar[tuple[str, ...]] = (*module.SOURCES, *cell_temperature.SOURCES)

    model: Literal["constant-efficiency", "one-diode"] = Field(
        "constant-efficiency", description="how light becomes power"
    )
    efficiency: Fraction | None = Field(
        None,
        description="power per light on the field, module to terminal (model: constant-efficiency)",
    )
    module: Module = Field(
        Module(),
        description="numbers of a module (model: one-diode); {table: pattern} takes those of the "
        "one module of pvlib's table whose name fits",
    )
    cell_temperature: CellTemperature = Field(
        CellTemperature(), description="how warm the cells get (model: one-diode)"
    )
    series: PositiveInt = Field(20, description="modules in series in a string (model: one-diode)")
    strings: PositiveInt | None = Field(
        None, description="strings side by side; as many as the light's aperture holds without it"
    )
    converter: OpenFraction = Field(
        0.97,  # 95-98 %, M: common practice
        description="power given per maximum power of the modules (model: one-diode)",
    )
    coupling: Coupling | None = Field(
        None, description="an electrolyser on the field without a converter (model: one-diode)"
    )
    _load: Any = PrivateAttr(None)  # the stack of the coupling, a `Load`

    @model_validator(mode="after")
    def _fits(self) -> PvField:
        trouble = self._wrong_for_model()
        if trouble:
            raise PydanticCustomError("pv-field", "{text}", {"text": trouble})
        return self

    def _wrong_for_model(self) -> str:
        given = stated(self)
        if self.model == "one-diode":
            if self.efficiency is not None:
                return "'efficiency' is of model constant-efficiency: remove it or change 'model'"
            if self.coupling is not None and "converter" in given:
                return "with 'coupling' there is no converter: remove 'converter' or 'coupling'"
            return ""
        strange = [name for name in _OF_ONE_DIODE if name in given]
        if strange:
            return f"'{strange[0]}' is of model one-diode: write model: one-diode or remove it"
        if self.efficiency is None:
            return "'efficiency' is missing: write efficiency: 20 %, or model: one-diode"
        return ""

    # --- the stack that hangs on it ----------------------------------------------------------

    def sees(self) -> Iterator[tuple[tuple[str, ...], str, str]]:
        if self.coupling is not None:
            yield ("coupling", "load"), self.coupling.load, "power"

    def trouble_seeing(self, name: str, other: Equipment) -> str:
        from chainflow.equipment.sun.coupling import trouble_with

        return trouble_with(other, name)

    def seeing(self, others: Mapping[str, Equipment]) -> Self:
        """Return the field with the stack of its `coupling` on it."""
        if self.coupling is None:
            return self
        from chainflow.equipment.sun.coupling import Load

        stack = others[self.coupling.load]
        trouble = self.trouble_seeing(self.coupling.load, stack)
        if trouble:
            raise ValueError(trouble)
        copy = self.model_copy()
        copy._load = Load.of(stack, self.coupling.cells)
        return copy

    # --- physics -----------------------------------------------------------------------------

    def run(
        self, feeds: Feeds, asked: Mapping[str, Any] | None = None, site: Site | None = None
    ) -> Outcome:
        """Do the work for one case or for a batch: the same arithmetic, without a loop."""
        return self.operate(feeds, asked or {}, site or Site(matter_of(feeds)))

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        sun = light(feeds)
        if self.efficiency is not None:
            share = self.efficiency * sun.rate
            return Outcome(
                {"power": share},
                duties=(_lost("light not converted", share - sun.rate, site),),
                power=-share,
            )
        if self.coupling is not None and self._load is None:
            text = f"nobody said what '{self.coupling.load}' is, on which the field hangs"
            raise Impossible("no-answer", text)
        work = self._work(sun)
        made: Array = work.point.power
        power = made if self.coupling is not None else self.converter * made
        duties = [_lost("light not converted", as_given(made - sun.rate), site)]
        if self.coupling is None:
            duties.append(_lost("converter loss", as_given(power - made), site))
        given = as_given(power)
        return Outcome(
            {"power": given},
            duties=tuple(duties),
            power=-given,
            results=self._results(work, sun, power) if site.detail else {},
            unmet=self._unmet(work, sun),
        )

    def _work(self, sun: Light) -> _Work:
        """The field at maximum power, or where it meets its load."""
        rate, irradiance, _, air, wind = np.broadcast_arrays(
            *(np.asarray(number, dtype=float) for number in sun.numbers)
        )
        temperature = self.cell_temperature.of(irradiance, air, wind)
        modules = self._modules(np.asarray(sun.area) + 0.0 * rate)
        lit = (irradiance > 0.0) & (rate > 0.0)
        diode = self.module.diode(irradiance[lit], temperature[lit])
        strings = modules[lit] / self.series
        span = diode.span()
        best = diode.at(span.best)
        point, found, cells = best, np.ones(best.current.shape, dtype=bool), None
        if self._load is not None:
            from chainflow.equipment.sun.coupling import best_cells, crossing

            point, found = crossing(diode, span, self.series, strings, self._load)
            cells = best_cells(diode, span, self.series, strings, self._load)
        return _Work(
            Point(_spread(strings * point.current, lit), _spread(self.series * point.voltage, lit)),
            _spread(modules[lit] * best.power, lit),
            _spread(self.series * span.opened, lit),
            modules,
            temperature,
            None if cells is None else _spread(cells, lit),
            _spread(found, lit) > 0.0,
        )

    def _modules(self, area: Array) -> Array:
        """How many modules the light falls on, a broken number where it says how many."""
        held = area / self.module.area
        return held if self.strings is None else np.minimum(self.strings * self.series, held)

    def _unmet(self, work: _Work, sun: Light) -> dict[str, str]:
        """Why there is no answer; in a batch a field that does not reach its load rests."""
        lit = (np.asarray(sun.rate) > 0.0) & (np.asarray(sun.irradiance) > 0.0)
        area = float(np.min(np.broadcast_to(sun.area, lit.shape), where=lit, initial=np.inf))
        wanted = (self.strings or 0) * self.series * self.module.area
        if wanted > area * (1.0 + _ROUND_OFF):
            return {
                "light": f"the light falls on {area:.6g} m2, but {self.strings} strings of "
                f"{self.series} modules have {wanted:.6g} m2: enlarge the aperture of the light, "
                "or take fewer strings"
            }
        if self.coupling is None or sun.cases is not None or not lit.any() or bool(work.found):
            return {}
        assert self._load is not None
        least = self._load.least_of_a_cell * self._load.cells
        return {
            "power": f"these curves do not cross: {self.series} modules in series give "
            f"{float(work.open_voltage):.4g} V at most where {self._load.cells} cells of "
            f"'{self.coupling.load}' need {least:.4g} V: more 'series', or fewer 'coupling.cells'"
        }

    def _results(self, work: _Work, sun: Light, power: Array) -> dict[str, Any]:
        rate, best = np.asarray(sun.rate), work.maximum
        lit = best > 0.0
        found = {
            "modules": work.modules,
            "strings": work.modules / self.series,
            "cell_temperature_K": work.temperature,
            "field_current_A": work.point.current,
            "field_voltage_V": work.point.voltage,
            "open_voltage_V": work.open_voltage,
            "maximum_power_W": best,
            "conversion": np.where(lit, power / np.where(lit, rate, 1.0), 0.0),
        }
        if self.coupling is None:
            found["converter_loss_W"] = work.point.power - power
        else:
            found["coupling_loss"] = np.where(lit, 1.0 - power / np.where(lit, best, 1.0), 0.0)
        if work.best_cells is not None:
            found["best_cells"] = work.best_cells
        return {name: as_given(np.asarray(value)) for name, value in found.items()}

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        if self.efficiency is not None:
            return {"light": {"power": np.array([[self.efficiency, 0.0, 0.0, 0.0, 0.0]])}}
        sun = light(feeds)
        if outcome.unmet or not (sun.rate > 0.0 and sun.irradiance > 0.0):
            return {}
        return {"light": {"power": self._by_light(sun)[None, :]}}

    def _by_light(self, sun: Light) -> Array:
        """Derivatives of the power by the five numbers of the light."""
        from chainflow.equipment.sun.field_slopes import at_maximum, response

        level = np.array(self.cell_temperature.of(sun.irradiance, sun.air, sun.wind))
        diode = self.module.diode(sun.irradiance, level)
        span = diode.span()
        strings = np.asarray(self._modules(np.asarray(sun.area))) / self.series
        meeting, voltage = None, span.best
        if self._load is not None:
            from chainflow.equipment.sun.coupling import meeting_of

            meeting, voltage = meeting_of(diode, span, self.series, strings, self._load)
        answer = response(self.module, diode, voltage, np.asarray(sun.irradiance), level)
        by_sun, by_air, by_wind = self.cell_temperature.slopes(sun.irradiance, sun.wind)
        currents = (
            0.0,
            answer.by_irradiance + answer.by_temperature * by_sun,
            0.0,
            answer.by_temperature * by_air,
            answer.by_temperature * by_wind,
        )
        follows = self.strings is None  # the number of strings follows the aperture
        shares = (1.0 / sun.rate, -1.0 / sun.irradiance, 0.0, 0.0, 0.0) if follows else (0.0,) * 5
        found = []
        for change, share in zip(currents, shares, strict=True):
            if meeting is not None:
                found.append(meeting.power(answer, np.asarray(change), share * strings))
                continue
            point = diode.at(voltage)
            one = at_maximum(np.asarray(change), point.current, voltage, diode.series_resistance)
            number = self.series * strings
            found.append(self.converter * number * (share * point.power + one))
        return np.array(found, dtype=float)


def _lost(purpose: str, heat: Any, site: Site) -> Duty:
    return Duty(purpose, heat, site.ambient, site.ambient, site.ambient, "ambient")


def _spread(values: Array, lit: Array) -> Array:
    """Numbers of the lit cases among all, zero in the others."""
    whole = np.zeros(lit.shape)
    whole[lit] = values
    return whole
