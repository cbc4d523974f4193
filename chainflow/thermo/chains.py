"""What are the straight hydrocarbon chains called, and how long are they?

Names of the n-alkanes C1 to C30, the 1-alkenes C2 to C20 and the wax, which stands for all longer
chains and counts as n-C40H82: 40 is the mean length of what is longer than C30 at a chain growth
of 0.90. No data here: they stand in ``species.yaml`` and ``hydrocarbons.yaml``.

Several at once are written by their carbon numbers: ``C5-C9`` and ``C12`` are n-alkanes, ``C21+``
all of them from there on and the wax, ``C2-C20=`` 1-alkenes (the trade's mark for a double bond).
"""

import re
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


_RANGE = re.compile(r"^C(\d{1,2})(?:-C(\d{1,2})|(\+))?$")
_NO_END = 10**6


def carbon_range(text: str) -> tuple[int, int]:
    """Return the first and last carbon number of a range: C5-C9, C21+, C12.

    Raises ValueError, in a sentence, if it is none.
    """
    match = _RANGE.match(text)
    if match is None:
        raise ValueError(f"'{text[:40]}' is no range of carbon numbers, wanted C5-C9, C21+ or C12")
    first = int(match[1])
    last = _NO_END if match[3] else int(match[2] or first)
    if first > last or first < 1:
        raise ValueError(
            f"'{text}' ends before it begins: write the smaller number first, as C5-C9"
        )
    return first, last


def chains_in(text: str) -> tuple[str, ...] | None:
    """Return the components that a range stands for, or None if the text is not written as one.

    ``C1-C30`` are n-alkanes, ``C2-C20=`` 1-alkenes, ``C5+`` n-alkanes and the wax.  Raises
    ValueError, in a sentence, if there are no such chains.
    """
    plain = text.removesuffix("=")
    if _RANGE.match(plain) is None:
        return None
    double = plain != text
    first, last = carbon_range(plain)
    least, most = (2, LONGEST_ALKENE) if double else (1, LONGEST_ALKANE)
    open_end = last == _NO_END
    last = most if open_end else last
    if first < least or max(first, last) > most:
        kind = "1-alkenes" if double else "n-alkanes"
        raise ValueError(
            f"'{text}': {kind} go from C{least} to C{most}, and '{WAX}' is all longer chains"
        )
    name = alkene if double else alkane
    return (*map(name, range(first, last + 1)), *((WAX,) if open_end and not double else ()))
