"""Engineering economics against print.

ASHRAE Pocket Guide for HVAC 2013, table of capital recovery factors (read; printed to 5e-6), and
the closed form i(1+i)^n/((1+i)^n-1), which agrees with engineering-economics tables.
"""

import pytest

from chainflow.accounts.costs import capital_recovery_factor, cost_account
from tests.plants import solved


@pytest.mark.parametrize(
    ("interest", "years", "printed", "tolerance"),
    [
        (0.08, 10, 0.14903, 5e-6),
        (0.10, 10, 0.16275, 5e-6),
        (0.045, 16, 0.08902, 5e-6),
        (0.08, 20, 0.101852, 1e-6),
        (0.07, 20, 0.094393, 1e-6),
        (0.05, 20, 0.080243, 1e-6),
        (0.06, 25, 0.078227, 1e-6),
    ],
)
def test_capital_recovery_factors(interest, years, printed, tolerance):
    assert capital_recovery_factor(interest, years) == pytest.approx(printed, abs=tolerance)


@pytest.mark.parametrize("interest", [1e-13, 1e-9, 1e-6])
def test_tiny_interest_is_nearly_none(interest):
    # series of the closed form: 1/n + (n + 1) i / 2n + O(i^2)
    series = 1 / 20 + 21 * interest / 40
    assert capital_recovery_factor(interest, 20) == pytest.approx(series, rel=1e-9)


def test_present_worth_factor():
    # 8 %, 20 a: 9.8181, 1e-4
    assert 1 / capital_recovery_factor(0.08, 20) == pytest.approx(9.8181, abs=1e-4)


def test_levelised_cost_of_hydrogen():
    """1000 per kW of current, 7 %, 20 a, 3 %/a, 4000 h, 52 kWh/kg, power at 40 per MWh: 3.697."""
    text = """
components: [H2, O2, H2O]
costs:
  currency: crowns
  interest: 7 %
  lifetime: 20 a
  hours: 4000 h
  fixed: 3 %
  equipment:
    stack: {size: stack.direct_current, purchase: 1000 crowns/kW}
  bought: {power: 40 crowns/MWh, material: {water: 0 crowns/t}}
equipment:
  grid:  {kind: grid}
  water: {kind: supply, composition: {H2O: 1}, temperature: 25 degC, pressure: 10 bar}
  stack: {kind: electrolyser, energy_use: 52 kWh/kg, temperature: 60 degC, pressure: 10 bar,
           hydrogen: 100 kg/h}
  town:  {kind: product}
  sky:   {kind: vent}
lines:
  - grid.power -> stack.power
  - water -> stack.water
  - stack.hydrogen -> town
  - stack.oxygen -> sky
"""
    costs = cost_account(solved(text))
    assert costs.fuel_cost / costs.fuel_mass == pytest.approx(3.697, abs=0.002)
    assert costs.unpriced == ()
    assert costs.as_data()["levelised"]["fuel"]["per_kg"] == costs.fuel_cost / costs.fuel_mass
