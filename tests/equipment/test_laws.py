"""Laws that hold for every kind of equipment, whatever its settings.

No number here comes from print: matter, energy and entropy bind them all.  Signs: heat and power
are positive into the equipment, so ``H in + heat + power = H out``.
"""

from collections import Counter

import numpy as np
import pytest

from chainflow.equipment.ports import Heat, Light, Role
from chainflow.equipment.register import kinds
from chainflow.thermo.streams import Stream
from tests.equipment.cases import CASES, named
from tests.equipment.feeds import rate

BOUNDARY = ("supply", "product", "vent", "sunlight", "grid")  # matter enters or leaves there
PASSING = ("splitter", "switchboard", "heat-network")  # what arrives only passes
BALANCE = 1e-12  # relative; round-off of a handful of sums, the solver itself wants 1e-9
INSIDE = [case for case in CASES if case.equipment.kind not in BOUNDARY]


def matter_in_and_out(case, outcome):
    arrived = [f for f in case.arrives(outcome) if isinstance(f, Stream)]
    left = [f for f in outcome.outlets.values() if isinstance(f, Stream)]
    return arrived, left


def test_every_kind_has_several_cases():
    counts = Counter(case.equipment.kind for case in CASES)
    assert set(counts) == set(kinds())
    assert {kind for kind, count in counts.items() if count < 2} == set()


@named(INSIDE)
def test_elements_are_kept(case):
    arrived, left = matter_in_and_out(case, case.run())
    atoms = case.site.matter.formula
    gains = sum((atoms @ s.flows for s in arrived), np.zeros(len(atoms)))
    through = float(gains.sum())
    lost = gains - sum((atoms @ s.flows for s in left), np.zeros(len(atoms)))
    assert np.abs(lost).max(initial=0.0) <= BALANCE * through


def light_in_less_out(case, outcome):
    arriving = [f for f in case.arrives(outcome) if isinstance(f, Light)]
    leaving = [f for f in outcome.outlets.values() if isinstance(f, Light)]
    return sum(f.rate for f in arriving) - sum(f.rate for f in leaving)


@named(INSIDE)
def test_energy_is_kept(case):
    outcome = case.run()
    arrived, left = matter_in_and_out(case, outcome)
    terms = [s.enthalpy for s in arrived] + [-s.enthalpy for s in left]
    terms += [outcome.heat, outcome.power, light_in_less_out(case, outcome)]
    if case.equipment.kind in PASSING and not case.unmet:
        terms += [rate(f) for f in case.arrives(outcome) if not isinstance(f, Light)]
        called = [f for port, f in outcome.drawn.items() if port == "shortage"]
        terms += [rate(f) for f in called if isinstance(f, Heat) or not outcome.power]
        terms += [-rate(f) for f in outcome.outlets.values() if not isinstance(f, Light)]
    size = sum(abs(term) for term in terms) + sum(abs(duty.heat) for duty in outcome.duties)
    assert abs(sum(terms)) <= BALANCE * size


@named(CASES)
def test_duties_and_lines_say_the_same(case):
    """Power and heat that pass a line are the duties that the line meets."""
    outcome = case.run()
    by_line = [duty for duty in outcome.duties if duty.met_by == "heat"]
    given = outcome.outlets.get("heat")
    asked = outcome.drawn.get("heat")
    taken = case.equipment.port("heat", inlet=True)
    if taken is not None and taken.role is Role.TAKES and "heat" in case.feeds:
        asked = Heat.total(case.feeds["heat"])
    for line, sign in ((given, -1.0), (asked, 1.0)):
        mine = [duty for duty in by_line if sign * duty.heat > 0.0]
        wanted = line.rate if isinstance(line, Heat) and case.equipment.kind not in PASSING else 0.0
        assert sum(sign * duty.heat for duty in mine) == pytest.approx(wanted, rel=1e-12)
        if mine:
            entropy = sum(sign * duty.heat / duty.mean for duty in mine)
            assert entropy == pytest.approx(line.rate / line.mean, rel=1e-9)


@named(CASES)
def test_every_duty_says_how_it_is_met_and_has_a_mean_between_its_ends(case):
    for duty in case.run().duties:
        assert duty.met_by in ("power", "heat", "own", "ambient", "bought")
        # latent heat over latent entropy is the boiling temperature to 0.5 %: two data sets
        assert duty.coldest * 0.99 <= duty.mean <= duty.hottest * 1.01


# ------------------------------------------------------------------------ second law
def entropy_made(case, outcome):
    """Entropy production [W/K] and the size of what it is the difference of."""
    arrived, left = matter_in_and_out(case, outcome)
    with_heat = [d.heat / d.mean for d in outcome.duties if d.met_by not in ("power", "own")]
    terms = [s.entropy for s in left] + [-s.entropy for s in arrived] + [-s for s in with_heat]
    return sum(terms), sum(abs(term) for term in terms)


@named([case for case in INSIDE if not case.ideal and not case.unmet])
def test_entropy_is_made_never_destroyed(case):
    made, size = entropy_made(case, case.run())
    assert made >= -1e-10 * size


IDEAL = [case for case in CASES if case.ideal]


@named(IDEAL)
def test_an_idealisation_is_declared_and_owns_up_to_its_work(case):
    """What is let off the second law says so and states the work it saves."""
    outcome, ambient = case.run(), case.site.ambient
    assert [note.code for note in outcome.idealisations] == [case.ideal]
    made, _ = entropy_made(case, outcome)
    heat = sum(d.heat * (1.0 - ambient / d.mean) for d in outcome.duties if d.met_by != "power")
    saved = outcome.power + heat - ambient * made  # exergy out less exergy in
    stated = outcome.results["minimum_work_W"]
    assert stated > 0.0
    if case.ideal == "free-separation":
        assert stated == pytest.approx(outcome.power + heat - ambient * made, rel=1e-9)
    else:  # a store states the work of ideal mixing, its streams are real gases at 30 bar
        assert saved <= 1.1 * stated


def test_idealisations_are_few():
    let_off = Counter(case.ideal for case in CASES if case.run().idealisations)
    assert let_off == Counter({"free-separation": 3, "pure-store": 2})
