"""The command line: which commands there are."""

from typing import Annotated

import typer

from thermal.cli import material
from thermal.cli.bench import bench
from thermal.cli.check import check
from thermal.cli.new import new
from thermal.cli.question import compare, frequency, peak, time
from thermal.cli.run import run
from thermal.cli.sweep import sweep
from thermal.cli.verify import verify

app = typer.Typer(
    help="Transient heating of metal workpieces by induction: time to temperature, section, power, energy.",
    no_args_is_help=True,
    add_completion=False,
    rich_markup_mode=None,
    pretty_exceptions_enable=False,
)


def _version(wanted: bool) -> None:
    if wanted:
        from thermal.report.versions import own_version

        print(f"thermal {own_version()}")
        raise typer.Exit


@app.callback()
def options(
    version: Annotated[
        bool, typer.Option("--version", callback=_version, is_eager=True, help="Show the version.")
    ] = False,
) -> None:
    """Options before the command."""


app.command()(new)
app.command()(check)
app.command()(run)
app.command()(time)
app.command()(peak)
app.command()(compare)
app.command()(frequency)
app.command()(sweep)
app.command()(verify)
app.command()(bench)
app.add_typer(material.app, name="material")
