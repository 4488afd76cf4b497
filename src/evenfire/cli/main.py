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
) -> None:
    """Plan every alternative of a case, price it and write the report.

    Writes report.html, appraisal.json and dispatch.csv into one folder.

    Example: evenfire appraise cases/cannery
    """
    from evenfire.cli.appraise import run

    raise typer.Exit(run(case, out, replace=replace, quiet=quiet))


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
