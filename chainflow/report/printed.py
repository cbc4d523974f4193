"""The answer as people read it: the short answer first, then the streams, then what to be wary of.

Plain text through rich: tables on any width, styles on a terminal only. Numbers are in
engineering units.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from typing import TYPE_CHECKING, TextIO

from chainflow.accounts.costs import cost_account
from chainflow.accounts.exergy import exergy_destroyed
from chainflow.accounts.hazards import CLOSING_SENTENCE, Remark, cautions, idealisations
from chainflow.accounts.heat import HeatAccount
from chainflow.accounts.plant import PlantAccount, plant_account
from chainflow.accounts.worth import BASES
from chainflow.basis.formatting import format_quantity
from chainflow.equipment.heat_needs import Duty
from chainflow.equipment.ports import Heat, Light, rate_of
from chainflow.report import numbers
from chainflow.report.accounts_printed import print_costs
from chainflow.report.plain import console, encoding_of, plain_table, printable
from chainflow.solver.solution import HoldResult, Solution, SolvedStream
from chainflow.thermo.streams import Stream

if TYPE_CHECKING:
    from rich.console import Console
    from rich.table import Table

    from chainflow.studies.why import Why

_MOST_LOSSES = 5
_ROUND_OFF = 1e-9  # of the largest stream: what is bought below it is how far the loops close
_LABEL = 18  # characters
_NARROW = 100  # characters; below, only the first columns of the stream table are shown
_NARROW_COLUMNS = 6
_TWO_LINES = 130  # characters; below, the two ends of a stream stand below each other


def print_answer(solution: Solution, out: TextIO | None = None, reasons: Why | None = None) -> None:
    """Print the whole answer; the reasons, if there are any, stand behind the short answer."""
    screen = console(out)
    encoding = encoding_of(screen.file)
    screen.print(printable(solution.flowsheet.title or "untitled", encoding), style="bold")
    for line in _short_answer(solution):
        screen.print(line, soft_wrap=True)
    if reasons is not None:
        screen.print()
        screen.print("Why", style="bold")
        for sentence in reasons.sentences():
            screen.print(f"- {sentence}", soft_wrap=True)
    if costs := cost_account(solution):
        print_costs(screen, costs)
    _print_tables(screen, solution)
    _print_remarks(screen, "Idealisations", idealisations(solution))
    _print_remarks(screen, "Cautions", cautions(solution))
    screen.print()
    screen.print(CLOSING_SENTENCE, soft_wrap=True)


def _line(label: str, text: str) -> str:
    return f"{label:<{_LABEL}} {text}"


def _short_answer(solution: Solution) -> Iterator[str]:
    account, basis = plant_account(solution), solution.flowsheet.basis
    balance = solution.balance
    yield (
        f"solved in {solution.passes} passes; balances close to "
        f"{balance.elements:.1e} (elements) and {balance.energy:.1e} (energy)"
    )
    yield ""
    found = account.efficiency
    yield _line("overall efficiency", _on_bases(found.overall, basis))
    yield _line("sunlight to fuel", _on_bases(found.sunlight_to_fuel, basis))
    yield _line("sunlight share", f"{numbers.percent(found.sunlight_share)} of what goes in")
    for rung in found.rungs:
        yield _line("", f"{rung.start + ' -> ' + rung.end:<24} {_on_bases(rung.ratio, basis)}")
    if found.left_out:
        yield _line("", f"left out of the rungs, nothing passes: {', '.join(found.left_out)}")
    for name, share in account.returned.items():
        yield _line(f"{name} returned", numbers.percent(share, 4))
    yield _line("sunlight", numbers.energy(account.sunlight))
    largest = max(
        (float(s.flow.total) for s in solution.streams if isinstance(s.flow, Stream)), default=0.0
    )
    yield from _listed("bought", _bought(account, _ROUND_OFF * largest))
    yield from _listed("delivered", _delivered(account))
    yield from _listed_if_any("heat recovery", _heat(account.heat))
    yield _line("exergy lost in", _losses(solution, account))


def _on_bases(values: Mapping[str, float | None], basis: str) -> str:
    others = [f"{numbers.percent(values[b])} {b}" for b in BASES if b != basis]
    return f"{numbers.percent(values[basis])} {basis} ({', '.join(others)})"


def _listed(label: str, entries: Iterator[str]) -> Iterator[str]:
    found = list(entries) or ["nothing"]
    for place, entry in enumerate(found):
        yield _line(label if place == 0 else "", entry)


def _listed_if_any(label: str, entries: Iterator[str]) -> Iterator[str]:
    for place, entry in enumerate(entries):
        yield _line(label if place == 0 else "", entry)


def _heat(heat: HeatAccount) -> Iterator[str]:
    """What the plant needs of heat, how it is met, and the least that has to come from outside."""
    if heat.needed <= 0.0:
        return
    parts = {"bought": heat.bought, "electric": heat.electric}
    least = _ROUND_OFF * heat.needed
    rest = [f"{numbers.energy(rate)} {word}" for word, rate in parts.items() if rate > least]
    yield (
        f"{numbers.energy(heat.recovered)} of {numbers.energy(heat.needed)} needed come from the "
        f"plant itself" + (f", {', '.join(rest)}" if rest else "")
    )
    table = heat.table
    pinch = ""
    if table.pinch_given is not None and table.pinch_needed is not None:
        levels = (numbers.celsius(table.pinch_given), numbers.celsius(table.pinch_needed))
        pinch = f"; pinch at {levels[0]} / {levels[1]} degC"
    yield (
        f"least at an approach of {heat.approach:g} K: {numbers.energy(table.hot_utility)} from "
        f"outside, {numbers.energy(table.cold_utility)} to cool away{pinch}"
    )


def _bought(account: PlantAccount, nothing: float) -> Iterator[str]:
    """What is bought; matter up to `nothing` [mol/s] is round-off of a closed loop."""
    bought = account.bought
    for name, power in bought.power.items():
        yield f"{numbers.energy(power)} of power for {name}"
    yield from _heats("heat", bought.heat)
    yield from _heats("cooling", bought.cold)
    for name, stream in bought.material.items():
        if float(stream.total) > nothing:
            yield f"{_amount(stream)} at {name}: {_shares(stream)}"


def _heats(what: str, parts: Iterable[tuple[str, Duty]]) -> Iterator[str]:
    """One line for each purpose, however many segments its heat comes in."""
    groups: dict[tuple[str, str], list[Duty]] = {}
    for name, duty in parts:
        groups.setdefault((name, duty.purpose), []).append(duty)
    for (name, purpose), duties in groups.items():
        heat = sum(duty.heat for duty in duties)
        coldest, hottest = min(d.coldest for d in duties), max(d.hottest for d in duties)
        ends = (coldest, hottest) if heat > 0.0 else (hottest, coldest)
        span = " to ".join(numbers.celsius(end) for end in ends) + " degC"
        heat = abs(heat)
        yield f"{numbers.energy(heat)} of {what} for {name} ({purpose}, {span})"


def _delivered(account: PlantAccount) -> Iterator[str]:
    sold = account.sold
    for name, power in sold.power:
        yield f"{numbers.energy(power)} of power to {name}"
    for name, heat in sold.heat:
        yield f"{numbers.energy(heat.rate)} of heat to {name}"
    for name, stream in sold.material:
        if float(stream.total) == 0.0:
            continue
        value = f", {numbers.energy(float(stream.lhv))} LHV" if float(stream.lhv) > 0.0 else ""
        yield f"{_amount(stream)} to {name}: {_shares(stream)}{value}"


def _amount(stream: Stream) -> str:
    mass = format_quantity(float(stream.mass_flow), "kg/s")
    return f"{format_quantity(float(stream.total), 'mol/s')} ({mass})"


def _shares(stream: Stream) -> str:
    return f"{numbers.composition(stream)} %"


def _losses(solution: Solution, account: PlantAccount) -> str:
    lost = sorted(exergy_destroyed(solution).items(), key=lambda pair: -pair[1])
    least = _ROUND_OFF * account.losses.entering_total
    shown = [f"{name} {numbers.energy(w)}" for name, w in lost[:_MOST_LOSSES] if w > least]
    return ", ".join(shown) or "nothing"


def _print_tables(screen: Console, solution: Solution) -> None:
    matter = [stream for stream in solution.streams if isinstance(stream.flow, Stream)]
    energy = [(s, s.flow) for s in solution.streams if not isinstance(s.flow, Stream)]
    for title, table in (
        ("Streams", _stream_table(matter, screen.width)),
        ("Power, heat and light", _energy_table(energy)),
        ("Holds", _hold_table(solution.holds)),
    ):
        if table.row_count:
            screen.print()
            screen.print(title, style="bold")
            screen.print(table)


def _stream_table(streams: list[SolvedStream], width: int) -> Table:
    """Return the table of matter; on a narrow screen without mass and phase."""
    columns = ["tag", "from -> to", "composition, mol %", "degC", "bar", "mol/s", "kg/h", "phase"]
    shown = columns[: _NARROW_COLUMNS if width < _NARROW else len(columns)]
    table = plain_table(
        *shown, right=("tag", "degC", "bar", "mol/s", "kg/h"), whole=("from -> to",)
    )
    for stream in streams:
        flow = stream.flow
        if isinstance(flow, Stream):
            cells = [
                str(stream.tag),
                _ends(stream, " ->\n  " if width < _TWO_LINES else " -> "),
                numbers.composition(flow),
                numbers.celsius(float(flow.temperature)),
                numbers.bar(float(flow.pressure)),
                numbers.flow(float(flow.total)),
                numbers.flow(3600 * float(flow.mass_flow)),
                numbers.phases(flow),
            ]
            table.add_row(*cells[: len(shown)])
    return table


def _energy_table(streams: list[tuple[SolvedStream, Heat | Light | float]]) -> Table:
    table = plain_table("tag", "from -> to", "content", "rate", "degC", right=("tag", "rate"))
    for stream, flow in streams:
        if isinstance(flow, Heat):
            span = f"{numbers.celsius(flow.start)} to {numbers.celsius(flow.end)}"
            row = (numbers.energy(flow.rate), span)
        else:
            row = (numbers.energy(rate_of(flow)), "")
        table.add_row(str(stream.tag), _ends(stream), stream.content, *row)
    return table


def _hold_table(holds: tuple[HoldResult, ...]) -> Table:
    table = plain_table("held", "wanted", "reached", "by", "value")
    for hold in holds:
        table.add_row(
            hold.hold,
            format_quantity(hold.wanted, hold.unit, difference=hold.difference),
            format_quantity(hold.reached, hold.unit, digits=6, difference=hold.difference),
            hold.by,
            format_quantity(hold.value, hold.by_unit, digits=6, difference=hold.by_difference),
        )
    return table


def _ends(stream: SolvedStream, arrow: str = " -> ") -> str:
    return f"{stream.key}{arrow}{', '.join(stream.targets) or 'leaves the plant'}"


def _print_remarks(screen: Console, title: str, remarks: tuple[Remark, ...]) -> None:
    if not remarks:
        return
    screen.print()
    screen.print(title, style="bold")
    for remark in remarks:
        where = f"{remark.equipment}: " if remark.equipment else ""
        screen.print(f"- {where}{remark.text} [{remark.code}]", soft_wrap=True)
