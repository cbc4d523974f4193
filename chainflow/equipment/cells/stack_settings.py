"""Which settings of an electrolyser go together?

Sentences for settings that do not fit the model, the sizing or the temperature; empty if all fits.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, NamedTuple

from chainflow.equipment.cells import alkaline, pem, solid_oxide
from chainflow.thermo.components import Matter
from chainflow.thermo.saturation import saturation_pressure

if TYPE_CHECKING:
    from chainflow.equipment.electrolysis import Electrolyser


class Model(NamedTuple):
    """What a model takes."""

    wants: str  # the setting that it cannot do without, or that holds its numbers
    example: str
    sized: bool  # whether current density and area mean something
    leaks: bool = False  # whether hydrogen gets into the oxygen
    window: tuple[float, float] | None = None  # [K]
    instead: str = ""


MODELS = {
    "specific-energy": Model("energy_use", "energy_use: 52 kWh/kg", sized=False),
    "voltage": Model("voltage", "voltage: 1.9 V", sized=False),
    "pem": Model("pem", "", True, True, (pem.COLDEST, pem.HOTTEST), "solid-oxide"),
    "alkaline": Model(
        "alkaline", "", True, True, (alkaline.COLDEST, alkaline.HOTTEST), "solid-oxide"
    ),
    "solid-oxide": Model(
        "solid_oxide", "", True, False, (solid_oxide.COLDEST, solid_oxide.HOTTEST), "pem"
    ),
    "measured": Model("curve", "curve: stack.csv", sized=True),
}
_WITH_NUMBERS = {"pem": "pem", "alkaline": "alkaline", "solid-oxide": "solid_oxide"}
_OWN = ("energy_use", "voltage", "pem", "alkaline", "solid_oxide", "curve", "faraday_efficiency")


def with_cell(given: Any) -> Any:
    """Return settings in which the numbers of the model's cells stand, if only by default."""
    if not isinstance(given, dict):
        return given
    word = given.get("model")
    name = _WITH_NUMBERS.get(word) if isinstance(word, str) else None
    if name is None or given.get(name) is not None:
        return given
    return {**given, name: {}}


def wrong_for_model(piece: Electrolyser) -> str:
    """Say which setting belongs to another model, or is missing."""
    model = MODELS[piece.model]
    own = {model.wants, "faraday_efficiency"} if piece.model == "measured" else {model.wants}
    strange = [n for n in _OWN if n not in own and getattr(piece, n) is not None]
    if getattr(piece, model.wants) is None or (strange and model.example):
        named = strange[0] if strange else _usual_mistake(model.wants)
        return f"model {piece.model} wants '{model.wants}' and not '{named}'; write {model.example}"
    if strange:
        return f"'{strange[0]}' is of another model than {piece.model}: remove it or change 'model'"
    return ""


def _usual_mistake(wants: str) -> str:
    return "voltage" if wants == "energy_use" else "energy_use"


def sizing_trouble(piece: Electrolyser) -> str:
    """Say why the size of the stack is unknown, or known twice."""
    given = [name for name in ("current_density", "cell_area") if getattr(piece, name) is not None]
    if piece.minimum_load is not None and piece.rating is None:
        return "'minimum_load' is a share of 'rating': give the power drawn at full load too"
    if not MODELS[piece.model].sized:
        if given:
            return (
                f"model {piece.model} has no curve, so '{given[0]}' means nothing: remove it or "
                "take model pem, alkaline, solid-oxide or measured"
            )
        return ""
    return _sized_trouble(piece, given)


def _sized_trouble(piece: Electrolyser, given: list[str]) -> str:
    neutral = piece.solid_oxide is not None and piece.solid_oxide.thermoneutral
    if neutral and piece.current_density is not None:
        return "'solid_oxide.thermoneutral' finds the current density: remove 'current_density'"
    if not given and not neutral:
        return (
            f"model {piece.model} wants 'current_density' or 'cell_area': with a current density "
            "the area follows from the load, with an area the current density does"
        )
    if piece.current_density == 0.0:
        return "'current_density' is zero, wanted more"
    if len(given) == 2 and piece.hydrogen is not None:
        return (
            "'hydrogen', 'cell_area' and 'current_density' are given: each two of them "
            "settle the third, "
            "remove one"
        )
    if len(given) == 2 and piece.rating is not None:
        return "'rating', 'cell_area' and 'current_density' are given: remove one of them"
    if neutral and (piece.cell_area is not None or piece.rating is not None):
        return (
            "'solid_oxide.thermoneutral' is one point of the curve: remove 'cell_area' "
            "and 'rating', "
            "the area follows from the load"
        )
    if piece.current_density is not None and piece.pem is not None:
        limit = piece.pem.limiting_current
        if piece.current_density >= limit:
            return (
                f"'current_density' is {piece.current_density / 1e4:.4g} A/cm2, wanted less than "
                f"the limiting current of {limit / 1e4:.4g} A/cm2"
            )
    return ""


def missing_components(model: str, matter: Matter) -> str:
    """Say which components the chemistry lacks."""
    names = ["H2", "O2", "H2O"]
    if model == "solid-oxide" and "CO2" in matter.index:
        names.append("CO")
    missing = [name for name in names if name not in matter.index]
    return f"electrolysis needs {', '.join(missing)} among the components" if missing else ""


def temperature_trouble(piece: Electrolyser) -> str:
    """Say why the temperature does not suit the model or the water."""
    model, level = MODELS[piece.model], piece.temperature
    if model.window is not None and not model.window[0] <= level <= model.window[1]:
        low, high = (limit - 273.15 for limit in model.window)
        other = MODELS[model.instead].window
        fits = other is not None and other[0] <= level <= other[1]
        hint = f"; at this temperature take model {model.instead}" if fits else ""
        return (
            f"temperature is {level - 273.15:.4g} degC, model {piece.model} works from "
            f"{low:.4g} to "
            f"{high:.4g} degC{hint}"
        )
    if piece.model == "solid-oxide":
        return _entry_trouble(piece)
    oxygen_side = piece.pem.oxygen_pressure if piece.pem is not None else None
    if oxygen_side is not None and oxygen_side > piece.pressure:
        return (
            "'pem.oxygen_pressure' is above 'pressure', wanted the lower pressure of the water side"
        )
    return boiling_trouble(level, oxygen_side or piece.pressure)


def boiling_trouble(level: float, least: float) -> str:
    """Say that water is no liquid at a temperature [K] and the lowest pressure [Pa]."""
    if level > 473.15 or saturation_pressure(level) >= 0.95 * least:
        return (
            f"at {level - 273.15:.4g} degC and {least / 1e5:.4g} bar the water boils, "
            "wanted liquid water: lower the temperature or raise the pressure"
        )
    return ""


def _entry_trouble(piece: Electrolyser) -> str:
    assert piece.solid_oxide is not None
    entry = piece.solid_oxide.entry
    if entry is not None and not solid_oxide.COLDEST <= entry <= solid_oxide.HOTTEST:
        return (
            f"'solid_oxide.entry' is {entry - 273.15:.4g} degC, wanted "
            f"{solid_oxide.COLDEST - 273.15:.4g} to {solid_oxide.HOTTEST - 273.15:.4g} degC"
        )
    return ""
