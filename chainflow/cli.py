"""The command line: thin commands that read, call the library and print.

Exit codes: 0 solved, 1 the file is wrong, 2 wrong usage, 3 no steady state, 4 a file cannot be
read or written, 70 a bug of ours, 130 interrupted. Answers go to stdout, everything else to
stderr.
"""

from __future__ import annotations

import functools
import os
import sys
import warnings
from collections.abc import Callable, Iterable
from pathlib import Path
from typing import TYPE_CHECKING, Annotated, Any

import typer

from chainflow import __version__
from chainflow.basis.faults import ChainflowError, FileFault, FlowsheetFault, NotSolved, UsageFault
from chainflow.report.outputs import (
    STDOUT,
    check_outputs,
    write_answer,
    write_failure,
    write_json,
)
from chainflow.report.saying import forget_output, say, say_bug, say_faults

if TYPE_CHECKING:
    from chainflow.flowsheet.network import Flowsheet
    from chainflow.solver.solution import Solution
    from chainflow.studies.why import Why

BUG = 70
INTERRUPTED = 130
_LACKING = ("heat-short", "short-of-power", "overfull")  # what goes astray may be what is lacking

app = typer.Typer(
    name="chainflow",
    no_args_is_help=True,
    add_completion=False,
    pretty_exceptions_enable=False,
    rich_markup_mode=None,
    context_settings={"help_option_names": ["-h", "--help"]},
)

FileArgument = Annotated[Path, typer.Argument(metavar="FILE", help="Flowsheet file (YAML).")]
JsonOption = Annotated[
    str | None,
    typer.Option("--json", metavar="PATH", help="Write everything as JSON, '-' for stdout."),
]
SetOption = Annotated[
    list[str] | None,
    typer.Option(
        "--set",
        metavar="NAME=VALUE",
        help="Give a knob or a setting another value; may be repeated: --set sun='600 W/m2'.",
    ),
]


def main() -> None:
    """Run the command line and leave with its exit code."""
    # None if the caller closed them; open for the whole run
    sys.stdout = sys.stdout or open(os.devnull, "w")  # noqa: SIM115
    sys.stderr = sys.stderr or open(os.devnull, "w")  # noqa: SIM115
    # pvlib still uses a name that pandas gives up: nothing that a user could mend
    warnings.filterwarnings("ignore", r"DatetimeIndex\.dayofyear", DeprecationWarning, r"pvlib\.")
    try:
        app()
    except KeyboardInterrupt:
        sys.exit(INTERRUPTED)


def reported(command: Callable[..., None]) -> Callable[..., None]:
    """Turn everything that goes wrong in a command into a sentence and an exit code."""

    @functools.wraps(command)
    def wrapped(*args: Any, **kwargs: Any) -> None:
        try:
            command(*args, **kwargs)
            sys.stdout.flush()
        except typer.Exit:
            raise
        except BrokenPipeError:
            forget_output()
        except KeyboardInterrupt:
            say("interrupted")
            raise typer.Exit(INTERRUPTED) from None
        except FlowsheetFault as problem:
            say_faults(problem.faults, kwargs.get("file"))
            raise typer.Exit(problem.exit_code) from None
        except ChainflowError as problem:
            say(str(problem))
            raise typer.Exit(problem.exit_code) from None
        except OSError as problem:
            forget_output()
            say(f"cannot read or write {problem.filename or 'the output'}: {problem.strerror}")
            raise typer.Exit(FileFault.exit_code) from None
        except Exception as problem:  # noqa: BLE001 - the outermost frame: whatever gets here is a bug
            say_bug(problem)
            raise typer.Exit(BUG) from None

    return wrapped


def _version(asked: bool) -> None:
    if asked:
        typer.echo(f"chainflow {__version__}")
        raise typer.Exit


@app.callback()
def common(
    version: Annotated[
        bool,
        typer.Option("--version", callback=_version, is_eager=True, help="Print the version."),
    ] = False,
) -> None:
    """Steady states of sun-to-fuel chains: one flowsheet file in, one closed balance out."""


@app.command()
@reported
def solve(
    file: FileArgument,
    json: JsonOption = None,
    csv: Annotated[
        Path | None,
        typer.Option("--csv", metavar="DIR", help="Write four CSV files: streams, ..."),
    ] = None,
    set_: SetOption = None,
    accounts: Annotated[
        bool,
        typer.Option(
            "--accounts",
            help="Print where it goes, too: rungs with own use, losses, carbon and water.",
        ),
    ] = False,
    results: Annotated[
        bool,
        typer.Option("--results", help="Print what each piece of equipment found, too."),
    ] = False,
    quiet: Annotated[bool, typer.Option("--quiet", help="Print no answer, only errors.")] = False,
    why: Annotated[
        bool,
        typer.Option("--why", help="Say where most is lost and which settings matter most."),
    ] = False,
) -> None:
    """Close the balance of a flowsheet and print the answer.

    First the efficiencies, what is returned, bought and delivered, then every stream, then
    idealisations and cautions.
    """
    overrides = _overrides(set_)
    check_outputs(file, json, csv)
    solution = _solved(file, overrides, json)
    if not quiet:
        say_faults(solution.remarks, file, "remark: ")
    reasons = _reasons(solution) if why else None
    write_answer(solution, json, csv, reasons)
    if not quiet and json != STDOUT:
        from chainflow.report.printed import print_answer

        print_answer(solution, reasons=reasons)
        if results:
            from chainflow.report.results_printed import print_results

            print_results(solution)
        if accounts:
            from chainflow.report.accounts_printed import print_accounts

            print_accounts(solution)


@app.command()
@reported
def compare(
    files: Annotated[
        list[Path], typer.Argument(metavar="FILE ...", help="Flowsheet files (YAML).")
    ],
    basis: Annotated[
        str | None,
        typer.Option("--basis", metavar="BASIS", help="LHV, HHV or exergy; that of the files."),
    ] = None,
    energy: Annotated[
        str, typer.Option("--energy", metavar="ENERGY", help="What the stores are sized for.")
    ] = "100 MWh",
    set_: SetOption = None,
    json: JsonOption = None,
    csv: Annotated[
        Path | None, typer.Option("--csv", metavar="PATH", help="Write the table as a CSV file.")
    ] = None,
) -> None:
    """Put flowsheets side by side on the same sunlight and the same basis.

    A file that fails does not stop the others: its column says why, and the exit code is that of
    the first that failed. --set changes the files that know the name.
    """
    from chainflow.basis.quantities import parse
    from chainflow.report.compared import comparison_csv, comparison_document, print_comparison
    from chainflow.report.document import to_json
    from chainflow.report.writing import check_writable, write_whole
    from chainflow.studies.compare import compare as compared

    overrides = _overrides(set_)
    for file in files:
        check_outputs(file, json, None)
    if csv is not None:
        if csv.resolve() in {file.resolve() for file in files}:
            raise UsageFault(f"--csv {csv} is one of the flowsheets: name another file")
        check_writable(csv)
    found = compared(
        files, overrides, basis, _option("--energy", lambda: parse(energy, "J", gt=0.0))
    )
    if csv is not None:
        write_whole(csv, comparison_csv(found))
    if json is not None:
        write_json(to_json(comparison_document(found)), json)
    if json != STDOUT:
        print_comparison(found)
    for route in found.routes:
        if not route.solved:
            say(route.told)
    if found.exit_code:
        sys.stdout.flush()
        raise typer.Exit(found.exit_code)


@app.command()
@reported
def check(file: FileArgument, set_: SetOption = None) -> None:
    """Check a flowsheet without solving it: who sets each amount, and which loops there are."""
    from chainflow.flowsheet.building import read_flowsheet
    from chainflow.report.checked import print_check
    from chainflow.solver.solve import inspect

    structure = inspect(read_flowsheet(file, _overrides(set_)))
    say_faults(structure.remarks, file, "remark: ")
    print_check(structure)


@app.command()
@reported
def kinds(
    kind: Annotated[str | None, typer.Argument(metavar="KIND", help="One kind in full.")] = None,
) -> None:
    """List the kinds of equipment, or print one in full."""
    from chainflow.basis.names import shorten, suggest
    from chainflow.equipment.register import kinds as known_kinds
    from chainflow.report.kinds import print_kind, print_kinds
    from chainflow.report.plain import console

    known = known_kinds()
    if kind is None:
        print_kinds(console(), known)
    elif kind in known:
        print_kind(console(), known[kind])
    else:
        hint = suggest(kind, known) or f"; known: {', '.join(known)}"
        raise UsageFault(f"there is no kind {shorten(kind)}{hint}")


@app.command(
    options_metavar="--gap GAP [--gap GAP] [OPTIONS]",
    context_settings={"allow_extra_args": True},  # told below, what a unit without quotes leaves
)
@reported
def limits(
    context: typer.Context,
    gap: Annotated[
        list[str] | None,
        typer.Option(
            "--gap",
            metavar="GAP",
            help="Band gap, as '2.1 eV'; give it twice for two absorbers in series.",
        ),
    ] = None,
    overpotential: Annotated[
        str,
        typer.Option(
            "--overpotential",
            metavar="VOLTS",
            help="Of both electrodes and the electrolyte together.",
        ),
    ] = "0.8 V",
    json: JsonOption = None,
) -> None:
    """Print how much hydrogen one band gap, or a pair, could make of sunlight at best.

    Available current, solar cell and solar-to-hydrogen efficiency in the detailed balance, without
    overpotential and with one.
    """
    from chainflow.basis.names import shorten
    from chainflow.basis.quantities import parse
    from chainflow.report.writing import check_writable
    from chainflow.studies.limits import limits as find_limits
    from chainflow.studies.limits import limits_document

    if context.args:
        raise UsageFault(
            f"{shorten(context.args[0])} stands alone: put a number and its unit in quotes, "
            "--gap '2.1 eV'"
        )
    if not gap:
        raise UsageFault("no band gap is given: chainflow limits --gap '2.1 eV'")
    if json is not None and json != STDOUT:
        check_writable(Path(json))
    volts = _option("--overpotential", lambda: parse(overpotential, "V", ge=0.0, le=3.0))
    found = find_limits([_gap(text) for text in gap], volts)
    if json is not None:
        from chainflow.report.document import to_json

        write_json(to_json(limits_document(found)), json)
    if json != STDOUT:
        from chainflow.report.limits import print_limits

        print_limits(found)


def _gap(text: str) -> float:
    """Read a band gap [J]."""
    from typing import get_args

    from chainflow.basis.quantities import BandGap

    _, marker = get_args(BandGap)
    return _option("--gap", lambda: marker.read(text))


def _option(name: str, read: Callable[[], Any]) -> float:
    """Read a quantity that stands behind an option."""
    from chainflow.basis.quantities import QuantityFault
    from chainflow.basis.units import UnitFault

    try:
        return float(read())
    except (QuantityFault, UnitFault) as problem:
        raise UsageFault(f"{name} {problem}") from None


@app.command()
@reported
def schema() -> None:
    """Print the JSON Schema of flowsheet files, for editors."""
    import json

    from chainflow.flowsheet.schema import json_schema

    typer.echo(json.dumps(json_schema(), indent=1))


def _overrides(given: Iterable[str] | None) -> dict[str, str]:
    """Read ``name=value`` pairs."""
    found: dict[str, str] = {}
    for text in given or ():
        name, equals, value = text.partition("=")
        if not equals or not name.strip() or not value.strip():
            from chainflow.basis.names import shorten

            raise UsageFault(f"--set {shorten(text)}: wanted NAME=VALUE, as sun='600 W/m2'")
        found[name.strip()] = value.strip()
    return found


def _solved(file: Path, overrides: dict[str, str], json: str | None) -> Solution:
    """Read and solve; a wrong file or a missing steady state is also written as JSON."""
    from chainflow.flowsheet.building import read_flowsheet
    from chainflow.solver.solve import solve_flowsheet

    flowsheet: Flowsheet | None = None
    try:
        flowsheet = read_flowsheet(file, overrides)
        return solve_flowsheet(flowsheet)
    except ChainflowError as problem:
        if flowsheet is not None and isinstance(problem, NotSolved):
            _say_what_is_open(flowsheet, problem, file)
        if json is not None and problem.exit_code in (1, 3):
            write_failure(file, problem, flowsheet, json)
        raise


def _say_what_is_open(flowsheet: Flowsheet, problem: NotSolved, file: Path) -> None:
    """A line that is missing may be why there is no steady state."""
    from chainflow.flowsheet.linkage import open_outlets

    say_faults(flowsheet.remarks, file, "remark: ")
    leaving = open_outlets(flowsheet)
    if leaving and problem.code in _LACKING:
        say(f"not linked, so leaving the plant: {', '.join(leaving)}")


def _reasons(solution: Solution) -> Why | None:
    """What lies behind the efficiency; None, and a word on stderr, if there is no efficiency."""
    from chainflow.studies.why import why

    try:
        return why(solution)
    except UsageFault as nothing:
        say(f"--why: {nothing}")
        return None


if __name__ == "__main__":
    main()
