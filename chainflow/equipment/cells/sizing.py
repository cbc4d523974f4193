"""At which current density does a stack work, and how large is it?

SI throughout: power [W], area of all cells together [m2], current of all cells added up [A],
current density [A/m2], flows [mol/s]. One of these settles it: a current density given (the area
follows from power or hydrogen), or an area given (the current density follows, along the curve),
or both.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import inf
from typing import NamedTuple

from chainflow.basis.constants import FARADAY
from chainflow.equipment.cells.losses import Curve, Losses, Share, VoltageCurve, rising_root

_DIFFERENCE = 1e-5  # relative step of the slopes along a curve


@dataclass(frozen=True, slots=True)
class ConstantCurve(VoltageCurve):
    """A cell whose voltage does not depend on its current."""

    reversible: float
    constant: float
    net: float = 1.0
    limit: float = inf

    def losses(self, density: float) -> Losses:
        """The voltage, its losses not told apart."""
        return Losses(self.reversible, unsplit=self.constant - self.reversible)

    def voltage(self, density: float) -> float:
        """The voltage [V]."""
        return self.constant

    def share(self, density: float) -> Share:
        """Where the hydrogen goes: none is lost."""
        return Share(self.net, 0.0)


class Working(NamedTuple):
    """How a stack works; `density` and `area` are zero where nothing says how large it is."""

    losses: Losses
    share: Share
    current: float  # [A], of all cells
    density: float  # [A/m2]
    area: float  # [m2]

    @property
    def voltage(self) -> float:
        """The voltage of a cell [V]."""
        return self.losses.reversible + self.losses.total

    @property
    def gross(self) -> float:
        """Hydrogen that the current would make without losses [mol/s]."""
        return self.current / (2.0 * FARADAY)

    @property
    def direct(self) -> float:
        """Direct current [W]."""
        return self.current * self.voltage


@dataclass(frozen=True, slots=True)
class Sizing:
    """What is known of a stack: current density, area, or what it draws at full load."""

    drawn: float  # power drawn per direct current [-], not less than one
    density: float | None = None
    area: float | None = None
    rating: float | None = None  # [W] drawn at full load

    def by_power(self, curve: Curve, power: float) -> Working:
        """Return how the stack works with a power [W] drawn."""
        direct = power / self.drawn
        area = self.area_of(curve)
        if area is None:
            return self._at_density(curve, direct=direct)
        if area <= 0.0 or direct <= 0.0:
            return _working(curve, 0.0, area)
        return _working(curve, curve.density_for(direct / area), area)

    def by_hydrogen(self, curve: Curve, hydrogen: float) -> Working:
        """Return how the stack works to give hydrogen [mol/s]."""
        area = self.area_of(curve)
        if area is None:
            net = curve.share(self.density or 0.0).net
            current = 2.0 * FARADAY * hydrogen / net if net > 0.0 else 0.0
            return self._at_density(curve, current=current)
        if area <= 0.0 or hydrogen <= 0.0:
            return _working(curve, 0.0, area)
        wanted = 2.0 * FARADAY * hydrogen / area
        density = rising_root(lambda i: i * curve.share(i).net, wanted, wanted, curve.limit)
        return _working(curve, density, area)

    def as_given(self, curve: Curve) -> Working:
        """Return how the stack works where area and current density are given."""
        return _working(curve, self.density or 0.0, self.area or 0.0)

    @property
    def follows_curve(self) -> bool:
        """Whether a part load moves along the curve: the area is known."""
        return self.area is not None or (self.rating is not None and self.density is not None)

    def area_of(self, curve: Curve) -> float | None:
        """Return the area of all cells [m2], or None if it follows from the load."""
        if self.area is not None or self.rating is None or self.density is None:
            return self.area
        return self.rating / self.drawn / (self.density * curve.voltage(self.density))

    def _at_density(
        self, curve: Curve, *, direct: float = 0.0, current: float | None = None
    ) -> Working:
        """The stack at the current density given, for direct current [W] or a current [A]."""
        density = self.density or 0.0
        losses = curve.losses(density)
        if current is None:
            current = direct / (losses.reversible + losses.total)
        area = current / density if density > 0.0 else 0.0
        return Working(losses, curve.share(density), current, density, area)

    def slopes(self, curve: Curve, at: Working) -> tuple[float, Share] | None:
        """Return d gross / d power [mol/J] and d (gross * share) / d power, or None at rest."""
        power = at.direct * self.drawn
        if power <= 0.0:
            return None
        if not self.follows_curve:
            gross = at.gross / power
            return gross, Share(gross * at.share.net, gross * at.share.crossed)
        step = min(_DIFFERENCE * at.density, 0.01 * (curve.limit - at.density))
        after, before = (_working(curve, at.density + s, at.area) for s in (step, -step))
        width = (after.direct - before.direct) * self.drawn
        if not width > 0.0:
            return None
        net, crossed = (
            (after.gross * after.share[k] - before.gross * before.share[k]) / width for k in (0, 1)
        )
        return (after.gross - before.gross) / width, Share(net, crossed)


def _working(curve: Curve, density: float, area: float) -> Working:
    return Working(curve.losses(density), curve.share(density), density * area, density, area)
