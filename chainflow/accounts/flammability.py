"""Can what is inside a line burn by itself?

Mole fractions [-]. Lower limits in air: IEC 60079-20-1:2010, as shipped in the library chemicals
1.5.2. Limiting oxygen concentrations, with nitrogen at ambient temperature: NFPA 69, from
memory; where none is known 5 % is taken, the lowest of all. Mixtures of fuels by Le Chatelier's
rule, 1 / L = sum(share / L). The lower limit is about the same in air and in oxygen; the upper one
is not, so no upper limit excuses a mixture that holds more oxygen than the limiting concentration.
That errs on the safe side. Heat and pressure widen the limits: these hold near ambient conditions.
"""

from __future__ import annotations

from dataclasses import dataclass

from chainflow.thermo.streams import Stream


@dataclass(frozen=True, slots=True)
class Limits:
    """Lower flammability limit in air and limiting oxygen concentration, mole fractions."""

    lower: float
    oxygen: float


LIMITS = {
    "H2": Limits(0.040, 0.05),
    "CH4": Limits(0.044, 0.12),
    "CO": Limits(0.109, 0.055),
    "CH3OH": Limits(0.060, 0.10),
    "CH3OCH3": Limits(0.027, 0.05),
    "NH3": Limits(0.150, 0.05),
    "C2H2": Limits(0.023, 0.05),
    "C2H4": Limits(0.023, 0.10),
    "C2H6": Limits(0.024, 0.11),
    "C3H6": Limits(0.020, 0.115),
    "C3H8": Limits(0.017, 0.115),
    "n-C4H10": Limits(0.014, 0.12),
}
UNKNOWN_FUEL = Limits(0.014, 0.05)  # the worst of the others, for fuels without data
ALARM_SHARE = 0.5  # of the limits; alarms at half the lower limit are common practice, no source
NO_GAS = 1e-9  # of a stream: what a solver leaves of gases in a liquid is no hazard


@dataclass(frozen=True, slots=True)
class Mixture:
    """Fuel and oxygen in a gas, with the limits of that blend of fuels; mole fractions."""

    fuel: float
    oxygen: float
    lower: float
    limiting_oxygen: float

    @property
    def flammable(self) -> bool:
        """Whether the gas can burn without any more air."""
        return self.within(1.0)

    def within(self, share: float) -> bool:
        """Whether fuel and oxygen both reach a share of their limits."""
        enough_fuel = self.fuel >= share * self.lower
        return self.fuel > 0.0 and enough_fuel and self.oxygen >= share * self.limiting_oxygen


def gas_mixture(stream: Stream) -> Mixture:
    """Return fuel, oxygen and limits of the gas in a stream; none if it is next to nothing."""
    total = float(stream.gas.sum())
    if total <= NO_GAS * float(stream.total):
        return Mixture(0.0, 0.0, 1.0, 1.0)
    matter = stream.matter
    shares = dict(zip(matter.components, (stream.gas / total).tolist(), strict=True))
    burns = dict(zip(matter.components, (matter.lhv > 0.0).tolist(), strict=True))
    fuels = {name: share for name, share in shares.items() if burns[name] and share > 0.0}
    fuel = sum(fuels.values())
    lower = sum(share / LIMITS.get(name, UNKNOWN_FUEL).lower for name, share in fuels.items())
    oxygen = sum(share / LIMITS.get(name, UNKNOWN_FUEL).oxygen for name, share in fuels.items())
    if fuel <= 0.0:
        return Mixture(0.0, shares.get("O2", 0.0), 1.0, 1.0)
    return Mixture(fuel, shares.get("O2", 0.0), fuel / lower, fuel / oxygen)
