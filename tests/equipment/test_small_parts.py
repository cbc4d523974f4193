"""Equations, shares, the register, ports and the numbers among settings."""

import subprocess
import sys
from importlib.metadata import EntryPoint

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from pydantic import ValidationError

from chainflow.equipment import register
from chainflow.equipment.base import Equipment
from chainflow.equipment.boundary import Vent
from chainflow.equipment.junctions import Splitter
from chainflow.equipment.ports import Heat, Role, mean_temperature
from chainflow.equipment.reactions import Reaction, parse_equation
from chainflow.equipment.shares import fractions, resolved
from tests.equipment.feeds import MATTER


# -------------------------------------------------------------------------------- equations
@pytest.mark.parametrize(
    ("text", "numbers"),
    [
        ("CO2 + 4 H2 -> CH4 + 2 H2O", {"CO2": -1, "H2": -4, "CH4": 1, "H2O": 2}),
        ("H2+0.5 O2->H2O", None),
        ("H2 + 0.5 O2 -> H2O", {"H2": -1, "O2": -0.5, "H2O": 1}),
        ("H2 + 1/2 O2 -> H2O", {"H2": -1, "O2": -0.5, "H2O": 1}),
        ("  2 H2 + O2  ->  2 H2O ", {"H2": -2, "O2": -1, "H2O": 2}),
        ("CO + CO -> CO2 + C", {"CO": -2, "CO2": 1, "C": 1}),
        ("n-C4H10 -> 2 C2H4 + H2", {"n-C4H10": -1, "C2H4": 2, "H2": 1}),
        ("CO2 = CO", None),
        ("CO2 -> CO -> C", None),
        ("-> CO", None),
        ("2H2 -> H2", None),
        ("1/0 H2 -> H2", None),
        ("x" * 300, None),
    ],
)
def test_equations(text, numbers):
    if numbers is None:
        with pytest.raises((ValueError, ZeroDivisionError)):
            parse_equation(text)
        with pytest.raises(ValidationError):
            Reaction(equation=text, conversion={"H2": 0.5})
    else:
        assert parse_equation(text) == pytest.approx(numbers)


@given(st.text(alphabet="COH24 +->./n-*", max_size=40) | st.text(max_size=40))
def test_any_equation_is_read_or_refused(text):
    try:
        numbers = parse_equation(text)
    except (ValueError, ZeroDivisionError):
        return
    assert all(np.isfinite(number) for number in numbers.values())


def test_a_reaction_as_a_vector():
    reaction = Reaction(equation="CO2 + 4 H2 -> CH4 + 2 H2O", conversion={"H2": 0.6})
    vector, row = reaction.vector(MATTER), reaction.by_feed(MATTER)
    assert np.abs(MATTER.formula @ vector).max() == 0.0
    assert row[MATTER.index["H2"]] == pytest.approx(0.6 / 4)
    assert np.count_nonzero(row) == 1
    assert list(reaction.faults(MATTER)) == []


# ----------------------------------------------------------------------------------- shares
@pytest.mark.parametrize(
    ("given_", "wanted"),
    [
        ({"a": 0.3, "b": "rest"}, {"a": 0.3, "b": 0.7}),
        ({"a": "rest"}, {"a": 1.0}),
        ({"a": 0.0, "b": 1.0}, {"a": 0.0, "b": 1.0}),
        ({"a": 1.0, "b": "rest"}, {"a": 1.0, "b": 0.0}),
        ({"a": 1 / 3, "b": 1 / 3, "c": 1 / 3}, {"a": 1 / 3, "b": 1 / 3, "c": 1 / 3}),
        ({"a": 0.333333, "b": 0.333333, "c": 0.333334}, None),
    ],
)
def test_shares_add_up_to_one(given_, wanted):
    found = resolved(given_)
    assert sum(found.values()) == pytest.approx(1.0, abs=1e-15)
    if wanted is not None:
        assert found == pytest.approx(wanted)


@pytest.mark.parametrize(
    "shares", [{}, {"a": 0.5}, {"a": 0.7, "b": 0.7}, {"a": "rest", "b": "rest"}, {"a": 1.2}]
)
def test_shares_that_do_not(shares):
    with pytest.raises(ValidationError):
        Splitter(shares=shares)


def test_a_composition_as_a_vector():
    vector = fractions({"CO2": 0.9, "N2": "rest"}, MATTER)
    assert vector[MATTER.index["CO2"]] == 0.9
    assert vector.sum() == pytest.approx(1.0)


# ------------------------------------------------------------------------------------ ports
def test_heat_as_one_flow_keeps_its_entropy():
    parts = [Heat.between(100.0, 900.0, 500.0), Heat.between(50.0, 400.0, 350.0)]
    whole = Heat.total(parts)
    assert whole.rate == 150.0
    assert (whole.start, whole.end) == (900.0, 350.0)
    assert whole.rate / whole.mean == pytest.approx(sum(h.rate / h.mean for h in parts))
    assert Heat.total([]) == Heat(0.0, 298.15, 298.15, 298.15)
    assert Heat.total([parts[0], parts[1].scaled(0.0)]) == parts[0]


@given(st.floats(200.0, 3000.0), st.floats(200.0, 3000.0))
def test_a_mean_temperature_lies_between(start, end):
    mean = mean_temperature(start, end)
    assert min(start, end) * (1 - 1e-12) <= mean <= max(start, end) * (1 + 1e-12)
    assert mean == pytest.approx(mean_temperature(end, start), rel=1e-12)


@pytest.mark.parametrize("cls", register.kinds().values(), ids=lambda cls: cls.kind)
def test_ports_of_a_kind_make_sense(cls):
    sides = [(port.name, port.is_inlet) for port in cls.ports]
    assert len(set(sides)) == len(sides)
    for inlet in (True, False):
        assert sum(port.main for port in cls.ports if port.is_inlet == inlet) <= 1
    for port in cls.ports:
        assert port.content in ("material", "power", "heat", "light", "any", "heat or power")
        assert port.means
        assert port.is_inlet == (port.role in (Role.TAKES, Role.CALLS))
    if cls.through:
        assert sum(p.content == "material" and p.is_inlet for p in cls.ports) == 1
    assert cls.__doc__
    for name, info in cls.model_fields.items():
        assert info.description, name


# ---------------------------------------------------------------------------------- register
def test_the_register_names_every_kind_by_its_own_name_and_no_other():
    for kind, cls in register.kinds().items():
        assert cls.kind == kind
        assert f"{cls.__module__}.{cls.__name__}".endswith(f".{register.CORE.get(kind, '')}")
    given = {
        cls.kind
        for cls in all_below(Equipment)
        if "kind" in vars(cls) and cls.__module__.startswith("chainflow.")
    }
    assert given == set(register.CORE)


def all_below(cls):
    """Every class derived from a class, of modules that were imported."""
    return {one for child in cls.__subclasses__() for one in (child, *all_below(child))}


def test_a_file_imports_only_its_own_kinds():
    code = (
        "import sys; from chainflow.flowsheet.building import read_text; "
        "read_text('{equipment: {a: {kind: sunlight, irradiance: 1 W/m2, aperture: 1 m2}, "
        "b: {kind: product}}, lines: [a -> b]}'); "
        "print(*sorted(m for m in sys.modules if m.startswith('chainflow.equipment.')))"
    )
    found = subprocess.run([sys.executable, "-c", code], check=True, capture_output=True, text=True)
    loaded = {name.rpartition(".")[2] for name in found.stdout.split()}
    assert {"sunlight", "boundary"} <= loaded
    assert not loaded & {"electrolysis", "fuel_cell", "burner", "compression", "methanation"}


def test_other_packages_add_kinds_but_replace_none(monkeypatch):
    class Candle(Vent):
        """A kind of another package."""

        kind = "candle"

    class Impostor(Vent):
        """Calls itself like a kind of the core."""

        kind = "mixer"

    points = [_Point("candle", Candle), _Point("mixer", Impostor)]
    monkeypatch.setattr(register, "entry_points", lambda group: points)
    register.kinds.cache_clear()
    try:
        known = register.kinds()
        assert known["candle"] is Candle
        assert known["mixer"] is not Impostor
        assert list(known)[-1] == "candle"
    finally:
        register.kinds.cache_clear()


def test_an_entry_point_that_is_no_kind_is_refused(monkeypatch):
    monkeypatch.setattr(register, "entry_points", lambda group: [_Point("wrong", dict)])
    register.kinds.cache_clear()
    try:
        with pytest.raises(TypeError, match="entry point 'wrong' is no kind of equipment"):
            register.kinds()
    finally:
        monkeypatch.undo()
        register.kinds.cache_clear()


class _Point:
    """Stands for `EntryPoint`: a name and what it loads."""

    def __init__(self, name, cls):
        self.name, self.cls = name, cls
        assert hasattr(EntryPoint, "load")

    def load(self):
        return self.cls


def test_a_kind_needs_no_more_than_its_ports_and_its_verb():
    with pytest.raises(NotImplementedError):  # the base names the verb; every kind gives its own
        Equipment().operate({}, {}, None)
    with pytest.raises(TypeError, match="vent serves nothing"):
        Vent().sample({}, {}, None)
