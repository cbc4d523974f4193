"""Which hydrocarbons does Fischer-Tropsch synthesis make of one mol of carbon monoxide?

Chains grow with the probability alpha at every step (Anderson, Schulz, Flory): the carbon in chains
of n atoms is ``n (1 - alpha)^2 alpha^(n-1)``, in all chains longer than N
``alpha^N (N (1 - alpha) + 1)``, which becomes wax by its carbon.  On top of it methane, less of C2
(ethylene is taken up by growing chains), and 1-alkenes.  What is made conserves carbon exactly;
hydrogen and oxygen follow from the balance of atoms.  Amounts [mol per mol of carbon].
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from math import exp

import numpy as np

from chainflow.thermo.chains import LONGEST_ALKENE, WAX, alkane, alkene
from chainflow.thermo.components import Array, Matter


@dataclass(frozen=True, slots=True)
class Olefins:
    """Olefins per paraffin: of C2, of C3, and the decline per carbon atom from there on."""

    two: float
    three: float
    decline: float

    def share(self, length: int) -> float:
        """Share of the chains of a length that are 1-alkenes."""
        if length < 2 or length > LONGEST_ALKENE:
            return 0.0
        ratio = self.two if length == 2 else self.three * exp(-self.decline * (length - 3))
        return ratio / (1.0 + ratio)


@dataclass(frozen=True, slots=True)
class ChainLengths:
    """What is made: methane beside the distribution, C2 as a share of it, olefins, longest."""

    extra_methane: float
    two_share: float
    olefins: Olefins
    longest: int

    def carbon(self, growth: float) -> Array:
        """Share of the carbon in chains of 1 to `longest` atoms and, last, in the wax."""
        n = np.arange(1, self.longest + 1)
        shares = np.empty(self.longest + 1)
        shares[:-1] = n * (1.0 - growth) ** 2 * growth ** (n - 1)
        shares[-1] = growth**self.longest * (self.longest * (1.0 - growth) + 1.0)
        taken_up = (1.0 - self.two_share) * shares[1]
        shares[1] -= taken_up
        shares[2:] *= 1.0 + taken_up / shares[2:].sum()
        shares *= 1.0 - self.extra_methane
        shares[0] += self.extra_methane
        return shares

    def made(self, growth: float, matter: Matter) -> Array:
        """Return what one mol of CO becomes, shape (components,); CO and H2 are negative."""
        return _balanced(_spread(self.olefins, self.longest, matter) @ self.carbon(growth), matter)

    def needed(self) -> tuple[str, ...]:
        """Names of the components that must be there."""
        return (*(alkane(n) for n in range(1, self.longest + 1)), WAX)

    def possible(self, matter: Matter) -> tuple[str, ...]:
        """Names of all hydrocarbons that may be made."""
        found = range(2, min(self.longest, LONGEST_ALKENE) + 1)
        alkenes = [alkene(n) for n in found if _share_there(self.olefins, n, matter)]
        return (*self.needed(), *alkenes)


@lru_cache(maxsize=64)
def _spread(olefins: Olefins, longest: int, matter: Matter) -> Array:
    """Share of the carbon of each length (the wax last) in each component."""
    spread = np.zeros((len(matter.components), longest + 1))
    for length in range(1, longest + 1):
        unsaturated = _share_there(olefins, length, matter)
        spread[matter.index[alkane(length)], length - 1] = 1.0 - unsaturated
        if unsaturated:
            spread[matter.index[alkene(length)], length - 1] = unsaturated
    spread[matter.index[WAX], longest] = 1.0
    return spread


def _share_there(olefins: Olefins, length: int, matter: Matter) -> float:
    """Share of 1-alkenes, zero where that alkene is not among the components."""
    share = olefins.share(length)
    return share if share and alkene(length) in matter.index else 0.0


def _balanced(carbon: Array, matter: Matter) -> Array:
    """Turn carbon by component into moles, and add CO, H2 and H2O so that all atoms are kept."""
    rows = {element: matter.formula[i] for i, element in enumerate(matter.elements)}
    moles = np.divide(carbon, rows["C"], out=np.zeros_like(carbon), where=carbon > 0.0)
    moles /= float(moles @ rows["C"])
    hydrogen = 0.5 * float(moles @ rows["H"])
    moles[matter.index["CO"]] -= 1.0
    moles[matter.index["H2O"]] += 1.0
    moles[matter.index["H2"]] -= hydrogen + 1.0
    return moles
