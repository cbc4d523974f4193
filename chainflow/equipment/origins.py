"""Where does what is bought come from, and how much carbon dioxide was emitted to make it?

Neither changes a balance; `chainflow.accounts.carbon` counts them. [kg CO2 per kg or per J].
"""

from typing import Annotated, Literal

from chainflow.basis.quantities import measured

Origin = Literal["fossil", "biogenic", "air"]
MaterialIntensity = Annotated[float, measured("1", ge=0)]
PowerIntensity = Annotated[float, measured("kg/J", ge=0)]
ORIGIN = "where the carbon of what is bought comes from; no balance depends on it"
MATERIAL_INTENSITY = "CO2 emitted to make and bring what is bought, per mass, as '120 g/kg'"
POWER_INTENSITY = "CO2 emitted for the power bought, as '40 g/kWh'; no balance depends on it"
