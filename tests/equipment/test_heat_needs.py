"""How heat needs are met: own heat, ambient, lines, bought; and the heat cascade."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from chainflow.equipment.cascade import cascade
from chainflow.equipment.heat_needs import Duty, settle
from chainflow.equipment.ports import Heat, mean_temperature

AMBIENT = 298.15
NONE, POWER, HEAT = frozenset(), frozenset({"power"}), frozenset({"heat"})


def need(heat, start, end):
    return Duty.between("need", heat, start, end)


def met(needs, inlets=NONE, outlets=NONE):
    found = settle(needs, AMBIENT, inlets, outlets)
    shares = {}
    for duty in found.duties:
        shares[duty.met_by] = shares.get(duty.met_by, 0.0) + duty.heat
    return {way: heat for way, heat in shares.items() if heat}, found


# --------------------------------------------------------------------------------- one by one
def test_a_need_that_nothing_meets_is_bought():
    assert met([need(100.0, 400.0, 500.0)])[0] == {"bought": 100.0}


def test_a_linked_heat_port_comes_before_power():
    assert met([need(100.0, 400.0, 500.0)], POWER)[0] == {"power": 100.0}
    shares, found = met([need(100.0, 400.0, 500.0)], POWER | HEAT)
    assert shares == {"heat": 100.0}
    assert (found.power, found.heat.rate) == (0.0, 100.0)


def test_heat_given_off_goes_to_its_line_or_to_the_ambient():
    assert met([need(-100.0, 500.0, 400.0)])[0] == {"ambient": -100.0}
    shares, found = met([need(-100.0, 500.0, 400.0)], outlets=HEAT)
    assert shares == {"heat": -100.0}
    assert found.offered == Heat(100.0, 500.0, 400.0, mean_temperature(500.0, 400.0))


def test_own_heat_that_is_hot_enough_comes_first():
    needs = [need(60.0, 300.0, 590.0), need(-100.0, 593.15, 593.15)]
    shares, found = met(needs, POWER, HEAT)
    assert shares == {"heat": -40.0}  # own heat cancels
    assert sum(d.heat for d in found.duties if d.met_by == "own") == 0.0
    assert found.offered.rate == pytest.approx(40.0)


def test_own_heat_that_is_too_cold_is_no_help():
    needs = [need(60.0, 300.0, 700.0), need(-100.0, 593.15, 593.15)]
    assert met(needs)[0] == {"bought": 60.0, "ambient": -100.0}


def test_the_hottest_need_takes_the_hottest_heat():
    needs = [
        need(50.0, 400.0, 450.0),
        need(50.0, 600.0, 650.0),
        need(-50.0, 700.0, 700.0),
        need(-50.0, 460.0, 460.0),
    ]
    assert met(needs)[0] == {}


def test_heat_below_the_ambient_is_free_and_cold_is_bought():
    assert met([need(100.0, 280.0, 290.0)])[0] == {"ambient": 100.0}
    assert met([need(-100.0, 290.0, 280.0)])[0] == {"bought": -100.0}


@pytest.mark.parametrize(
    ("heat", "ways"), [(100.0, ("ambient", "bought")), (-100.0, ("bought", "ambient"))]
)
def test_a_duty_across_the_ambient_is_parted_there(heat, ways):
    start, end = (278.15, 318.15) if heat > 0 else (318.15, 278.15)
    shares, found = met([need(heat, start, end)])
    assert shares == {ways[0]: pytest.approx(heat / 2), ways[1]: pytest.approx(heat / 2)}
    ends = {(d.met_by, d.coldest, d.hottest) for d in found.duties}
    assert ends == {(ways[0], 278.15, AMBIENT), (ways[1], AMBIENT, 318.15)}


def test_what_is_settled_already_stays():
    loss = Duty("loss", -5.0, AMBIENT, AMBIENT, AMBIENT, "ambient")
    assert loss in settle([loss, need(1.0, 400.0, 410.0)], AMBIENT, NONE, NONE).duties


TEMPERATURES = st.floats(250.0, 1500.0)
NEEDS = st.lists(st.tuples(st.floats(-1e3, 1e3), TEMPERATURES, TEMPERATURES), max_size=5).map(
    lambda rows: [need(*row) for row in rows]
)


@given(NEEDS, st.sampled_from([NONE, POWER, HEAT, POWER | HEAT]), st.sampled_from([NONE, HEAT]))
def test_settling_keeps_heat_and_entropy(needs, inlets, outlets):
    found = settle(needs, AMBIENT, inlets, outlets)
    size = sum(abs(d.heat) for d in needs)
    assert sum(d.heat for d in found.duties) == pytest.approx(
        sum(d.heat for d in needs), abs=1e-9 * size + 1e-12
    )
    entropy = sum(d.heat / d.mean for d in needs)
    assert sum(d.heat / d.mean for d in found.duties) == pytest.approx(
        entropy, abs=1e-9 * size + 1e-12
    )
    assert sum(d.heat for d in found.duties if d.met_by == "own") == pytest.approx(
        0.0, abs=1e-9 * size + 1e-12
    )
    for duty in found.duties:
        assert duty.met_by in ("power", "heat", "own", "ambient", "bought")


# -------------------------------------------------------------------------------- the cascade
def flow(rate, start, end):
    return Heat.between(rate, start, end)


def test_the_cascade_of_a_textbook():
    # Linnhoff and Flower's four-stream problem as it stands in the Pinch Analysis handbooks
    # (Kemp, Pinch Analysis and Process Integration, 2nd ed. 2007, table 2.2; from memory):
    # approach 10 K, hot utility 20 kW, cold utility 60 kW, pinch at 85 degC (shifted)
    hot = [
        flow(3.0 * 110, 170.0 + 273.15, 60.0 + 273.15),
        flow(1.5 * 120, 150.0 + 273.15, 30.0 + 273.15),
    ]
    cold = [
        flow(2.0 * 115, 20.0 + 273.15, 135.0 + 273.15),
        flow(4.0 * 60, 80.0 + 273.15, 140.0 + 273.15),
    ]
    found = cascade(hot, cold, 10.0)
    assert found.hot_utility == pytest.approx(20.0)
    assert found.cold_utility == pytest.approx(60.0)
    assert found.pinch - 273.15 == pytest.approx(85.0)


def test_heat_that_is_not_hot_enough_meets_nothing():
    found = cascade([flow(100.0, 350.0, 340.0)], [flow(40.0, 400.0, 420.0)])
    assert (found.hot_utility, found.cold_utility) == (40.0, 100.0)


def test_heat_of_one_temperature_meets_a_need_of_the_same():
    found = cascade([flow(100.0, 500.0, 500.0)], [flow(40.0, 500.0, 500.0)])
    assert (found.hot_utility, found.cold_utility) == (0.0, 60.0)
    assert found.rest == Heat(60.0, 500.0, 500.0, 500.0)


def test_an_empty_cascade():
    found = cascade([], [])
    assert (found.hot_utility, found.cold_utility, found.pinch, found.rest) == (
        0.0,
        0.0,
        None,
        None,
    )


HEATS = st.lists(st.tuples(st.floats(1.0, 1e3), TEMPERATURES, TEMPERATURES), max_size=4)


@given(HEATS, HEATS)
def test_the_cascade_keeps_the_heat(hot, cold):
    given_, needed = [flow(*row) for row in hot], [flow(*row) for row in cold]
    found = cascade(given_, needed)
    size = sum(h.rate for h in (*given_, *needed)) + 1e-12
    balance = sum(h.rate for h in given_) + found.hot_utility - sum(h.rate for h in needed)
    assert balance == pytest.approx(found.cold_utility, abs=1e-9 * size)
    assert found.hot_utility >= -1e-9 * size
    assert found.cold_utility >= -1e-9 * size
    assert found.hot_utility <= sum(h.rate for h in needed) * (1 + 1e-9)


@given(HEATS, HEATS, st.floats(0.0, 50.0))
def test_a_wider_approach_never_saves(hot, cold, approach):
    given_, needed = [flow(*row) for row in hot], [flow(*row) for row in cold]
    size = sum(h.rate for h in (*given_, *needed)) + 1e-12
    assert (
        cascade(given_, needed, approach).hot_utility
        >= cascade(given_, needed).hot_utility - 1e-9 * size
    )
