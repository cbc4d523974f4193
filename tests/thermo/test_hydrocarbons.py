"""Liquid hydrocarbons: the table, the three-phase flash, and streams that hold an oil."""

import numpy as np
import pytest

from chainflow.basis.constants import GAS_CONSTANT
from chainflow.thermo import species
from chainflow.thermo.chains import LONGEST_ALKANE, WAX, WAX_LENGTH, alkane, alkene
from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter, known_components
from chainflow.thermo.species import component_species, polynomial
from chainflow.thermo.stream_slopes import enthalpy_slopes, entropy_slopes, temperature_slopes
from chainflow.thermo.streams import Stream
from chainflow.thermo.validity import StateError
from tests.data_making import hydrocarbons as maker

CHAINS = (*(alkane(n) for n in range(2, 31)), *(alkene(n) for n in range(2, 21)), WAX)
MATTER = Matter.of((*DEFAULT_COMPONENTS, *CHAINS))
SMALL = Matter.of(("N2", "H2O", "CO2", "C3H8", "n-C8H18", "n-C16H34"))


def synthesis(scale=0.3):
    flows = MATTER.vector({"H2": 4.0, "CO": 2.0, "CO2": 0.5, "H2O": 3.0, "CH4": 0.3})
    for n in range(2, 31):
        flows[MATTER.index[alkane(n)]] = scale * 0.1 * 0.9**n
    for n in range(2, 21):
        flows[MATTER.index[alkene(n)]] = scale * 0.03 * 0.9**n
    flows[MATTER.index[WAX]] = scale * 0.9**30
    return flows


STATES = [(493.15, 25e5), (313.15, 24e5), (313.15, 1e5), (600.0, 25e5), (380.0, 25e5), (255.0, 5e5)]


# ------------------------------------------------------------------------------- the table
def test_the_shipped_table_is_what_its_maker_makes():
    made, shipped = maker.text().splitlines(), maker.FILE.read_text(encoding="utf-8").splitlines()
    assert len(made) == len(shipped)
    for mine, theirs in zip(made, shipped, strict=True):
        assert _numbers_of(mine) == pytest.approx(_numbers_of(theirs), rel=1e-6, abs=1e-300), mine
        assert _words_of(mine) == _words_of(theirs)


@pytest.mark.parametrize("name", maker.LIGHT)
def test_short_chains_in_the_other_file_come_from_the_same_maker(name):
    shipped, made = species.species_of(name).input_data["liquid"], maker.light_liquid_of(name)
    assert set(shipped) == set(made)
    for key, value in made.items():
        assert shipped[key] == pytest.approx(value, rel=1e-5), key


def _numbers_of(line):
    if line.startswith("#") or (":" not in line and "[" not in line):
        return []
    body = line[line.index("[") + 1 : line.index("]")] if "[" in line else ""
    return [float(word) for word in body.split(",") if word.strip()]


def _words_of(line):
    return (
        line[: line.index("[")] if "[" in line and not line.startswith("#") else line.split(",")[0]
    )


def test_every_chain_is_known_by_its_name():
    assert set(CHAINS) <= set(known_components())
    assert alkane(16) == "n-C16H34"
    assert alkene(12) == "1-C12H24"
    assert (alkane(4), alkene(3)) == ("n-C4H10", "C3H6")
    for n, name in ((31, alkane), (21, alkene), (1, alkene), (0, alkane)):
        with pytest.raises(ValueError, match="wanted"):
            name(n)


def test_formulas_follow_the_names():
    carbon, hydrogen = (MATTER.formula[MATTER.elements.index(e)] for e in "CH")
    for n in range(1, LONGEST_ALKANE + 1):
        assert carbon[MATTER.index[alkane(n)]] == n
        assert hydrogen[MATTER.index[alkane(n)]] == 2 * n + 2
    for n in range(2, 21):
        assert carbon[MATTER.index[alkene(n)]] == n
        assert hydrogen[MATTER.index[alkene(n)]] == 2 * n
    assert carbon[MATTER.index[WAX]] == WAX_LENGTH


def test_polynomials_are_smooth_and_rise():
    for name in species.HYDROCARBONS:
        pure = polynomial(name)
        grid = np.linspace(200.0, 6000.0, 200)
        capacity = np.array([pure.heat_capacity(t) for t in grid])
        assert (capacity > 0.0).all()
        ends = pure.heat_capacity(np.nextafter(1000.0, 0.0)), pure.heat_capacity(1000.001)
        assert ends[0] == pytest.approx(ends[1], rel=1e-5)


@pytest.mark.parametrize("name", [c for c in CHAINS if c not in ("C2H4", "C2H6")])
def test_properties_are_in_order_along_a_chain_at_every_temperature(name):
    """Vapour pressure and latent heat: positive, and the pressure rises steadily."""
    oil = MATTER.oil
    place = oil.names.index(name)
    grid = np.linspace(200.0, 1200.0, 150)
    pressures = np.array([oil.log_pressures(t).value[place] for t in grid])
    assert (np.diff(pressures) > 0.0).all()
    gas = np.array([polynomial(name).enthalpy(t) for t in grid])
    liquid = np.array([oil.enthalpies(t, 1e5)[MATTER.index[name]] for t in grid])
    assert (gas - liquid > 0.0).all()


def test_longer_chains_are_less_volatile():
    for temperature in (250.0, 300.0, 400.0, 500.0, 600.0):
        values = MATTER.oil.log_pressures(temperature).value
        names = list(MATTER.oil.names)
        row = [values[names.index(alkane(n))] for n in range(2, 31)] + [values[names.index(WAX)]]
        assert (np.diff(row) < 0.0).all()


@pytest.mark.parametrize("n", range(5, 31))
def test_gas_and_liquid_nearly_balance_at_the_vapour_pressure(n):
    """Two sets of data meet: Gibbs energies from heats, and the vapour pressure itself.

    The pressure at which the ideal gas balances the liquid is the vapour pressure times the
    fugacity coefficient of the saturated vapour, 0.9 to 1 from 1 to 100 kPa.
    """
    oil, name = MATTER.oil, alkane(n)
    place, there = oil.names.index(name), MATTER.index[name]
    row = maker.vapour_pressure_row("alkane", n)
    for pressure in (3e3, 1e4, 3e4, 1e5):
        t = min(maker.temperature_of(row, pressure), 640.0)
        gibbs = oil.enthalpies(t, 1e5)[there] - t * oil.entropies(t)[there]
        balanced = 1e5 * np.exp((gibbs - polynomial(name).gibbs(t)) / (GAS_CONSTANT * t))
        saturated = np.exp(oil.log_pressures(t).value[place])
        assert 0.93 < balanced / saturated < 1.03


def test_enthalpy_entropy_and_heat_capacity_of_the_liquid_belong_together():
    oil, step = MATTER.oil, 1e-3
    for t in (230.0, 300.0, 450.0, 630.0, 700.0, 1100.0):
        rise = (oil.enthalpies(t + step, 1e5) - oil.enthalpies(t - step, 1e5)) / (2 * step)
        growth = (oil.entropies(t + step) - oil.entropies(t - step)) / (2 * step)
        assert rise == pytest.approx(oil.heat_capacities(t), rel=1e-6)
        assert t * growth == pytest.approx(oil.heat_capacities(t), rel=1e-6)


# ------------------------------------------------------------------------------- the flash
@pytest.mark.parametrize(("temperature", "pressure"), STATES)
def test_phases_add_up_and_are_in_equilibrium(temperature, pressure):
    flows = synthesis()
    s = Stream.at(MATTER, flows, temperature, pressure)
    assert s.gas + s.water + s.liquid == pytest.approx(flows, rel=1e-14, abs=1e-300)
    assert s.liquid.sum() > 0.0
    oil = MATTER.oil
    y, x = s.gas[oil.places] / s.gas.sum(), s.liquid[oil.places] / s.liquid.sum()
    pressures = np.exp(oil.log_pressures(temperature).value)
    assert x.sum() == pytest.approx(1.0, rel=1e-14)
    heavy = y * pressure > 1e-200
    assert (y * pressure)[heavy] == pytest.approx((x * pressures)[heavy], rel=1e-9)
    assert s.liquid.sum() == pytest.approx(s.liquid[oil.places].sum(), rel=1e-15)


def test_a_flash_with_oil_agrees_with_rachford_and_rice():
    """Two components and nitrogen, bisection on the textbook equation."""
    flows = SMALL.vector({"N2": 1.0, "n-C8H18": 0.5, "n-C16H34": 0.2})
    s = Stream.at(SMALL, flows, 400.0, 2e5)
    oil, z = SMALL.oil, flows / flows.sum()
    k = np.full(len(flows), np.inf)
    k[oil.places] = np.exp(oil.log_pressures(400.0).value) / 2e5

    def excess(v):
        return sum(
            zi / v if np.isinf(ki) else zi * (ki - 1.0) / (1.0 + v * (ki - 1.0))
            for zi, ki in zip(z, k, strict=True)
            if zi > 0.0
        )

    low, high = 1e-9, 1.0
    for _ in range(200):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if excess(middle) > 0.0 else (low, middle)
    assert s.gas.sum() / flows.sum() == pytest.approx(low, rel=1e-12)


def test_water_appears_when_oil_leaves_the_gas():
    """A gas that is dry only because its hydrocarbons thin the water."""
    flows = SMALL.vector({"N2": 0.05, "H2O": 0.01, "n-C16H34": 1.0})
    s = Stream.at(SMALL, flows, 320.0, 1e5)
    assert s.liquid.sum() > 0.9
    assert s.water.sum() > 0.0
    share = s.gas[SMALL.water] / s.gas.sum()
    from chainflow.thermo.water import saturation_pressure

    assert share * 1e5 == pytest.approx(saturation_pressure(320.0), rel=1e-10)


def test_dry_streams_and_sets_without_long_chains_know_no_oil():
    assert Matter.of(DEFAULT_COMPONENTS).oil is None
    assert Matter.of(("H2", "C3H8", "n-C4H10")).oil is None
    s = Stream.at(MATTER, MATTER.vector({"H2": 1.0, "CO": 1.0}), 300.0, 30e5)
    assert s.liquid is MATTER.nothing


def test_the_last_trace_of_a_vapour_condenses_at_its_dew_point():
    flows = SMALL.vector({"N2": 1.0, "n-C8H18": 0.01})
    partial = 0.01 / 1.01 * 1e5
    pressures = SMALL.oil.log_pressures
    low, high = 250.0, 400.0
    place = SMALL.oil.names.index("n-C8H18")
    for _ in range(100):
        middle = 0.5 * (low + high)
        wet = np.exp(pressures(middle).value[place]) < partial
        low, high = (middle, high) if wet else (low, middle)
    assert Stream.at(SMALL, flows, low - 1e-6, 1e5).liquid.sum() > 0.0
    assert Stream.at(SMALL, flows, high + 1e-6, 1e5).liquid.sum() == 0.0


# ----------------------------------------------------------------------------- streams
@pytest.mark.parametrize(("temperature", "pressure"), STATES)
def test_a_state_is_found_again_from_its_enthalpy(temperature, pressure):
    flows = synthesis()
    s = Stream.at(MATTER, flows, temperature, pressure)
    for guess in (temperature, 300.0, 900.0):
        back = Stream.from_enthalpy(MATTER, flows, s.enthalpy, pressure, guess)
        assert back.temperature == pytest.approx(temperature, abs=1e-8)
        assert back.liquid == pytest.approx(s.liquid, rel=1e-6, abs=1e-12)


@pytest.mark.parametrize(("temperature", "pressure"), STATES)
def test_slopes_agree_with_differences(temperature, pressure):
    flows = synthesis()
    s = Stream.at(MATTER, flows, temperature, pressure)
    (by_flows, by_level), (growth, growth_level) = enthalpy_slopes(s), entropy_slopes(s)
    step = 2e-3
    up, down = (Stream.at(MATTER, flows, temperature + d, pressure) for d in (step, -step))
    assert by_level == pytest.approx((up.enthalpy - down.enthalpy) / (2 * step), rel=1e-7)
    assert growth_level == pytest.approx((up.entropy - down.entropy) / (2 * step), rel=1e-6)
    for place in np.flatnonzero(flows)[::4]:
        more, less = flows.copy(), flows.copy()
        size = 0.01 * flows[place]
        more[place] += size
        less[place] -= size
        up, down = (Stream.at(MATTER, n, temperature, pressure) for n in (more, less))
        rise = (up.enthalpy - down.enthalpy) / (2 * size)
        assert by_flows[place] == pytest.approx(rise, rel=2e-5, abs=1.0)
        change = (up.entropy - down.entropy) / (2 * size)
        assert growth[place] == pytest.approx(change, rel=2e-4, abs=0.02)
    to_flow, to_enthalpy = temperature_slopes(s)
    assert to_enthalpy * by_level == pytest.approx(1.0)
    assert to_flow == pytest.approx(-by_flows / by_level)


def test_enthalpy_rises_steadily_through_all_phase_changes():
    flows = synthesis()
    grid = np.linspace(205.0, 1000.0, 120)
    streams = [Stream.at(MATTER, flows, t, 25e5) for t in grid]
    assert (np.diff([s.enthalpy for s in streams]) > 0.0).all()
    heats = np.diff([s.enthalpy for s in streams])
    means = heats / np.diff([s.entropy for s in streams])
    # heat over entropy is a temperature on the way, to 5 %: three sets of data at phase changes
    assert (means > 0.95 * grid[:-1]).all()
    assert (means < 1.05 * grid[1:]).all()


@pytest.mark.parametrize("made", [{"n-C8H18": 1.0}, {"n-C8H18": 1.0, "H2O": 1.0}])
def test_what_boils_at_one_temperature_is_split_by_its_enthalpy(made):
    flows = SMALL.vector(made)
    low, high = (Stream.at(SMALL, flows, t, 1e5).enthalpy for t in (300.0, 450.0))
    before = 0.0
    for share in np.linspace(0.0, 1.0, 21):
        wanted = low + share * (high - low)
        s = Stream.from_enthalpy(SMALL, flows, wanted, 1e5)
        again = SMALL.gas_enthalpy(s.gas, s.temperature, 1e5)
        again += SMALL.water_enthalpy(s.water, s.temperature, 1e5)
        again += SMALL.oil_enthalpy(s.liquid, s.temperature, 1e5)
        assert again == pytest.approx(wanted, rel=1e-11)
        assert s.flows == pytest.approx(flows, rel=1e-13)
        assert s.temperature >= before - 1e-7
        before = s.temperature
        by_flows, by_level = enthalpy_slopes(s)
        if np.isinf(by_level):
            assert float(by_flows @ flows) == pytest.approx(wanted, rel=1e-9)
            assert temperature_slopes(s)[1] == 0.0


def test_two_liquids_that_do_not_mix_boil_below_either():
    """Steam distillation: the vapour pressures add up."""
    flows = SMALL.vector({"n-C8H18": 1.0, "H2O": 1.0})
    low, high = (Stream.at(SMALL, flows, t, 101325.0).enthalpy for t in (300.0, 450.0))
    s = Stream.from_enthalpy(SMALL, flows, low + 0.4 * (high - low), 101325.0)
    assert s.gas.any()
    assert s.water.any()
    assert s.liquid.any()
    # octane and water boil together at 89.4 to 89.9 degC (steam distillation, from memory)
    assert s.temperature - 273.15 == pytest.approx(89.6, abs=0.5)


def test_heating_values_of_an_oil_are_those_of_the_liquid():
    flows = SMALL.vector({"n-C16H34": 1.0})
    s = Stream.at(SMALL, flows, 298.15, 1e5)
    place = SMALL.index["n-C16H34"]
    gas_heat = float(s.matter.lhv[place])
    assert s.liquid.sum() == pytest.approx(1.0)
    oil = SMALL.oil.enthalpies(298.15, 1e5)[place]
    assert gas_heat - s.lhv == pytest.approx(polynomial("n-C16H34").enthalpy(298.15) - oil)
    assert s.hhv - s.lhv == pytest.approx(17 * 44.0e3, rel=1e-3)  # water's latent heat at 25 degC
    hot = Stream.at(SMALL, flows, 700.0, 1e5)
    assert hot.lhv == pytest.approx(gas_heat, rel=1e-14)


def test_exergy_of_a_fuel_is_a_little_above_its_heating_value():
    """Liquid hydrocarbons: 1.06 to 1.08 of the lower heating value (Szargut, from memory)."""
    for name in ("n-C8H18", "n-C16H34"):
        s = Stream.at(SMALL, SMALL.vector({name: 1.0}), 298.15, 1e5)
        assert 1.05 < s.exergy() / s.lhv < 1.08


def test_batches_hold_oil_too():
    flows = np.stack([synthesis(), 2.0 * synthesis()])
    s = Stream.at(MATTER, flows, np.array([313.15, 500.0]), 20e5)
    alone = Stream.at(MATTER, flows[1], 500.0, 20e5)
    assert s.case(1).liquid == pytest.approx(alone.liquid, rel=1e-14)
    assert s.lhv[1] == pytest.approx(alone.lhv, rel=1e-14)
    back = Stream.from_enthalpy(MATTER, flows, s.enthalpy, 20e5)
    assert back.temperature == pytest.approx([313.15, 500.0], abs=1e-7)


def test_random_mixtures_always_flash_and_come_back():
    random = np.random.default_rng(3)
    for _ in range(150):
        flows = synthesis(0.0)
        chosen = random.random(len(flows)) < 0.3
        flows = np.where(chosen, 10.0 ** random.uniform(-6, 1, len(flows)), 0.0)
        flows[MATTER.index["H2"]] = 10.0 ** random.uniform(-6, 1)
        temperature = random.uniform(220.0, 700.0)
        pressure = 10.0 ** random.uniform(4.5, 6.7)
        try:
            s = Stream.at(MATTER, flows, temperature, pressure)
        except StateError as problem:  # CO2 and the like may not liquefy
            assert "liquefy" in str(problem)
            continue
        assert s.flows == pytest.approx(flows, rel=1e-13, abs=1e-300)
        assert (s.gas >= 0.0).all()
        back = Stream.from_enthalpy(MATTER, flows, s.enthalpy, pressure, 400.0)
        assert back.enthalpy == s.enthalpy
        assert back.temperature == pytest.approx(temperature, abs=1e-6)


def test_component_species_lists_the_long_chains_last():
    names = list(component_species())
    assert names.index("n-C5H12") > names.index("N2O")
    assert known_components() == tuple(names)
