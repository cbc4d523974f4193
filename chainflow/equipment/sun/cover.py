"""How much less of slanting light gets through the front of a module than of straight light?

Everything is relative to light that comes straight on, whose loss is already in a module's numbers.
Angles of incidence and tilts in [deg], as in the library pvlib; shares [-]; any shape.
"""

from __future__ import annotations

from functools import lru_cache
from typing import Annotated, Any, Literal, NamedTuple

import numpy as np
from pydantic import BaseModel, ConfigDict, Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import measured
from chainflow.equipment.setting_numbers import stated

SOURCES = (
    "slanting light through glass: De Soto, Klein and Beckman, Solar Energy 80 (2006) 78",
    "slanting light by one number: Souka and Safwat, Solar Energy 10 (1966) 170; ASHRAE 93-77",
    "slanting light of sky and ground: Marion, Solar Energy 147 (2017) 344",
)
_OWN = {"fresnel": ("index", "extinction", "thickness", "coating"), "ashrae": ("slant_loss",)}
_STEP = 3.0  # between tilts of a plane that moves [deg]; 0.001 on the share of the sky
Index = Annotated[float, measured("1", gt=1, le=4)]


class Cover(BaseModel):
    """The front of the modules.

    `fresnel`: Fresnel's equations at the surface and what the glass absorbs on its way, both
    polarisations alike; index 1.526, extinction 4 1/m and 2 mm of De Soto and others (R in pvlib),
    with a `coating` of lower index on it if one is given. `ashrae`: 1 - slant_loss * (1 /
    cos(incidence) - 1), never below zero; slant_loss 0.05 (R in pvlib).
    """

    model_config = ConfigDict(frozen=True, extra="forbid")

    model: Literal["fresnel", "ashrae"] = Field(
        "fresnel", description="by the laws of refraction, or by one number"
    )
    index: Index = Field(1.526, description="refractive index of the glass (model: fresnel)")
    extinction: Annotated[float, measured("1/m", ge=0)] = Field(
        4.0, description="light that the glass absorbs on its way (model: fresnel)"
    )
    thickness: Annotated[float, measured("m", ge=0, le=0.1)] = Field(
        0.002, description="of the glass (model: fresnel)"
    )
    coating: Index | None = Field(
        None, description="refractive index of a coating against reflection (model: fresnel)"
    )
    slant_loss: Annotated[float, measured("1", ge=0, le=1)] = Field(
        0.05, description="how fast light is lost as it slants (model: ashrae)"
    )

    @model_validator(mode="after")
    def _of_one_model(self) -> Cover:
        strange = sorted(stated(self) - {*_OWN[self.model], "model"})
        if strange:
            text = f"'{strange[0]}' is of another model than {self.model}: remove it"
            raise PydanticCustomError("cover", "{text}", {"text": text})
        if self.coating is not None and self.coating >= self.index:
            text = (
                f"'coating' of index {self.coating:.4g} on glass of {self.index:.4g} reflects "
                "more, wanted a lower index, as 1.29"
            )
            raise PydanticCustomError("cover", "{text}", {"text": text})
        return self

    def beam(self, incidence: Any) -> np.ndarray:
        """Return what gets in of a beam [-]; none from behind."""
        from pvlib import iam

        angle = np.asarray(incidence, dtype=float)
        if self.model == "ashrae":
            found = iam.ashrae(angle, self.slant_loss)
        else:
            found = iam.physical(
                angle, self.index, self.extinction, self.thickness, n_ar=self.coating
            )
        return np.where(angle < 90.0, np.maximum(found, 0.0), 0.0)

    def diffuse(self, tilt: np.ndarray) -> Diffuse:
        """Return what gets in of the light of sky and ground, by the tilt of the plane."""
        if np.all(tilt == tilt.flat[0]):
            return Diffuse(*(share + 0.0 * tilt for share in _at(self, (float(tilt.flat[0]),))))
        tilts = np.arange(0.0, tilt.max() + _STEP, _STEP)
        return Diffuse(*(np.interp(tilt, tilts, share) for share in _at(self, tuple(tilts))))


class Diffuse(NamedTuple):
    """What gets in of light from everywhere [-]."""

    sky: np.ndarray
    ground: np.ndarray


@lru_cache(maxsize=16)
def _at(cover: Cover, tilts: tuple[float, ...]) -> Diffuse:
    """Return the shares of an evenly bright sky and ground at some tilts."""
    from pvlib.iam import marion_integrate

    sky, ground = (marion_integrate(cover.beam, np.array(tilts), of) for of in ("sky", "ground"))
    return Diffuse(np.asarray(sky), np.asarray(ground))
