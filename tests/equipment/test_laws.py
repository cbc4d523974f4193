"""Laws that hold for every kind of equipment, whatever its settings.

No number here comes from print: matter, energy, entropy and order bind them all.  Signs: heat and
power are positive into the equipment, so ``H in + heat + power = H out``.
"""

from collections import Counter
from dataclasses import replace

import numpy as np
import pytest
from pydantic import ValidationError

from chainflow.equipment.ports import ANY_NAME, Heat, Role, arriving
from chainflow.equipment.register import kinds
from chainflow.thermo.streams import Stream
from tests.equipment.cases import CASES, numbers

BOUNDARY = (
    "supply",
    "product",
    "vent",
    "sunlight",
    "grid",
)  # what enters or leaves the plant there
PASSING = ("splitter", "switchboard", "heat-network")  # what arrives only passes
BALANCE = 1e-12  # relative; round-off of a handful of sums, the solver itself wants 1e-9


def named(cases):
    return pytest.mark.parametrize("case", cases, ids=lambda case: case.name)


INSIDE = [case for case in CASES if case.equipment.kind not in BOUNDARY]


def matter_in_and_out(case, outcome):
    arrived = [f for f in case.arrives(outcome) if isinstance(f, Stream)]
    left = [f for f in outcome.outlets.values() if isinstance(f, Stream)]
    return arrived, left


def rate(flow):
    return flow.rate if isinstance(flow, Heat) else 0.0 if isinstance(flow, Stream) else flow


def test_every_kind_has_several_cases():
    counts = Counter(case.equipment.kind for case in CASES)
    assert set(counts) == set(kinds())
    assert {kind for kind, count in counts.items() if count < 2} == set()


# ------------------------------------------------------------------------------------ balances
@named(INSIDE)
def test_elements_are_kept(case):
    arrived, left = matter_in_and_out(case, case.run())
    atoms = case.site.matter.formula
    gains = sum((atoms @ s.flows for s in arrived), np.zeros(len(atoms)))
    through = float(gains.sum())
    lost = gains - sum((atoms @ s.flows for s in left), np.zeros(len(atoms)))
    assert np.abs(lost).max(initial=0.0) <= BALANCE * through


@named(INSIDE)
def test_energy_is_kept(case):
    outcome = case.run()
    arrived, left = matter_in_and_out(case, outcome)
    light = case.feeds.get("light", 0.0)
    terms = [s.enthalpy for s in arrived] + [-s.enthalpy for s in left]
    terms += [outcome.heat, outcome.power, light]
    if case.equipment.kind in PASSING and not case.unmet:
        terms += [rate(f) for f in case.arrives(outcome)]
        terms += [rate(f) for port, f in outcome.drawn.items() if port == "shortage"]
        terms += [-rate(f) for f in outcome.outlets.values()]
    size = sum(abs(term) for term in terms) + sum(abs(duty.heat) for duty in outcome.duties)
    assert abs(sum(terms)) <= BALANCE * size


@named(CASES)
def test_duties_and_lines_say_the_same(case):
    """Power and heat that pass a line are the duties that the line meets."""
    outcome = case.run()
    by_line = [duty for duty in outcome.duties if duty.met_by == "heat"]
    given = outcome.outlets.get("heat")
    asked = outcome.drawn.get("heat")
    if case.equipment.kind == "heat-engine":
        given, asked = None, Heat.total(case.feeds["heat"])
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


# ---------------------------------------------------------------------------------- second law
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


# ------------------------------------------------------------------------- batches and order
SIZES = np.array([1.0, 1.3, 0.9])


def in_cases(flow):
    """The same flow three times in different amounts, as a batch."""
    if isinstance(flow, tuple):
        return tuple(in_cases(part) for part in flow)
    if isinstance(flow, Stream):
        return Stream.stack([flow.scaled(size) for size in SIZES])
    return flow if isinstance(flow, Heat) else flow * SIZES


def one_case(flow, place):
    if isinstance(flow, tuple):
        return tuple(one_case(part, place) for part in flow)
    if isinstance(flow, Stream):
        return flow.case(place)
    return flow if isinstance(flow, Heat) else float(flow[place])


def batched(case):
    feeds = {
        port: flow if port in case.called else in_cases(flow) for port, flow in case.feeds.items()
    }
    return feeds, {port: in_cases(amount) for port, amount in case.asked.items()}


def everything(case):
    """All flows that arrive."""
    return [flow for port in case.feeds for flow in arriving(case.feeds, port)]


@named([case for case in CASES if any(not isinstance(f, Heat) for f in everything(case))])
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


def _picked(flow, place):
    if isinstance(flow, Stream):
        return flow.case(place) if flow.cases else flow
    if isinstance(flow, Heat):
        parts = (flow.rate, flow.start, flow.end, flow.mean)
        return Heat(*(float(np.broadcast_to(part, 3)[place]) for part in parts))
    return float(np.broadcast_to(flow, 3)[place])


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


# ------------------------------------------------------------------------------------- scaling
def enlarged(flow, factor):
    if isinstance(flow, tuple):
        return tuple(enlarged(part, factor) for part in flow)
    return flow.scaled(factor) if isinstance(flow, Stream | Heat) else flow * factor


def enlarged_settings(case, factor):
    piece = case.equipment
    for path in case.extensive:
        piece = with_amount(piece, path, factor)
    return piece


def with_amount(piece, path, factor):
    """A copy of the equipment in which one amount is larger."""
    if len(path) == 1:
        return piece.with_setting(path, piece.setting(path) * factor)
    name, place, key = path
    parts = list(getattr(piece, name))
    amount = getattr(parts[place], key)
    parts[place] = parts[place].model_copy(
        update={key: amount._replace(value=amount.value * factor)}
    )
    return piece.model_copy(update={name: tuple(parts)})


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


# ------------------------------------------------------------------------------ good manners
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


# ----------------------------------------------------------------------------- nothing flows
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


# ---------------------------------------------------------------------------------- structure
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


# ------------------------------------------------------------------------------------- slopes
ENTHALPY = 1e5  # [J/mol], the size of a molar enthalpy
STEP = 2e-5  # of a stream's total
SLOPES = 2e-6  # central differences: truncation about STEP^2, noise about 1e-12 / STEP


def shifted(flow, place, size):
    """A flow with one of its numbers moved: a component's flow, the enthalpy, or the amount."""
    if not isinstance(flow, Stream):
        return flow + size
    flows, enthalpy = flow.flows.copy(), flow.enthalpy
    if place < len(flows):
        flows[place] += size
    else:
        enthalpy += size
    return Stream.from_enthalpy(flow.matter, flows, enthalpy, flow.pressure, flow.temperature)


def outputs(case, feeds, asked, equipment):
    """Everything the equipment writes as vectors, and what one mol of a store's draws is."""
    outcome = case.run(equipment, feeds, asked)
    found = {port: _vector(flow) for port, flow in outcome.outlets.items()}
    found |= {f"drawn:{port}": _vector(amount) for port, amount in outcome.drawn.items()}
    if case.equipment.kind == "store":
        sample = case.equipment.sample(feeds, asked, case.site)[ANY_NAME]
        found["state"] = _vector(sample)
    return found


def _vector(flow):
    if isinstance(flow, Stream):
        return np.append(flow.flows, flow.enthalpy / ENTHALPY)
    if isinstance(flow, Heat):
        return np.array([flow.rate, flow.start, flow.end, flow.mean])
    return np.array([flow])


def moved(case, label, place, size, settled):
    """The outputs after a shift of one number of one input."""
    feeds, asked = dict(case.feeds), dict(case.asked)
    if label.startswith("asked:"):
        port = label.removeprefix("asked:")
        asked[port] = asked[port] + size
    else:
        port, _, number = label.partition("#")
        flow, which = feeds[port], int(number or 1) - 1
        if isinstance(flow, tuple):
            parts = list(flow)
            parts[which] = shifted(parts[which], place, size)
            feeds[port] = tuple(parts)
        else:
            feeds[port] = shifted(flow, place, size)
    return outputs(case, feeds, asked, settled)


def differences(case, label, place, step, settled):
    """Central differences by one number; one-sided, second order, where it is zero."""
    base = outputs(case, case.feeds, case.asked, settled)
    ahead = moved(case, label, place, step, settled)
    if _value(case, label, place) >= step:
        back = moved(case, label, place, -step, settled)
        return {key: (ahead[key] - back[key]) / (2 * step) for key in base}
    further = moved(case, label, place, 2 * step, settled)
    return {key: (4 * ahead[key] - 3 * base[key] - further[key]) / (2 * step) for key in base}


def _input(case, label):
    """The flow or amount that a label of the slopes stands for."""
    if label.startswith("asked:"):
        return case.asked[label.removeprefix("asked:")]
    return arriving(case.feeds, label.partition("#")[0])[0]


def _value(case, label, place):
    flow = _input(case, label)
    if isinstance(flow, Stream):
        return flow.flows[place] if place < len(flow.flows) else np.inf
    return flow


def inputs_with_slopes():
    found = []
    for case in CASES:
        outcome = case.run()
        labels = case.equipment.slopes(case.feeds, case.asked, case.site, outcome)
        given = {*case.feeds, *(f"asked:{port}" for port in case.asked)}
        found += [(case, label) for label in labels if label.partition("#")[0] in given]
    return found


WITH_SLOPES = inputs_with_slopes()


@pytest.mark.parametrize(
    ("case", "label"), WITH_SLOPES, ids=lambda part: part if isinstance(part, str) else part.name
)
def test_slopes_agree_with_differences(case, label):
    outcome = case.run()
    settled = case.equipment.settled(outcome)
    blocks = case.equipment.slopes(case.feeds, case.asked, case.site, outcome)[label]
    for place, (unit, size) in _columns(_input(case, label), case).items():
        found = differences(case, label, place, STEP * size, settled)
        for key, numeric in found.items():
            block = blocks.get(key)
            given = np.zeros(len(numeric)) if block is None else np.asarray(block)[:, place].copy()
            if key == "state" or isinstance(outcome.outlets.get(key), Stream):
                given[-1] /= ENTHALPY
            scale = max(1.0, np.abs(numeric * unit).max(), _rate_of(case, key, outcome))
            assert given * unit == pytest.approx(numeric * unit, abs=SLOPES * scale), (key, place)


def _columns(flow, case):
    """Numbers of a flow that are moved: place -> (unit, size of a step's base).

    A component that is absent is moved only if there is gas to be in and its elements are there
    already: the first atom of an element changes an equilibrium like the square root or the
    logarithm of its amount, and the first bubble in a liquid is a new phase.
    """
    if not isinstance(flow, Stream):
        return {0: (1.0, abs(float(flow)))}
    atoms = flow.matter.formula
    there = (atoms @ flow.flows > 0.0) & flow.gas.any()
    columns = {
        place: (1.0, float(flow.total))
        for place, name in enumerate(flow.matter.components)
        if (flow.flows[place] > 0.0 or there[atoms[:, place] > 0.0].all())
        and name not in case.jumps
    }
    return columns | {len(flow.flows): (ENTHALPY, float(flow.total) * ENTHALPY)}


def _rate_of(case, key, outcome):
    """Powers are large numbers: their slopes are judged by the power per mol."""
    drawn = outcome.drawn.get(key.removeprefix("drawn:"))
    if key.startswith("drawn:power") and isinstance(drawn, float):
        return ENTHALPY
    return 1.0


def test_slopes_are_given_where_they_pay():
    """Equilibrium, mixing, splitting, condensers, stores and power-driven equipment have them."""
    kinds_with = {case.equipment.kind for case, _ in WITH_SLOPES}
    assert kinds_with >= {
        "mixer",
        "blend",
        "splitter",
        "separator",
        "condenser",
        "heater",
        "cooler",
        "store",
        "compressor",
        "reactor",
        "shift-reactor",
        "methanation-reactor",
        "burner",
        "electrolyser",
        "switchboard",
        "pv-field",
    }


# ------------------------------------------------------------------------------------- limits
def limited_settings():
    """Every number setting with a limit: (class, name, a value outside)."""
    found = []
    for cls in kinds().values():
        for name, info in cls.model_fields.items():
            for note in [*info.metadata, *_notes_inside(info.annotation)]:
                limits = getattr(note, "limits", None)
                if limits is None:
                    continue
                for outside in _outside(limits):
                    found.append((cls, name, outside))
    return found


def _notes_inside(annotation):
    notes = list(getattr(annotation, "__metadata__", ()))
    for part in getattr(annotation, "__args__", ()):
        notes += _notes_inside(part)
    return notes


def _outside(limits):
    if limits.gt is not None:
        yield limits.gt
    if limits.ge is not None:
        yield limits.ge - 1e-6 * max(1.0, abs(limits.ge))
    if limits.le is not None:
        yield limits.le + 1e-6 * max(1.0, abs(limits.le))
    if limits.lt is not None:
        yield limits.lt


@pytest.mark.parametrize(
    ("cls", "name", "outside"),
    limited_settings(),
    ids=lambda part: getattr(part, "kind", str(part)),
)
def test_limits_of_settings_are_kept(cls, name, outside):
    with pytest.raises(ValidationError) as caught:
        cls.model_validate({name: outside})
    mine = [error for error in caught.value.errors() if error["loc"][0] == name]
    if not mine:  # a map of numbers
        with pytest.raises(ValidationError) as caught:
            cls.model_validate({name: {"H2": outside}})
        mine = [error for error in caught.value.errors() if error["loc"][0] == name]
    assert any("out of range" in error["msg"] or "valid" in error["msg"] for error in mine)


@pytest.mark.parametrize("case", CASES, ids=lambda case: case.name)
def test_settings_are_frozen(case):
    names = list(type(case.equipment).model_fields)
    for name in names:
        with pytest.raises(ValueError, match="frozen"):
            setattr(case.equipment, name, None)


def test_no_case_mixes_components():
    """The guard of this battery: a stream of other components than the site's would pass unseen."""
    for case in CASES:
        for port in case.feeds:
            for flow in arriving(case.feeds, port):
                assert not isinstance(flow, Stream) or flow.matter is case.site.matter
