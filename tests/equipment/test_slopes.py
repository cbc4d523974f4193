"""Slopes in closed form agree with differences, for every kind that gives some."""

import numpy as np
import pytest

from chainflow.equipment.ports import ANY_NAME, Heat, Light, arriving
from chainflow.thermo.streams import Stream
from tests.equipment.cases import CASES
from tests.equipment.feeds import heat_numbers, numbers

ENTHALPY = 1e5  # [J/mol], the size of a molar enthalpy
STEP = 2e-5  # of a stream's total
SLOPES = 2e-6  # central differences: truncation about STEP^2, noise about 1e-12 / STEP


def shifted(flow, place, size):
    """A flow with one of its numbers moved: a component's flow, the enthalpy, or the amount."""
    if isinstance(flow, Heat):
        changed = heat_numbers(flow)
        changed[place] += size
        return Heat.total([Heat(*row) for row in changed.reshape(-1, 4)])
    if isinstance(flow, Light):
        parts = numbers(flow)
        parts[place] += size
        return Light(*parts.tolist())
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
    found |= {f"own:{name}": np.array([value]) for name, value in outcome.results.items()}
    if case.equipment.kind == "store":
        sample = case.equipment.sample(feeds, asked, case.site)[ANY_NAME]
        found["state"] = _vector(sample)
    return found


def _vector(flow):
    if isinstance(flow, Stream):
        return np.append(flow.flows, flow.enthalpy / ENTHALPY)
    return numbers(flow)


def moved(case, label, place, size, settled):
    """The outputs after a shift of one number of one input."""
    feeds, asked = dict(case.feeds), dict(case.asked)
    if label.startswith("asked:"):
        port = label.removeprefix("asked:")
        asked[port] = shifted(asked[port], place, size)
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
    port, _, number = label.partition("#")
    return arriving(case.feeds, port)[int(number or 1) - 1]


def _value(case, label, place):
    flow = _input(case, label)
    if isinstance(flow, Stream):
        return flow.flows[place] if place < len(flow.flows) else np.inf
    return numbers(flow)[place]


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
            if block is None and key.startswith("own:"):
                continue
            given = np.zeros(len(numeric)) if block is None else np.asarray(block)[:, place].copy()
            if key == "state" or isinstance(outcome.outlets.get(key), Stream):
                given[-1] /= ENTHALPY
            scale = max(1.0, np.abs(numeric * unit).max(), _rate_of(case, key, outcome))
            if np.abs((given - numeric) * unit).max() > SLOPES * scale:  # is it truncation?
                closer = differences(case, label, place, STEP * size / 4.0, settled)[key]
                numeric = (16.0 * closer - numeric) / 15.0
            assert given * unit == pytest.approx(numeric * unit, abs=SLOPES * scale), (key, place)


def _columns(flow, case):
    """Numbers of a flow that are moved: place -> (unit, size of a step's base).

    A component that is absent is moved only if there is gas to be in and its elements are there
    already: the first atom of an element changes an equilibrium like the square root or the
    logarithm of its amount, and the first bubble in a liquid is a new phase.  Of heat, the rate and
    the mean of each piece: two pieces that meet at a temperature have a kink there (see
    `test_heat_matching.py` for temperatures).
    """
    if isinstance(flow, Heat):
        rows = [(p.rate, p.mean) for p in flow.pieces]
        sizes = {4 * i: rate for i, (rate, _) in enumerate(rows)}
        sizes |= {4 * i + 3: mean for i, (_, mean) in enumerate(rows)}
        return {place: (1.0, size) for place, size in sizes.items()}
    if not isinstance(flow, Stream):
        return {place: (1.0, abs(value) or 1.0) for place, value in enumerate(numbers(flow))}
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
        "flash-drum",
        "cut",
        "reformer",
        "fischer-tropsch-reactor",
        "pressure-swing",
        "water-treatment",
        "heat-exchanger",
        "absorber",
    }
