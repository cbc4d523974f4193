"""What are the straight hydrocarbon chains called, and how long are they?

Names of the n-alkanes C1 to C30, the 1-alkenes C2 to C20 and the wax, which stands for all longer
chains and counts as n-C40H82: 40 is the mean length of what is longer than C30 at a chain growth
of 0.90. No data here: they stand in ``species.yaml`` and ``hydrocarbons.yaml``.
"""

from functools import cache

LONGEST_ALKANE = 30
LONGEST_ALKENE = 20
WAX = "wax"
WAX_LENGTH = 40  # carbon atoms

_ALKANES = {1: "CH4", 2: "C2H6", 3: "C3H8", 4: "n-C4H10"}
_ALKENES = {2: "C2H4", 3: "C3H6"}


def alkane(length: int) -> str:
    """Return the name of the n-alkane of a length from 1 to 30."""
    if not 1 <= length <= LONGEST_ALKANE:
        raise ValueError(f"no n-alkane of {length} carbon atoms, wanted 1 to {LONGEST_ALKANE}")
    return _ALKANES.get(length, f"n-C{length}H{2 * length + 2}")


def alkene(length: int) -> str:
    """Return the name of the 1-alkene of a length from 2 to 20."""
    if not 2 <= length <= LONGEST_ALKENE:
        raise ValueError(f"no 1-alkene of {length} carbon atoms, wanted 2 to {LONGEST_ALKENE}")
    return _ALKENES.get(length, f"1-C{length}H{2 * length}")


@cache
def hydrocarbons() -> tuple[str, ...]:
    """Return the names of the long hydrocarbons: alkanes from C5, alkenes from C4, the wax."""
    alkanes = [alkane(n) for n in range(5, LONGEST_ALKANE + 1)]
    alkenes = [alkene(n) for n in range(4, LONGEST_ALKENE + 1)]
    return (*alkanes, *alkenes, WAX)


HYDROCARBONS = frozenset(hydrocarbons())
