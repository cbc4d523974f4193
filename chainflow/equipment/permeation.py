"""How much of each component passes a membrane? Cross-flow and well-mixed, by permeances.

Flux of component i [mol/(m2 s)]: ``Q_i (x_i p_feed - y_i p_permeate)`` with the permeance Q_i, the
mole fractions x on the feed side and y of what has just permeated.  With the total flux j this is
``y_i = Q_i x_i p_feed / (j + Q_i p_permeate)``, and ``sum y = 1`` fixes j.

Cross-flow: the feed side is in plug flow and what permeates is drawn off where it passes.  With
``n_i`` left on the feed side and n their sum, ``d ln n_i / d ln n = y_i / x_i`` and
``dA / d ln n = -n / j``: the slopes are between zero and the pressure ratio, so a component that is
used up does no harm.  The way walked is ``-ln(n/n_0) + A / area``, so that the driving force may be
used up as well.  Integrated with the embedded Runge-Kutta pair of Dormand and Prince, J. Comp.
Appl. Math. 6 (1980) 19, whose error estimate sets the steps.

Ideal gas, constant permeances, no pressure drop along either side, isothermal flux.
Areas [m2], flows [mol/s], pressures [Pa], permeances [mol/(m2 s Pa)].
"""

from __future__ import annotations

from collections.abc import Sequence
from math import exp, isfinite
from operator import mul

TOLERANCE = 1e-7  # of n_i/n_i0 and of the area, estimated per step; the answer is closer
_MOST_STEPS = 2000
_NO_FLUX = 1e-9  # of the flux at the inlet, at which nothing more passes
_LEAST_LEFT = -20.0  # ln(n/n_0) at which all is taken to have passed

_WEIGHTS = (
    (1 / 5,),
    (3 / 40, 9 / 40),
    (44 / 45, -56 / 15, 32 / 9),
    (19372 / 6561, -25360 / 2187, 64448 / 6561, -212 / 729),
    (9017 / 3168, -355 / 33, 46732 / 5247, 49 / 176, -5103 / 18656),
    (35 / 384, 0.0, 500 / 1113, 125 / 192, -2187 / 6784, 11 / 84),
)
_ERRORS = (71 / 57600, 0.0, -71 / 16695, 71 / 1920, -17253 / 339200, 22 / 525, -1 / 40)


def local_flux(
    fractions: Sequence[float],
    permeances: Sequence[float],
    feed_pressure: float,
    permeate_pressure: float,
) -> float:
    """Return the total flux [mol/(m2 s)] at one place; zero where nothing can pass.

    ``sum Q_i x_i p_feed / (j + Q_i p_permeate) = 1``: falling and convex in j, so Newton's steps
    from below never overshoot.
    """
    driving = [q * x * feed_pressure for q, x in zip(permeances, fractions, strict=True)]
    return _flux(driving, [q * permeate_pressure for q in permeances], 0.0)


def _flux(driving: list[float], held: list[float], guess: float) -> float:
    """Solve ``sum d / (j + h) = 1`` for j."""
    if not any(held):
        return sum(driving)
    flux = guess
    for _ in range(100):
        total = slope = 0.0
        for d, h in zip(driving, held, strict=True):
            if d > 0.0:
                part = d / (flux + h)
                total += part
                slope += part / (flux + h)
        if total <= 1.0 and flux == 0.0:
            return 0.0
        step = (total - 1.0) / slope
        flux = max(flux + step, 0.0)
        if abs(step) <= 1e-9 * flux:  # squared by the step just taken: below round-off
            break
    return flux


class _Path:
    """Slopes of ln(n_i/n_i0), of ln(n/n_0) and of the share of the area by the way walked."""

    def __init__(
        self, start: list[float], permeances: list[float], high: float, low: float, reach: float
    ) -> None:
        self.reach, self.flux = reach, 0.0  # area per feed [m2 s/mol]
        self.pushed = [q * high for q in permeances]
        self.held = [q * low for q in permeances]
        self.driving = [x * q for x, q in zip(start, self.pushed, strict=True)]

    def slopes(self, state: list[float]) -> list[float]:
        """The slopes at a state [ln(n_i/n_i0).., ln(n/n_0), A/area]."""
        left = state[-2]
        driving = [d * exp(v - left) for d, v in zip(self.driving, state, strict=False)]
        self.flux = flux = _flux(driving, self.held, 0.95 * self.flux)
        passing, there = flux * self.reach, exp(left)
        pace = passing / (passing + there)
        found = [
            -pace * pushed / (flux + held) if pushed else 0.0
            for pushed, held in zip(self.pushed, self.held, strict=True)
        ]
        return [*found, -pace, there / (passing + there)]


def cross_flow(
    flows: Sequence[float],
    permeances: Sequence[float],
    area: float,
    feed_pressure: float,
    permeate_pressure: float,
    tolerance: float = TOLERANCE,
) -> list[float]:
    """Return what is left of each component on the feed side [mol/s].

    All permeances zero, no area or a permeate pressure that nothing can pass against leave the
    feed as it is.
    """
    total = sum(flows)
    if total <= 0.0 or area <= 0.0:
        return list(flows)
    there = [i for i, n in enumerate(flows) if n > 0.0]
    path = _Path(
        [flows[i] / total for i in there],
        [permeances[i] for i in there],
        feed_pressure,
        permeate_pressure,
        area / total,
    )
    logs = _integrate(path, tolerance)
    kept = list(flows)
    for i, log_left in zip(there, logs, strict=True):
        kept[i] = flows[i] * exp(log_left)
    return kept


def _integrate(path: _Path, tolerance: float) -> list[float]:
    """Walk along the feed side until the area is used up; ln(n_i/n_i0) at the end."""
    size = len(path.held)
    state, step = [0.0] * (size + 2), 1e-2
    slopes = path.slopes(state)
    weakest = _NO_FLUX * path.flux
    if weakest <= 0.0:
        return state[:size]
    for _ in range(_MOST_STEPS):
        if state[-2] < _LEAST_LEFT:
            return [-700.0 if q > 0.0 else v for q, v in zip(path.pushed, state, strict=False)]
        moved, there, error = _step(path, state, slopes, step)
        error /= tolerance
        if error <= 1.0:
            if moved[-1] >= 1.0:
                return _finish(path, state, slopes, step)
            state, slopes = moved, there
            if path.flux <= weakest:
                break  # the driving force is used up
        step *= _growth(error)
    return state[:size]


def _growth(error: float) -> float:
    if not error < 1e6:
        return 0.1
    return min(max(0.9 * max(error, 1e-10) ** -0.2, 0.2), 5.0)


def _step(
    path: _Path, state: list[float], first: list[float], step: float
) -> tuple[list[float], list[float], float]:
    """One step of the pair: new state, slopes there, and the largest estimated error."""
    slopes = [first]
    moved = state
    for weights in _WEIGHTS:
        scaled = [step * w for w in weights]
        moved = [
            sum(map(mul, scaled, column), s)
            for s, column in zip(state, zip(*slopes, strict=True), strict=True)
        ]
        slopes.append(path.slopes(moved))
    return moved, slopes[-1], _error(moved, slopes, step)


def _error(moved: list[float], slopes: list[list[float]], step: float) -> float:
    """Largest estimated error: of what is left per feed, and of the share of the area."""
    scaled = [step * w for w in _ERRORS]
    errors = [abs(sum(map(mul, scaled, column))) for column in zip(*slopes, strict=True)]
    parts = [e * exp(v) for e, v in zip(errors[:-1], moved[:-1], strict=True)]
    worst = max(*parts, errors[-1])
    return worst if isfinite(worst) else float("inf")


def _finish(path: _Path, state: list[float], slopes: list[float], step: float) -> list[float]:
    """Find the step that ends exactly at the area: Newton on its length, inside the step."""
    length, low, high = 0.5 * step, 0.0, step
    moved = state
    for _ in range(60):
        moved, there, _ = _step(path, state, slopes, length)
        missing = 1.0 - moved[-1]
        if abs(missing) <= 1e-14:
            break
        low, high = (length, high) if missing > 0.0 else (low, length)
        better = length + missing / there[-1]
        if not low <= better <= high:
            better = 0.5 * (low + high)
        if better == length:
            break
        length = better
    return moved[: len(path.held)]


def well_mixed(
    flows: Sequence[float],
    permeances: Sequence[float],
    area: float,
    feed_pressure: float,
    permeate_pressure: float,
) -> list[float]:
    """Return what is left of each component [mol/s] if both sides are mixed all over.

    ``n_i = n_i0 / (1 + A Q_i p_feed j / (n (j + Q_i p_permeate)))`` with ``j = (n_0 - n) / A``;
    the share left is found by bisection and secants, so that the parts add up.
    """
    total = sum(flows)
    if total <= 0.0 or area <= 0.0:
        return list(flows)
    fractions = [n / total for n in flows]
    if local_flux(fractions, permeances, feed_pressure, permeate_pressure) <= 0.0:
        return list(flows)

    def kept(passed: float) -> list[float]:
        flux, left = passed * total / area, total * (1.0 - passed)
        return [
            n / (1.0 + area * q * feed_pressure * flux / (left * (flux + q * permeate_pressure)))
            for n, q in zip(flows, permeances, strict=True)
        ]

    low, high = 0.0, 1.0
    for _ in range(200):
        middle = 0.5 * (low + high)
        if not low < middle < high:
            break
        # more left than the guess says: less has passed
        low, high = (low, middle) if sum(kept(middle)) > total * (1.0 - middle) else (middle, high)
    return kept(low) if low > 0.0 else list(flows)


__all__ = ["cross_flow", "local_flux", "well_mixed"]
