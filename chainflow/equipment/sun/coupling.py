"""Where does a photovoltaic field meet a stack of cells that hangs on it without a converter?

The stack's curve is its own: the voltage of a cell by current density, times the cells in series.
The field's voltage falls as its current grows, the stack's rises, so there is one crossing or none.
It is looked for along the diode's voltage by halving, on a table of the stack's curve, then closed
with the curve itself. SI throughout: [V], [A], [A/m2], area of all cells together [m2].
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from chainflow.equipment.base import Equipment
from chainflow.equipment.cells.losses import Curve
from chainflow.equipment.electrolysis import Electrolyser
from chainflow.equipment.sun.field_slopes import OnLoad
from chainflow.equipment.sun.one_diode import Array, Diode, Point, Span, rising_zero

_TABLE = np.geomspace(1e-6, 1e6, 2001)  # current densities [A/m2]
_BELOW_LIMIT = 1.0 - 1e-9
_ROUGH = 36  # halvings of a search on the table
_ASIDE = 1e-5  # relative, of the differences that give its slope


@dataclass(frozen=True, slots=True, eq=False)
class Load:
    """Cells in series as a load; `area` is None where their voltage does not follow the current."""

    curve: Curve
    cells: int
    area: float | None  # of all cells together [m2]
    constant: float  # voltage of a cell where there is no area [V]
    table: tuple[Array, Array]  # current density [A/m2], voltage [V]

    @staticmethod
    def of(stack: Equipment, cells: int) -> Load:
        """Return a stack, `trouble_with` of which is empty, as a load."""
        assert isinstance(stack, Electrolyser)
        curve = stack.liquid_curve()
        area = stack.sizing().area_of(curve)
        constant = curve.voltage(stack.current_density or 0.0)
        densities = np.append(0.0, _TABLE)
        if np.isfinite(curve.limit):
            densities = np.minimum(densities, curve.limit * _BELOW_LIMIT)
            densities = np.unique(densities)
        voltages = np.array([curve.voltage(float(density)) for density in densities])
        return Load(curve, cells, area, constant, (densities, voltages))

    @property
    def least_of_a_cell(self) -> float:
        """Voltage below which a cell takes no current [V]."""
        return self.constant if self.area is None else float(self.table[1][0])

    def in_table(self, current: Array, cells: Array) -> Array:
        """Voltage of the stack at a current, between points of the table; infinite beyond it."""
        if self.area is None:
            return self.constant * cells + 0.0 * current
        density = current * cells / self.area
        return cells * np.interp(density, *self.table, right=np.inf)

    def voltage(self, current: Array) -> Array:
        """Voltage of the stack at a current, by the curve itself."""
        if self.area is None:
            return self.constant * self.cells + 0.0 * current
        highest = self.curve.limit * _BELOW_LIMIT
        density = np.clip(current * self.cells / self.area, 0.0, highest)
        return self.cells * _elementwise(self.curve.voltage, density)


def trouble_with(stack: object, name: str) -> str:
    """Say why something cannot hang on a field directly; empty if it can."""
    if not isinstance(stack, Electrolyser):
        return f"'{name}' is no electrolyser, wanted the stack that hangs on the field"
    if stack.model == "solid-oxide":
        return (
            f"the curve of '{name}' hangs on what it is fed with, wanted model pem, alkaline, "
            "measured, voltage or specific-energy"
        )
    if stack.calls_for_power:
        return (
            f"'{name}' says itself how much it makes, with a field it takes what comes: remove "
            "'hydrogen', or one of 'cell_area' and 'current_density'"
        )
    if stack.drawn != 1.0:
        return (
            f"'{name}' draws power beside that of its cells, without a converter there is none: "
            "set 'rectifier: 100 %' and 'auxiliaries: 0 %'"
        )
    return ""


class Crossing(NamedTuple):
    """Where the curves cross; `found` is False where they do not, and nothing flows there."""

    point: Point  # of one module
    found: Array


def crossing(diode: Diode, span: Span, series: int, strings: Array, load: Load) -> Crossing:
    """Return where modules, `series` in each of `strings`, meet a load."""
    cells = np.full_like(strings, float(load.cells))
    found = series * span.opened > load.cells * load.least_of_a_cell
    rough = _in_table(diode, span, series, strings, load, cells)

    def excess(voltage: Array) -> Array:
        point = diode.at(voltage)
        return series * point.voltage - load.voltage(strings * point.current)

    point = diode.at(_closed(excess, rough, span, found))
    return Crossing(
        Point(np.where(found, point.current, 0.0), np.where(found, point.voltage, span.opened)),
        found,
    )


def meeting_of(
    diode: Diode, span: Span, series: int, strings: Array, load: Load
) -> tuple[OnLoad, Array]:
    """Return the place where the curves cross with the load's slope, and the diode's voltage."""
    point = crossing(diode, span, series, strings, load).point
    current = strings * point.current
    step = _ASIDE * current
    slope = (load.voltage(current + step) - load.voltage(current - step)) / (2.0 * step)
    meeting = OnLoad(
        series,
        strings,
        point.current,
        diode.series_resistance,
        load.voltage(current),
        slope,
    )
    return meeting, point.voltage + point.current * diode.series_resistance


def _in_table(
    diode: Diode, span: Span, series: int, strings: Array, load: Load, cells: Array
) -> tuple[Array, Array]:
    """Return the diode's voltage at the crossing by the table, and how the excess rises there."""

    def excess(voltage: Array) -> Array:
        point = diode.at(voltage)
        return series * point.voltage - load.in_table(strings * point.current, cells)

    found = rising_zero(excess, span.short, span.opened, _ROUGH)
    aside = _ASIDE * (span.opened - span.short)
    rise = (excess(found + aside) - excess(found - aside)) / np.where(aside > 0.0, 2 * aside, 1.0)
    return found, rise


def _closed(
    function: Callable[[Array], Array], rough: tuple[Array, Array], span: Span, found: Array
) -> Array:
    """Close in on a zero that the table left, elementwise: a step by its slope, one by a secant."""
    start, rise = rough
    value = function(start)
    usable = found & np.isfinite(rise) & (rise > 0.0)
    first = start - np.where(usable, value / np.where(usable, rise, 1.0), 0.0)
    first = np.clip(first, span.short, span.opened)
    after = function(first)
    moving = (after != value) & (after != 0.0)
    step = after * (first - start) / np.where(moving, after - value, 1.0)
    return np.clip(first - np.where(moving, step, 0.0), span.short, span.opened)


def best_cells(diode: Diode, span: Span, series: int, strings: Array, load: Load) -> Array:
    """Return the number of cells in series that draws most power, the area of all kept.

    The load then passes through the point of maximum power, or misses it by less than a cell.
    """
    best = diode.at(span.best)
    ceiling = np.maximum(np.floor(series * span.opened / load.least_of_a_cell), 1.0)

    def excess(cells: Array) -> Array:
        return load.in_table(strings * best.current, cells) - series * best.voltage

    wanted = rising_zero(excess, np.ones_like(ceiling), ceiling, _ROUGH)
    few, many = np.floor(wanted), np.ceil(wanted)
    powers = []
    for cells in (few, many):
        rough, _ = _in_table(diode, span, series, strings, load, cells)
        point = diode.at(rough)
        powers.append(point.power)
    return np.where(powers[0] >= powers[1], few, many)


def _elementwise(law: Callable[[float], float], numbers: Array) -> Array:
    """Apply a law of plain numbers to each of an array."""
    return np.array([law(float(number)) for number in numbers.ravel()]).reshape(numbers.shape)
