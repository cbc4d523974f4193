"""Streams: phases found, enthalpy and temperature exchanged, cases, slopes."""

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.stream_slopes import enthalpy_slopes, temperature_slopes
from chainflow.thermo.streams import Stream
from chainflow.thermo.validity import StateError
from chainflow.thermo.water import saturation_temperature

MATTER = Matter.of(DEFAULT_COMPONENTS)
DRY = MATTER.vector({"H2": 4.0, "CO2": 1.0})
WET = MATTER.vector({"H2": 4.0, "CO2": 1.0, "H2O": 1.0})
WATER = MATTER.vector({"H2O": 1.0})


def own_enthalpy(stream):
    """Enthalpy [W] of the phases, worked out anew."""
    temperature, pressure = stream.temperature, stream.pressure
    gas = stream.matter.gas_enthalpy(stream.gas, temperature, pressure)
    return gas + stream.matter.water_enthalpy(stream.water, temperature, pressure)


def test_totals_and_fractions():
    stream = Stream.at(MATTER, WET, 600.0, 30e5)
    assert stream.total == pytest.approx(6.0)
    assert stream.fraction("H2") == pytest.approx(4 / 6)
    assert stream.dry_fraction("H2") == pytest.approx(0.8)
    assert stream.dry_fraction("H2O") == 0.0
    assert stream.fraction("CH3OH") == 0.0
    assert stream.mass_flow == pytest.approx(4 * 2.016e-3 + 44.009e-3 + 18.015e-3, rel=1e-4)
    assert stream.lhv == pytest.approx(4 * MATTER.lhv[0])
    assert stream.hhv == pytest.approx(4 * MATTER.hhv[0])
    assert stream.phase_totals == {"gas": pytest.approx(6.0), "water": 0.0, "liquid": 0.0}


def test_without_flow_everything_is_zero():
    stream = Stream.empty(MATTER)
    assert (stream.total, stream.enthalpy, stream.entropy, stream.exergy()) == (0.0,) * 4
    assert stream.fraction("H2") == 0.0
    assert stream.dry_fraction("H2") == 0.0
    assert Stream.from_enthalpy(MATTER, np.zeros(8), 0.0, 1e5).temperature == 298.15
    assert Stream.from_enthalpy(MATTER, np.zeros(8), 0.0, 1e5, guess=500.0).temperature == 500.0
    slopes = temperature_slopes(stream)
    assert slopes[1] == 0.0


def test_a_stream_cannot_be_changed():
    stream = Stream.at(MATTER, WET, 313.15, 30e5)
    for field in (stream.gas, stream.water, stream.liquid, stream.scaled(2.0).gas):
        with pytest.raises(ValueError, match="read-only"):
            field[0] = 1.0
    with pytest.raises(AttributeError):
        stream.temperature = 300.0


def test_the_array_of_the_caller_is_not_shared():
    flows = WET.copy()
    stream = Stream.at(MATTER, flows, 600.0, 1e5)
    flows[0] = 99.0
    assert stream.total == 6.0


@given(
    st.lists(st.floats(0.0, 10.0), min_size=8, max_size=8),
    st.floats(275.0, 1800.0),
    st.floats(5e4, 1e7),
    st.sampled_from([None, 210.0, 600.0, 3000.0]),
)
def test_temperature_from_enthalpy_returns_where_it_came_from(flows, temperature, pressure, guess):
    flows = np.array(flows)
    assume(flows.sum() > 1e-3)
    # carbon dioxide below 305 K may be a liquid, which no phase here describes
    assume(temperature > 310.0 or flows[6] * pressure < 2e6 * flows.sum())
    stream = Stream.at(MATTER, flows, temperature, pressure)
    back = Stream.from_enthalpy(MATTER, flows, stream.enthalpy, pressure, guess)
    assert back.temperature == pytest.approx(temperature, rel=1e-9)
    assert back.flows == pytest.approx(flows, rel=1e-12, abs=1e-14)
    scale = abs(back.enthalpy) + 8.3 * temperature * flows.sum()
    assert abs(own_enthalpy(back) - back.enthalpy) <= 1e-12 * scale


@pytest.mark.parametrize("share", [0.0, 1e-6, 0.3, 0.999999, 1.0])
def test_boiling_water_is_split_by_its_enthalpy(share):
    pressure = 5e5
    boiling = saturation_temperature(pressure)
    steam = MATTER.gas_enthalpy(WATER, boiling, pressure)
    liquid = MATTER.water_enthalpy(WATER, boiling, pressure)
    wanted = liquid + share * (steam - liquid)
    stream = Stream.from_enthalpy(MATTER, WATER, wanted, pressure)
    assert stream.temperature == pytest.approx(boiling, rel=1e-12)
    assert stream.gas[4] == pytest.approx(share, abs=1e-12)
    assert own_enthalpy(stream) == pytest.approx(wanted, rel=1e-13)


def test_water_boils_steadily_also_with_a_trace_of_air():
    flows = MATTER.vector({"H2O": 1.0, "N2": 1e-10})
    enthalpies = np.linspace(-279e3, -237e3, 15)
    streams = [Stream.from_enthalpy(MATTER, flows, h, 5e5) for h in enthalpies]
    gases = [stream.gas[4] for stream in streams]
    assert gases == sorted(gases)
    assert sum(0.01 < gas < 0.99 for gas in gases) >= 8
    for stream, wanted in zip(streams, enthalpies, strict=True):
        assert own_enthalpy(stream) == pytest.approx(wanted, rel=1e-12)


def test_water_above_its_critical_pressure_is_still_found():
    for enthalpy in (-272e3, -262e3, -255e3, -230e3):
        stream = Stream.from_enthalpy(MATTER, WATER, enthalpy, 300e5)
        assert own_enthalpy(stream) == pytest.approx(enthalpy, rel=1e-9)


def test_an_enthalpy_no_temperature_has_is_an_error():
    for enthalpy in (-1e7, 1e7):
        with pytest.raises(StateError, match="J/mol"):
            Stream.from_enthalpy(MATTER, DRY, enthalpy, 1e5)
    with pytest.raises(StateError, match="finite"):
        Stream.from_enthalpy(MATTER, DRY, float("nan"), 1e5)


def test_a_gas_that_would_half_liquefy_is_refused_not_invented():
    pure, pressure = MATTER.vector({"CO2": 1.0}), 60e5
    enthalpies = [MATTER.gas_enthalpy(pure, t, pressure) for t in range(250, 310)]
    widest = int(np.argmax(np.diff(enthalpies)))  # where the vapour root of the cubic ends
    between = 0.5 * (enthalpies[widest] + enthalpies[widest + 1])
    assert enthalpies[widest + 1] - enthalpies[widest] > 2e3
    with pytest.raises(StateError, match="partly liquefy"):
        Stream.from_enthalpy(MATTER, pure, between, pressure)


def test_a_valve_keeps_enthalpy_and_cools_carbon_dioxide():
    stream = Stream.at(MATTER, MATTER.vector({"CO2": 1.0}), 320.0, 50e5)
    low = stream.at_pressure(1e5)
    assert low.enthalpy == stream.enthalpy
    assert low.temperature < 290.0
    assert stream.at_pressure(50e5) is stream


def test_hydrogen_warms_in_a_valve():
    stream = Stream.at(MATTER, MATTER.vector({"H2": 1.0}), 298.15, 350e5)
    assert stream.at_pressure(1e5).temperature > 298.15


def test_gaseous_looks_for_no_liquid():
    stream = Stream.gaseous(MATTER, WET, 313.15, 30e5)
    assert stream.water.sum() == 0.0
    assert Stream.at(MATTER, WET, 313.15, 30e5).water.sum() > 0.9


def test_scaling_scales_all_that_flows():
    stream = Stream.at(MATTER, WET, 313.15, 30e5)
    double = stream.scaled(2.0)
    assert double.enthalpy == 2 * stream.enthalpy
    assert double.flows == pytest.approx(2 * stream.flows)
    assert double.entropy == pytest.approx(2 * stream.entropy, rel=1e-12)


def test_one_case_and_many_run_through_the_same_code():
    temperatures = np.array([310.0, 500.0, 900.0])
    many = Stream.at(MATTER, WET, temperatures, 30e5)
    assert many.gas.shape == (3, 8)
    for place, temperature in enumerate(temperatures):
        one = Stream.at(MATTER, WET, temperature, 30e5)
        same = many.case(place)
        assert same.enthalpy == one.enthalpy
        assert (same.gas == one.gas).all()
        assert many.entropy[place] == one.entropy
        assert many.exergy()[place] == pytest.approx(one.exergy(), rel=1e-14)
    assert many.fraction("H2") == pytest.approx([4 / 6] * 3)
    back = Stream.from_enthalpy(MATTER, many.flows, many.enthalpy, many.pressure)
    assert back.temperature == pytest.approx(temperatures, rel=1e-10)
    assert many.scaled(np.array([1.0, 2.0, 0.0])).total == pytest.approx([6.0, 12.0, 0.0])
    assert many.at_pressure(1e5).pressure.tolist() == [1e5] * 3


def test_two_case_axes():
    flows = np.broadcast_to(WET, (2, 3, 8))
    many = Stream.gaseous(MATTER, flows, 500.0, 1e5)
    assert many.cases == (2, 3)
    assert many.entropy.shape == (2, 3)
    assert many.case(1).case(2).enthalpy == Stream.gaseous(MATTER, WET, 500.0, 1e5).enthalpy


def test_stacking_needs_one_matter():
    other = Stream.empty(Matter.of(("H2", "N2")))
    with pytest.raises(ValueError, match="different components"):
        Stream.stack([Stream.empty(MATTER), other])
    with pytest.raises(ValueError, match="at least one"):
        Stream.stack([])


@pytest.mark.parametrize(
    ("flows", "temperature"),
    [(DRY, 500.0), (WET, 600.0), (WET, 313.15), (WET, 400.0)],
)
def test_enthalpy_slopes_agree_with_differences(flows, temperature):
    pressure = 30e5
    stream = Stream.at(MATTER, flows, temperature, pressure)
    by_flows, by_temperature = enthalpy_slopes(stream)
    for place in np.flatnonzero(flows):
        step = np.zeros(8)
        step[place] = 1e-4
        up = Stream.at(MATTER, flows + step, temperature, pressure).enthalpy
        down = Stream.at(MATTER, flows - step, temperature, pressure).enthalpy
        assert by_flows[place] == pytest.approx((up - down) / 2e-4, rel=1e-6, abs=1.0)
    up = Stream.at(MATTER, flows, temperature + 1e-3, pressure).enthalpy
    down = Stream.at(MATTER, flows, temperature - 1e-3, pressure).enthalpy
    assert by_temperature == pytest.approx((up - down) / 2e-3, rel=1e-6)


@pytest.mark.parametrize("temperature", [313.15, 600.0])
def test_temperature_slopes_agree_with_differences(temperature):
    stream = Stream.at(MATTER, WET, temperature, 30e5)
    by_flows, by_enthalpy = temperature_slopes(stream)

    def found(flows, enthalpy):
        return Stream.from_enthalpy(MATTER, flows, enthalpy, 30e5, temperature).temperature

    heat = 10.0
    change = found(WET, stream.enthalpy + heat) - found(WET, stream.enthalpy - heat)
    assert by_enthalpy == pytest.approx(change / (2 * heat), rel=1e-5)
    for place in (0, 4, 6):
        step = np.zeros(8)
        step[place] = 1e-4
        change = found(WET + step, stream.enthalpy) - found(WET - step, stream.enthalpy)
        assert by_flows[place] == pytest.approx(change / 2e-4, rel=1e-5)


def test_slopes_see_carbon_dioxide_dissolve_before_any_is_there():
    flows = MATTER.vector({"N2": 1.0, "H2O": 1.0})
    stream = Stream.at(MATTER, flows, 300.0, 30e5)
    by_flows, _ = enthalpy_slopes(stream)
    step = MATTER.vector({"CO2": 1e-6})
    more = Stream.at(MATTER, flows + step, 300.0, 30e5).enthalpy
    assert by_flows[6] == pytest.approx((more - stream.enthalpy) / 1e-6, rel=1e-4)


def test_boiling_water_does_not_get_hotter():
    pressure = 5e5
    boiling = saturation_temperature(pressure)
    steam = MATTER.gas_enthalpy(WATER, boiling, pressure)
    liquid = MATTER.water_enthalpy(WATER, boiling, pressure)
    stream = Stream.from_enthalpy(MATTER, WATER, 0.5 * (steam + liquid), pressure)
    by_flows, by_enthalpy = temperature_slopes(stream)
    assert by_enthalpy == 0.0
    assert not by_flows.any()
    assert enthalpy_slopes(stream)[1] == np.inf
