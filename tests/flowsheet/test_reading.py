"""Reading: words with places, what is refused and where, knobs, and hostile files."""

import hashlib
import io
import subprocess
import sys
import time
from itertools import pairwise
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from chainflow.basis.faults import FileFault, FlowsheetFault, Place, UsageFault
from chainflow.flowsheet.reading import (
    LARGEST_FILE,
    Mapping,
    Text,
    place_at,
    plain,
    read_tree,
    substitute_knobs,
)
from chainflow.flowsheet.tree import DEEPEST, MOST_FAULTS, MOST_NODES

EXAMPLE = """\
title: Costs $5, "in all"
knobs:
  sun: 850 W/m2
  area: $size
  size: 60000 m2
equipment:
  sun:   {kind: sunlight, irradiance: $sun, aperture: $area}
  pump:
    kind: pump
    pressure: 12 bar
    on: NO
lines:
  - sun.light -> field.light
  - a -> b
holds: []
nothing:
"""


def faults_of(text, overrides=None):
    with pytest.raises(FlowsheetFault) as caught:
        substitute_knobs(read_tree(text), overrides)
    return caught.value.faults


def only_fault(text):
    (fault,) = faults_of(text)
    return fault


# ------------------------------------------------------------------------------------ reading
def test_words_stay_as_they_were_written():
    tree = read_tree("a: 1.50\nb: yes\nc: NO\nd: 0x10\ne: 2026-01-01\nf: '007'\ng: .inf\n")
    assert plain(tree.root) == {
        "a": "1.50",
        "b": "yes",
        "c": "NO",
        "d": "0x10",
        "e": "2026-01-01",
        "f": "007",
        "g": ".inf",
    }


@pytest.mark.parametrize("written", ["", "~", "null", "Null", "NULL"])
def test_nothing_is_none(written):
    assert plain(read_tree(f"a: {written}\n").root) == {"a": None}


@pytest.mark.parametrize("written", ["''", "'null'", '"~"', "nULL", "none"])
def test_quoted_nothing_is_text(written):
    assert plain(read_tree(f"a: {written}\n").root) == {"a": written.strip("'\"")}


def test_places_count_from_one():
    root = read_tree(EXAMPLE).root
    pump = root.get("equipment").get("pump")
    assert pump.entries["pressure"] == (Place(10, 5), Text("12 bar", Place(10, 15)))
    assert root.get("lines").items[1].place == Place(14, 5)
    assert root.get("nothing").value is None
    assert root.get("absent") is None


def test_order_of_the_file_is_kept():
    keys = list(read_tree("z: 1\na: 2\nm: 3\n").root.entries)
    assert keys == ["z", "a", "m"]


def test_aliases_are_written_out():
    tree = read_tree("a: &x {b: [1, 2]}\nc: *x\n")
    assert plain(tree.root) == {"a": {"b": ["1", "2"]}, "c": {"b": ["1", "2"]}}
    assert tree.root.size == 9  # root, and twice: map, list, two texts
    assert tree.root.depth == 3


def test_a_tree_knows_its_content(tmp_path):
    file = tmp_path / "plant.yaml"
    file.write_bytes(b"\xef\xbb\xbftitle: caf\xc3\xa9\r\nlines: []\r\n")
    tree = read_tree(file)
    assert tree.name == "plant.yaml"
    assert plain(tree.root) == {"title": "café", "lines": []}
    assert tree.sha256 == hashlib.sha256(file.read_bytes()).hexdigest()


@pytest.mark.parametrize(
    ("text", "place", "code", "said"),
    [
        ("", (1, 1), "empty", "the file is empty"),
        ("# only a remark\n", (1, 1), "empty", "the file is empty"),
        ("---\n", (2, 1), "top", "wanted a map with title, equipment and lines"),
        ("- a\n", (1, 1), "top", "wanted a map"),
        ("words", (1, 1), "top", "wanted a map"),
        ("a: 1\nb: 2\na: 3\n", (3, 1), "duplicate-key", "'a' is here twice, first at 1:1"),
        ("x: {p: 1, p: 2}", (1, 11), "duplicate-key", "first at 1:5"),
        ("a: !!python/object:os.system 1", (1, 4), "tag", "is not read here"),
        ("a: !secret x", (1, 4), "tag", "'!secret'"),
        ("a: !!str 1", (1, 4), "tag", "remove it"),
        ("a: 1\n---\nb: 2\n", (2, 1), "documents", "second document"),
        ("a: *x", (1, 4), "alias", "stands for nothing"),
        ("a: &x [*x]", (1, 8), "alias", "stands inside what it stands for"),
        ("? [1]\n: 2\n", (1, 3), "key", "a name is wanted"),
        (": 1", (1, 1), "key", "a name is wanted"),
        ("a: &x {p: 1}\nb:\n  <<: *x\n", (3, 3), "key", "no part of YAML 1.2"),
        ("a: b: c", (1, 5), "syntax", "put the text in quotes"),
        ("a: [1, 2", (1, 9), "syntax", "']' is missing"),
        ("a: {b: 1", (1, 9), "syntax", "'}' is missing"),
        ("a:\n\tb: 1\n", (2, 1), "syntax", "a tab cannot"),
        ("a: 1\nb: 'x\nc: 3\n", (2, 4), "syntax", "a closing quote is missing"),
        ("a: 1\nbc\nd: 3\n", (3, 1), "syntax", "a ':' is missing"),
        ("a: @x", (1, 4), "syntax", "cannot start with this character"),
        ("a: 1\nb: x\x07y", (2, 5), "syntax", r"'\x07' is not allowed"),
        ('a: 1\nb: "\\UFFFFFFFF"', (2, 1), "syntax", "escape"),
        ('a: "\\ud800"', (1, 4), "encoding", "surrogate"),
        ("a: \ud800", (1, 4), "encoding", "not UTF-8"),
        ("%YAML 9.9\n---\na: 1", (1, 1), "syntax", "not YAML"),
    ],
)
def test_what_is_refused_and_where(text, place, code, said):
    fault = only_fault(text)
    assert (fault.line, fault.column) == place
    assert fault.code == code
    assert said in fault.text
    assert fault.text.isprintable()


def test_bytes_that_are_no_text_have_a_place(tmp_path):
    file = tmp_path / "latin.yaml"
    file.write_bytes(b"title: plain\nname: caf\xe9\n")
    with pytest.raises(FlowsheetFault, match=r"^2:10: .*save it as UTF-8"):
        read_tree(file)


def test_all_faults_of_a_file_come_at_once():
    faults = faults_of("a: 1\na: 2\nb: !x 3\nc: {d: 1, d: 2, e: *f}\n")
    assert [(fault.code, fault.line) for fault in faults] == [
        ("duplicate-key", 2),
        ("tag", 3),
        ("duplicate-key", 4),
        ("alias", 4),
    ]


@pytest.mark.parametrize("name", ["missing.yaml", ".", "a\0b"])
def test_files_that_cannot_be_read(tmp_path, name):
    with pytest.raises(FileFault, match="cannot read"):
        read_tree(tmp_path / name)


def test_a_file_without_permission(monkeypatch):
    def refuse(*_):
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr(Path, "open", refuse)
    with pytest.raises(FileFault, match=r"cannot read 'closed\.yaml': Permission denied"):
        read_tree(Path("closed.yaml"))


# ------------------------------------------------------------------------------------- places
@pytest.mark.parametrize(
    ("location", "at_key", "place"),
    [
        (("equipment", "pump", "pressure"), False, (10, 15)),
        (("equipment", "pump", "pressure"), True, (10, 5)),
        (("equipment", "pump", "pressure", "float"), False, (10, 15)),  # union member
        (("equipment", "pump", "missing"), False, (9, 5)),
        (("equipment", "pump", "missing"), True, (8, 3)),
        (("equipment", "pump", "on", "[key]"), False, (11, 5)),
        (("lines", 1), False, (14, 5)),
        (("lines", 7), False, (13, 3)),
        (("lines", "1"), False, (13, 3)),
        ((), False, (1, 1)),
        ((0, "nowhere", -1), False, (1, 1)),
        (("lines", -1), False, (13, 3)),
    ],
)
def test_the_nearest_place_of_a_location(location, at_key, place):
    assert place_at(read_tree(EXAMPLE).root, location, at_key=at_key) == place


# -------------------------------------------------------------------------------------- knobs
def test_knobs_stand_for_whole_values():
    tree = substitute_knobs(read_tree(EXAMPLE))
    sun = tree.root.get("equipment").get("sun")
    assert plain(sun) == {"kind": "sunlight", "irradiance": "850 W/m2", "aperture": "60000 m2"}
    assert sun.get("aperture") == Text("60000 m2", Place(7, 55), knob="area")
    assert plain(tree.root)["title"] == 'Costs $5, "in all"'
    assert tree.remarks == ()


def test_overrides_change_knobs():
    tree = substitute_knobs(read_tree(EXAMPLE), {"size": "10 ha", "sun": "$size"})
    assert plain(tree.root.get("equipment").get("sun"))["aperture"] == "10 ha"
    assert plain(tree.root.get("equipment").get("sun"))["irradiance"] == "10 ha"


def test_an_override_of_no_knob_is_wrong_usage():
    with pytest.raises(UsageFault, match=r"no knob 'sizze' \(did you mean 'size'\?\)"):
        substitute_knobs(read_tree(EXAMPLE), {"sizze": "1 ha"})


def test_knobs_may_hold_lists_and_maps():
    knobs = "knobs: {range: [$low, 450 degC], low: 250 degC, mix: {H2: 1}}\n"
    tree = substitute_knobs(read_tree(knobs + "x: {r: $range, m: $mix}\n"))
    assert plain(tree.root)["x"] == {"r": ["250 degC", "450 degC"], "m": {"H2": "1"}}


def test_a_knob_in_quotes_is_a_knob():
    assert plain(substitute_knobs(read_tree('knobs: {a: 1}\nx: "$a"')).root)["x"] == "1"


def test_a_knob_that_nothing_uses_is_a_remark():
    (remark,) = substitute_knobs(read_tree("knobs:\n  used: 1\n  idle: 2\nx: $used\n")).remarks
    assert remark.code == "unused-knob"
    assert (remark.line, remark.column) == (3, 3)
    assert "'idle' is not used" in remark.text


@pytest.mark.parametrize(
    ("text", "place", "code", "said"),
    [
        ("x: $sunn\nknobs: {sun: 1}", (1, 4), "unknown-knob", "(did you mean 'sun'?)"),
        ("x: $a", (1, 4), "unknown-knob", "there is no knob 'a'"),
        ("knobs: {a: $b, b: $c, c: $a}\nx: $b", (1, 16), "knob-ring", "$b -> $c -> $a -> $b"),
        ("knobs: {a: $a}\nx: $a", (1, 9), "knob-ring", "$a -> $a"),
        ("knobs: {a: 1}\nx: 2 $a", (2, 4), "knob", "a whole value"),
        ("knobs: {a: 1}\nx: $a bar", (2, 4), "knob", "a whole value"),
        ("knobs: {a: 1}\nx: $", (2, 4), "knob", "a whole value"),
        ("knobs: {a: 1}\nx: {$a: 1}", (2, 5), "knob", "not for a key"),
        ("knobs: 3", (1, 8), "knob", "wanted names with values"),
        ("knobs: {Big: 1}", (1, 9), "knob", "'Big' is not a name"),
        ("knobs: {flow: 1}", (1, 9), "knob", "word of addresses"),
    ],
)
def test_knobs_that_are_refused_and_where(text, place, code, said):
    fault = only_fault(text)
    assert (fault.line, fault.column) == place
    assert fault.code == code
    assert said in fault.text


def test_every_wrong_knob_is_reported():
    faults = faults_of("knobs: {a: $b, b: $a}\nx: $a\ny: [$c, 1 $a, $c]\n")
    assert [fault.code for fault in faults] == [
        "knob-ring",
        "unknown-knob",
        "knob",
        "unknown-knob",
    ]


@pytest.mark.parametrize("written", ["knobs:\nx: 1\n", "x: 1\n", "knobs: {}\nx: 1\n"])
def test_a_file_may_have_no_knobs(written):
    assert plain(substitute_knobs(read_tree(written)).root)["x"] == "1"


# ---------------------------------------------------------------------------- hostile files
def test_depth_is_limited():
    allowed = "a: " + "[" * (DEEPEST - 2) + "1" + "]" * (DEEPEST - 2)
    assert read_tree(allowed).root.depth == DEEPEST - 1
    for opening in ("[", "{a: ", "- ", "? "):
        assert "levels" in faults_of(("a:\n  " + opening) + opening * 50_000)[-1].text


def test_size_is_limited(tmp_path):
    file = tmp_path / "large.yaml"
    file.write_bytes(b"#" * (LARGEST_FILE + 1))
    with pytest.raises(FlowsheetFault, match="larger than"):
        read_tree(file)


def test_an_endless_file_ends(monkeypatch):
    class Endless(io.RawIOBase):
        def read(self, size=-1):
            assert size >= 0, "read without a limit"
            return b"#" * size

    monkeypatch.setattr(Path, "open", lambda *_: Endless())
    with pytest.raises(FlowsheetFault, match="larger than"):
        read_tree(Path("endless.yaml"))


def test_an_alias_bomb_is_refused_at_once():
    lines = ["a0: &a0 [x, x]"]
    lines += [f"a{n}: &a{n} [{', '.join([f'*a{n - 1}'] * 10)}]" for n in range(1, 25)]
    start = time.perf_counter()
    fault = only_fault("\n".join(lines))
    assert str(MOST_NODES) in fault.text
    assert time.perf_counter() - start < 2.0


def test_a_knob_bomb_is_refused_at_once():
    knobs = ["  k0: 1"]
    knobs += [f"  k{n}: [{', '.join([f'$k{n - 1}'] * 10)}]" for n in range(1, 25)]
    start = time.perf_counter()
    fault = only_fault("knobs:\n" + "\n".join(knobs) + "\nx: $k24\n")
    assert fault.code == "too-large"
    assert time.perf_counter() - start < 2.0


@pytest.mark.parametrize("step", [1, -1])
def test_long_chains_of_knobs_never_exhaust_the_stack(step):
    names = [f"k{n}" for n in range(1000)][::step]
    knobs = [f"  {name}: [${before}]" for before, name in pairwise(names)]
    uses = [f"x{name}: ${name}" for name in names]
    faults = faults_of("\n".join(["knobs:", f"  {names[0]}: 1", *knobs, *uses]))
    assert faults
    assert {fault.code for fault in faults} <= {"knob", "too-large", "too-deep"}


def test_reading_stops_after_so_many_faults():
    start = time.perf_counter()
    knobs = "\n".join(f"  knob{n}: 1" for n in range(3000))
    uses = "\n".join(f"use{n}: $knab{n}" for n in range(3000))
    assert len(faults_of(f"knobs:\n{knobs}\n{uses}\n")) == MOST_FAULTS
    assert time.perf_counter() - start < 20.0


SIGNS = (
    *("a", "b", ": ", "\n", "  ", "- ", "[", "]", "{", "}", ",", "&a ", "*a", "!t ", "|\n", ">-\n"),
    *("'", '"', "\\", "#", "$a", "$", "? ", "---\n", "...\n", "%", "\t", "~", "null", "<<", "@"),
    *("knobs:\n", "\\ud800", "\\U00110000", "\r", "\x00", "\ufeff", "é", "\u2028", "\x85"),
)
WORDS = st.sampled_from(SIGNS)


def read_or_refuse(source):
    try:
        tree = substitute_knobs(read_tree(source))
    except FlowsheetFault as problem:
        assert str(problem).replace("\n", "").isprintable()
        assert all(fault.line and fault.column for fault in problem.faults)
    else:
        assert isinstance(tree.root, Mapping)
        assert isinstance(plain(tree.root), dict)


@settings(max_examples=600)
@given(st.lists(WORDS, max_size=40).map("".join))
def test_any_mixture_of_yaml_signs_is_a_tree_or_faults_with_places(text):
    read_or_refuse(text)


@settings(max_examples=300)
@given(st.text(max_size=200))
def test_any_text_is_a_tree_or_faults_with_places(text):
    read_or_refuse(text)


@settings(max_examples=200)
@given(st.binary(max_size=100))
def test_any_bytes_are_a_tree_or_faults_with_places(tmp_path_factory, content):
    file = tmp_path_factory.getbasetemp() / "any.yaml"
    file.write_bytes(content)
    read_or_refuse(file)


@settings(max_examples=300)
@given(st.integers(0, len(EXAMPLE)), st.integers(0, 8), st.lists(WORDS, max_size=3).map("".join))
def test_any_slip_of_the_pen_is_a_tree_or_faults_with_places(start, length, inserted):
    read_or_refuse(EXAMPLE[:start] + inserted + EXAMPLE[start + length :])


def test_reading_is_quick_enough():
    rows = "\n".join(
        f"  e{n}: {{kind: pump, pressure: 12 bar, efficiency: 75 %}}" for n in range(2000)
    )
    start = time.perf_counter()
    assert read_tree("equipment:\n" + rows).root.size > 8000
    assert time.perf_counter() - start < 20.0


def test_ruamel_is_imported_only_when_a_file_is_read():
    code = "import sys, chainflow.flowsheet.reading; print('ruamel.yaml' in sys.modules)"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "False"
