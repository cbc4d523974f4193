from math import exp

import pytest

from chainflow.equipment.base import Site
from chainflow.equipment.battery import Battery
from chainflow.equipment.published import lithium_ion_ranges
from tests.equipment.feeds import MATTER

PLAIN = {"efficiency": "86 %", "duration": "4 h"}


def run(charge=1e6, **settings):
    battery = Battery.model_validate({**PLAIN, **settings})
    return battery.operate({"charge": (charge,)}, {}, Site(MATTER))


def test_round_trip_and_size_by_hand():
    outcome = run()
    assert outcome.outlets["discharge"] == pytest.approx(0.86e6, rel=1e-15)
    assert outcome.results["capacity_J"] == pytest.approx(0.86e6 * 4 * 3600, rel=1e-15)
    assert outcome.results["lost_W"] == pytest.approx(0.14e6, rel=1e-12)


def test_leakage_is_exponential_in_the_time_kept():
    # a share lambda of what is there leaks in each time: N = N0 exp(-lambda t)
    leaking = run(self_discharge="3 %/d", kept_for="2 d")
    assert leaking.outlets["discharge"] == pytest.approx(0.86e6 * exp(-0.06), rel=1e-13)


def test_the_time_kept_is_the_duration_unless_given():
    assert run(self_discharge="24 %/d").outlets["discharge"] == pytest.approx(
        0.86e6 * exp(-0.04), rel=1e-13
    )


def test_a_part_that_stays_makes_it_larger():
    whole, part = run(), run(usable="80 %")
    assert part.results["capacity_J"] == pytest.approx(whole.results["capacity_J"] / 0.8, rel=1e-14)
    assert part.outlets == whole.outlets
    assert part.results["energy_J_kg"] == pytest.approx(0.8 * whole.results["energy_J_kg"])


def test_cells_lie_within_their_published_range():
    # 100 to 265 Wh/kg and 250 to 700 Wh/L at cell level: web comparison of energy storage (read)
    results = run().results
    assert 100 < results["energy_J_kg"] / 3600 < 265
    assert 250 < results["energy_J_m3"] / 3600 / 1000 < 700
    assert lithium_ion_ranges.SPECIFIC_ENERGY == (100.0, 265.0)


@pytest.mark.parametrize(
    "wrong",
    [
        {"efficiency": "0 %"},
        {"efficiency": "101 %"},
        {"duration": "0 h"},
        {"self_discharge": "-1 %/d"},
        {"self_discharge": "3 %"},
        {"usable": "0 %"},
        {"mass": "0 kg/kWh"},
        {"volume": "4 kg/kWh"},
    ],
)
def test_wrong_settings_are_refused(wrong):
    with pytest.raises(ValueError, match=next(iter(wrong))):
        run(**wrong)
