"""Isentropic changes: closure, there and back, limits, slopes."""

import numpy as np
import pytest

from chainflow.thermo.components import DEFAULT_COMPONENTS, Matter
from chainflow.thermo.compression import (
    isentropic,
    isentropic_slopes,
    isentropic_temperature,
    isentropic_work,
)
from chainflow.thermo.validity import StateError

MATTER = Matter.of(DEFAULT_COMPONENTS)
FLOWS = MATTER.vector({"H2": 4.0, "CO2": 1.0, "CH4": 0.1})


@pytest.mark.parametrize("end", [2e5, 9.99e5, 10e5, 30e5, 300e5])
def test_entropy_stays_and_work_is_the_rise_of_enthalpy(end):
    found = isentropic(MATTER, FLOWS, 400.0, 10e5, end)
    start, last = MATTER.gas_state(FLOWS, 400.0, 10e5), MATTER.gas_state(FLOWS, found[0], end)
    assert last.entropy == pytest.approx(start.entropy, rel=1e-12)
    assert found.work == pytest.approx(last.enthalpy - start.enthalpy, rel=1e-9, abs=1e-6)
    assert isentropic_work(MATTER, FLOWS, 400.0, 10e5, end) == found.work
    back = isentropic_temperature(MATTER, FLOWS, found.temperature, end, 10e5)
    assert back == pytest.approx(400.0, rel=1e-10)


def test_argon_follows_the_exponent_of_a_monatomic_gas():
    argon = MATTER.vector({"Ar": 1.0})
    hot = isentropic_temperature(MATTER, argon, 300.0, 10.0, 80.0)
    assert hot == pytest.approx(300.0 * 8.0**0.4, rel=1e-5)  # (gamma - 1)/gamma = 2/5


def test_without_flow_nothing_happens():
    assert isentropic(MATTER, np.zeros(8), 300.0, 1e5, 10e5) == (300.0, 0.0, 0.0)
    slopes = isentropic_slopes(MATTER, np.zeros(8), 300.0, 1e5, 10e5, 300.0)
    assert slopes.work_by_start == 0.0


def test_leaving_the_data_is_an_error():
    with pytest.raises(StateError, match="take more stages"):
        isentropic(MATTER, FLOWS, 3000.0, 1e3, 1e8)
    with pytest.raises(StateError, match="ends"):
        isentropic(MATTER, MATTER.vector({"N2": 1.0}), 250.0, 50e5, 1e5)
    with pytest.raises(StateError, match="pressure"):
        isentropic(MATTER, FLOWS, 300.0, 1e5, float("nan"))


def test_slopes_agree_with_differences():
    start, low, high = 330.0, 20e5, 70e5
    end = isentropic_temperature(MATTER, FLOWS, start, low, high)
    slopes = isentropic_slopes(MATTER, FLOWS, start, low, high, end)
    up = isentropic(MATTER, FLOWS, start + 1e-3, low, high)
    down = isentropic(MATTER, FLOWS, start - 1e-3, low, high)
    change = (up.temperature - down.temperature) / 2e-3
    assert slopes.temperature_by_start == pytest.approx(change, rel=1e-6)
    assert slopes.work_by_start == pytest.approx((up.work - down.work) / 2e-3, rel=1e-6)
    for place in np.flatnonzero(FLOWS):
        step = np.zeros(8)
        step[place] = 1e-4
        up = isentropic(MATTER, FLOWS + step, start, low, high)
        down = isentropic(MATTER, FLOWS - step, start, low, high)
        change = (up.temperature - down.temperature) / 2e-4
        assert slopes.temperature_by_flows[place] == pytest.approx(change, rel=1e-5, abs=1e-6)
        work = (up.work - down.work) / 2e-4
        assert slopes.work_by_flows[place] == pytest.approx(work, rel=1e-6)
