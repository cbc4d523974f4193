"""What `chainflow limits` prints."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from functools import partial
from typing import TYPE_CHECKING, TextIO

from chainflow.report.numbers import percent
from chainflow.report.plain import console
from chainflow.studies.limits import Absorber, Limits, Splitting, in_volts
from chainflow.thermo.detailed_balance import Best

if TYPE_CHECKING:
    from rich.table import Table


def print_limits(found: Limits, out: TextIO | None = None) -> None:
    """Print each gap by itself, then solar to hydrogen without and with overpotentials."""
    screen = console(out)
    screen.print(
        "Limits of the detailed balance at 25 degC in the reference sun "
        f"(ASTM G173-03 global, {found.irradiance:.1f} W/m2)"
    )
    for one in found.absorbers:
        screen.print(f"\nBand gap {_gaps((one.gap,))}", style="bold")
        for line in _absorber_lines(one):
            screen.print(f"  {line}")
    best = found.best_cell
    screen.print(f"\nThe best single solar cell: {percent(best.efficiency)} at {_gaps(best.gaps)}")
    screen.print("\nSolar to hydrogen", style="bold")
    screen.print(_table(found))
    for line in _remarks(found):
        screen.print(line, soft_wrap=True)


def _absorber_lines(one: Absorber) -> Iterator[str]:
    cell = one.cell
    yield (
        f"photons above it   {one.available / 10.0:.4g} mA/cm2, light up to "
        f"{one.wavelength / 1e-9:.4g} nm"
    )
    yield f"if all split water {percent(one.share)} solar to hydrogen"
    yield (
        f"as a solar cell    {percent(float(cell.efficiency))}: open circuit "
        f"{float(cell.open_circuit):.3f} V, fill factor {float(cell.fill_factor):.3f}"
    )


def _table(found: Limits) -> Table:
    from rich import box
    from rich.table import Table

    table = Table(box=box.SIMPLE_HEAD, pad_edge=False, show_edge=False)
    table.add_column("")
    for one in found.splitting:
        extra = f"{one.overpotential:.3g} V overpotential" if one.overpotential else "ideal"
        table.add_column(f"{extra}: {one.needed:.3f} V", overflow="fold")
    for name, cell in _rows(found):
        table.add_row(name, *(cell(one) for one in found.splitting))
    return table


def _rows(found: Limits) -> Iterator[tuple[str, Callable[[Splitting], str]]]:
    """Yield the name of each row and what stands in it at an overpotential."""
    for place, absorber in enumerate(found.absorbers):
        yield f"{_gaps((absorber.gap,))} alone", partial(_of_one, place)
    if len(found.absorbers) == 2:
        names = _gaps(tuple(absorber.gap for absorber in found.absorbers))
        yield f"{names} in series", _of_pair
    else:
        gap = _gaps((found.absorbers[0].gap,))
        yield f"{gap} and the best behind it", lambda one: _of_best(one.behind, -1)
        yield f"{gap} and the best in front", lambda one: _of_best(one.front, 0)
    yield "best single absorber", lambda one: _of_best(one.best_one)
    yield "best pair in series", lambda one: _of_best(one.best_two)


def _of_one(place: int, one: Splitting) -> str:
    return percent(one.alone[place].efficiency)


def _of_pair(one: Splitting) -> str:
    assert one.pair is not None
    if not one.pair.efficiency > 0.0:
        return percent(0.0)
    return f"{percent(one.pair.efficiency)} ({one.pair.limited_by} limits)"


def _of_best(best: Best | None, place: int | None = None) -> str:
    if best is None or not best.efficiency > 0.0:
        return percent(0.0)
    gaps = best.gaps if place is None else (best.gaps[place],)
    return f"{percent(best.efficiency)} at {_gaps(gaps)}"


def _remarks(found: Limits) -> Iterator[str]:
    """Say why something is zero."""
    for place, absorber in enumerate(found.absorbers):
        volts = float(absorber.cell.open_circuit)
        for one in found.splitting:
            if not one.alone[place].efficiency > 0.0:
                yield (
                    f"{_gaps((absorber.gap,))} alone gives {volts:.3g} V at most, "
                    f"{one.needed:.3g} V are needed: no hydrogen without a second absorber"
                )
                break


def _gaps(gaps: tuple[float, ...]) -> str:
    return " / ".join(f"{in_volts(gap):.4g}" for gap in gaps) + " eV"
