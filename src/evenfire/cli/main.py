"""The command ``evenfire``: words on a terminal and exit status. Heavy rooms load inside the commands."""

from __future__ import annotations

import sys
from pathlib import Path
from typing import Annotated

import typer

from evenfire.errors import EvenfireError, ExitStatus

app = typer.Typer(
    name="evenfire",
    help=(
        "Investment cases for steam plants with peaky demand: a bigger boiler, a further boiler, a steam "
        "accumulator, or a mix.\n\nPressurised steam and hot water kill. Results are for an investment "
        "decision, not for construction; vessel, safety valves, pipework, controls and inspection follow "
        "local law and codes and licensed engineers."
    ),
    no_args_is_help=True,
    pretty_exceptions_enable=False,
    rich_markup_mode=None,
)

CaseArgument = Annotated[
    Path, typer.Argument(metavar="CASE", help="Folder that holds case.toml, or the file itself.")
]


@app.command()
def appraise(
    case: CaseArgument,
    out: Annotated[
        Path | None, typer.Option(metavar="FOLDER", help="Output folder; CASE/appraisal unless given.")
    ] = None,
    replace: Annotated[bool, typer.Option("--replace", help="Overwrite an existing output folder.")] = False,
    quiet: Annotated[bool, typer.Option("--quiet", help="Print only problems.")] = False,
    fresh: Annotated[
        bool, typer.Option("--fresh", help="Plan anew, without the plans kept from earlier runs.")
    ] = False,
    whole_record: Annotated[
        bool,
        typer.Option(
            "--whole-record",
            help="Also plan on every day of the record at its own step (up to 5 minutes an alternative).",
        ),
    ] = False,
) -> None:
    """Plan every alternative of a case, price it and write the report.

    Writes report.html, appraisal.json and dispatch.csv into one folder.

    Example: evenfire appraise cases/cannery
    """
    from evenfire.cli.appraise import run

    raise typer.Exit(run(case, out, replace=replace, quiet=quiet, fresh=fresh, whole_record=whole_record))


@app.command()
def replay(
    case: CaseArgument,
    out: Annotated[
        Path | None, typer.Option(metavar="FOLDER", help="Output folder; CASE/replay unless given.")
    ] = None,
    replace: Annotated[bool, typer.Option("--replace", help="Overwrite an existing output folder.")] = False,
    quiet: Annotated[bool, typer.Option("--quiet", help="Print only problems.")] = False,
) -> None:
    """Run every recommended plant over the whole record by controls that cannot see the future.

    Plans are taken from earlier runs where they are unchanged. Writes replay.json, set_points.csv and
    trace.csv.

    Example: evenfire replay cases/cannery --out cannery-replay
    """
    from evenfire.cli.replay import run

    raise typer.Exit(run(case, out, replace=replace, quiet=quiet))


@app.command()
def model(
    case: CaseArgument,
    alternative: Annotated[str, typer.Option(help="Name of the alternative, e.g. 'storage'.")],
    out: Annotated[Path, typer.Option(metavar="FILE", help="File to write, ending in .mps or .lp.")],
    replace: Annotated[bool, typer.Option("--replace", help="Overwrite an existing file.")] = False,
) -> None:
    """Write the mixed-integer model of an alternative for any solver.

    Tonnes, MWh and thousands of currency; the minimum is the net present cost in thousands.

    Example: evenfire model cases/dyehouse --alternative storage --out storage.mps
    """
    from evenfire.cli.model import run

    raise typer.Exit(run(case, alternative, out, replace=replace))


@app.command()
def record(
    source: Annotated[
        Path,
        typer.Argument(
            metavar="CASE_OR_FILE",
            help="Case folder, its case.toml, or a bare record file (.csv, .gz, .xlsx, ...).",
        ),
    ],
    out: Annotated[
        Path | None,
        typer.Option(metavar="FOLDER", help="Output folder; 'record' beside the case or file unless given."),
    ] = None,
    replace: Annotated[bool, typer.Option("--replace", help="Overwrite an existing output folder.")] = False,
    quiet: Annotated[bool, typer.Option("--quiet", help="Print only problems.")] = False,
    time_column: Annotated[str | None, typer.Option(help="Column with the time of each step.")] = None,
    flow_column: Annotated[str | None, typer.Option(help="Column with the flow.")] = None,
    unit: Annotated[
        str | None,
        typer.Option(help="Its unit: kg/h, t/h, lb/h, kg/s, kg, t, lb, kg/step, kW, MW, m3/h, ..."),
    ] = None,
    zone: Annotated[
        str | None, typer.Option(help="Time zone, e.g. Europe/Berlin, or 'fixed' without summer time.")
    ] = None,
    clock_column: Annotated[str | None, typer.Option(help="Column of the time of day, if apart.")] = None,
    sheet: Annotated[str | None, typer.Option(help="Sheet of a workbook.")] = None,
    header_row: Annotated[int | None, typer.Option(help="Row of the column names.")] = None,
    delimiter: Annotated[str | None, typer.Option(help="Column delimiter; 'tab' for a tab.")] = None,
    decimal: Annotated[str | None, typer.Option(help="Decimal sign: . or ,")] = None,
    encoding: Annotated[str | None, typer.Option(help="Text encoding.")] = None,
    date_order: Annotated[str | None, typer.Option(help="ymd, dmy or mdy.")] = None,
    stamp: Annotated[str | None, typer.Option(help="Time stands at the 'start' or 'end' of a step.")] = None,
    on_change_step_seconds: Annotated[
        float | None, typer.Option(help="Logged on change: average onto this step.")
    ] = None,
    gaps: Annotated[str | None, typer.Option(help="refuse, hold, interpolate or zero.")] = None,
    largest_gap_minutes: Annotated[float | None, typer.Option(help="Longest gap that may be filled.")] = None,
    status_column: Annotated[
        str | None, typer.Option(help="Column that says whether a value is good.")
    ] = None,
    good_status: Annotated[list[str] | None, typer.Option(help="A word for good; may be repeated.")] = None,
    missing_value: Annotated[
        list[str] | None, typer.Option(help="A cell that means no value; may be repeated.")
    ] = None,
    negative_flow: Annotated[str | None, typer.Option(help="refuse or zero.")] = None,
    counter_rollover: Annotated[
        float | None, typer.Option(help="Reading after which a counter starts again.")
    ] = None,
    heat_kj_per_kg: Annotated[
        float | None, typer.Option(help="For kW, MW, m3/h: heat per kg of steam, from feedwater.")
    ] = None,
    boiler_efficiency_percent: Annotated[
        float | None, typer.Option(help="For a fuel meter: boiler efficiency on the meter's basis.")
    ] = None,
    calorific_value_kwh_per_m3: Annotated[
        float | None, typer.Option(help="For a gas meter in m3/h: calorific value on the same basis.")
    ] = None,
    boilers_kg_h: Annotated[
        float | None, typer.Option(help="Boiler capacity above which peaks are ranked.")
    ] = None,
    step_minutes: Annotated[float | None, typer.Option(help="Step of the typical days.")] = None,
) -> None:
    """Say what a record of steam demand is worth, from a case or from a bare data file.

    Writes record.json and record.html into one folder. A bare file needs --time-column, --flow-column and
    --unit; whatever else the file does not decide by itself is refused with the readings it could have.

    Example: evenfire record steam.csv --time-column time --flow-column steam --unit kg/h --out record
    """
    from evenfire.cli.record import FileOptions, run

    options = FileOptions(
        time_column=time_column,
        flow_column=flow_column,
        unit=unit,
        zone=zone,
        clock_column=clock_column,
        sheet=sheet,
        header_row=header_row,
        delimiter=delimiter,
        decimal=decimal,
        encoding=encoding,
        date_order=date_order,
        stamp=stamp,
        on_change_step_seconds=on_change_step_seconds,
        gaps=gaps,
        largest_gap_minutes=largest_gap_minutes,
        status_column=status_column,
        good_status=tuple(good_status or ()),
        missing_value=tuple(missing_value or ()),
        negative_flow=negative_flow,
        counter_rollover=counter_rollover,
        heat_kj_per_kg=heat_kj_per_kg,
        boiler_efficiency_percent=boiler_efficiency_percent,
        calorific_value_kwh_per_m3=calorific_value_kwh_per_m3,
        boilers_kg_h=boilers_kg_h,
        step_minutes=step_minutes,
    )
    raise typer.Exit(run(source, options, out, replace=replace, quiet=quiet))


@app.command()
def plant(
    case: CaseArgument,
    out: Annotated[
        Path | None, typer.Option(metavar="FOLDER", help="Output folder; CASE/plant unless given.")
    ] = None,
    replace: Annotated[bool, typer.Option("--replace", help="Overwrite an existing output folder.")] = False,
    quiet: Annotated[bool, typer.Option("--quiet", help="Print only problems.")] = False,
) -> None:
    """Show what the boilers and the vessel of a case do by themselves; nothing is planned.

    Prints efficiency, losses, burner starts and pressure windows, and writes plant.html with their figures.

    Example: evenfire plant cases/cannery
    """
    from evenfire.cli.plant import run

    raise typer.Exit(run(case, out, replace=replace, quiet=quiet))


@app.command()
def sweep(
    case: CaseArgument,
    vary: Annotated[
        list[str] | None,
        typer.Option(
            metavar="PATH=LOW:HIGH:COUNT",
            help="A numeric input by its path in the case, and its values; may be given twice.",
        ),
    ] = None,
    rank_percent: Annotated[
        float | None,
        typer.Option(help="Also rank inputs, each lowered and raised by this share of its value."),
    ] = None,
    out: Annotated[
        Path | None, typer.Option(metavar="FOLDER", help="Output folder; CASE/sweep unless given.")
    ] = None,
    processes: Annotated[int, typer.Option(min=1, max=256, help="Processes of this machine to work in.")] = 1,
    cluster: Annotated[
        str | None, typer.Option(metavar="ADDRESS", help="Work on the Dask cluster of this scheduler.")
    ] = None,
    replace: Annotated[bool, typer.Option("--replace", help="Overwrite an existing output folder.")] = False,
    quiet: Annotated[bool, typer.Option("--quiet", help="Print only problems.")] = False,
) -> None:
    """Plan a case over one or two of its inputs: when does the answer change?

    With nothing named: the fuel price from half to double of what the case states, and a ranking of inputs by
    20 %. Writes sweep.json, sweep.csv and sweep.html into one folder. The same command goes on where an
    interrupted one stopped.

    Example: evenfire sweep cases/cannery --vary fuel.price_per_mwh=20:120:25 --out prices
    """
    from evenfire.cli.sweep import run

    raise typer.Exit(
        run(
            case,
            tuple(vary or ()),
            out,
            rank_percent=rank_percent,
            processes=processes,
            cluster=cluster,
            replace=replace,
            quiet=quiet,
        )
    )


@app.command()
def risk(
    case: CaseArgument,
    out: Annotated[
        Path | None, typer.Option(metavar="FOLDER", help="Output folder; CASE/risk unless given.")
    ] = None,
    scenarios: Annotated[int | None, typer.Option(help="How many scenarios, in place of the case's.")] = None,
    seed: Annotated[int | None, typer.Option(help="Seed, in place of the case's.")] = None,
    replan: Annotated[int, typer.Option(help="Plan so many of the scenarios anew.")] = 0,
    processes: Annotated[int, typer.Option(min=1, max=256, help="Processes of this machine to work in.")] = 1,
    cluster: Annotated[
        str | None, typer.Option(metavar="ADDRESS", help="Work on the Dask cluster of this scheduler.")
    ] = None,
    replace: Annotated[bool, typer.Option("--replace", help="Overwrite an existing output folder.")] = False,
    quiet: Annotated[bool, typer.Option("--quiet", help="Print only problems.")] = False,
) -> None:
    """Draw random scenarios of what is uncertain: how often is each alternative the cheapest?

    Needs a [risk] section in the case. Writes risk.json, risk.csv and risk.html into one folder. The same
    command goes on where an interrupted one stopped.

    Example: evenfire risk cases/dyehouse --replan 50 --out chances
    """
    from evenfire.cli.risk import run

    raise typer.Exit(
        run(
            case,
            out,
            scenarios=scenarios,
            seed=seed,
            replan=replan,
            processes=processes,
            cluster=cluster,
            replace=replace,
            quiet=quiet,
        )
    )


@app.command()
def schema() -> None:
    """Print the JSON Schema of case.toml, so that an editor can complete and check a case.

    Example: evenfire schema > case.schema.json
    """
    import json

    from evenfire.case.schema import case_json_schema

    typer.echo(json.dumps(case_json_schema(), indent=2, ensure_ascii=False))


def main() -> None:
    """Run the command line; problems a user can mend are printed without a traceback."""
    try:
        app()
    except EvenfireError as error:
        sys.stderr.write(f"evenfire: {error}\n")
        sys.exit(error.exit_status)
    except KeyboardInterrupt:
        sys.stderr.write("evenfire: interrupted, nothing written\n")
        sys.exit(ExitStatus.INTERRUPTED)
