"""Where the numbers of the hydrocarbon table come from: the library `chemicals`, 1.5.2.

Read by `hydrocarbons.py` beside this module, at the time the table is made and never at run time.
All in SI per mol; a family is "alkane" (C_n H_2n+2) or "alkene" (the 1-alkene C_n H_2n).
"""

from functools import cache

import numpy as np
from chemicals import critical, heat_capacity, phase_change, reaction, vapor_pressure
from chemicals.identifiers import CAS_from_any

ALKANES = (
    "methane",
    "ethane",
    "propane",
    "butane",
    "pentane",
    "hexane",
    "heptane",
    "octane",
    "nonane",
    "decane",
    "undecane",
    "dodecane",
    "tridecane",
    "tetradecane",
    "pentadecane",
    "hexadecane",
    "heptadecane",
    "octadecane",
    "nonadecane",
    "eicosane",
    "heneicosane",
    "docosane",
    "tricosane",
    "tetracosane",
    "pentacosane",
    "hexacosane",
    "heptacosane",
    "octacosane",
    "nonacosane",
    "triacontane",
)
ALKENES = (
    "-",
    "ethylene",
    "propylene",
    "1-butene",
    "1-pentene",
    "1-hexene",
    "1-heptene",
    "1-octene",
    "1-nonene",
    "1-decene",
    "1-undecene",
    "1-dodecene",
    "1-tridecene",
    "1-tetradecene",
    "1-pentadecene",
    "1-hexadecene",
    "1-heptadecene",
    "1-octadecene",
    "1-nonadecene",
    "1-eicosene",
)


@cache
def number(family, n):
    """Return the CAS registry number of the member with n carbon atoms."""
    return CAS_from_any((ALKANES if family == "alkane" else ALKENES)[n - 1])


def formation_enthalpies(family):
    """Return {n: J/mol} of the gas at 298.15 K: API Technical Data Book (Albahri), C5 to C20."""
    return {n: reaction.Hfg(number(family, n), method="API_TDB_G") for n in range(5, 21)}


def entropies(family):
    """Return {n: J/(mol K)} of the gas at 298.15 K and 1 bar: Yaws, C5 to C16 (C18 of alkenes)."""
    last = 16 if family == "alkane" else 18
    return {n: reaction.S0g(number(family, n), method="YAWS") for n in range(5, last + 1)}


def gas_heat_capacities(family, temperature):
    """Return {n: J/(mol K)} of the ideal gas: TRC Thermodynamics of Organic Compounds, C6 on."""
    table, found = heat_capacity.TRC_gas_data, {}
    for n in range(6, 21):
        if number(family, n) in table.index:
            row = table.loc[number(family, n)]
            if row["Tmin"] <= temperature <= row["Tmax"]:
                terms = [row[f"a{i}"] for i in range(8)]
                found[n] = heat_capacity.TRCCp(temperature, *terms)
    return found


def vaporisation_heats(family):
    """Return {n: J/mol} at 298.15 K: CRC Handbook; the longest from Gharagheizi's collection."""
    first, second = phase_change.Hvap_data_CRC, phase_change.Hvap_data_Gharagheizi
    found = {}
    for n in range(5, 21):
        for table in (first, second):
            if n not in found and number(family, n) in table.index:
                value = float(table.loc[number(family, n)]["Hvap298"])
                if np.isfinite(value):
                    found[n] = value
    return found


def vapour_pressure(family, n, temperature):
    """Return Pa, or None where the source does not reach.

    Wagner's equation (McGarry; Poling, Prausnitz and O'Connell) to C20 of the alkanes and C10 of
    the alkenes, else Antoine's (Landolt-Boernstein).
    """
    cas = number(family, n)
    for table, equation in (
        (vapor_pressure.Psat_data_WagnerPoling, vapor_pressure.Wagner),
        (vapor_pressure.Psat_data_WagnerMcGarry, vapor_pressure.Wagner_original),
    ):
        if cas in table.index:
            row = table.loc[cas]
            if not row["Tmin"] <= temperature <= 0.98 * row["Tc"]:
                return None
            terms = [row[name] for name in "ABCD"]
            return equation(temperature, row["Tc"], row["Pc"], *terms)
    row = vapor_pressure.Psat_data_Landolt_Antoine.loc[cas]
    if not row["Tmin"] <= temperature <= row["Tmax"]:
        return None
    return vapor_pressure.Antoine(temperature, row["A"], row["B"], row["C"], np.e)


def liquid_heat_capacities(family, temperature):
    """Return {n: J/(mol K)}: Zabransky's fits where they reach, else Perry's table 2-153."""
    found = {}
    for n in range(5, 21):
        value = _zabransky(number(family, n), temperature) or _perry(number(family, n), temperature)
        if value is not None and temperature < 0.75 * critical.Tc(number(family, n)):
            found[n] = value
    return found


def _zabransky(cas, temperature):
    for kind, fits in heat_capacity.zabransky_dicts.items():
        if cas in fits and "spline" in kind:
            fit = fits[cas]
            low, high = fit.Tmin, fit.Tmax
            if low <= temperature <= high:
                return fit.calculate(temperature)
    return None


def _perry(cas, temperature):
    table = heat_capacity.Cp_data_Perry_Table_153_100
    if cas not in table.index:
        return None
    row = table.loc[cas]
    if not row["Tmin"] <= temperature <= row["Tmax"]:
        return None
    return sum(row[name] * temperature**i for i, name in enumerate("ABCDE")) / 1e3
