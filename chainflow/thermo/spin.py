"""How does hydrogen split into ortho and para, and what do they hold?

Rotation of the hydrogen molecule: levels ``E_J = B J(J+1) - D [J(J+1)]^2`` (even J para with
nuclear weight 1, odd J ortho with 3), ideal and apart from all else.  B = 59.336, D = 0.0457 cm-1
(certainty C: closed form, checked against the enthalpy of 527 kJ/kg between normal and para
hydrogen at 20 K).  Normal hydrogen is 1/4 para for good, equilibrium hydrogen follows the
temperature.  [K], [J/mol], [J/(mol K)].
"""

from __future__ import annotations

from functools import lru_cache
from math import exp, log
from typing import NamedTuple

from chainflow.basis.constants import GAS_CONSTANT

_B, _D = 59.336, 0.0457  # [1/cm]
_KELVIN_CM = 1.438776877  # h c / k [cm K], CODATA 2018
_LEVELS = 20
NORMAL_PARA = 0.25


class Spin(NamedTuple):
    """Enthalpy and entropy above those of pure para hydrogen at the same temperature."""

    para_share: float
    enthalpy: float  # [J/mol]
    entropy: float  # [J/(mol K)]


def _sums(temperature: float, first: int) -> tuple[float, float, float]:
    """Partition sum without nuclear weight, energy and entropy of one kind; zero at J = 0."""
    total = energy = 0.0
    lowest = _level(first)
    for j in range(first, _LEVELS, 2):
        part = (2 * j + 1) * exp(-(_level(j) - lowest) / temperature)
        total += part
        energy += part * _level(j)
    mean = energy / total
    entropy = GAS_CONSTANT * (log(total) + (mean - lowest) / temperature)
    return total * exp(-lowest / temperature), GAS_CONSTANT * mean, entropy


def _level(j: int) -> float:
    product = j * (j + 1)
    return (_B * product - _D * product**2) * _KELVIN_CM


@lru_cache(maxsize=512)
def equilibrium(temperature: float) -> Spin:
    """Return equilibrium hydrogen at a temperature."""
    para, ortho = _sums(temperature, 0)[0], 3.0 * _sums(temperature, 1)[0]
    return _mixed(temperature, para / (para + ortho))


@lru_cache(maxsize=512)
def normal(temperature: float) -> Spin:
    """Return normal hydrogen, 1/4 para, at a temperature."""
    return _mixed(temperature, NORMAL_PARA)


def _mixed(temperature: float, share: float) -> Spin:
    _, para_energy, para_entropy = _sums(temperature, 0)
    _, ortho_energy, ortho_entropy = _sums(temperature, 1)
    ortho_entropy += GAS_CONSTANT * log(3.0)  # nuclear weight
    mixing = -GAS_CONSTANT * sum(x * log(x) for x in (share, 1.0 - share) if x > 0.0)
    return Spin(
        share,
        (1.0 - share) * (ortho_energy - para_energy),
        (1.0 - share) * (ortho_entropy - para_entropy) + mixing,
    )
