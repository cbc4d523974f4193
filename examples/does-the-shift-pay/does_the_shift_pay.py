"""Does a reverse water-gas shift before the methanation pay, and what does heat recovery save?

Solves the two shipped methane cycles, the one with the shift for several temperatures up to which
the shift's product preheats its feed, and prints what each keeps of the sunlight.
"""

from pathlib import Path

import chainflow

FLOWSHEETS = Path(__file__).parents[2] / "flowsheets"
TO_FUEL = "plant.efficiency.sunlight_to_fuel.LHV"
OVERALL = "plant.efficiency.overall.LHV"


def row(label: str, answer: chainflow.Answer, heater: float) -> str:
    """One line of the table: sunlight to fuel, to power, and what the shift's heater draws."""
    return f"{label:<28}{answer[TO_FUEL]:>9.2%}{answer[OVERALL]:>10.2%}{heater / 1e3:>12.0f} kW"


def main() -> None:
    print(f"{'':<28}{'to fuel':>9}{'to power':>10}{'shift draws':>15}")
    direct = chainflow.solve(FLOWSHEETS / "methane-cycle-direct.yaml")
    print(row("methanation alone", direct, 0.0))
    for level in (150, 400, 650, 700):
        preheat = {"regain": f"{level} degC"}
        answer = chainflow.solve(FLOWSHEETS / "methane-cycle.yaml", set=preheat)
        heater = answer["shift.duty.power"]
        print(row(f"shift, feed from {level} degC", answer, heater))


if __name__ == "__main__":
    main()
