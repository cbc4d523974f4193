"""A kind of equipment of one's own: a solar collector that turns light into heat."""

from typing import ClassVar

from pydantic import Field

from chainflow.basis.quantities import Fraction, Temperature
from chainflow.equipment.base import Duty, Equipment, Heat, Outcome, Port, Role, rate


class SolarCollector(Equipment):
    """Heat at one temperature from the light on a field of collectors."""

    kind: ClassVar[str] = "solar-collector"
    family: ClassVar[str] = "sunlight"
    ports: ClassVar[tuple[Port, ...]] = (
        Port("light", "light", Role.TAKES, main=True, means="light on the collectors"),
        Port("heat", "heat", Role.OFFERS, main=True, means="heat of the loop"),
    )
    formulas: ClassVar[tuple[str, ...]] = ("heat = efficiency * light",)

    efficiency: Fraction = Field(description="heat per light on the field")
    temperature: Temperature = Field(description="temperature at which the heat is given")

    def operate(self, feeds, asked, site):
        light, level = rate(feeds, "light"), self.temperature
        given = self.efficiency * light
        useful = Duty.between("heat given", -given, level, level, met_by="heat")
        lost = Duty.between("light lost", given - light, level, level, met_by="ambient")
        return Outcome({"heat": Heat.between(given, level, level)}, duties=(useful, lost))
