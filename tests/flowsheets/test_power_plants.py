"""Gas turbine and steam cycle against libraries that share no data with the project.

Gas turbine: ideal-gas heat capacities of CoolProp integrated along isentropes; real-gas effects at
15 bar are some tenths of a per cent.  Steam cycle: IAPWS-97; the gas model of the project takes
0.5 % more heat for steam of 40 bar and 400 degC and gives as much more in the turbine (known
departure of Redlich-Kwong, stated with the boiler).
"""

from functools import cache

import numpy as np
import pytest
from CoolProp.CoolProp import PropsSI
from iapws import IAPWS97
from scipy.optimize import brentq

from chainflow.accounts.plant import plant_account
from chainflow.thermo.streams import Stream
from tests.flowsheets.shipped import flow, rate, solved

GAS_CONSTANT = 8.314462618
FLUIDS = {"N2": "N2", "O2": "O2", "Ar": "Argon", "H2O": "Water", "CO2": "CO2"}
FUEL = 100 / 3600 / 16.043e-3 * 802.3e3  # [W]: 100 kg/h of methane, 802.3 kJ/mol


@cache
def grid(name: str) -> tuple[np.ndarray, np.ndarray]:
    """Temperatures [K] and ideal-gas heat capacities [J/(mol K)] of a pure gas."""
    levels = np.linspace(280.0, 1700.0, 285)
    return levels, np.array([PropsSI("Cp0molar", "T", t, "P", 1e5, FLUIDS[name]) for t in levels])


def isentropic(gas: Stream, start: float, ratio: float) -> float:
    """Enthalpy that an ideal gas takes up from `start` [K] over a pressure ratio [W]."""
    there = {name: float(gas.flow(name)) for name in FLUIDS if float(gas.flow(name)) > 0.0}
    levels = grid("N2")[0]
    capacity = sum(n * grid(name)[1] for name, n in there.items())
    steps = np.diff(levels)
    entropy = np.append(0.0, np.cumsum(0.5 * steps * (capacity / levels)[:-1]))
    entropy[1:] += np.cumsum(0.5 * steps * (capacity / levels)[1:])
    enthalpy = np.append(0.0, np.cumsum(0.5 * steps * (capacity[:-1] + capacity[1:])))
    wanted = np.interp(start, levels, entropy) + sum(there.values()) * GAS_CONSTANT * np.log(ratio)
    end = brentq(lambda t: np.interp(t, levels, entropy) - wanted, levels[0], levels[-1])
    return float(np.interp(end, levels, enthalpy) - np.interp(start, levels, enthalpy))


def compression():
    return isentropic(flow(solved("gas-turbine"), "air.outlet"), 288.15, 15 / 1.01325) / 0.86


def expansion():
    hot = flow(solved("gas-turbine"), "liner.outlet")
    assert float(hot.temperature) == pytest.approx(1473.15, abs=0.1)
    return -isentropic(hot, float(hot.temperature), 1.04 / 14.4) * 0.89


def test_the_compressor_of_the_gas_turbine():
    found = rate(solved("gas-turbine"), "shaft.compressor")
    assert found == pytest.approx(compression(), rel=0.003)


def test_the_turbine_of_the_gas_turbine():
    assert rate(solved("gas-turbine"), "turbine.power") == pytest.approx(expansion(), rel=0.003)


def test_the_efficiency_of_the_gas_turbine():
    wanted = 0.98 * (expansion() - compression()) / FUEL
    found = plant_account(solved("gas-turbine")).efficiency.overall["LHV"]
    assert found == pytest.approx(wanted, rel=0.005)


def test_no_gas_turbine_beats_the_cold_air_cycle():
    """Ideal efficiency 48.2 % at a pressure ratio of 10 and gamma 1.4 (closed form)."""
    assert 1 - 10 ** (-0.4 / 1.4) == pytest.approx(0.482, abs=0.001)
    for high in (5, 10, 20, 30):
        best = 1 - (high / 1.01325) ** (-0.4 / 1.4)
        solution = solved("gas-turbine", high=f"{high} bar")
        assert 0.15 < plant_account(solution).efficiency.overall["LHV"] < best


def steam_tables() -> tuple[float, float, float]:
    """Work of turbine and pump and heat of the boiler [J/kg], by IAPWS-97."""
    level = float(flow(solved("steam-cycle"), "boiler.steam").temperature)
    live, water = IAPWS97(T=level, P=4.0), IAPWS97(T=318.15, P=0.01)
    behind, pumped = IAPWS97(P=0.01, s=live.s), IAPWS97(P=4.0, s=water.s)
    turbine, pump = 0.82 * (live.h - behind.h), (pumped.h - water.h) / 0.70
    return 1e3 * turbine, 1e3 * pump, 1e3 * (live.h - water.h - pump)


def test_steam_leaves_the_boiler_superheated_by_the_tables():
    live = flow(solved("steam-cycle"), "boiler.steam")
    boiling = IAPWS97(P=4.0, x=1).T
    assert float(live.temperature) == pytest.approx(boiling + 150.0, abs=0.2)


def test_work_and_heat_of_the_steam_cycle_per_mass():
    solution = solved("steam-cycle")
    live, cold = flow(solution, "boiler.steam"), flow(solution, "feed.outlet")
    mass = float(live.mass_flow)
    turbine, pump, heat = steam_tables()
    assert rate(solution, "turbine.power") / mass == pytest.approx(turbine, rel=0.01)
    assert rate(solution, "shaft.feed") / mass == pytest.approx(pump, rel=0.01)
    taken = float(live.enthalpy) - float(cold.enthalpy)
    assert taken / mass == pytest.approx(heat, rel=0.01)


def test_the_efficiency_of_the_steam_cycle():
    """(877 - 6) / 3021 kJ/kg = 0.288 by the tables."""
    solution = solved("steam-cycle")
    turbine, pump, heat = steam_tables()
    live, cold = flow(solution, "boiler.steam"), flow(solution, "feed.outlet")
    found = (rate(solution, "turbine.power") - rate(solution, "shaft.feed")) / (
        float(live.enthalpy) - float(cold.enthalpy)
    )
    assert (turbine - pump) / heat == pytest.approx(0.2886, abs=0.001)
    assert found == pytest.approx((turbine - pump) / heat, rel=0.005)


def test_the_dryness_behind_the_turbine():
    """82 % of the ideal drop leaves 2337 kJ/kg: (2337 - 192) / 2392 = 0.897 by the tables."""
    behind = flow(solved("steam-cycle"), "turbine.outlet")
    assert float(behind.gas.sum() / behind.total) == pytest.approx(0.897, abs=0.005)


def test_the_water_goes_round_and_none_is_bought():
    solution = solved("steam-cycle")
    assert abs(solution.outcomes["well"].results["net_mol_s"]) < 1e-9
    assert "well" not in plant_account(solution).bought.material
