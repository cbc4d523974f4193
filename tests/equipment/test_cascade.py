"""The heat cascade and the match of heat given with heat needed: laws, whatever the heats."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from chainflow.equipment.cascade import cascade, composite
from chainflow.equipment.heat_matching import match
from chainflow.equipment.ports import MOST_PARTS, Heat, closest_groups
from tests.equipment.feeds import CONDENSING, STEAM

APPROACHES = st.floats(0.0, 60.0)
TEMPERATURES = st.floats(250.0, 1500.0)
FLOWS = st.one_of(
    st.tuples(st.floats(0.0, 1e3), TEMPERATURES, TEMPERATURES),
    st.tuples(st.floats(1.0, 1e3), TEMPERATURES).map(lambda row: (row[0], row[1], row[1])),
)
HEATS = st.lists(FLOWS, max_size=5).map(lambda rows: [Heat.between(*row) for row in rows])


def size_of(*groups):
    return sum(h.rate for group in groups for h in group) + 1e-12


def above(heats, level):
    """Heat above a temperature, by the definition and not by intervals."""
    total = 0.0
    for heat in heats:
        for piece in heat.pieces:
            span = piece.hottest - piece.coldest
            share = (piece.hottest - level) / span if span > 1e-6 else piece.hottest >= level
            total += piece.rate * min(max(float(share), 0.0), 1.0)
    return total


def test_heat_that_is_not_hot_enough_meets_nothing():
    found = cascade([Heat.between(100.0, 350.0, 340.0)], [Heat.between(40.0, 400.0, 420.0)])
    assert (found.hot_utility, found.cold_utility) == (40.0, 100.0)


def test_heat_of_one_temperature_meets_a_need_of_the_same():
    hot, cold = [Heat.between(100.0, 500.0, 500.0)], [Heat.between(40.0, 500.0, 500.0)]
    found = cascade(hot, cold)
    assert (found.hot_utility, found.cold_utility, found.pinch) == (0.0, 60.0, None)
    (rest,) = match(hot, cold, 0.0).rest
    assert (rest.rate[0], rest.hot[0], rest.cold[0]) == (60.0, 500.0, 500.0)
    at_once = cascade([Heat.between(100.0, 510.0, 510.0)], cold, 10.0)
    assert at_once.hot_utility == 0.0


def test_an_empty_cascade():
    found = cascade([], [])
    assert (found.hot_utility, found.cold_utility, found.pinch) == (0.0, 0.0, None)
    assert found.grand_composite == composite([]) == []
    assert match([], [], 10.0).rest == ()


@given(HEATS, HEATS, APPROACHES)
def test_the_cascade_keeps_the_heat_of_every_interval(hot, cold, approach):
    """What leaves a level less what reaches the next is what the interval needs net."""
    found, size = cascade(hot, cold, approach), size_of(hot, cold)
    balance = sum(h.rate for h in hot) + found.hot_utility - sum(h.rate for h in cold)
    assert balance == pytest.approx(found.cold_utility, abs=1e-9 * size)
    half = 0.5 * approach
    for k, level in enumerate(found.levels[1:], start=1):
        just = level + 2e-6  # below every level but this one; levels are 1e-6 K apart or more
        if found.levels[k - 1] - level < 1e-3:
            continue
        net = above(hot, just + half) - above(cold, just - half)
        most = 1e-9 * size + 1e-5 * size / (found.levels[k - 1] - level)
        assert found.arriving[k] == pytest.approx(found.hot_utility + net, abs=most)
    assert (found.flow >= 0.0).all()
    if found.levels.size:
        assert found.passing[-1] == pytest.approx(found.cold_utility, abs=1e-9 * size)


@given(HEATS, HEATS, APPROACHES)
def test_the_least_heat_is_the_largest_deficit(hot, cold, approach):
    found, size, half = cascade(hot, cold, approach), size_of(hot, cold), 0.5 * approach
    ends = [e - half for h in hot for e in (h.start, h.end)]
    ends += [e + half for h in cold for e in (h.start, h.end)]
    deficits = [
        above(cold, e - half + side) - above(hot, e + half + side)
        for e in ends
        for side in (-2e-6, 2e-6)
    ]
    narrow = min((h.hottest - h.coldest for h in (*hot, *cold) if h.start != h.end), default=1.0)
    if narrow > 1e-2:
        assert found.hot_utility == pytest.approx(max([0.0, *deficits]), abs=1e-3 * size)


@given(HEATS, HEATS, APPROACHES, APPROACHES)
def test_a_wider_approach_never_saves(hot, cold, one, other):
    narrow, wide = sorted((one, other))
    least = [cascade(hot, cold, a).hot_utility for a in (narrow, wide)]
    assert least[1] >= least[0] - 1e-9 * size_of(hot, cold)


@given(HEATS, HEATS, APPROACHES, st.randoms(use_true_random=False))
def test_the_order_is_of_no_account(hot, cold, approach, random):
    mixed = [list(hot), list(cold)]
    for heats in mixed:
        random.shuffle(heats)
    one, other = cascade(hot, cold, approach), cascade(*mixed, approach)
    size = size_of(hot, cold)
    assert other.hot_utility == pytest.approx(one.hot_utility, abs=1e-9 * size)
    assert other.flow == pytest.approx(one.flow, abs=1e-9 * size)
    first, second = match(hot, cold, approach), match(*mixed, approach)
    assert second.missing[0] == pytest.approx(first.missing[0], abs=1e-9 * size)
    assert entropy(second.rest) == pytest.approx(entropy(first.rest), abs=1e-9 * size)


@given(HEATS, HEATS, APPROACHES)
def test_the_match_meets_as_much_as_the_problem_table_allows(hot, cold, approach):
    table, found, size = (
        cascade(hot, cold, approach),
        match(hot, cold, approach),
        size_of(hot, cold),
    )
    assert found.missing[0] == pytest.approx(table.hot_utility, abs=1e-9 * size)
    assert sum(p.rate[0] for p in found.wanted) == pytest.approx(found.missing[0], abs=1e-9 * size)
    rest = sum(p.rate[0] for p in found.rest)
    assert rest == pytest.approx(table.cold_utility, abs=1e-9 * size)
    wanted = sum(h.rate for h in cold)
    assert sum(found.met) + found.missing[0] == pytest.approx(wanted, abs=1e-9 * size)
    for heat, met in zip(cold, found.met, strict=True):
        assert -1e-9 * size <= met <= heat.rate + 1e-9 * size


def entropy(pieces):
    return sum(float(p.rate[0] / p.mean[0]) for p in pieces)


@given(HEATS, HEATS, APPROACHES)
def test_the_match_makes_entropy(hot, cold, approach):
    """What goes in, the heat asked for included, carries no more entropy than what comes out."""
    found = match(hot, cold, approach)
    entering = sum(h.rate / h.mean for h in hot) + entropy(found.wanted)
    leaving = sum(h.rate / h.mean for h in cold) + entropy(found.rest)
    assert leaving - entering >= -1e-9 * (leaving + entering)


@given(HEATS, HEATS, APPROACHES)
def test_what_is_asked_for_meets_what_is_missing(hot, cold, approach):
    wanted = [
        Heat(*(float(n[0]) for n in (p.rate, p.hot, p.cold, p.mean)))
        for p in match(hot, cold, approach).wanted
    ]
    again = match([*hot, *wanted], cold, approach)
    assert again.missing[0] == pytest.approx(0.0, abs=1e-7 * size_of(hot, cold))


@given(HEATS)
def test_a_composite_curve_carries_all_heat_and_only_rises(heats):
    points = composite(heats)
    size = size_of(heats)
    if points:
        assert points[-1][0] == pytest.approx(sum(h.rate for h in heats), abs=1e-9 * size)
        heat, level = np.array(points).T
        assert (np.diff(heat) >= 0.0).all()
        assert (np.diff(level) >= 0.0).all()


def test_too_many_pieces_are_joined_where_they_are_closest():
    assert closest_groups([(9, 8), (8, 7.9), (5, 4), (4, 1)], 3) == [[0, 1], [2], [3]]
    many = [Heat.between(1.0 + i, 900.0 - 10 * i, 895.0 - 10 * i) for i in range(40)]
    whole = Heat.total(many)
    assert len(whole.parts) == MOST_PARTS
    assert sum(p.rate for p in whole.pieces) == pytest.approx(sum(h.rate for h in many))
    assert sum(p.rate / p.mean for p in whole.pieces) == pytest.approx(
        sum(h.rate / h.mean for h in many), rel=1e-12
    )


def test_the_shape_of_heat_counts():
    """A condensing gas gives less above the boiling point than a straight line would."""
    straight = Heat(CONDENSING.rate, CONDENSING.start, CONDENSING.end, CONDENSING.mean)
    by_shape, by_line = (cascade([h], [STEAM], 10.0).hot_utility for h in (CONDENSING, straight))
    # above 463.0 K: the gas gives 1e4 * 137 / 167; the steam wants 4e4 + 6e3 at or above 453 K
    assert by_shape == pytest.approx(4.6e4 - 1e4 * 137.0 / 167.0, rel=1e-9)
    assert by_line < 0.75 * by_shape


# --- slopes --------------------------------------------------------------------------------------


def random_heats(random, count):
    heats = []
    for _ in range(count):
        start, end = random.uniform(320.0, 900.0, 2)
        level = float(random.uniform(320.0, 900.0))
        ends = (level, level) if random.uniform() < 0.2 else (float(start), float(end))
        heats.append(Heat.between(float(random.uniform(1.0, 100.0)), *ends))
    return heats


def moved(heats, place, step):
    rows = [[h.rate, h.start, h.end, h.mean] for h in heats]
    rows[place // 4][place % 4] += step
    return [Heat(*row) for row in rows]


def flat(found):
    pieces = [n for p in (*found.rest, *found.wanted) for n in (p.rate, p.hot, p.cold, p.mean)]
    return np.array([found.missing, *pieces])


@pytest.mark.parametrize("seed", range(40))
def test_slopes_of_the_match_agree_with_differences(seed):
    random = np.random.default_rng(seed)
    hot, cold = random_heats(random, 4), random_heats(random, 4)
    compared = 0
    found = flat(match(hot, cold, 10.0, slopes=True))
    for place in range(32):
        heat = (*hot, *cold)[place // 4]
        if heat.start == heat.end and place % 4 in (1, 2):
            continue  # moving one end alone makes another kind of piece of it
        step = 1e-5 * (heat.rate, heat.start, heat.end, heat.mean)[place % 4]
        sides = [flat(match(*(_one_moved(hot, cold, place, s * step)), 10.0)) for s in (1.0, -1.0)]
        if not all(side.shape[0] == found.shape[0] for side in sides):
            continue  # a kink between
        numeric = (sides[0][:, 0] - sides[1][:, 0]) / (2.0 * step)
        given_ = found[:, 1 + place]
        assert given_ == pytest.approx(numeric, rel=1e-5, abs=1e-5 * (1 + np.abs(numeric).max()))
        compared += 1
    assert compared > 15


def _one_moved(hot, cold, place, step):
    if place < 4 * len(hot):
        return moved(hot, place, step), cold
    return hot, moved(cold, place - 4 * len(hot), step)
