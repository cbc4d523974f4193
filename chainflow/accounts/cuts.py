"""How much energy passes the successive cuts through a plant?

What goes in, the power made from light or bought, hydrogen made by electrolysis, fuel made, fuel
kept (see `chainflow.accounts.fuel`) or power kept, and what is useful. Cuts that a plant does not
have are left out; where light makes hydrogen without being power first there is no cut of power.
A file may name its own cuts between the first and the last
(`chainflow.flowsheet.rungs`); the ends stay, so the rungs multiply to the overall efficiency.

*Power kept* is what batteries give back, with the power that goes to its use past them: what is
kept of a plant that makes no fuel. A battery whose power goes to no use keeps nothing.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from chainflow.accounts.border import leaving
from chainflow.accounts.deliveries import Deliveries
from chainflow.accounts.exergy import flow_exergy
from chainflow.accounts.fuel import fuel_lines, worth_of_lines
from chainflow.accounts.purchases import Purchases
from chainflow.accounts.worth import Worth, of_material, of_power
from chainflow.equipment.base import Equipment
from chainflow.equipment.battery import Battery
from chainflow.equipment.boundary import Product
from chainflow.equipment.heat import HeatEngine
from chainflow.equipment.heat_network import HeatNetwork
from chainflow.equipment.junctions import Splitter
from chainflow.equipment.ports import rate_of
from chainflow.equipment.power import Grid, Switchboard
from chainflow.equipment.sunlight import Sunlight
from chainflow.flowsheet.network import Flowsheet
from chainflow.flowsheet.rungs import FIRST, LAST, NamedCut
from chainflow.solver.solution import Solution, SolvedStream
from chainflow.thermo.streams import Stream

_SAME = 1e-12  # relative; two cuts through the same lines differ by round-off only


@dataclass(frozen=True, slots=True)
class Cut:
    """The energy that passes one cut through the plant, and the outlets it passes."""

    name: str
    worth: Worth
    ports: tuple[str, ...] = ()


def cuts(
    solution: Solution, entering: Worth, bought: Purchases, delivered: Deliveries
) -> tuple[Cut, ...]:
    """Return the cuts that a plant has, in order; each is more than nothing but the last."""
    if not entering.positive:
        return ()
    between = tuple(cut for cut in _between(solution, bought) if cut.worth.positive)
    first = Cut("light" if sunlight(solution) > 0.0 else "input", entering)
    last = Cut(_last_name(delivered), delivered.worth)
    named = solution.flowsheet.blocks.cuts
    if named:
        return _renamed(solution, named, (first, *between, last))
    if between and between[-1].name.endswith("kept") and _same(between[-1].worth, last.worth):
        return (first, *between)
    return (first, *between, last)


def sunlight(solution: Solution) -> float:
    """Return the light that falls on all apertures [W]."""
    pieces = solution.flowsheet.equipment
    return sum(
        rate_of(stream.flow)
        for stream in solution.streams
        if stream.content == "light" and isinstance(pieces[stream.source], Sunlight)
    )


# --- cuts that are found from the graph --------------------------------------------------------


def _between(solution: Solution, bought: Purchases) -> Iterator[Cut]:
    """Yield the cuts between what goes in and what is useful, also those that are nothing."""
    air = solution.flowsheet.environment
    gas = [(s.key, s.flow) for s in _hydrogen(solution) if isinstance(s.flow, Stream)]
    hydrogen = Worth.total(of_material(flow, air) for _, flow in gas)
    lines = fuel_lines(solution)
    made, kept = worth_of_lines(solution, lines.made), worth_of_lines(solution, lines.kept)
    solar = tuple(_solar_power(solution))
    power = sum(rate_of(stream.flow) for stream in solar)
    # else power only drives a plant that runs on bought fuel or makes hydrogen of light itself
    if (power > 0.0 or hydrogen.positive) and not _lit_hydrogen(solution):
        ports = tuple(stream.key for stream in solar)
        yield Cut("power", of_power(power + bought.power_total), ports)
    yield Cut("hydrogen", hydrogen, tuple(key for key, _ in gas))
    yield Cut("fuel made", made, lines.made)
    if made.positive:
        yield Cut("fuel kept", kept, lines.kept)
    else:
        yield _power_kept(solution)


def _power_kept(solution: Solution) -> Cut:
    """Return the power of the batteries that serve a use, and what goes there past them."""
    sheet = solution.flowsheet
    behind = _behind_batteries(solution)
    final = [s for s in solution.streams if s.content == "power" and _is_useful(solution, s)]
    if not any(stream.source in behind for stream in final):
        return Cut("power kept", Worth())
    batteries = [s for s in solution.streams if isinstance(sheet.equipment[s.source], Battery)]
    passing = batteries + [stream for stream in final if stream.source not in behind]
    total = sum(rate_of(stream.flow) for stream in passing)
    return Cut("power kept", of_power(total), tuple(stream.key for stream in passing))


def _behind_batteries(solution: Solution) -> set[str]:
    """Return the batteries and the switchboards that their power reaches."""
    sheet = solution.flowsheet
    found: set[str] = set()
    queue = [name for name, piece in sheet.equipment.items() if isinstance(piece, Battery)]
    while queue:
        name = queue.pop()
        if name not in found and isinstance(sheet.equipment[name], Battery | Switchboard):
            found.add(name)
            queue += [line.target for line in sheet.out_of(name)]
    return found


def _is_useful(solution: Solution, stream: SolvedStream) -> bool:
    pieces = solution.flowsheet.equipment
    receivers = [pieces[target.partition(".")[0]] for target in stream.targets]
    away = not receivers and not isinstance(pieces[stream.source], Switchboard | Grid)
    return away or any(isinstance(piece, Product | Grid) for piece in receivers)


def _last_name(delivered: Deliveries) -> str:
    matter = any(float(stream.total) > 0.0 for _, stream in delivered.material)
    only_power = delivered.power_total > 0.0 and not delivered.heat_total and not matter
    return "power out" if only_power else "useful"


def _same(first: Worth, second: Worth) -> bool:
    pairs = zip(first.by_basis.values(), second.by_basis.values(), strict=True)
    return all(abs(a - b) <= _SAME * abs(a) for a, b in pairs)


def _solar_power(solution: Solution) -> Iterator[SolvedStream]:
    """Yield the power that leaves equipment which takes light, or heat of sunlight alone."""
    sheet = solution.flowsheet
    for name, piece in sheet.equipment.items():
        heated = sheet.into(name) and isinstance(piece, HeatEngine) and _is_sun_heated(sheet, name)
        if _takes_light(piece) or heated:
            yield from (s for s in leaving(solution, name) if s.content == "power")


def _is_sun_heated(sheet: Flowsheet, name: str) -> bool:
    """Whether all that arrives at a piece is from receivers of light, be it through networks."""
    seen, waiting = {name}, [name]
    while waiting:
        for line in sheet.into(waiting.pop()):
            source = sheet.equipment[line.source]
            if _takes_light(source) or line.source in seen:
                continue
            if not (isinstance(source, HeatNetwork | Splitter) and sheet.into(line.source)):
                return False
            seen.add(line.source)
            waiting.append(line.source)
    return True


def _takes_light(piece: Equipment) -> bool:
    return any(port.is_inlet and port.content == "light" for port in piece.port_list())


def _lit_hydrogen(solution: Solution) -> bool:
    """Whether hydrogen is made of light without being power first."""
    pieces = solution.flowsheet.equipment.values()
    return any(piece.makes and _takes_light(piece) for piece in pieces)


def _hydrogen(solution: Solution) -> Iterator[SolvedStream]:
    """Yield what leaves the hydrogen outlets of equipment that makes it."""
    for name, piece in solution.flowsheet.equipment.items():
        if piece.makes:
            yield from (s for s in leaving(solution, name) if s.outlet == "hydrogen")


# --- cuts that the file names --------------------------------------------------------------------


def _renamed(
    solution: Solution, named: tuple[NamedCut, ...], automatic: tuple[Cut, ...]
) -> tuple[Cut, ...]:
    """Return the file's own cuts between the two ends."""
    first, last = automatic[0], automatic[-1]
    known = {cut.name: cut for cut in automatic[1:-1]}
    between = []
    for cut in named:
        if cut.word == FIRST:
            first = Cut(cut.name, first.worth)
        elif cut.word == LAST:
            last = Cut(cut.name, last.worth)
        elif cut.word:
            if cut.word in known:
                between.append(Cut(cut.name, known[cut.word].worth, known[cut.word].ports))
        else:
            between.append(Cut(cut.name, _worth_of_ports(solution, cut.ports), cut.ports))
    return (first, *(cut for cut in between if cut.worth.positive), last)


def _worth_of_ports(solution: Solution, ports: tuple[str, ...]) -> Worth:
    """Return what leaves the named outlets, whatever it is."""
    air, parts = solution.flowsheet.environment, []
    for stream in solution.streams:
        if stream.key in ports:
            if isinstance(stream.flow, Stream):
                parts.append(of_material(stream.flow, air))
            else:
                rate = rate_of(stream.flow)
                exergy = flow_exergy(stream.flow, stream.content, air)
                parts.append(Worth(rate, rate, exergy))
    return Worth.total(parts)
