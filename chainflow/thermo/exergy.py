"""How much work could a stream give in exchange with the environment?

Exergy [W], physical plus chemical, as ``H - T0 S - sum_e b_e lambda_e``: the Gibbs energy at the
environment's temperature less that of the stream's atoms in the reference gases of the air. It
works for any gas and for liquid water. Kinetic and potential exergy are left out.

Reference gases and their pressures: Szargut, Morris and Steward, Exergy Analysis of Thermal,
Chemical and Metallurgical Processes (1988), from memory.
"""

from dataclasses import dataclass
from functools import cache
from math import log
from typing import Final

import numpy as np

from chainflow.basis.constants import ATMOSPHERE, GAS_CONSTANT, P_REFERENCE, T_REFERENCE
from chainflow.thermo.components import Array, Matter
from chainflow.thermo.saturation import saturation_pressure
from chainflow.thermo.species import polynomial
from chainflow.thermo.streams import Stream, Value

SUN_TEMPERATURE = 5778.0  # [K], of a black body with the sun's radiance


@dataclass(frozen=True, slots=True)
class Environment:
    """The surroundings: temperature [K], pressure [Pa], partial pressures of the air [Pa].

    The air need not fill the pressure; each gas is a reference on its own.
    """

    temperature: float = T_REFERENCE
    pressure: float = ATMOSPHERE
    nitrogen: float = 75830.0
    oxygen: float = 20390.0
    argon: float = 906.0
    carbon_dioxide: float = 33.5
    water: float = 2200.0
    helium: float = 0.485

    def __post_init__(self) -> None:
        for name in self.__slots__:
            if not getattr(self, name) > 0.0:
                raise ValueError(
                    f"environment: {name} is {getattr(self, name):g}, wanted a value above zero"
                )

    @classmethod
    def at(
        cls,
        temperature: float = T_REFERENCE,
        pressure: float = ATMOSPHERE,
        carbon_dioxide: float | None = None,
        humidity: float | None = None,
    ) -> "Environment":
        """Return the usual air at another temperature [K] and pressure [Pa].

        Parameters
        ----------
        carbon_dioxide : mole fraction in the air; the usual partial pressure, in proportion to
            `pressure`, if None.
        humidity : partial pressure of water by its saturation pressure; that of the usual
            surroundings at 25 degC (0.69) if None.

        Raises `ValueError` for water above the air's own pressure or no saturation pressure.
        """
        usual = cls()
        if (temperature, pressure, carbon_dioxide, humidity) == (
            usual.temperature,
            usual.pressure,
            None,
            None,
        ):
            return usual
        share = pressure / usual.pressure
        relative = humidity
        if relative is None:
            relative = usual.water / saturation_pressure(usual.temperature)
        water = relative * saturation_pressure(temperature)
        if water >= pressure:
            raise ValueError(
                f"water alone has {water / 1e5:.4g} bar there, "
                f"the air {pressure / 1e5:.4g} bar: take a lower temperature or humidity"
            )
        return cls(
            temperature=temperature,
            pressure=pressure,
            nitrogen=usual.nitrogen * share,
            oxygen=usual.oxygen * share,
            argon=usual.argon * share,
            carbon_dioxide=(
                usual.carbon_dioxide * share
                if carbon_dioxide is None
                else carbon_dioxide * pressure
            ),
            water=water,
            helium=usual.helium * share,
        )

    def element_potentials(self) -> dict[str, float]:
        """Return the Gibbs energy of each element's atoms in the reference gases [J/mol]."""
        return dict(_element_potentials(self))

    def _potential(self, gas: str, partial_pressure: float) -> float:
        pure = polynomial(gas).gibbs(self.temperature)
        return pure + GAS_CONSTANT * self.temperature * log(partial_pressure / P_REFERENCE)


@cache
def _element_potentials(air: Environment) -> tuple[tuple[str, float], ...]:
    oxygen = air._potential("O2", air.oxygen) / 2
    return (
        ("O", oxygen),
        ("H", (air._potential("H2O", air.water) - oxygen) / 2),
        ("C", air._potential("CO2", air.carbon_dioxide) - 2 * oxygen),
        ("N", air._potential("N2", air.nitrogen) / 2),
        ("Ar", air._potential("Ar", air.argon)),
        ("He", air._potential("He", air.helium)),
    )


STANDARD_ENVIRONMENT: Final = Environment()


def stream_exergy(stream: Stream, environment: Environment = STANDARD_ENVIRONMENT) -> Value:
    """Return the exergy of a stream [W], in the shape of its cases."""
    bound = stream.flows @ component_potentials(stream.matter, environment)
    value = stream.enthalpy - environment.temperature * stream.entropy - bound
    return float(value) if np.ndim(value) == 0 else value


def component_potentials(matter: Matter, environment: Environment) -> Array:
    """Return the Gibbs energy of each component's atoms in the environment [J/mol]."""
    potentials = dict(_element_potentials(environment))
    return np.array([potentials[element] for element in matter.elements]) @ matter.formula


def chemical_exergies(matter: Matter, environment: Environment = STANDARD_ENVIRONMENT) -> Array:
    """Return the exergy of each component as a pure ideal gas at T0, p0 [J/mol]."""
    temperature = environment.temperature
    order = GAS_CONSTANT * temperature * log(environment.pressure / P_REFERENCE)
    gibbs = matter.ideal_enthalpies(temperature) - temperature * matter.ideal_entropies(temperature)
    return gibbs + order - component_potentials(matter, environment)


def heat_exergy(heat: Value, temperature: Value, ambient: float = T_REFERENCE) -> Value:
    """Return the exergy of heat given off at one temperature [W] (Carnot)."""
    return heat * (1.0 - ambient / temperature)


def solar_exergy_factor(ambient: float = T_REFERENCE, sun: float = SUN_TEMPERATURE) -> float:
    """Return exergy per energy of sunlight [-], 0.9312 by default.

    ``1 - 4/3 x + 1/3 x^4`` with ``x = T0/T_sun``: Petela, J. Heat Transfer 86 (1964) 187.
    """
    ratio = ambient / sun
    return 1.0 - 4.0 / 3.0 * ratio + ratio**4 / 3.0
