"""Which photovoltaic module is it?

The default is a generic crystalline module of 60 cells, 328 W at 1000 W/m2 and 25 degC, whose
numbers are our own; no maker's. Others are found in the table of module parameters that the library
pvlib ships (2019), by a pattern. SI throughout: [A], [V], [ohm], [m2], band gap [J].
"""

from __future__ import annotations

from fnmatch import fnmatchcase
from functools import cache
from typing import TYPE_CHECKING, Annotated, Any

import numpy as np
from pydantic import BaseModel, ConfigDict, Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.names import shorten
from chainflow.basis.quantities import Area, BandGap, measured
from chainflow.equipment.sun.one_diode import Diode, joule, translated

if TYPE_CHECKING:
    import pandas as pd

SOURCES = (
    "translation: De Soto, Klein and Beckman, Solar Energy 80 (2006) 78",
    "module tables by name: library pvlib, table of 2019",
)
_COLUMNS = {
    "light_current": "I_L_ref",
    "saturation_current": "I_o_ref",
    "series_resistance": "R_s",
    "shunt_resistance": "R_sh_ref",
    "ideality_voltage": "a_ref",
    "area": "A_c",
}
Current = Annotated[float, measured("A", gt=0)]
Resistance = Annotated[float, measured("ohm", gt=0)]


class Module(BaseModel):
    """Numbers of one module at 1000 W/m2 and 25 degC."""

    model_config = ConfigDict(frozen=True, extra="forbid")

    light_current: Current = Field(10.50, description="current that the light makes")
    saturation_current: Current = Field(1.17469e-10, description="of the diode")
    series_resistance: Annotated[float, measured("ohm", ge=0)] = Field(
        0.28, description="of contacts and fingers"
    )
    shunt_resistance: Resistance = Field(400.0, description="of leaks beside the junction")
    ideality_voltage: Annotated[float, measured("V", gt=0)] = Field(
        1.6186, description="cells in series times ideality times kT/q"
    )
    current_coefficient: Annotated[float, measured("A/K")] = Field(
        0.00525, description="growth of the light current with temperature"
    )
    gap: BandGap = Field(joule(1.121), description="band gap at 25 degC")
    area: Area = Field(1.70, description="area of the module that the light falls on")

    @model_validator(mode="before")
    @classmethod
    def _from_table(cls, given: Any) -> Any:
        if not isinstance(given, dict) or "table" not in given:
            return given
        pattern = given["table"]
        if not isinstance(pattern, str):
            text = "'table' is a pattern of names in quotes, as in '*_60_cells*'"
            raise PydanticCustomError("module", "{text}", {"text": text})
        rest = {key: value for key, value in given.items() if key != "table"}
        return {**from_table(pattern), **rest}

    def diode(self, irradiance: Any, temperature: Any) -> Diode:
        """Return its diode in light [W/m2], above zero, at a cell temperature [K]."""
        standard = Diode(
            np.asarray(self.light_current),
            np.asarray(self.saturation_current),
            np.asarray(self.series_resistance),
            np.asarray(self.shunt_resistance),
            np.asarray(self.ideality_voltage),
        )
        return translated(standard, self.current_coefficient, self.gap, irradiance, temperature)


def from_table(pattern: str) -> dict[str, float]:
    """Return the numbers of the one module of pvlib's table whose name fits a pattern.

    `*` stands for anything, `?` for one character; capitals do not count.
    """
    table = _table()
    names = [n for n in table.columns if fnmatchcase(n.lower(), pattern.strip().lower())]
    if len(names) != 1:
        text = (
            f"{shorten(pattern)} fits {len(names)} modules of the table, wanted one: narrow it "
            "with more of the name"
            if names
            else f"{shorten(pattern)} fits no module of the table; * stands for anything"
        )
        raise PydanticCustomError("module", "{text}", {"text": text})
    row = table[names[0]]
    adjust = 1.0 - float(row["Adjust"]) / 100.0
    found = {name: float(row[column]) for name, column in _COLUMNS.items()}
    return {**found, "current_coefficient": float(row["alpha_sc"]) * adjust}


@cache
def _table() -> pd.DataFrame:
    from pvlib.pvsystem import retrieve_sam

    return retrieve_sam("CECMod")
