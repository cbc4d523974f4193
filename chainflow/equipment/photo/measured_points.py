"""How do measured points of an electrode become a curve that can be used?

SI throughout: potential [V] against the reversible hydrogen electrode, current density [A/m2] of
the illuminated area, wavelength [m]. Points come from a CSV file with units in its headings, or as
lists. Points of a curve may stand in any order and may scatter: currents at one potential are
averaged, small steps down are levelled (pool adjacent violators; Ayer et al., Ann. Math. Stat. 26
(1955) 641), either sign convention of the current is understood, and a small current against the
direction before the onset counts as none. What is more than a tenth of the highest current off is
no scatter: it is refused and its line named.
"""

from __future__ import annotations

from collections.abc import Sequence
from functools import lru_cache
from typing import Annotated, Any, NamedTuple

from pydantic import (
    BaseModel,
    BeforeValidator,
    ConfigDict,
    Field,
    PrivateAttr,
    ValidationInfo,
    WithJsonSchema,
)
from pydantic_core import PydanticCustomError

from chainflow.basis.names import shorten
from chainflow.basis.quantities import Length, Voltage, measured
from chainflow.equipment.csv_points import CurveFault, Form, Wanted, read_points

SCATTER = 0.1  # of the highest current; our own convention
APART = 0.05  # quantum efficiencies at one wavelength
_CURVE = Form(
    {
        "potential": Wanted("V", "a potential in V"),
        "current_density": Wanted("A/m2", "a current density in mA/cm2"),
    },
    "potential [V], current density [mA/cm2]",
    ": divide by the illuminated area",
)
_EFFICIENCY = Form(
    {
        "wavelength": Wanted("m", "a wavelength in nm"),
        "efficiency": Wanted("1", "a quantum efficiency in % or 1"),
    },
    "wavelength [nm], quantum efficiency [%]",
)


class FilePoints(BaseModel):
    """Points with the names of where they stand."""

    model_config = ConfigDict(frozen=True, extra="forbid")
    _places: tuple[str, ...] = PrivateAttr(())
    _file: str = PrivateAttr("")

    @property
    def places(self) -> tuple[str, ...]:
        """How each point is named in a sentence."""
        count = len(next(iter(dict(self).values())))
        return self._places or tuple(f"point {i}" for i in range(1, count + 1))

    @property
    def prefix(self) -> str:
        """What stands in front of a place."""
        return f"{self._file}, " if self._file else ""


class PhotoCurve(FilePoints):
    """A measured curve of the illuminated photoelectrode."""

    potential: tuple[Voltage, ...] = Field(description="against the reversible hydrogen electrode")
    current_density: tuple[Annotated[float, measured("A/m2")], ...] = Field(
        description="of the illuminated area, one for each potential; either sign convention"
    )

    def cleaned(self, direction: float) -> Cleaned:
        """Return rising driving potentials and current densities. Raises `CurveFault`."""
        return _cleaned(self.potential, self.current_density, direction, self.places, self.prefix)


class EfficiencyCurve(FilePoints):
    """A measured external quantum efficiency."""

    wavelength: tuple[Length, ...]
    efficiency: tuple[Annotated[float, measured("1")], ...] = Field(
        description="electrons per photon that arrives, one for each wavelength"
    )

    def sorted(self) -> tuple[tuple[float, ...], tuple[float, ...]]:
        """Return rising wavelengths and the efficiencies there. Raises `CurveFault`."""
        return _sorted(self.wavelength, self.efficiency, self.places, self.prefix)


def from_file(form: Form, model: type[FilePoints]) -> Any:
    """Return a validator that reads a file where a name is given."""

    def read(given: Any, info: ValidationInfo) -> Any:
        if not isinstance(given, str):
            return given
        folder = (info.context or {}).get("folder", "")
        try:
            points = read_points(given, folder, form)
        except CurveFault as fault:
            raise PydanticCustomError("curve", "{text}", {"text": str(fault)}) from None
        columns = {key: tuple(point.values[key] for point in points) for key in form.columns}
        found = model.model_validate(columns)
        found._places = tuple(f"line {point.line}" for point in points)
        found._file = shorten(given, 100)
        return found

    return read


PhotoCurveSetting = Annotated[
    PhotoCurve,
    BeforeValidator(from_file(_CURVE, PhotoCurve)),
    WithJsonSchema({"type": ["string", "object"], "description": f"a CSV file: {_CURVE.example}"}),
]


def _share_or_curve(given: Any, info: ValidationInfo) -> Any:
    """Tell the name of a file from a share."""
    is_file = isinstance(given, str) and given.strip().lower().endswith((".csv", ".txt", ".tsv"))
    return from_file(_EFFICIENCY, EfficiencyCurve)(given, info) if is_file else given


QuantumEfficiency = Annotated[
    Annotated[float, measured("1", gt=0, le=1)] | EfficiencyCurve,
    BeforeValidator(_share_or_curve),
    WithJsonSchema(
        {
            "type": ["string", "number", "object"],
            "description": f"a share, or a CSV file: {_EFFICIENCY.example}",
        }
    ),
]


class Cleaned(NamedTuple):
    """A curve that rises: driving potentials [V] and current densities [A/m2]."""

    drives: tuple[float, ...]
    densities: tuple[float, ...]


class CurvePoint(NamedTuple):
    """A point of a curve that rises: where, how much, and the name of the place it stands in."""

    drive: float
    density: float
    place: str


def require_curve(
    word: str, levels: Sequence[float], densities: Sequence[float], prefix: str
) -> None:
    """Refuse lists of unequal length, and less than three different levels (`word` names them)."""
    if len(levels) != len(densities):
        raise CurveFault(
            f"{len(levels)} {word} and {len(densities)} current densities are given, "
            "wanted as many of the one as of the other"
        )
    if len(set(levels)) < 3:
        raise CurveFault(f"{prefix}{len(set(levels))} {word} are given, wanted at least three")


@lru_cache(maxsize=64)
def _cleaned(
    potentials: tuple[float, ...],
    densities: tuple[float, ...],
    direction: float,
    places: tuple[str, ...],
    prefix: str,
) -> Cleaned:
    require_curve("potentials", potentials, densities, prefix)
    sign = 1.0 if max(densities) >= -min(densities) else -1.0
    triples = zip(potentials, densities, places, strict=True)
    points = sorted(CurvePoint(direction * v, sign * j, place) for v, j, place in triples)
    highest = max(point.density for point in points)
    if highest <= 0.0:
        raise CurveFault(f"{prefix}every current is zero, wanted the curve in the light")
    _refuse_other_direction(points, highest, direction, prefix)
    _refuse_backward(points, highest, sign, prefix)
    single = merged(points, highest, direction, prefix)
    levels = levelled([max(point.density, 0.0) for point in single])
    for point, level in zip(single, levels, strict=True):
        if abs(max(point.density, 0.0) - level) > SCATTER * highest:
            raise CurveFault(
                f"{prefix}{point.place}: {per_area(point.density)} at "
                f"{direction * point.drive:.4g} V is out of line with its neighbours "
                f"({per_area(level)}), wanted a current that rises to a plateau"
            )
    return Cleaned(tuple(point.drive for point in single), tuple(levels))


def _refuse_other_direction(
    points: Sequence[CurvePoint], highest: float, direction: float, prefix: str
) -> None:
    """Refuse a curve that belongs to the other kind of electrode."""
    half = len(points) // 2
    first, last = points[:half], points[-half:]
    fall = sum(p.density for p in first) / half - sum(p.density for p in last) / half
    if fall <= SCATTER * highest:
        return
    kind, other = ("photoanode", "photocathode")[:: 1 if direction > 0.0 else -1]
    words = ("falls", "rises")[:: 1 if direction > 0.0 else -1]
    largest = max(points, key=lambda point: point.density)
    raise CurveFault(
        f"{prefix}{largest.place}: the current grows as the potential {words[0]}, that of a "
        f"{other} and not of a {kind}: change 'electrode' or turn the sign of the potentials"
    )


def _refuse_backward(
    points: Sequence[CurvePoint], highest: float, sign: float, prefix: str
) -> None:
    """Refuse currents of both directions in one curve."""
    lowest = min(points, key=lambda point: point.density)
    if lowest.density < -SCATTER * highest:
        raise CurveFault(
            f"{prefix}{lowest.place}: {per_area(sign * lowest.density)} runs against the rest "
            f"(up to {per_area(sign * highest)}): leave out the branch in which the electrode "
            "works the other way"
        )


def merged(
    points: Sequence[CurvePoint], highest: float, direction: float, prefix: str
) -> list[CurvePoint]:
    """Return one point for each potential, the mean of all that stand there."""
    groups: dict[float, list[CurvePoint]] = {}
    for point in points:
        groups.setdefault(point.drive, []).append(point)
    found = []
    for drive, group in groups.items():
        low, high = (f(group, key=lambda p: p.density) for f in (min, max))
        if high.density - low.density > SCATTER * highest:
            raise CurveFault(
                f"{prefix}{low.place} and {high.place}: {per_area(low.density)} and "
                f"{per_area(high.density)} at {direction * drive:.4g} V: keep one of the two sweeps"
            )
        mean = sum(point.density for point in group) / len(group)
        found.append(CurvePoint(drive, mean, group[0].place))
    return found


def levelled(values: Sequence[float]) -> list[float]:
    """Return the nearest values that never fall: pool adjacent violators."""
    blocks: list[tuple[float, int]] = []
    for value in values:
        total, count = value, 1
        while blocks and blocks[-1][0] * count > total * blocks[-1][1]:
            before, more = blocks.pop()
            total, count = total + before, count + more
        blocks.append((total, count))
    return [total / count for total, count in blocks for _ in range(count)]


@lru_cache(maxsize=64)
def _sorted(
    wavelengths: tuple[float, ...],
    efficiencies: tuple[float, ...],
    places: tuple[str, ...],
    prefix: str,
) -> tuple[tuple[float, ...], tuple[float, ...]]:
    if len(wavelengths) != len(efficiencies):
        raise CurveFault(
            f"{len(wavelengths)} wavelengths and {len(efficiencies)} efficiencies are given, "
            "wanted as many of the one as of the other"
        )
    if len(set(wavelengths)) < 2:
        raise CurveFault(f"{prefix}one wavelength is given, wanted at least two")
    groups: dict[float, list[tuple[float, str]]] = {}
    for wavelength, value, place in sorted(
        zip(wavelengths, efficiencies, places, strict=True), key=lambda point: point[0]
    ):
        if not 0.0 <= value <= 1.0:
            hint = "; for per cent write [%] in the heading" if 1.0 < value <= 100.0 else ""
            raise CurveFault(
                f"{prefix}{place}: a quantum efficiency of {value:.4g}, wanted 0 to 1{hint}"
            )
        if not 50e-9 < wavelength < 20e-6:
            raise CurveFault(
                f"{prefix}{place}: a wavelength of {wavelength / 1e-9:.4g} nm, wanted one of light"
            )
        groups.setdefault(wavelength, []).append((value, place))
    for wavelength, group in groups.items():
        low, high = min(group), max(group)
        if high[0] - low[0] > APART:
            raise CurveFault(
                f"{prefix}{low[1]} and {high[1]}: {low[0]:.4g} and {high[0]:.4g} at "
                f"{wavelength / 1e-9:.4g} nm: keep one of them"
            )
    means = [sum(value for value, _ in group) / len(group) for group in groups.values()]
    return tuple(groups), tuple(means)


def per_area(density: float) -> str:
    """Return a current density [A/m2] in the words of the trade."""
    return f"{density / 10.0:.4g} mA/cm2"
