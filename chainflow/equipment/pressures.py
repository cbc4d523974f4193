"""Sentences about pressures that do not fit, shared by equipment that works at a set pressure.

Pressures in [Pa], absolute.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping

import numpy as np

_SLACK = 1e-9  # relative, so that 30 bar is not below 30 bar


def lower_feed(
    inlets: Mapping[str, tuple[float, ...]],
    pressure: float,
    mend: str = "put a pump or compressor between",
) -> Iterator[tuple[str, str]]:
    """Feeds below the pressure at which equipment works: (inlet, sentence)."""
    for port, pressures in inlets.items():
        for level in pressures:
            if np.isfinite(level) and level < pressure * (1.0 - _SLACK):
                text = f"'{port}' is at {level / 1e5:.4g} bar, works at {pressure / 1e5:.4g} bar"
                yield port, f"{text}: {mend}"


def higher_feed(
    inlets: Mapping[str, tuple[float, ...]], pressure: float, mend: str
) -> Iterator[tuple[str, str]]:
    """Feeds above the pressure that equipment is to reach: (inlet, sentence)."""
    for port, pressures in inlets.items():
        for level in pressures:
            if np.isfinite(level) and level > pressure * (1.0 + _SLACK):
                text = (
                    f"'{port}' is at {level / 1e5:.4g} bar, "
                    f"above the {pressure / 1e5:.4g} bar wanted at the outlet: {mend}"
                )
                yield port, text
