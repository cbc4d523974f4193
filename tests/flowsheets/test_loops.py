"""The loops of the shipped flowsheets close in few passes, whatever the order of the file."""

import pytest

from chainflow.basis.faults import NotSolved
from chainflow.flowsheet.building import read_text
from chainflow.solver.solve import inspect
from tests.flowsheets.shipped import (
    CYCLES,
    FIRED,
    HUGE,
    NAMES,
    flow,
    heat_behind,
    largest_difference,
    numbers,
    renamed,
    shuffled,
    solved,
    solved_text,
    text_of,
)

ALSO_AMOUNTS = {  # knobs beside the aperture, a thousand times as large
    "hydrogen-direct-coupled": {"cells": "150000 m2"},
    "methane-direct-coupled": {"cells": "150000 m2"},
    "solar-heat-syngas": {"spare": "20 MW"},
}


@pytest.mark.parametrize("purge", ["5 %", "1 %", "0.1 %"])
def test_a_recycle_with_a_purge_closes_in_few_passes(purge):
    assert solved("methane-store", purge=purge).passes <= 9


@pytest.mark.parametrize("name", CYCLES)
@pytest.mark.parametrize("purge", ["0 %", "0.1 %"])
@pytest.mark.parametrize("capture", ["100 %", "98 %", "90 %", "0 %"])
def test_the_closed_cycle_closes_in_few_passes_with_its_hold(name, capture, purge):
    solution = solved(name, capture=capture, purge=purge)
    assert solution.passes <= 13
    (hold,) = solution.holds
    assert hold.reached == pytest.approx(1473.15, abs=1e-6)


@pytest.mark.parametrize("purge", ["10 %", "3 %", "0.5 %"])
def test_nested_loops_close_together_with_the_hold_on_hydrogen(purge):
    """Tail gas to synthesis and reformer, carbon dioxide, water, oxygen, power: one Newton."""
    solution = solved("liquid-fuel", purge=purge)
    assert solution.passes <= 12
    (hold,) = solution.holds
    made = float(flow(solution, "stack.hydrogen").flow("H2"))
    assert abs(hold.reached) < 1e-9 * made


@pytest.mark.parametrize(
    ("name", "most"),
    [
        ("hydrogen-fuel-cell", 8),
        ("hydrogen-700-bar", 6),
        ("hydrogen-liquid", 7),
        ("steam-methane", 8),
        ("gas-turbine", 10),
        ("steam-cycle", 3),
    ],
)
def test_the_others_close_in_few_passes(name, most):
    assert solved(name).passes <= most


# --- nitrogen in what is bought --------------------------------------------------------------


@pytest.mark.parametrize("name", CYCLES)
def test_nitrogen_without_a_way_out_is_named_before_anything_is_solved(name):
    knobs = {"capture": "100 %", "purge": "0 %", "inert": "0.1 %"}
    with pytest.raises(NotSolved, match=r"^N \(as N2\) enters at bought\.outlet") as caught:
        inspect(read_text(text_of(name), knobs))
    assert caught.value.code == "no-way-out"
    assert "open a purge" in caught.value.text


@pytest.mark.parametrize("name", ["methane-compressed", "methane-liquid"])
def test_nitrogen_that_leaves_with_the_flue_gas_does_not_help_that_of_the_recycle(name):
    """Water of the flue gas ties both into one loop, but no nitrogen gets from one to the other."""
    with pytest.raises(NotSolved, match=r"^N \(as N2\) enters at bought\.outlet and has") as caught:
        inspect(read_text(text_of(name), {"purge": "0 %"}))
    assert caught.value.code == "no-way-out"
    inspect(read_text(text_of(name), {"purge": "0 %", "inert": "0 %"}))  # clean: nothing builds up


def test_nitrogen_without_a_way_out_of_a_recycle_is_named():
    with pytest.raises(NotSolved, match=r"^N \(as N2\) enters at bought\.outlet"):
        solved("methane-store", purge="0 %")


@pytest.mark.parametrize("name", CYCLES)
@pytest.mark.parametrize("purge", ["0.1 %", "1 %"])
def test_a_purge_opens_it_at_the_ratio_of_what_is_bought(name, purge):
    """What leaves has the make-up's own N2 : C, 0.1 : 99.9, however small the purge.

    Nearly all of it is the purge; surplus oxygen takes a trace of carbon dioxide along.
    """
    solution = solved(name, capture="100 %", purge=purge, inert="0.1 %")
    leaving = [flow(solution, key) for key in ("split.purge", "oxygen.rest", "capture.lost")]
    carbon = sum(float(out.flow(species)) for out in leaving for species in ("CO", "CO2", "CH4"))
    nitrogen = sum(float(out.flow("N2")) for out in leaving)
    assert nitrogen / carbon == pytest.approx(0.1 / 99.9, rel=1e-7)
    assert nitrogen == pytest.approx(float(leaving[0].flow("N2")), rel=1e-9)


def test_nitrogen_in_the_recycle_leaves_as_fast_as_it_comes():
    solution = solved("methane-store", purge="0.1 %")
    bought = float(flow(solution, "bought.outlet").flow("N2"))
    assert float(flow(solution, "back.purge").flow("N2")) == pytest.approx(bought, rel=1e-9)


# --- what must not matter --------------------------------------------------------------------


@pytest.mark.parametrize(
    ("name", "key"),
    [
        pytest.param(name, key, marks=pytest.mark.slow if name in HUGE and key > 1 else ())
        for name in NAMES
        for key in (1, 2, 3)
    ],
)
def test_any_order_of_the_file_gives_the_same_answer(name, key):
    other = solved_text(shuffled(text_of(name), key))
    assert list(other.flowsheet.equipment) != list(solved(name).flowsheet.equipment)
    own = solved(name)
    assert largest_difference(numbers(own), numbers(other), heat_behind(own)) < 1e-12


@pytest.mark.parametrize("name", NAMES)
def test_new_names_in_a_new_order_change_no_number(name):
    text, names = renamed(text_of(name))
    other = numbers(solved_text(shuffled(text, 4)))
    old = {new: old for old, new in names.items()}
    assert not set(names) & set(old)
    back = {}
    for key, values in other.items():
        piece, _, port = key.partition(".")
        back[f"{old[piece]}.{port}"] = values
    own = solved(name)
    assert largest_difference(numbers(own), back, heat_behind(own)) < 1e-12


@pytest.mark.parametrize("name", NAMES)
def test_a_second_run_gives_the_same_bits(name):
    again = solved_text(text_of(name) + "\n# another text, so that nothing is remembered\n")
    assert numbers(again) == numbers(solved(name))


@pytest.mark.parametrize("name", NAMES)
def test_a_plant_a_thousand_times_as_large_is_the_same_plant(name):
    size = {"fuel": "100000 kg/h"} if name in FIRED else {"aperture": "25000000 m2"}
    large = numbers(solved(name, **(size | ALSO_AMOUNTS.get(name, {}))))
    scaled = {
        key: [1e3 * value for value in values[:-2]] + values[-2:]
        if len(values) > 1
        else [1e3 * values[0]]
        for key, values in numbers(solved(name)).items()
    }
    assert largest_difference(scaled, large) < 1e-9
