"""Faults: order, places, exit codes, and the way through a pickle."""

import pickle

import pytest

from chainflow.basis.faults import (
    ChainflowError,
    Fault,
    FileFault,
    FlowsheetFault,
    NotSolved,
    Place,
    UsageFault,
)


def test_a_fault_shows_its_place_only_if_it_has_one():
    assert str(Fault("code", "something is wrong")) == "something is wrong"
    assert str(Fault("code", "something is wrong", 12, 5)) == "12:5: something is wrong"
    assert Fault("code", "x", 12, 5).place == Place(12, 5)


def test_located_fills_in_a_place_but_never_moves_one():
    somewhere = Fault("code", "x").located(Place(3, 4))
    assert (somewhere.line, somewhere.column) == (3, 4)
    assert somewhere.located(Place(9, 9)) == somewhere
    assert Fault("code", "x").located(None) == Fault("code", "x")


def test_faults_come_in_the_order_of_the_file_and_once_each():
    late, early, nowhere = Fault("a", "late", 10, 1), Fault("a", "early", 9, 20), Fault("a", "none")
    problem = FlowsheetFault([nowhere, late, early, late])
    assert problem.faults == (early, late, nowhere)
    assert str(problem) == "9:20: early\n10:1: late\nnone"


def test_a_flowsheet_fault_holds_at_least_one_fault():
    with pytest.raises(ValueError, match="at least one"):
        FlowsheetFault([])


@pytest.mark.parametrize(
    ("error", "exit_code", "builtin"),
    [
        (FlowsheetFault(Fault("code", "text", 1, 2)), 1, ValueError),
        (UsageFault("no such knob"), 2, ValueError),
        (NotSolved("short", "board is short", {"missing_W": 3.0}), 3, RuntimeError),
        (FileFault("cannot read"), 4, OSError),
    ],
)
def test_errors_keep_their_fields_through_a_pickle(error, exit_code, builtin):
    copy = pickle.loads(pickle.dumps(error))
    assert type(copy) is type(error)
    assert vars(copy) == vars(error)
    assert str(copy) == str(error)
    assert copy.exit_code == exit_code
    assert isinstance(copy, ChainflowError)
    assert isinstance(copy, builtin)
