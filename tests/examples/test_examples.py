"""Every example runs and says what it promises."""

import importlib
import runpy
import shutil
import sys
from pathlib import Path

import pytest

import chainflow
from chainflow.equipment.register import kinds

EXAMPLES = Path(__file__).parents[2] / "examples"


def test_every_example_is_tested():
    assert {p.name for p in EXAMPLES.iterdir() if p.is_dir()} == {
        "does-the-shift-pay",
        "solar-collector",
    }


def test_does_the_shift_pay(capsys):
    """The shift never pays, and costs the less the more of its heat is recovered."""
    path = EXAMPLES / "does-the-shift-pay" / "does_the_shift_pay.py"
    runpy.run_path(str(path), run_name="__main__")
    _, direct, *shifted = capsys.readouterr().out.splitlines()

    def to_fuel(line):
        return float(line.split("%")[0].split()[-1])

    efficiencies = [to_fuel(line) for line in shifted]
    assert len(efficiencies) == 4
    assert efficiencies == sorted(efficiencies)
    assert to_fuel(direct) > max(efficiencies)


@pytest.fixture
def collector(tmp_path, monkeypatch):
    """Lay the example package beside chainflow as an installer does: module and entry point."""
    shutil.copy(EXAMPLES / "solar-collector" / "solar_collector.py", tmp_path)
    known = tmp_path / "chainflow_solar_collector-0.1.0.dist-info"
    known.mkdir()
    (known / "METADATA").write_text("Metadata-Version: 2.1\nName: chainflow-solar-collector\n")
    (known / "entry_points.txt").write_text(
        "[chainflow.equipment]\nsolar-collector = solar_collector:SolarCollector\n"
    )
    monkeypatch.syspath_prepend(tmp_path)
    importlib.invalidate_caches()
    kinds.cache_clear()
    yield
    kinds.cache_clear()
    sys.modules.pop("solar_collector", None)


@pytest.mark.usefixtures("collector")
def test_a_kind_of_ones_own():
    """By hand: 1 MW of light, 60 %, 50 % of Carnot between 523.15 and 298.15 K."""
    assert "solar-collector" in kinds()
    answer = chainflow.solve(EXAMPLES / "solar-collector" / "steam.yaml")
    assert answer["collectors.heat.rate"] == pytest.approx(600e3, rel=1e-12)
    by_hand = 600e3 * 0.5 * (1 - 298.15 / 523.15)
    assert answer["wheel.power.rate"] == pytest.approx(by_hand, rel=1e-9)
    assert answer.solution.balance.energy < 1e-12


def test_its_package_names_the_entry_point():
    text = (EXAMPLES / "solar-collector" / "pyproject.toml").read_text()
    assert 'entry-points."chainflow.equipment"' in text
    assert 'solar-collector = "solar_collector:SolarCollector"' in text


def test_without_the_package_the_kind_is_unknown():
    with pytest.raises(chainflow.FlowsheetFault, match="there is no kind 'solar-collector'"):
        chainflow.read(EXAMPLES / "solar-collector" / "steam.yaml")


def test_a_kind_takes_about_thirty_lines():
    text = (EXAMPLES / "solar-collector" / "solar_collector.py").read_text()
    assert len([line for line in text.splitlines() if line.strip()]) <= 30
