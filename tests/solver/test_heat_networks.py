"""Plants that close through their heat networks."""

import numpy as np
import pytest

from chainflow.basis.faults import FlowsheetFault
from chainflow.equipment.ports import Heat
from chainflow.flowsheet.building import read_text
from chainflow.solver import order
from chainflow.solver.lookup import value_at
from chainflow.solver.solve import Prepared, solve_flowsheet
from tests.heat_plants import STEAM_METHANE, TWO_NETWORKS, without_recovery
from tests.solver.test_slopes import compared

AGREES = 1e-4  # slopes against differences with a step of 1e-6


def solved(text, **overrides):
    return solve_flowsheet(read_text(text, overrides))


def test_heat_closes_within_the_same_loop():
    """The shortage is power, so it is one of the stack's loop; the balance is that of any plant."""
    solution = solved(STEAM_METHANE)
    assert solution.passes <= 10
    assert max(solution.balance.elements, solution.balance.energy) < 1e-9
    supplied = sum(h.rate for h in solution.feeds["warmth"]["supply"])
    asked = sum(value_at(solution, f"warmth.{name}.rate") for name in ("raise", "preheat"))
    shortage, rest = (value_at(solution, f"warmth.{name}") for name in ("shortage", "rest"))
    assert supplied + shortage == pytest.approx(asked + rest, rel=1e-9)
    assert value_at(solution, "board.heat.rate") == pytest.approx(shortage, rel=1e-9)
    assert value_at(solution, "warmth.duty.power") == pytest.approx(shortage, rel=1e-9)


def test_recovered_heat_makes_more_fuel():
    with_it, without = (
        value_at(solved(text), "village.inlet.flow.CH4")
        for text in (STEAM_METHANE, without_recovery())
    )
    # all heat electric takes 1.4 of 4.0 MW away from the stack
    assert 1.3 < with_it / without < 1.6


def test_a_wider_approach_takes_more_power():
    shortage = [
        value_at(solved(STEAM_METHANE, gap=gap), "warmth.shortage_W")
        for gap in ("1 K", "10 K", "30 K")
    ]
    assert shortage == sorted(shortage)
    assert shortage[0] < shortage[2]


@pytest.mark.parametrize("text", [STEAM_METHANE, TWO_NETWORKS], ids=["steam", "two networks"])
def test_slopes_of_every_step_agree_with_differences(text):
    """All but those of heat by heat, whose parts meet: see the next test."""
    variables = Prepared(read_text(text)).program.variables
    rows = [
        row
        for row in compared(read_text(text))
        if {variables[row[1]].form, variables[row[2]].form} != {"heat"}
    ]
    assert {"warmth", "chill"} & {row[0] for row in rows}
    worst = max(rows, key=lambda row: row[-1])
    assert worst[-1] < AGREES, worst


@pytest.mark.parametrize(
    ("text", "name", "key"),
    [
        (TWO_NETWORKS, "low", "warm.heat~amount"),
        (TWO_NETWORKS, "low", "cool.heat"),
        (STEAM_METHANE, "warmth", "raise.heat~amount"),
        (STEAM_METHANE, "warmth", "knock.heat"),
    ],
)
@pytest.mark.parametrize("what", ["heat", "temperature"])
def test_slopes_by_a_whole_heat_flow_agree_with_differences(text, name, key, what):
    """More heat, or hotter heat, in all parts at once, so that parts that meet stay together."""
    prepared = Prepared(read_text(text))
    values = prepared.close().values
    steps = (*prepared.order.before, *prepared.order.loop, *prepared.order.after)
    (step,) = [s for s in steps if s.name == name]
    heat = values[key]
    assert isinstance(heat, Heat)
    written = step.run(values)
    blocks = step.closed_forms(values)[key]
    base = step.variables[key].pack(heat)
    moves = (np.arange(len(base)) % 4 == 0) == (what == "heat")
    direction = np.where(moves, base, 0.0)
    sides = []
    for sign in (1.0, -1.0):
        moved = step.variables[key].unpack(base + sign * 1e-6 * direction, step.matter)
        found = step.run({**values, key: moved})
        sides.append({w: step.variables[w].pack(found[w]) for w in written})
    for w in written:
        numeric = (sides[0][w] - sides[1][w]) / 2e-6
        closed = blocks.get((w, key), np.zeros((len(numeric), len(base)))) @ direction
        assert closed == pytest.approx(numeric, abs=AGREES * (1.0 + np.abs(numeric).max())), w


def test_shortage_from_another_network_comes_at_the_temperatures_it_lacks():
    solution = solved(TWO_NETWORKS)
    help_ = solution.stream("high.help").flow
    assert isinstance(help_, Heat)
    assert help_.rate == pytest.approx(value_at(solution, "low.shortage_W"), rel=1e-9)
    # the flue gives up to 400 degC, its users want up to 450: asked 10 K above that
    assert help_.hottest == pytest.approx(460.0 + 273.15)
    assert help_.coldest < 410.0 + 273.15
    assert value_at(solution, "high.shortage_W") == 0.0
    rest = solution.stream("low.rest").flow
    assert value_at(solution, "wheel.power.rate") == pytest.approx(
        0.5 * rest.rate * (1.0 - 298.15 / rest.mean), rel=1e-9
    )


def test_only_what_is_missing_is_asked():
    solution = solved(TWO_NETWORKS, warm="300 degC")
    assert value_at(solution, "low.shortage_W") == 0.0
    assert solution.stream("high.help").flow.rate == 0.0


def test_order_of_the_file_is_of_no_account():
    head, lines = STEAM_METHANE.split("lines:\n")
    turned = head + "lines:\n" + "".join(lines.splitlines(keepends=True)[::-1])
    addresses = ("village.inlet.flow.CH4", "warmth.shortage_W", "warmth.rest_W")
    one, other = (solved(text) for text in (STEAM_METHANE, turned))
    for address in addresses:
        assert value_at(other, address) == pytest.approx(value_at(one, address), rel=1e-9)


def test_shortage_takes_heat_or_power_and_nothing_else():
    light = STEAM_METHANE.replace("board.heat -> warmth.shortage", "water.rest -> warmth.shortage")
    with pytest.raises(FlowsheetFault) as caught:
        read_text(light)
    assert "brings material to a port for heat or power" in str(caught.value)


def test_a_heat_line_that_is_torn_closes_too(monkeypatch):
    """Heat has more numbers than one: where a loop is cut there, all of them are unknowns."""
    expected = value_at(solved(STEAM_METHANE), "village.inlet.flow.CH4")
    usual = order.choose_tears

    def with_heat(graph, weights, forced=()):
        return usual(graph, weights, [*forced, "raise.heat~amount"])

    monkeypatch.setattr(order, "choose_tears", with_heat)
    prepared = Prepared(read_text(STEAM_METHANE))
    assert "raise.heat~amount" in prepared.order.tears
    solution = prepared.solve()
    assert value_at(solution, "village.inlet.flow.CH4") == pytest.approx(expected, rel=1e-8)
    assert np.isfinite(solution.error_estimate)
