"""How are numbers of an answer written for people?

Shares in per cent, everything else through `chainflow.basis.formatting`; values are SI.
"""

from __future__ import annotations

import math

from chainflow.basis.constants import ICE_POINT
from chainflow.basis.formatting import format_quantity
from chainflow.thermo.streams import Stream

_MOST_COMPONENTS = 6
_LEAST_SHARE = 5e-5  # mole fraction below which a component is not worth a word
_PHASE_SHARE = 1e-9


def percent(share: float | None, digits: int = 3) -> str:
    """Return a share in per cent; "-" if there is none."""
    if share is None or not math.isfinite(share):
        return "-"
    if abs(share) < 1e-12:
        return "0 %"
    return f"{_rounded(100 * share, digits)} %"


def _rounded(value: float, digits: int) -> str:
    """Return significant digits, one more close below 100 so that 99.97 is not 100."""
    if 99.0 <= value < 100.0:
        digits = max(digits, 4)
    shown = f"{value:.{digits}g}"
    return f"{float(shown):.0f}" if "e+" in shown else shown


def celsius(temperature: float) -> str:
    """Return a temperature [K] as a number in degC."""
    return f"{temperature - ICE_POINT:.1f}"


def bar(pressure: float) -> str:
    """Return a pressure [Pa] as a number in bar."""
    return f"{pressure / 1e5:.4g}"


def flow(amount: float) -> str:
    """Return a flow as a number with four digits."""
    return _rounded(amount, 4)


def energy(rate: float) -> str:
    """Return an energy flow [W] with its unit."""
    return format_quantity(rate, "W")


def composition(stream: Stream) -> str:
    """Return the main components in per cent of the whole stream, most first."""
    total = float(stream.total)
    if total <= 0.0:
        return "no flow"
    pairs = zip(stream.matter.components, (stream.flows / total).tolist(), strict=True)
    shares = sorted(((s, name) for name, s in pairs if s >= _LEAST_SHARE), key=lambda p: -p[0])
    shown = [f"{name} {_rounded(100 * share, 3)}" for share, name in shares[:_MOST_COMPONENTS]]
    return ", ".join(shown)


def phases(stream: Stream) -> str:
    """Return the phases that are there, as in "gas + water"."""
    total = float(stream.total)
    there = [n for n, amount in stream.phase_totals.items() if amount > _PHASE_SHARE * total]
    return " + ".join(there) or "-"
