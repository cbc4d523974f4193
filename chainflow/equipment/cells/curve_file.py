"""How does a CSV file of measured voltages become points?

Headings with units, `current density [A/cm2]`, `voltage [V]` and perhaps `temperature [degC]`, in
any order (see `chainflow.equipment.csv_points`).
"""

from __future__ import annotations

from pathlib import Path
from typing import Any

from chainflow.equipment.csv_points import CurveFault, Form, Wanted, read_points

__all__ = ["CurveFault", "read_curve"]

_FORM = Form(
    {
        "current_density": Wanted("A/m2", "a current density in A/cm2"),
        "voltage": Wanted("V", "a voltage in V"),
        "temperature": Wanted("K", "a temperature in degC", optional=True),
    },
    "current density [A/cm2], voltage [V]",
    ": divide by the active area of a cell",
)


def read_curve(name: str, folder: str | Path = "") -> tuple[dict[str, Any], ...]:
    """Return the points of a CSV file, one map of lists in SI for each temperature.

    A relative name counts from `folder`. Raises `FileFault` if there is no such file, `CurveFault`
    if it is no curve.
    """
    found: dict[float | None, list[tuple[float, float]]] = {}
    for _, values in read_points(name, folder, _FORM):
        points = found.setdefault(values.get("temperature"), [])
        points.append((values["current_density"], values["voltage"]))
    return tuple(_branch(level, sorted(points)) for level, points in found.items())


def _branch(level: float | None, points: list[tuple[float, float]]) -> dict[str, Any]:
    branch: dict[str, Any] = {
        "current_density": [density for density, _ in points],
        "voltage": [voltage for _, voltage in points],
    }
    return branch if level is None else {"temperature": level, **branch}
