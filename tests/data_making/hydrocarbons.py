"""Make `chainflow/thermo/hydrocarbons.yaml`: n-alkanes, 1-alkenes and a wax, as homologous rows.

Run by hand, ``python -m tests.data_making.hydrocarbons``; a test makes the table again and
compares. Every property is a smooth function of the carbon number n, fitted to what
`sources` hands out, so that scatter between data sets does not become chemistry:

* gas: formation enthalpy and entropy at 298.15 K linear in n; heat capacity linear in n at every
  temperature, 200 to 1500 K (above 1000 K the short members speak for all), continued to 6000 K
  towards the classical limit; then NASA polynomials, 200-1000-6000 K;
* vapour pressure: ``ln p = A + B/T + C ln T + D T``, each coefficient a sum of 1, n, n^(2/3), n^2
  (1, n, n^(2/3) for the alkenes);
* latent heat ``L = l0 + l1 T + l2 T^2``, gas to liquid, each coefficient linear in n, from the
  heat of vaporisation at 298.15 K, liquid and gas heat capacities, and at low pressure from the
  slope of the vapour pressure; entropy so that gas and liquid balance at 10 kPa of vapour;
* critical data and density: Riazi and Al-Sahhaf, Fluid Phase Equilib. 117 (1996) 217, from
  memory, checked against the library; alkenes by their ratio to the alkanes.
"""

from functools import cache
from math import exp, log
from pathlib import Path

import numpy as np

import chainflow.thermo
from tests.data_making import sources

GAS_CONSTANT = 8.31446261815324
REFERENCE = 298.15  # [K]
WAX = 40  # carbon atoms; the mean of all chains above C30 at a chain growth of 0.90
MEMBERS = {"alkane": [*range(5, 31), WAX], "alkene": list(range(4, 21))}
LIGHT = {"C2H4": ("alkene", 2), "C2H6": ("alkane", 2), "C3H6": ("alkene", 3)}
LIGHT |= {"C3H8": ("alkane", 3), "n-C4H10": ("alkane", 4)}
LIQUID_VOLUME = {"C2H4": 76e-6, "C2H6": 80e-6, "C3H6": 83e-6, "C3H8": 90e-6, "n-C4H10": 101e-6}
JOINT, LOWEST, HIGHEST = 1000.0, 200.0, 6000.0  # [K] of the polynomials
PRESSURES = np.geomspace(1e3, 1e6, 13)  # [Pa] the vapour pressures are fitted at
FILE = Path(chainflow.thermo.__file__).with_name("hydrocarbons.yaml")


# ------------------------------------------------------------------------------ gas
@cache
def gas_line(family, temperature):
    """Return slope and intercept of the heat capacity by n at a temperature [J/(mol K)]."""
    values = sources.gas_heat_capacities(family, temperature)
    return np.polyfit(list(values), list(values.values()), 1)


@cache
def line_of(name, family):
    """Return slope and intercept by n of another property of `sources`."""
    values = getattr(sources, name)(family)
    return np.polyfit(list(values), list(values.values()), 1)


def classical_limit(family, n):
    """Return cp of the gas with every vibration and every hindered turn fully excited."""
    modes, turns = (9 * n, n - 1) if family == "alkane" else (9 * n - 6, n - 2)
    return GAS_CONSTANT * (4.0 + modes - 0.5 * turns)


def gas_heat_capacity(family, n, temperature):
    """Return cp [J/(mol K)] of the ideal gas from 200 to 6000 K."""
    if temperature <= 1500.0:
        return float(np.polyval(gas_line(family, temperature), n))
    limit = classical_limit(family, n)
    end, before = (float(np.polyval(gas_line(family, t), n)) for t in (1500.0, 1400.0))
    power = log((limit - before) / (limit - end)) / log(1500.0 / 1400.0)
    return limit - (limit - end) * (1500.0 / temperature) ** power


@cache
def gas_polynomial(family, n):
    """Return the two rows of a NASA polynomial, joined with equal cp and slope at 1000 K."""
    rows = []
    below = np.linspace(LOWEST, JOINT, 41)
    above = np.concatenate([np.linspace(JOINT, 1500.0, 26), np.geomspace(1550.0, HIGHEST, 40)])
    ends = None
    for grid in (below, above):
        x = grid / 1000.0
        values = np.array([gas_heat_capacity(family, n, t) for t in grid]) / GAS_CONSTANT
        powers = np.vander(x, 5, increasing=True)
        if ends is None:
            scaled = np.linalg.lstsq(powers / values[:, None], np.ones(len(x)), rcond=None)[0]
            ends = float(scaled.sum()), float(scaled @ np.arange(5))
        else:
            scaled = _joined(x, powers, values, *ends)
        rows.append(scaled / 1000.0 ** np.arange(5))
    return _with_constants(rows, *(_at_reference(name, family, n) for name in _REFERENCES))


_REFERENCES = ("formation_enthalpies", "entropies")


def _at_reference(name, family, n):
    return float(np.polyval(line_of(name, family), n))


def _joined(x, powers, values, level, slope):
    """Fit the upper row under the condition that level and slope at x = 1 are given."""
    free = np.stack(
        [x**2 - 1.0 - 2.0 * (x - 1.0), x**3 - 1.0 - 3.0 * (x - 1.0), x**4 - 1.0 - 4.0 * (x - 1.0)],
        axis=1,
    )
    wanted = values - level - slope * (x - 1.0)
    top = np.linalg.lstsq(free / values[:, None], wanted / values, rcond=None)[0]
    linear = slope - top @ [2.0, 3.0, 4.0]
    return np.array([level - linear - top.sum(), linear, *top])


def _with_constants(rows, enthalpy, entropy):
    """Append the constants of enthalpy and entropy: given at 298.15 K, continuous at 1000 K."""
    low, high = rows
    a6 = enthalpy / GAS_CONSTANT - _enthalpy_sum(low, REFERENCE)
    a7 = entropy / GAS_CONSTANT - _entropy_sum(low, REFERENCE)
    b6 = a6 + _enthalpy_sum(low, JOINT) - _enthalpy_sum(high, JOINT)
    b7 = a7 + _entropy_sum(low, JOINT) - _entropy_sum(high, JOINT)
    return [*low, a6, a7], [*high, b6, b7]


def _enthalpy_sum(row, temperature):
    return float(sum(a * temperature ** (i + 1) / (i + 1) for i, a in enumerate(row)))


def _entropy_sum(row, temperature):
    powers = sum(a * temperature**i / i for i, a in enumerate(row) if i)
    return float(row[0] * log(temperature) + powers)


# -------------------------------------------------------------------------- vapour pressure
@cache
def pressure_points(family):
    """Return (n, T, ln p) of the sources from 1 kPa to 1 MPa."""
    points = []
    for n in [m for m in MEMBERS[family] if m != WAX]:
        for temperature in np.arange(230.0, 760.0, 8.0):
            found = sources.vapour_pressure(family, n, float(temperature))
            if found is not None and 1e3 <= found <= 1e6:
                points.append((n, float(temperature), log(found)))
    return np.array(points)


def _in_temperature(temperature):
    t = np.asarray(temperature, dtype=float)
    return np.stack([np.ones_like(t), 300.0 / t, np.log(t / 300.0), t / 300.0])


def _in_temperature_slope(temperature):
    t = np.asarray(temperature, dtype=float)
    return np.stack([np.zeros_like(t), -300.0 / t**2, 1.0 / t, np.full_like(t, 1.0 / 300.0)])


def _in_number(family, n):
    n = np.asarray(n, dtype=float) / 10.0
    terms = [np.ones_like(n), n, n ** (2.0 / 3.0), n**2]
    return np.stack(terms[: 4 if family == "alkane" else 3])


@cache
def pressure_fit(family):
    """Return the coefficients, shape (terms in T, terms in n).

    The slope at 298.15 K is held to the heat of vaporisation, so that the fit goes on sensibly
    below 1 kPa, where the sources of the long chains end.
    """
    n, temperature, wanted = pressure_points(family).T
    rows = _products(_in_temperature(temperature), _in_number(family, n))
    chains = np.arange(7.0, MEMBERS[family][-1] + 1.0)
    heat = np.polyval(line_of("vaporisation_heats", family), chains)
    slope_rows = _products(
        _in_temperature_slope(np.full(len(chains), REFERENCE)), _in_number(family, chains)
    )
    slopes = heat / (GAS_CONSTANT * REFERENCE**2)
    weight = 100.0 / slopes  # 1 % of slope counts like 1 % of pressure at this many points
    rows = np.vstack([rows, slope_rows * weight[:, None] * SLOPE_SHARE])
    wanted = np.concatenate([wanted, slopes * weight * SLOPE_SHARE])
    found = np.linalg.lstsq(rows, wanted, rcond=None)[0]
    return found.reshape(4, -1)


SLOPE_SHARE = 0.01


def _products(first, second):
    return np.einsum("ip,jp->pij", first, second).reshape(first.shape[1], -1)


@cache
def vapour_pressure_row(family, n):
    """Return A, B, C, D of ``ln(p/Pa) = A + B/T + C ln T + D T``."""
    a, b, c, d = pressure_fit(family) @ _in_number(family, float(n))
    return a - c * log(300.0), b * 300.0, c, d / 300.0


def log_pressure(row, temperature):
    """Return ln(p/Pa)."""
    a, b, c, d = row
    return a + b / temperature + c * log(temperature) + d * temperature


def ideal_latent_heat(row, temperature):
    """Return ``R T^2 d ln p/dT`` [J/mol]."""
    _, b, c, d = row
    return GAS_CONSTANT * (-b + c * temperature + d * temperature**2)


def temperature_of(row, pressure):
    """Return the temperature [K] of a vapour pressure [Pa]."""
    low, high = 100.0, 1200.0
    for _ in range(80):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if log_pressure(row, middle) < log(pressure) else (low, middle)
    return 0.5 * (low + high)


# ------------------------------------------------------------------------------ latent heat
@cache
def latent_fit():
    """Return the coefficients of the alkanes' latent heat, shape (powers of T, powers of n)."""
    rows, wanted = [], []

    def add(powers, n, value, weight):
        rows.append(np.outer(powers, [1.0, n / 10.0]).ravel() * weight)
        wanted.append(value * weight)

    for n, heat in sources.vaporisation_heats("alkane").items():
        add(_powers(REFERENCE), n, heat, 1.0 / heat / 0.004)
    for t in (REFERENCE, 320.0, 350.0, 375.0, 400.0, 425.0, 450.0, 475.0, 500.0):
        for n, liquid in sources.liquid_heat_capacities("alkane", t).items():
            loss = gas_heat_capacity("alkane", n, t) - liquid
            add(_slopes(t), n, loss, 1.0 / liquid / 0.02)
    for n in range(8, 31):
        row = vapour_pressure_row("alkane", n)
        for pressure in (1e3, 3e3, 1e4):
            t = temperature_of(row, pressure)
            heat = ideal_latent_heat(row, t)
            add(_powers(t), n, heat, 1.0 / heat / 0.02)
    return np.linalg.lstsq(np.array(rows), np.array(wanted), rcond=None)[0].reshape(3, 2)


def _powers(t):
    return np.array([1.0, t / 300.0, (t / 300.0) ** 2])


def _slopes(t):
    return np.array([0.0, 1.0 / 300.0, 2.0 * t / 300.0**2])


@cache
def latent_row(family, n):
    """Return l0, l1, l2 [J/mol] of ``L = l0 + l1 T + l2 T^2``.

    The alkenes lose heat capacity like the alkanes; their heat at 298.15 K is their own.
    """
    scaled = latent_fit() @ [1.0, n / 10.0]
    if family == "alkene":
        own = np.polyval(line_of("vaporisation_heats", "alkene"), n)
        scaled[0] += own - float(scaled @ _powers(REFERENCE))
    return tuple(float(v) for v in scaled / 300.0 ** np.arange(3))


# ------------------------------------------------------------------------ other constants
def molar_mass(family, n):
    """Return g/mol."""
    return 12.011 * n + 1.008 * (2 * n + (2 if family == "alkane" else 0))


def critical_data(family, n):
    """Return critical temperature [K], pressure [Pa] and acentric factor."""
    m = molar_mass("alkane", n)
    boiling = 1070.0 - exp(6.98291 - 0.02013 * m ** (2.0 / 3.0))
    temperature = boiling / (1.15 - exp(-0.41966 - 0.02436 * m**0.58))
    pressure = exp(4.65757 - 0.13423 * m**0.5) * 1e5
    factor = exp(-3.06826 + 1.04987 * m**0.2) - 0.3
    if family == "alkene":  # C5 to C10 in the library: within 0.5 %, 4 % and 0.02
        temperature, pressure, factor = temperature * 0.995, pressure * 1.04, factor - 0.012
    return temperature, pressure, factor


def boiling_point(n):
    """Return the boiling point of the n-alkane by the correlation [K]; a check only."""
    return 1070.0 - exp(6.98291 - 0.02013 * molar_mass("alkane", n) ** (2.0 / 3.0))


def molar_volume(family, n):
    """Return the volume of the liquid at 20 degC [m3/mol]."""
    m = molar_mass("alkane", n)
    density = 0.859 - exp(88.01379 - 85.7446 * m**0.01)
    return molar_mass(family, n) / 1e6 / (density * (1.0 if family == "alkane" else 1.018))


# -------------------------------------------------------------------------------- writing
def liquid_of(family, n):
    """Return the numbers of the liquid, as they stand in the file.

    ``range`` [K] bounds both fits; outside, the latent heat stays and ln p is straight in 1/T.
    """
    pressure = [float(f"{v:.9e}") for v in vapour_pressure_row(family, n)]
    latent = [float(f"{v:.9e}") for v in latent_row(family, n)]
    low = 250.0
    highest = round(min(critical_data(family, n)[0] * 0.90, 640.0), 1)
    balance = round(min(max(temperature_of(pressure, 1e4), low), highest), 3)
    heat = sum(v * balance**i for i, v in enumerate(latent))
    order = GAS_CONSTANT * (log_pressure(pressure, balance) - log(1e5))
    return {
        "range": [low, highest],
        "vapour-pressure": pressure,
        "latent-heat": latent,
        "balance": [balance, heat / balance + order],
        "molar-volume": molar_volume(family, n),
    }


def light_liquid_of(name):
    """Return the same for C2 to C4, dissolved: a constant heat, that of boiling at 50 kPa."""
    family, n = LIGHT[name]
    grid = np.arange(150.0, 420.0, 4.0)
    points = [(t, sources.vapour_pressure(family, n, float(t))) for t in grid]
    known = [(t, p) for t, p in points if p is not None and p > 2e4]
    t, p = np.array(known).T
    rows = np.stack([np.ones_like(t), 1.0 / t, np.log(t), t], axis=1)
    scale = np.abs(rows).max(axis=0)
    fit = np.linalg.lstsq(rows / scale, np.log(p), rcond=None)[0] / scale
    pressure = [float(f"{v:.9e}") for v in fit]
    balance = round(temperature_of(pressure, 5e4), 3)
    heat = float(f"{ideal_latent_heat(pressure, balance):.6e}")
    order = GAS_CONSTANT * (log_pressure(pressure, balance) - log(1e5))
    return {
        "range": [float(t.min()), float(t.max())],
        "vapour-pressure": pressure,
        "latent-heat": [heat, 0.0, 0.0],
        "balance": [balance, heat / balance + order],
        "molar-volume": LIQUID_VOLUME[name],
    }


def name_of(family, n):
    """Return the name that a flowsheet uses."""
    if n == WAX:
        return "wax"
    return f"n-C{n}H{2 * n + 2}" if family == "alkane" else f"1-C{n}H{2 * n}"


def _numbers(values, style):
    return "[" + ", ".join(format(v, style) for v in values) + "]"


def liquid_lines(liquid):
    """Return the block `liquid` of one species as lines of YAML."""
    temperature, entropy = liquid["balance"]
    return [
        "  liquid:",
        f"    range: {_numbers(liquid['range'], '.1f')}",
        f"    vapour-pressure: {_numbers(liquid['vapour-pressure'], '.9e')}",
        f"    latent-heat: {_numbers(liquid['latent-heat'], '.9e')}",
        f"    balance: [{temperature:.3f}, {entropy:.9e}]",
        f"    molar-volume: {liquid['molar-volume']:.5e}",
    ]


def species_lines(family, n):
    """Return one species as lines of YAML."""
    low, high = gas_polynomial(family, n)
    hydrogen = 2 * n + (2 if family == "alkane" else 0)
    return [
        f"- name: {name_of(family, n)}",
        f"  composition: {{C: {n}, H: {hydrogen}}}",
        "  thermo:",
        "    model: NASA7",
        "    reference-pressure: 1 bar",
        "    temperature-ranges: [200.0, 1000.0, 6000.0]",
        "    data:",
        f"    - {_numbers(low, '.9e')}",
        f"    - {_numbers(high, '.9e')}",
        f"  critical-parameters: {_critical(family, n)}",
        *liquid_lines(liquid_of(family, n)),
    ]


def _critical(family, n):
    temperature, pressure, factor = critical_data(family, n)
    return (
        f"{{critical-temperature: {temperature:.2f}, critical-pressure: {pressure:.0f}, "
        f"acentric-factor: {factor:.4f}}}"
    )


HEADER = """\
# Thermochemical data of hydrocarbons C4 and up: n-alkanes, 1-alkenes and a wax (as n-C40H82).
#
# Made by tests/data_making/hydrocarbons.py from the library chemicals 1.5.2; do not edit by hand.
# Every number is a smooth function of the carbon number, fitted to (and off by at most):
#   formation enthalpy, gas, 298.15 K: API Technical Data Book, C5-C20 (0.8 kJ/mol at C16, else 0.4)
#   entropy, gas, 1 bar: Yaws, C5-C18 (0.5 J/(mol K); 1-hexene 2)
#   heat capacity, gas: TRC, C6-C20, 200-1500 K (1.0 %; 2 % at 200 K), then to the classical limit
#   vapour pressure: Wagner (McGarry; Poling) to C20 and C10=, Antoine (Landolt-Boernstein) above;
#     1 kPa to 1 MPa, see the test for the rms of each member (0.3 to 3 %); below 1 kPa 2 to 20 %
#   latent heat: CRC Handbook, C5-C20, 298.15 K (0.7 %); liquid heat capacity Zabransky and Perry
#     (3 %); C21 and up, and the wax, are extrapolated
#   critical data, density: Riazi and Al-Sahhaf, Fluid Phase Equilib. 117 (1996) 217, from memory
# `liquid`: ln(p/Pa) = A + B/T + C ln T + D T; latent heat l0 + l1 T + l2 T^2 [J/mol]; `range` [K]
# of both; `balance`: a temperature [K] and the entropy of vaporisation to 1 bar there
# [J/(mol K)]; molar volume [m3/mol].

components:
"""


def text():
    """Return the whole file."""
    rows = [species_lines(family, n) for family, members in MEMBERS.items() for n in members]
    order = sorted(rows, key=lambda lines: lines[0] == "- name: wax")
    return HEADER + "\n".join("\n".join(lines) for lines in order) + "\n"


if __name__ == "__main__":
    FILE.write_text(text(), encoding="utf-8")
    for light in LIGHT:
        print(light, *liquid_lines(light_liquid_of(light)), sep="\n")
