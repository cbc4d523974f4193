"""What equipment may and may not do: nothing is changed, remembered, invented or left out."""

from dataclasses import replace

import numpy as np
import pytest

from chainflow.equipment.ports import ANY_NAME, Role, arriving
from chainflow.thermo.streams import Stream
from tests.equipment.cases import CASES, named
from tests.equipment.feeds import numbers


@named(CASES)
def test_what_is_handed_in_is_not_changed(case):
    before = {port: [numbers(f).copy() for f in arriving(case.feeds, port)] for port in case.feeds}
    asked, settings = dict(case.asked), case.equipment.model_dump()
    outcome = case.run()
    case.equipment.slopes(case.feeds, case.asked, case.site, outcome)
    for port, flows in before.items():
        for old, flow in zip(flows, arriving(case.feeds, port), strict=True):
            assert (numbers(flow) == old).all()
            if isinstance(flow, Stream):
                assert not flow.gas.flags.writeable
                assert not flow.water.flags.writeable
    assert case.asked == asked
    assert case.equipment.model_dump() == settings


@named(CASES)
def test_the_same_question_gets_the_same_answer(case):
    """No memory: nothing that ran in between changes a result."""
    first = case.run()
    for other in CASES[::25]:
        other.run()
    second = case.run()
    for port, flow in first.outlets.items():
        assert (numbers(second.outlets[port]) == numbers(flow)).all()
    assert second.duties == first.duties
    assert second.results == first.results


@named(CASES)
def test_what_leaves_is_finite_and_not_negative(case):
    outcome = case.run()
    for flow in outcome.outlets.values():
        assert np.isfinite(numbers(flow)).all()
        if isinstance(flow, Stream):
            assert (flow.gas >= 0.0).all()
            assert (flow.water >= 0.0).all()
    assert np.isfinite([outcome.power, outcome.heat, *outcome.results.values()]).all()


@named(CASES)
def test_only_what_is_wrong_on_purpose_is_unmet(case):
    assert bool(case.run().unmet) == case.unmet


@named(CASES)
def test_results_are_listed_by_the_class(case):
    assert set(case.run().results) <= set(type(case.equipment).gives)


@named(CASES)
def test_only_real_ports_are_used(case):
    outcome, piece = case.run(), case.equipment
    for port in outcome.outlets:
        assert piece.port(port, inlet=False) is not None, port
    for port in outcome.drawn:
        assert piece.port(port, inlet=True).role is Role.CALLS, port
    for port in case.feeds:
        assert piece.port(port, inlet=True) is not None


@named(CASES)
def test_detail_changes_no_flow(case):
    """The short answer that the loops use is the long one without its remarks."""
    long = case.run()
    short = case.equipment.operate(case.feeds, case.asked, replace(case.site, detail=False))
    for one, other in ((long.outlets, short.outlets), (long.drawn, short.drawn)):
        assert one.keys() == other.keys()
        for port, flow in one.items():
            assert numbers(other[port]) == pytest.approx(numbers(flow), rel=1e-12)
    assert short.power == pytest.approx(long.power, rel=1e-12)
    assert short.heat == pytest.approx(long.heat, rel=1e-12)


@named([case for case in CASES if case.asked and case.equipment.kind in ("supply", "store")])
def test_one_mol_of_what_is_served_is_what_leaves(case):
    sample = case.equipment.sample(case.feeds, case.asked, case.site)
    for port, amount in case.asked.items():
        one = sample.get(port, sample.get(ANY_NAME))
        assert one.total == pytest.approx(1.0, rel=1e-14)
        assert numbers(case.run().outlets[port]) == pytest.approx(
            numbers(one.scaled(amount)), rel=1e-12
        )


# ------------------------------------------------------------------------- structure
@named(CASES)
def test_pressures_are_those_that_were_settled_beforehand(case):
    arriving_at = {
        port: tuple(float(f.pressure) for f in arriving(case.feeds, port) if isinstance(f, Stream))
        for port in case.feeds
    }
    known = {port: levels for port, levels in arriving_at.items() if levels}
    settled = case.equipment.outlet_pressures(known)
    for port, flow in case.run().outlets.items():
        if isinstance(flow, Stream):
            level = settled.get(port, settled.get(ANY_NAME))
            assert float(flow.pressure) == pytest.approx(level, rel=1e-12)


@named(CASES)
def test_no_species_turns_up_where_it_was_not_expected(case):
    """What the structural tests think can be at an outlet covers what really is there."""
    outcome, matter, piece = case.run(), case.site.matter, case.equipment
    outlets = [port for port, flow in outcome.outlets.items() if isinstance(flow, Stream)]
    expected = {port: set() for port in outlets}
    for port in case.feeds:
        for flow in arriving(case.feeds, port):
            if isinstance(flow, Stream):
                for place in np.flatnonzero(flow.flows):
                    species = matter.components[place]
                    for outlet, made in piece.destinations(port, species, outlets, matter):
                        expected[outlet].add(made)
    for outlet, species in piece.origins().items():
        for port in outlets:
            if port == outlet or (outlet == ANY_NAME and port in case.asked):
                expected[port] |= set(species)
    for port in outlets:
        there = {matter.components[i] for i in np.flatnonzero(outcome.outlets[port].flows > 0.0)}
        assert there <= expected[port], port


def test_no_case_mixes_components():
    """The guard of this battery: a stream of other components than the site's would pass unseen."""
    for case in CASES:
        for port in case.feeds:
            for flow in arriving(case.feeds, port):
                assert not isinstance(flow, Stream) or flow.matter is case.site.matter
