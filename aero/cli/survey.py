"""`aero survey`: the main job."""

from __future__ import annotations

from typing import Any

import click

from aero.cli import options as shared
from aero.cli.show import CAUTION, is_terminal, print_csv, print_json, say, show
from aero.errors import InputError


@click.command(
    "survey",
    epilog="Example: aero survey trajectories/marram-steep.csv --vehicle trajectories/marram.toml --out out/",
)
@click.argument("trajectory", type=click.Path(), metavar="TRAJECTORY")
@click.option(
    "--vehicle", "vehicle_file", type=click.Path(), required=True, metavar="FILE", help="Vehicle file (TOML)."
)
@click.option(
    "--out", type=click.Path(), required=True, metavar="DIR", help="Folder to write, whole or not at all."
)
@shared.replace_option
@click.option("--skip-bad-rows", is_flag=True, help="Survey the good rows and list the bad ones.")
@click.option(
    "--tables",
    metavar="csv,parquet",
    default="csv,parquet",
    show_default=True,
    help="Formats of the points table.",
)
@click.option(
    "--figures",
    type=click.Choice(["all", "none"]),
    default="all",
    show_default=True,
    help="Whether figures, and the report page made of them, are written.",
)
@shared.place_options
@shared.atmosphere_options
@shared.model_options
@shared.format_option("table", "json", "csv")
def command(**options: Any) -> None:
    """Survey a trajectory: regimes and where they change, drag and heating with a 95 % band, a report.

    TRAJECTORY is a CSV, TSV or Parquet file whose columns state their units; altitude and speed are required.
    """
    run(**options)


def run(**options: Any) -> None:
    """Do what `aero survey` and `aero demo` share."""
    from aero.survey.write import check_out

    check_out(options["out"], replace=options["replace"])
    tables = _tables(options["tables"])

    from aero.body import read_vehicle
    from aero.survey import survey
    from aero.survey.place import placed
    from aero.trajectory import read_trajectory

    settings = shared.settings_from(**options)
    vehicle = shared.vehicle_with(read_vehicle(options["vehicle_file"]), **options)
    trajectory = read_trajectory(options["trajectory"], skip_bad_rows=options["skip_bad_rows"])
    trajectory = placed(
        trajectory, date=options["date"], latitude=options["latitude"], longitude=options["longitude"]
    )
    air_model, why = shared.choose_atmosphere(
        missing=trajectory_missing(trajectory),
        **{k: options[k] for k in ("atmosphere", "activity", "f107", "f107a", "ap", "space_weather")},
    )
    with bar("points", trajectory.altitude.size) as advance:
        result = survey(trajectory, vehicle, atmosphere=air_model, settings=settings, progress=advance)
    with bar("writing", 1.0) as advance:
        files = result.write(
            options["out"],
            replace=options["replace"],
            tables=tables,
            figures=options["figures"],
            progress=lambda _, step: advance(step),
        )
    report(result, files, why, options)


def trajectory_missing(trajectory: Any) -> str | None:
    """Return what is not known of date and place, None where all is."""
    place = trajectory.latitude is not None and trajectory.longitude is not None
    date = trajectory.utc is not None
    if place and date:
        return None
    if not place and not date:
        return "neither date nor place"
    return "no date" if place else "no place"


def _tables(text: str) -> tuple[str, ...]:
    names = tuple(part.strip() for part in text.split(","))
    if names not in {("csv", "parquet"), ("parquet", "csv"), ("parquet",), ("csv",)}:
        raise InputError(
            f"'{text}' is not a choice of tables", source="--tables", remedy="use csv,parquet, csv or parquet"
        )
    return names


class bar:  # noqa: N801 - used like a function
    """A progress bar on a terminal, nothing elsewhere."""

    def __init__(self, what: str, total: float) -> None:
        self.what = what
        self.total = total
        self.progress: Any = None

    def __enter__(self) -> Any:
        if not is_terminal():
            return lambda _step: None
        from rich.console import Console
        from rich.progress import Progress

        self.progress = Progress(console=Console(stderr=True), transient=True)
        self.progress.start()
        task = self.progress.add_task(self.what, total=self.total)
        return lambda step: self.progress.advance(task, step)

    def __exit__(self, *error: object) -> None:
        if self.progress is not None:
            self.progress.stop()


def report(result: Any, files: list[str], why: str, options: dict[str, Any]) -> None:
    """Print what was found and what was written."""
    style = options["style"]
    out = str(options["out"]).rstrip("/")
    say(
        f"Surveyed {len(result.points):,} points of {result.trajectory.name} with {result.vehicle.name}; "
        f"air: {result.atmosphere.description}, {why}.",
        style=style,
    )
    if style == "json":
        from aero.survey.record import survey_record

        print_json(survey_record(result))
    elif style == "csv":
        print_csv(list(result.segments.columns), result.segments.to_numpy().tolist())
    else:
        from aero.cli.text import crossings_text, reasons_text, segments_text

        show("")
        say(result.summary)
        show("")
        if not result.segments.empty:
            show(crossings_text(result.crossings))
            show("")
            show(segments_text(result.segments))
            show("")
            show(reasons_text(result.segments))
            show("")
    for note in result.notes:
        say(f"note: {note}", style=style)
    say(CAUTION, style=style)
    table = "segments.csv" if len(result.segments) else next(f for f in files if f.startswith("points."))
    first = f"{out}/{'report.html' if 'report.html' in files else table}"
    say(f"Wrote {len(files)} files to {out}/; open {first} first.", style=style)
