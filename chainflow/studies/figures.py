"""The figures of a comparison, row by row: one list for the table, the JSON and the CSV.

SI. A figure is None where a route has none; what is an amount per time is scaled to the common
sunlight.
"""

from __future__ import annotations

from collections.abc import Callable, Container, Iterator, Mapping, Sequence
from dataclasses import dataclass
from functools import partial

from chainflow.studies.compare import Comparison, Route
from chainflow.studies.needs import heat_needs, needs
from chainflow.studies.stages import ORDER

Value = float | str | None


@dataclass(frozen=True, slots=True)
class Figure:
    """One row: its place, words, unit, and a value for each route in order."""

    group: str
    key: str  # dotted, ends in its unit as in the document
    label: str
    unit: str  # SI; "share" for what is shown in per cent, "text", "money", "kg/kWh"
    values: tuple[Value, ...]


def figures(found: Comparison) -> tuple[Figure, ...]:
    """Return all rows of a comparison in which at least one route has a value other than zero."""
    rows = (
        *_efficiency(found),
        *_rungs(found),
        *_stages(found),
        *_store(found),
        *_needs(found),
        *_heat(found),
        *_hazards(found),
        *_costs(found),
    )
    return tuple(row for row in rows if any(row.values))


def _row(
    found: Comparison, group: str, key: str, label: str, unit: str, of: Callable[[Route], Value]
) -> Figure:
    values = tuple(of(route) if route.solved else None for route in found.routes)
    return Figure(group, key, label, unit, values)


def _efficiency(found: Comparison) -> Iterator[Figure]:
    group = "efficiency"

    def fuel(route: Route) -> Value:
        assert route.account is not None
        return route.account.efficiency.sunlight_to_fuel[found.basis] or None

    yield _row(found, group, "sunlight_to_fuel", "sunlight to fuel", "share", fuel)

    def kept(route: Route) -> Value:
        return None if route.stages is None else route.stages.kept

    yield _row(found, group, "sunlight_to_kept", "sunlight to what is kept", "share", kept)

    def power(route: Route) -> Value:
        only = route.stages is not None and route.stages.only_power
        assert route.account is not None
        return route.account.efficiency.overall[found.basis] if only else None

    yield _row(found, group, "sunlight_to_power", "sunlight to power", "share", power)

    def share(route: Route) -> Value:
        assert route.account is not None
        return route.account.efficiency.sunlight_share

    yield _row(found, group, "sunlight_share", "sunlight of what goes in", "share", share)


def _rungs(found: Comparison) -> Iterator[Figure]:
    names: dict[tuple[str, str], None] = {}
    for route in found.solved:
        assert route.account is not None
        names |= dict.fromkeys((r.start, r.end) for r in route.account.efficiency.rungs)

    for start, end in names:

        def ratio(route: Route, start: str = start, end: str = end) -> Value:
            assert route.account is not None
            rungs = route.account.efficiency.rungs
            return next(
                (r.ratio[found.basis] for r in rungs if (r.start, r.end) == (start, end)), None
            )

        yield _row(found, "rungs", f"{start} -> {end}", f"{start} -> {end}", "share", ratio)


def _stages(found: Comparison) -> Iterator[Figure]:
    lost = [route.stages.lost for route in found.routes if route.stages is not None]
    for name in dict.fromkeys([*ORDER, *(name for one in lost for name in one)]):

        def share(route: Route, name: str = name) -> Value:
            return None if route.stages is None else route.stages.lost.get(name)

        yield _row(found, "lost", name, name, "share", share)


def _store(found: Comparison) -> Iterator[Figure]:
    words: dict[str, Callable[[Route], Value]] = {
        "content": lambda r: r.kept.content if r.kept else None,
        "phase": lambda r: r.kept.phase if r.kept else None,
        "vessel": lambda r: r.kept.vessel if r.kept else None,
    }
    for key, of in words.items():
        yield _row(found, "store", key, key, "text", of)
    numbers: tuple[tuple[str, str, str, Callable[[Route], Value]], ...] = (
        ("temperature_K", "temperature", "K", lambda r: r.kept.temperature if r.kept else None),
        ("pressure_Pa", "pressure", "Pa", lambda r: r.kept.pressure if r.kept else None),
        ("energy_J_kg", "energy per kg", "J/kg", lambda r: r.kept.per_mass if r.kept else None),
        (
            "energy_with_vessel_J_kg",
            "  with vessel",
            "J/kg",
            lambda r: r.kept.per_mass_with_vessel if r.kept else None,
        ),
        ("energy_J_m3", "energy per m3", "J/m3", lambda r: r.kept.per_volume if r.kept else None),
        (
            "energy_with_vessel_J_m3",
            "  with vessel",
            "J/m3",
            lambda r: r.kept.per_volume_with_vessel if r.kept else None,
        ),
    )
    for key, label, unit, of in numbers:
        yield _row(found, "store", key, label, unit, of)
    sizes = (
        ("mass_kg", "mass", "kg"),
        ("mass_with_vessel_kg", "  with vessel", "kg"),
        ("volume_m3", "volume", "m3"),
        ("volume_with_vessel_m3", "  with vessel", "m3"),
    )
    for key, label, unit in sizes:

        def size(route: Route, key: str = key) -> Value:
            return route.kept.sizes(found.energy)[key] if route.kept else None

        yield _row(found, "size", key, label, unit, size)


def _needs(found: Comparison) -> Iterator[Figure]:
    rows = (
        ("water_kg_s", "water bought", "kg/s"),
        ("CO2_kg_s", "CO2 bought", "kg/s"),
        ("CO2_from_air_kg_s", "CO2 out of the air", "kg/s"),
        ("power_W", "power bought", "W"),
        ("heat_W", "heat bought", "W"),
        ("cold_W", "cooling bought", "W"),
        ("water_kg_kWh_fuel", "water, kg a kWh of fuel", "kg/kWh"),
        ("carbon_efficiency", "carbon that ends in fuel", "share"),
        ("water_returned", "water returned", "share"),
        ("CO2_returned", "CO2 returned", "share"),
    )
    known = {r.name: needs(r.account) for r in found.solved if r.account is not None}
    yield from _amounts(found, "needs", rows, known, fixed=("share", "kg/kWh"))


def _heat(found: Comparison) -> Iterator[Figure]:
    rows = (
        ("needed_W", "needed", "W"),
        ("recovered_W", "  met by own heat", "W"),
        ("electric_W", "  met by power", "W"),
        ("ambient_W", "  met by the ambient", "W"),
        ("bought_W", "  bought", "W"),
        ("hottest_K", "hottest need", "K"),
    )
    known = {
        r.name: heat_needs(r.solution, r.account) for r in found.solved if r.solution and r.account
    }
    yield from _amounts(found, "heat", rows, known, fixed=("K",))


def _amounts(
    found: Comparison,
    group: str,
    rows: Sequence[tuple[str, str, str]],
    known: Mapping[str, Mapping[str, float | None]],
    fixed: Container[str],
) -> Iterator[Figure]:
    """Rows (key, label, unit) of amounts known by route, scaled unless their unit is `fixed`."""
    for key, label, unit in rows:

        def amount(route: Route, key: str = key, unit: str = unit) -> Value:
            value = known[route.name][key]
            return value if value is None or unit in fixed else value * found.scales[route.name]

        yield _row(found, group, key, label, unit, amount)


def _hazards(found: Comparison) -> Iterator[Figure]:
    for hazard in dict.fromkeys(one for route in found.routes for one in route.hazards):

        def there(route: Route, hazard: str = hazard) -> Value:
            return "yes" if hazard in route.hazards else "no"

        yield _row(found, "hazards", hazard, hazard, "text", there)


def _costs(found: Comparison) -> Iterator[Figure]:
    accounts = {r.name: r.account.costs for r in found.solved if r.account is not None}
    currencies = {one.currency for one in accounts.values() if one is not None}

    def levelised(route: Route, what: str) -> Value:
        one = accounts[route.name]
        if one is None:
            return None
        if what == "fuel":
            energy = one.fuel_hhv if found.basis == "HHV" else one.fuel_lhv
            return one.per_kwh(one.fuel_cost, energy)
        return one.per_kwh(one.power_cost, one.power) if what == "power" else one.installed

    for what, label in (("fuel", "fuel"), ("power", "power")):
        yield _row(
            found,
            "cost",
            f"{what}_per_kWh",
            f"{label}, a kWh",
            "money",
            partial(levelised, what=what),
        )

    def installed(route: Route) -> Value:
        value = levelised(route, "installed")
        return value * found.scales[route.name] if isinstance(value, float) else None

    yield _row(found, "cost", "installed", "installed", "money", installed)
    if currencies:
        yield _row(
            found,
            "cost",
            "currency",
            "currency",
            "text",
            lambda route: getattr(accounts[route.name], "currency", None),
        )
