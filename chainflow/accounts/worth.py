"""How much energy is in what passes the plant's border, on three bases side by side?

Power in [W] by lower heating value, upper heating value and exergy. Electricity counts fully on
all three, heat and light count their energy on the heating-value bases. Exergies are counted
against the environment that the flowsheet names, 298.15 K and 1.01325 bar by default.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass

from chainflow.equipment.ports import Heat
from chainflow.thermo.exergy import (
    STANDARD_ENVIRONMENT,
    Environment,
    heat_exergy,
    solar_exergy_factor,
)
from chainflow.thermo.streams import Stream

BASES = ("LHV", "HHV", "exergy")


@dataclass(frozen=True, slots=True)
class Worth:
    """An energy flow [W] on the three bases."""

    lhv: float = 0.0
    hhv: float = 0.0
    exergy: float = 0.0

    def __add__(self, other: Worth) -> Worth:
        return Worth(self.lhv + other.lhv, self.hhv + other.hhv, self.exergy + other.exergy)

    @staticmethod
    def total(parts: Iterable[Worth]) -> Worth:
        """Return the sum of all parts."""
        return sum(parts, Worth())

    @property
    def by_basis(self) -> dict[str, float]:
        """The three numbers by the name of their basis."""
        return dict(zip(BASES, (self.lhv, self.hhv, self.exergy), strict=True))

    @property
    def positive(self) -> bool:
        """Whether it is more than nothing on every basis."""
        return min(self.lhv, self.hhv, self.exergy) > 0.0

    def over(self, whole: Worth) -> dict[str, float | None]:
        """Return this per `whole` on each basis; None where `whole` is nothing."""
        return _by_basis(self, whole, lambda part, all_of: part / all_of if all_of > 0.0 else None)


def _by_basis(
    part: Worth, whole: Worth, rule: Callable[[float, float], float | None]
) -> dict[str, float | None]:
    pairs = zip(part.by_basis.items(), whole.by_basis.values(), strict=True)
    return {basis: rule(value, other) for (basis, value), other in pairs}


def of_power(power: float) -> Worth:
    """Return the worth of electric power [W]."""
    return Worth(power, power, power)


def of_light(light: float, environment: Environment = STANDARD_ENVIRONMENT) -> Worth:
    """Return the worth of sunlight [W], its exergy by Petela's formula."""
    return Worth(light, light, light * solar_exergy_factor(environment.temperature))


def of_heat(heat: Heat, environment: Environment = STANDARD_ENVIRONMENT) -> Worth:
    """Return the worth of heat [W]; at or below the environment it has no exergy here."""
    exergy = float(heat_exergy(heat.rate, heat.mean, environment.temperature))
    return Worth(heat.rate, heat.rate, max(exergy, 0.0))


def of_material(stream: Stream, environment: Environment = STANDARD_ENVIRONMENT) -> Worth:
    """Return the worth of matter: heating values at 25 degC, physical plus chemical exergy."""
    return Worth(float(stream.lhv), float(stream.hhv), float(stream.exergy(environment)))
