"""Settings have limits, keep them, and are frozen."""

import pytest
from pydantic import ValidationError

from chainflow.equipment.register import kinds
from tests.equipment.cases import CASES


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
