"""Batches, order and scale: many cases at once, lines in another order, a larger plant."""

import numpy as np
import pytest

from chainflow.equipment.ports import Heat, Light, arriving, times
from chainflow.thermo.streams import Stream
from tests.equipment.cases import CASES, named
from tests.equipment.feeds import enlarged, numbers, rate

SIZES = np.array([1.0, 1.3, 0.9])


def in_cases(flow):
    """The same flow three times in different amounts, as a batch."""
    if isinstance(flow, tuple):
        return tuple(in_cases(part) for part in flow)
    if isinstance(flow, Stream):
        return Stream.stack([flow.scaled(size) for size in SIZES])
    return times(flow, SIZES)


def one_case(flow, place):
    if isinstance(flow, tuple):
        return tuple(one_case(part, place) for part in flow)
    if isinstance(flow, Stream):
        return flow.case(place)
    return _picked(flow, place)


def batched(case):
    feeds = {
        port: flow if port in case.called else in_cases(flow) for port, flow in case.feeds.items()
    }
    return feeds, {port: in_cases(amount) for port, amount in case.asked.items()}


def everything(case):
    """All flows that arrive."""
    return [flow for port in case.feeds for flow in arriving(case.feeds, port)]


@named([case for case in CASES if everything(case)])
def test_a_batch_is_its_cases_one_by_one(case):
    feeds, asked = batched(case)
    together = case.equipment.run(feeds, asked, case.site)
    for place in range(len(SIZES)):
        alone = case.run(
            feeds={p: f if p in case.called else one_case(f, place) for p, f in feeds.items()},
            asked={p: one_case(a, place) for p, a in asked.items()},
        )
        for mine, theirs in ((together.outlets, alone.outlets), (together.drawn, alone.drawn)):
            assert mine.keys() == theirs.keys()
            for port, flow in theirs.items():
                assert numbers(_picked(mine[port], place)) == pytest.approx(
                    numbers(flow), rel=1e-15
                )
        assert np.broadcast_to(together.power, 3)[place] == pytest.approx(alone.power, rel=1e-15)
        heat = sum(
            np.broadcast_to(d.heat, 3)[place] for d in together.duties if d.met_by != "power"
        )
        assert heat == pytest.approx(alone.heat, rel=1e-12)
        for name, value in alone.results.items():
            assert np.broadcast_to(together.results[name], 3)[place] == pytest.approx(
                value, rel=1e-15
            )


def _picked_piece(piece, place):
    row = (piece.rate, piece.start, piece.end, piece.mean)
    return Heat(*(float(np.broadcast_to(number, 3)[place]) for number in row))


def _picked(flow, place):
    if isinstance(flow, Stream):
        return flow.case(place) if flow.cases else flow
    if isinstance(flow, Heat):
        pieces = [_picked_piece(piece, place) for piece in flow.pieces]
        return Heat.total([p for p in pieces if p.rate != 0.0] or pieces[:1])
    return flow.case(place) if isinstance(flow, Light) else float(np.broadcast_to(flow, 3)[place])


@named([case for case in CASES if len(everything(case)) > len(case.feeds)])
def test_the_order_of_lines_at_an_inlet_is_of_no_account(case):
    turned = {
        port: flow[::-1] if isinstance(flow, tuple) else flow for port, flow in case.feeds.items()
    }
    first, second = case.run(), case.run(feeds=turned)
    for one, other in ((first.outlets, second.outlets), (first.drawn, second.drawn)):
        for port in one:
            assert numbers(other[port]) == pytest.approx(numbers(one[port]), rel=1e-12, abs=1e-300)
    assert second.power == pytest.approx(first.power, rel=1e-12)
    assert second.heat == pytest.approx(first.heat, rel=1e-12)


# ---------------------------------------------------------------------------- scale
def enlarged_settings(case, factor):
    piece = case.equipment
    for path in case.extensive:
        piece = piece.with_setting(path, piece.setting(path) * factor)
    return piece


@named(CASES)
def test_a_thousand_times_as_much_gives_a_thousand_times_as_much(case):
    factor = 1000.0
    feeds = {p: f if p in case.called else enlarged(f, factor) for p, f in case.feeds.items()}
    asked = {p: enlarged(a, factor) for p, a in case.asked.items()}
    small, large = case.run(), case.run(enlarged_settings(case, factor), feeds, asked)
    for one, other in ((small.outlets, large.outlets), (small.drawn, large.drawn)):
        for port, flow in one.items():
            assert numbers(other[port]) == pytest.approx(
                numbers(enlarged(flow, factor)), rel=1e-10, abs=1e-9
            )
    assert large.power == pytest.approx(factor * small.power, rel=1e-10)
    assert [d.purpose for d in large.duties] == [d.purpose for d in small.duties]
    for one, other in zip(small.duties, large.duties, strict=True):
        assert other.heat == pytest.approx(factor * one.heat, rel=1e-9, abs=1e-3)
        assert other.mean == pytest.approx(one.mean, rel=1e-9)


# --------------------------------------------------------------------- nothing flows
def nothing(flow):
    if isinstance(flow, tuple):
        return tuple(nothing(part) for part in flow)
    return enlarged(flow, 0.0)


@named(CASES)
def test_nothing_in_gives_nothing_out(case):
    feeds = {p: f if p in case.called else nothing(f) for p, f in case.feeds.items()}
    asked = {p: nothing(a) for p, a in case.asked.items()}
    outcome = case.run(enlarged_settings(case, 0.0) if case.extensive else None, feeds, asked)
    for flow in outcome.outlets.values():
        value = flow.total if isinstance(flow, Stream) else rate(flow)
        assert value == 0.0
        assert np.isfinite(numbers(flow)).all()
    assert all(rate(amount) == 0.0 for amount in outcome.drawn.values())
    assert outcome.power == 0.0
    assert all(duty.heat == 0.0 for duty in outcome.duties)
    assert np.isfinite(list(outcome.results.values())).all()
