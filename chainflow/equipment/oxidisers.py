"""What is called for a fire beside its oxidiser: oxygen that enriches it, air that leaks in.

Flows [mol/s], enthalpy [W], pressure [Pa].  Both follow the amounts of the rest in fixed ratios, so
they are put into the streams that the fire is reckoned with: the oxidiser becomes a mixture, and
whatever enters brings its share of leak air along.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, replace

import numpy as np

from chainflow.thermo.streams import Stream


def together(streams: Iterable[Stream]) -> Stream:
    """Several streams as one of which only flows, enthalpy and pressure count."""
    streams = tuple(streams)
    first = streams[0]
    return replace(
        first,
        gas=np.sum([stream.flows for stream in streams], axis=0),
        water=first.matter.nothing,
        liquid=first.matter.nothing,
        enthalpy=float(sum(stream.enthalpy for stream in streams)),
        pressure=min(float(stream.pressure) for stream in streams),
    )


@dataclass(frozen=True, slots=True)
class Oxidiser:
    """One mol/s of oxidiser, of which a share comes from the `oxygen` inlet, and the leak.

    `leak` is mol of leak air per mol of all else that enters; `air` one mol/s of what leaks in.
    """

    stream: Stream
    oxygen_share: float = 0.0
    leak: float = 0.0
    air: Stream | None = None
    why: str = ""

    def with_leak(self, stream: Stream) -> Stream:
        """A stream with the air that leaks in beside it."""
        if self.air is None:
            return stream
        return together((stream, self.air.scaled(self.leak * float(stream.total))))

    def called(self, drawn: dict[str, float], given: float) -> dict[str, float]:
        """All amounts that are called, from those of the mixture; `given` is what else enters."""
        amount = drawn["oxidiser"]
        found = drawn | {"oxidiser": amount * (1.0 - self.oxygen_share)}
        if self.oxygen_share or self.why:
            found["oxygen"] = amount * self.oxygen_share
        if self.air is not None:
            found["leak"] = self.leak * (given + amount + drawn.get("moderator", 0.0))
        return found


def enriched(air: Stream, oxygen: Stream, wanted: float) -> Oxidiser:
    """Mix air and oxygen to a wanted mole fraction of O2."""
    low, high = float(air.fraction("O2")), float(oxygen.fraction("O2"))
    span = high - low
    share = (wanted - low) / span if span > 0.0 else -1.0
    if not 0.0 <= share <= 1.0:
        text = (
            f"'enrichment' is {100 * wanted:.4g} % O2, between the {100 * low:.4g} % of the "
            f"oxidiser and the {100 * high:.4g} % of the oxygen wanted"
        )
        return Oxidiser(air, why=text)
    return Oxidiser(together((air.scaled(1.0 - share), oxygen.scaled(share))), share)
