"""Which gas, which water and which oil does a flow form at a temperature and pressure?

Both liquids are ideal solutions that do not mix with each other, under an ideal gas:
``y_i p = x_i p_i(T)`` for the hydrocarbons in the oil (`chainflow.thermo.oil`), Raoult and Henry
for the water (`chainflow.thermo.water`). No water dissolves in the oil and no hydrocarbon in the
water. H2, CO, CO2, CH4, N2 and the like do not dissolve in the oil: at 40 degC and 25 bar that
leaves out, per mol of oil, some 0.02 mol of H2, 0.04 of CO, 0.1 of CH4 and 0.3 of CO2 for each as
the pure gas (from memory), less with its share in the gas. C2 to C4 do, by Raoult.

The phase amounts b minimise ``sum b_j - sum z_i ln E_i`` with ``E_i = sum_j b_j e_ij``, e = 1 in
the gas and 1/K in a liquid (Michelsen, Comput. Chem. Eng. 18 (1994) 545): convex, so that damped
Newton ends at the one answer; the amounts in each phase are ``z_i b_j e_ij / E_i``.
One case: flows (components,) [mol/s], [K], [Pa].
"""

from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from chainflow.thermo.oil import Oil
from chainflow.thermo.validity import some
from chainflow.thermo.water import CRITICAL_TEMPERATURE, distribution, log_slopes, split

if TYPE_CHECKING:
    from chainflow.thermo.components import Array, Matter

_NO_LIQUID = 1e-14  # share of the flow below which a liquid is round-off
_GONE = 1e-30  # share of the flow: an oil that has shrunk to it shrinks for ever
_MOST_STEPS = 200
_LAST_STEP = 1e-9  # relative: the step after it is below round-off
GAS, WATER, OIL = range(3)


class Split(NamedTuple):
    """Gas, water and oil [mol/s], each (components,)."""

    gas: "Array"
    water: "Array"
    oil: "Array"


class LiquidSlopes(NamedTuple):
    """Slopes of water and oil by flows (components, components) and by temperature."""

    water_by_flows: "Array"
    oil_by_flows: "Array"
    water_by_temperature: "Array"
    oil_by_temperature: "Array"


def three_phase_split(
    matter: "Matter",
    flows: "Array",
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...],
) -> Split | None:
    """Return the phases of checked flows, or None if all is gas."""
    oil = matter.oil
    pair = split(matter, flows, temperature, pressure, dissolved)
    gas, water = pair or (flows, matter.nothing)
    dry = None if pair is None else Split(gas, water, matter.nothing)
    if oil is None or not _oil_forms(oil, gas, temperature, pressure):
        return dry
    total = float(flows.sum())
    if float(flows[oil.places].sum()) <= _NO_LIQUID * total:
        return dry
    ratios = _ratios(matter, flows, temperature, pressure, dissolved)
    amounts = _all_liquid(flows, ratios)
    if amounts is None:
        amounts = _amounts(flows, ratios, gas, water)
    found = _phases(flows, ratios, amounts)
    if float(found.oil.sum()) <= _NO_LIQUID * total:
        return dry
    return found


def oil_forms(matter: "Matter", gas: "Array", temperature: float, pressure: float) -> bool:
    """Return whether hydrocarbons condense from a gas; exactly at the dew point they do not."""
    return matter.oil is not None and _oil_forms(matter.oil, gas, temperature, pressure)


def _oil_forms(oil: Oil, gas: "Array", temperature: float, pressure: float) -> bool:
    there = gas[oil.places]
    if not some(there):
        return False
    liquid = float(there @ oil.log_pressures(temperature).inverse) * pressure
    return liquid > sum(gas.tolist())


def _ratios(
    matter: "Matter",
    flows: "Array",
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...],
) -> "Array":
    """Return e, shape (3, components): one in the gas, 1/K in the liquids, zero where it is not."""
    assert matter.oil is not None
    e = np.zeros((3, len(matter.components)))
    e[GAS] = 1.0
    e[OIL, matter.oil.places] = pressure * matter.oil.log_pressures(temperature).inverse
    wet = matter.water is not None and flows[matter.water] > 0.0
    if wet and temperature < CRITICAL_TEMPERATURE:
        places, names = matter.solubles(dissolved)
        e[WATER, list(places)] = 1.0 / np.array(distribution(names, temperature, pressure))
    return e


def _all_liquid(flows: "Array", e: "Array") -> "Array | None":
    """Return the amounts of water and oil where no gas is left, or None."""
    if flows[(e[WATER] <= 0.0) & (e[OIL] <= 0.0)].any():
        return None
    water, oil = (float(flows[e[phase] > 0.0].sum()) for phase in (WATER, OIL))
    vapour = 0.0
    for phase, amount in ((WATER, water), (OIL, oil)):
        if amount > 0.0:
            at = e[phase] > 0.0
            vapour += float((flows[at] / e[phase, at]).sum()) / amount
    return np.array([0.0, water, oil]) if vapour <= 1.0 else None


def _amounts(flows: "Array", e: "Array", gas: "Array", water: "Array") -> "Array":
    """Return the amounts of gas, water and oil; gas and oil are known to be there."""
    total = float(flows.sum())
    heavy = float(flows[e[OIL] > 10.0].sum())
    oil = max(heavy, 0.01 * float(flows[e[OIL] > 0.0].sum()))
    start = np.array([max(float(gas.sum()) - oil, 0.01 * total), float(water.sum()), oil])
    wet = start[WATER] > 0.0
    found = _minimised(flows, e, start, [GAS, WATER, OIL] if wet else [GAS, OIL])
    if wet or not e[WATER].any():
        return found
    at = e[WATER] > 0.0  # drier of hydrocarbons, the gas may be wet
    if float((flows[at] * e[WATER, at]).sum()) <= found[GAS]:
        return found
    found[WATER] = 0.5 * float(flows[at].sum())
    return _minimised(flows, e, found, [GAS, WATER, OIL])


def _minimised(flows: "Array", e: "Array", start: "Array", active: list[int]) -> "Array":
    """Return the amounts of the active phases, all of which are there at the answer."""
    there = flows > 0.0
    z, e = flows[there], e[active][:, there]
    gone = _GONE * float(z.sum())
    amounts = start[active]
    for _ in range(_MOST_STEPS):
        whole = amounts @ e
        once = z / whole
        step = small_solve((e * (once / whole)) @ e.T, 1.0 - e @ once)
        relative = (step / amounts).tolist()  # negative: downwards is where the answer is less
        size = max(abs(part) for part in relative)
        step *= -min(1.0, 0.9 / max(*relative, 0.9))
        if size > 0.1:
            step = _lower(z, e, amounts, step, whole)
        amounts = amounts + step
        if size <= _LAST_STEP or amounts[-1] < gone:
            break
    found = np.zeros(3)
    found[active] = amounts
    return found


def _lower(z: "Array", e: "Array", amounts: "Array", step: "Array", whole: "Array") -> "Array":
    """Halve a long step until it brings the potential down."""
    for _ in range(40):
        if float(step.sum() - z @ np.log((amounts + step) @ e / whole)) < 0.0:
            break
        step = 0.5 * step
    return step


def small_solve(matrix: "Array", right: "Array") -> "Array":
    """Solve two or three equations with a symmetric matrix; not finite where it is singular."""
    if len(matrix) == 2 and right.ndim == 1:
        (a, b), (_, d) = matrix.tolist()
        one, two = right.tolist()
        return _over(np.array([d * one - b * two, a * two - b * one]), a * d - b * b)
    if len(matrix) == 2:
        (a, b), (_, d) = matrix.tolist()
        both = np.array([[d, -b], [-b, a]])
        return _over(both @ right, a * d - b * b)
    (a, b, c), (_, d, e), (_, _, f) = matrix.tolist()
    first, second, third = d * f - e * e, c * e - b * f, b * e - c * d
    middle, last, corner = a * f - c * c, b * c - a * e, a * d - b * b
    both = np.array([[first, second, third], [second, middle, last], [third, last, corner]])
    return _over(both @ right, a * first + b * second + c * third)


def _over(values: "Array", determinant: float) -> "Array":
    return values / determinant if determinant else np.full(values.shape, np.inf)


def _phases(flows: "Array", e: "Array", amounts: "Array") -> Split:
    shares = amounts[:, np.newaxis] * e
    shares = shares / np.maximum(shares.sum(axis=0), 1e-300)
    water, oil = flows * shares[WATER], flows * shares[OIL]
    return Split(np.maximum(flows - water - oil, 0.0) if amounts[GAS] else 0.0 * flows, water, oil)


class _Answer(NamedTuple):
    """What the phases of a flow need to say how they answer to changes."""

    active: list[int]
    amounts: "Array"  # (active,)
    share: "Array"  # (active, components), e over the whole
    moving: "Array"  # (active, components), de/dT over the whole
    hessian: "Array"


def _answer(
    matter: "Matter",
    phases: Split,
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...],
) -> _Answer:
    flows = phases.gas + phases.water + phases.oil
    amounts = np.array([float(part.sum()) for part in phases])
    least = 1e-14 * float(amounts.sum())
    active = [phase for phase in (GAS, WATER, OIL) if amounts[phase] > least]
    e = _ratios(matter, flows, temperature, pressure, dissolved)[active]
    b = amounts[active]
    whole = np.maximum(b @ e, 1e-300)
    share = e / whole
    moving = _ratio_slopes(matter, temperature, dissolved)[active] * share
    return _Answer(active, b, share, moving, (share * flows) @ share.T)


def liquids_by_temperature(
    matter: "Matter",
    phases: Split,
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...],
) -> tuple["Array", "Array"]:
    """Return the slopes of water and oil by temperature, each (components,); some oil is there."""
    known = _answer(matter, phases, temperature, pressure, dissolved)
    flows = phases.gas + phases.water + phases.oil
    return _by_temperature(known, flows)


def _by_temperature(known: _Answer, flows: "Array") -> tuple["Array", "Array"]:
    pushed = known.amounts @ known.moving
    force = (known.moving - known.share * pushed) @ flows
    moved = _solved(known.hessian, force)
    whole = moved @ known.share + pushed
    out = [np.zeros(len(flows)), np.zeros(len(flows))]
    for row, phase in enumerate(known.active):
        if phase != GAS:
            part = moved[row] - known.amounts[row] * whole
            change = known.share[row] * part + known.amounts[row] * known.moving[row]
            out[phase - 1] = flows * change
    return out[0], out[1]


def liquid_slopes(
    matter: "Matter",
    phases: Split,
    temperature: float,
    pressure: float,
    dissolved: tuple[str, ...],
) -> LiquidSlopes:
    """Return how water and oil answer to flows and temperature; some oil is there.

    Where the phases are more than the components (one boiling alone) there is no answer and the
    slopes are not finite.
    """
    known = _answer(matter, phases, temperature, pressure, dissolved)
    flows = phases.gas + phases.water + phases.oil
    moved = _solved(known.hessian, known.share)
    spread = known.share.T @ moved
    out = [np.zeros((len(flows), len(flows))) for _ in range(2)]
    for row, phase in enumerate(known.active):
        if phase == GAS:
            continue
        own = flows * known.share[row]
        block = own[:, np.newaxis] * (moved[row] - known.amounts[row] * spread)
        block[np.diag_indices(len(flows))] += known.amounts[row] * known.share[row]
        out[phase - 1] = block
    water_heated, oil_heated = _by_temperature(known, flows)
    return LiquidSlopes(out[0], out[1], water_heated, oil_heated)


def _solved(matrix: "Array", right: "Array") -> "Array":
    """Solve for the active phases; a single one stays what it is."""
    if len(matrix) == 1:
        return right / matrix[0, 0]
    return small_solve(matrix, right)


def _ratio_slopes(matter: "Matter", temperature: float, dissolved: tuple[str, ...]) -> "Array":
    """Return d ln e / dT, shape (3, components)."""
    assert matter.oil is not None
    slopes = np.zeros((3, len(matter.components)))
    slopes[OIL, matter.oil.places] = -matter.oil.log_pressures(temperature).slope
    if matter.water is not None and temperature < CRITICAL_TEMPERATURE:
        places, names = matter.solubles(dissolved)
        slopes[WATER, list(places)] = -np.array(log_slopes(names, temperature))
    return slopes
