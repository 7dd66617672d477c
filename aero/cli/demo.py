"""`aero demo`: the shipped example, from file to report."""

from __future__ import annotations

from typing import Any

import click

from aero.cli import options as shared
from aero.cli.show import say

TRAJECTORY = "marram-steep.csv"
VEHICLE = "marram.toml"


@click.command("demo", epilog="Example: aero demo --out aero-demo")
@click.option(
    "--out", type=click.Path(), default="aero-demo", show_default=True, metavar="DIR", help="Folder to write."
)
@shared.replace_option
@shared.format_option("table", "json", "csv")
def command(**options: Any) -> None:
    """Survey the shipped example: the invented capsule Marram on a steep return."""
    from aero.cli import survey
    from aero.examples_path import example
    from aero.survey.write import check_out

    check_out(options["out"], replace=options["replace"])
    say(f"The shipped example, all invented: {VEHICLE} on {TRAJECTORY}.", style=options["style"])
    survey.run(
        trajectory=str(example(TRAJECTORY)),
        vehicle_file=str(example(VEHICLE)),
        out=options["out"],
        replace=options["replace"],
        style=options["style"],
        skip_bad_rows=False,
        tables="csv,parquet",
        figures="all",
        date=None,
        latitude=None,
        longitude=None,
        atmosphere=None,
        activity=None,
        f107=None,
        f107a=None,
        ap=None,
        space_weather=None,
        free_path="hard-sphere",
        bounds=(0.01, 0.1, 10.0),
        wall=None,
        perfect_gas=False,
        convective="sutton-graves",
        surface_model=None,
        catalysis=None,
        no_shadowing=False,
    )
