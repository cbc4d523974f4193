"""How heat needs are met: own heat, ambient, lines, bought."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

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


def test_a_part_of_a_duty_keeps_the_shape_of_its_heat():
    parts = ((-60.0, 500.0, 450.0, 474.6), (-40.0, 450.0, 400.0, 424.5))
    whole = Duty("cooling", -100.0, 500.0, 400.0, 453.2, curve=parts)
    half = whole.part(-50.0, "heat")
    assert half.curve == ((-30.0, *parts[0][1:]), (-20.0, *parts[1][1:]))
    assert [(p.rate, p.start) for p in half.flow.pieces] == [(30.0, 500.0), (20.0, 450.0)]
    assert settle([whole], AMBIENT, NONE, HEAT).offered == whole.flow
