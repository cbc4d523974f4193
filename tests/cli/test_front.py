import tomllib
from pathlib import Path

import pytest

import chainflow
from tests.plants import HYDROGEN

HERE = Path(__file__).resolve().parents[2]


@pytest.fixture
def file(tmp_path):
    path = tmp_path / "plant.yaml"
    path.write_text(HYDROGEN)
    return path


def test_all_is_sorted_and_there():
    assert chainflow.__all__ == sorted(chainflow.__all__)
    for name in chainflow.__all__:
        assert getattr(chainflow, name) is not None
    assert dir(chainflow) == sorted(chainflow.__all__)


def test_an_unknown_name_is_an_attribute_error():
    with pytest.raises(AttributeError, match="no attribute 'nothing'"):
        _ = chainflow.nothing


def test_version_is_that_of_the_package():
    project = tomllib.loads((HERE / "pyproject.toml").read_text())["project"]
    assert chainflow.__version__ == project["version"]


def test_read_and_solve(file):
    flowsheet = chainflow.read(file)
    answer = chainflow.solve(flowsheet)
    assert isinstance(answer, chainflow.Answer)
    assert answer["dry.gas.fraction.H2"] > 0.99


def test_solve_takes_a_path(file):
    plain, changed = chainflow.solve(file), chainflow.solve(str(file), set={"sun": "400 W/m2"})
    assert changed["plant.sunlight_W"] == plain["plant.sunlight_W"] / 2


def test_read_takes_other_values(file):
    assert chainflow.read(file, set={"stack.temperature": "70 degC"}).equipment[
        "stack"
    ].temperature == pytest.approx(343.15, rel=1e-14)


def test_set_without_a_file_is_refused(file):
    with pytest.raises(chainflow.UsageFault, match="give it to read"):
        chainflow.solve(chainflow.read(file), set={"sun": "400 W/m2"})


def test_faults_can_be_caught(file):
    file.write_text(HYDROGEN.replace("kind: product", "kind: produkt"))
    with pytest.raises(chainflow.FlowsheetFault) as caught:
        chainflow.read(file)
    (fault,) = caught.value.faults
    assert isinstance(fault, chainflow.Fault)
    assert HYDROGEN.splitlines()[fault.line - 1].startswith("  town:")
    with pytest.raises(chainflow.ChainflowError):
        chainflow.read(file.parent / "none.yaml")
