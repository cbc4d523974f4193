"""How is an SI value printed for people?

Short plain ASCII text in the unit a process engineer would use: bar, degC, kW, kWh/kg. Programs
get SI from the JSON answer instead.
"""

import math
from typing import Final

from chainflow.basis.units import Unit, resolve, si_unit, usual_unit

# units from large to small: the first in which the value is at least 1 is taken, else the last;
# zero takes the usual unit
_SCALES: Final = (
    ("Pa", ("bar", "mbar", "Pa")),
    ("W", ("GW", "MW", "kW", "W")),
    ("J", ("GWh", "MWh", "kWh", "kJ", "J")),
    ("m", ("km", "m", "mm", "um")),
    ("m2", ("km2", "m2", "cm2")),
    ("s", ("d", "h", "min", "s")),
    ("V", ("V", "mV")),
    ("kg", ("t", "kg", "g")),
    ("kg/s", ("kg/s", "kg/h")),
    ("mol/s", ("mol/s", "mmol/s")),
    ("J/kg", ("kWh/kg", "kJ/kg")),
    ("J/mol", ("kJ/mol",)),
    ("A/m2", ("A/cm2", "mA/cm2", "A/m2")),
    ("ohm*m2", ("ohm*cm2",)),
    ("kg/J", ("kg/kWh",)),
    ("m3/J", ("L/kWh",)),
    ("s-1", ("%/d",)),
    ("rad", ("deg",)),
    ("1", ("%", "ppm")),
)

_OF_ONE_ELECTRON = 1e-15  # [J]: what is less is told in eV


def format_quantity(value: float, unit: str, *, digits: int = 4, difference: bool = False) -> str:
    """Return an SI value as short plain text for a table: "12 bar", "320 degC", "5.1 MW".

    Parameters
    ----------
    value : float
        SI value; a value that is not finite gives "-".
    unit : str
        Any unit of what it is; only its dimension counts ("Pa" prints as bar), except that energy
        per volume ("J/m3") is not taken for the pressure it has the dimension of.
    digits : int
        Significant digits; zeros at the end are dropped.
    difference : bool
        A temperature difference stays in K.
    """
    if not math.isfinite(value):
        return "-"
    wanted = resolve(unit)
    if unit.endswith("J/m3"):
        chosen = resolve("MJ/m3")
    else:
        chosen = _scaled(value, si_unit(wanted.exponents), difference)
    return f"{format_number(chosen.from_si(value), digits)} {chosen.text}".removesuffix(" 1")


def _scaled(value: float, si: str, difference: bool) -> Unit:
    if si == "K":
        return resolve("K" if difference else "degC")
    if si == "J" and 0.0 < abs(value) < _OF_ONE_ELECTRON:
        return resolve("eV")
    candidates = dict(_SCALES).get(si, (si,))
    for candidate in candidates:
        if abs(resolve(candidate).from_si(value)) >= 1.0:
            return resolve(candidate)
    return resolve(candidates[-1] if value else usual_unit(resolve(si).exponents))


def format_number(number: float, digits: int = 4) -> str:
    """Round to significant digits, drop zeros at the end, keep exponents for extremes only."""
    rounded = float(f"{number:.{digits - 1}e}")
    if rounded == 0.0:
        return "0"
    if not 1e-4 <= abs(rounded) < 1e7:
        return f"{rounded:.{digits}g}"
    places = max(0, digits - 1 - math.floor(math.log10(abs(rounded))))
    shown = f"{rounded:.{places}f}"
    return shown.rstrip("0").rstrip(".") if "." in shown else shown
