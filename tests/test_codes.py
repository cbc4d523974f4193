"""DEVELOPERS.md lists every code of faults, problems, cautions and idealisations, and no other."""

import ast
import re
from collections.abc import Iterator
from pathlib import Path

TOP = Path(__file__).parents[1]
MAKERS = {"Fault", "fault", "_fault", "remark", "NotSolved", "Caution", "Remark"}
CODE = r"[a-z]+(?:-[a-z]+)*"


def constants(node: ast.AST) -> Iterator[str]:
    """Yield the texts in an expression that look like codes."""
    for part in ast.walk(node):
        value = getattr(part, "value", None) if isinstance(part, ast.Constant) else None
        if isinstance(value, str) and re.fullmatch(CODE, value):
            yield value


def direct(node: ast.AST) -> Iterator[str]:
    """Yield an expression that is nothing but a code of several words."""
    if isinstance(node, ast.Constant) and "-" in str(node.value):
        yield from constants(node)


def branches(node: ast.AST) -> Iterator[str]:
    """Yield the codes that an expression with `if` may give."""
    if isinstance(node, ast.IfExp):
        yield from branches(node.body)
        yield from branches(node.orelse)
    else:
        yield from constants(node)


def name_of(node: ast.AST) -> str:
    return getattr(node, "attr", getattr(node, "id", ""))


def codes_in(tree: ast.Module) -> Iterator[str]:
    for node in ast.walk(tree):
        if isinstance(node, ast.Call) and name_of(node.func) in MAKERS and node.args:
            yield from branches(node.args[0])
        targets = getattr(node, "targets", [getattr(node, "target", None)])
        for name in map(name_of, targets):
            if name == "code" and isinstance(node.value, ast.IfExp):
                yield from branches(node.value)
            if name == "_CODES":
                yield from (code for value in node.value.values for code in constants(value))
            if name == "_HAZARDS":
                yield from (code for row in node.value.elts for code in constants(row.elts[0]))
        if isinstance(node, ast.Return) and isinstance(node.value, ast.Tuple):
            yield from (code for part in node.value.elts[:1] for code in direct(part))


def used() -> set[str]:
    """Return the codes in the package's own text."""
    found = set()
    for path in (TOP / "chainflow").rglob("*.py"):
        found |= set(codes_in(ast.parse(path.read_text(encoding="utf-8"))))
    return found


def listed() -> list[str]:
    """Return the codes in the tables of DEVELOPERS.md."""
    text = (TOP / "DEVELOPERS.md").read_text(encoding="utf-8")
    section = text.split("## Codes")[1].split("\n## ")[0]
    return re.findall(rf"^\| `({CODE})` \|", section, re.MULTILINE)


def test_every_code_is_listed_once():
    assert sorted(listed()) == sorted(set(listed()))
    assert used() - set(listed()) == set()


def test_every_listed_code_is_used():
    assert set(listed()) - used() == set()


def test_the_search_finds_codes_of_every_sort():
    expected = {"unknown-kind", "missing-setting", "no-way-out", "heat-short", "toxic-contents"}
    assert expected | {"free-separation", "drop-free-recycle", "unlinked-outlet"} <= used()
