"""The JSON Schema takes every shipped flowsheet and refuses what the reader refuses."""

import copy

import jsonschema
import pytest

from chainflow.flowsheet.schema import json_schema
from tests.flowsheets.shipped import FOLDER, as_data

SHIPPED = {path.stem: path.read_text(encoding="utf-8") for path in sorted(FOLDER.glob("*.yaml"))}
BLOCKS = """
environment: {temperature: $cold, humidity: 60 %, carbon_dioxide: 430 ppm}
rungs: {sunshine: light, panels: [field.power], village: useful}
"""


@pytest.fixture(scope="module")
def validator():
    schema = json_schema()
    jsonschema.Draft202012Validator.check_schema(schema)
    return jsonschema.Draft202012Validator(schema)


@pytest.mark.parametrize("text", SHIPPED.values(), ids=SHIPPED)
def test_shipped_flowsheets_fit(validator, text):
    assert [error.message for error in validator.iter_errors(as_data(text))] == []


def test_the_blocks_fit(validator):
    data = as_data(SHIPPED["battery"] + BLOCKS)
    assert list(data)[-2:] == ["environment", "rungs"]
    assert [error.message for error in validator.iter_errors(data)] == []


@pytest.mark.parametrize(
    ("path", "value"),
    [
        (("environment", "temprature"), "10 degC"),
        (("environment", "humidity"), "wet"),
        (("rungs", "Panels"), ["field.power"]),
        (("rungs", "panels"), "power made"),
        (("rungs", "panels"), []),
        (("costs", "hours"), "many"),
        (("costs", "colour"), "red"),
        (("costs", "equipment", "field", "fixd"), "3 %"),
        (("costs", "equipment", "field", "purchase"), "a lot"),
        (("costs", "bought"), {"power": "40"}),
    ],
)
def test_wrong_blocks_do_not_fit(validator, path, value):
    data = copy.deepcopy(as_data(SHIPPED["battery"] + BLOCKS))
    here = data
    for key in path[:-1]:
        here = here[key]
    here[path[-1]] = value
    assert list(validator.iter_errors(data))
