"""`aero air`: the atmosphere itself, as a table or a figure."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import click
import numpy as np

from aero.cli import options as shared
from aero.cli.point import missing_of
from aero.cli.show import print_csv, print_json, say, show
from aero.errors import InputError

MOST_ROWS = 1_000_000


@click.command("air", epilog="Example: aero air --from 80km --to 200km --step 10km")
@click.option(
    "--from", "start", type=shared.Quantity("length", "80km"), required=True, help="Lowest altitude."
)
@click.option(
    "--to", "stop", type=shared.Quantity("length", "200km"), required=True, help="Highest altitude."
)
@click.option("--step", type=shared.Quantity("length", "10km"), required=True, help="Altitude step.")
@shared.place_options
@shared.atmosphere_options
@shared.free_path_option
@click.option("--figure", type=click.Path(), metavar="FILE", help="Draw it as .svg or .png.")
@shared.replace_option
@shared.format_option("table", "json", "csv")
def command(**options: Any) -> None:
    """Show an atmosphere as a table or a figure; both ends of the range are included."""
    from aero.survey.profile import profile

    altitude = altitudes(options["start"], options["stop"], options["step"])
    air_model, why = shared.choose_atmosphere(
        missing=missing_of(options),
        **{k: options[k] for k in ("atmosphere", "activity", "f107", "f107a", "ap", "space_weather")},
    )
    columns = profile(
        altitude,
        air_model,
        free_path=options["free_path"],
        latitude=options["latitude"],
        longitude=options["longitude"],
        date=options["date"],
    )
    style = options["style"]
    if options["figure"] is not None:
        _draw(options, columns, f"{air_model.description}; mean free path {options['free_path']}")
    if style == "json":
        rows = [dict(zip(columns, row, strict=True)) for row in zip(*columns.values(), strict=True)]
        print_json(rows)
    elif style == "csv":
        print_csv(list(columns), list(zip(*columns.values(), strict=True)))
    else:
        from aero.cli.text import air_text

        say(f"Air: {air_model.description}, {why}; mean free path {options['free_path']}.")
        show(air_text(columns))
    if options["figure"] is not None:
        say(f"Wrote {options['figure']}.", style=style)


def altitudes(start: float, stop: float, step: float) -> np.ndarray:
    """Return altitudes from start to stop, both included, a step apart but for the last."""
    for name, value in (("--from", start), ("--to", stop)):
        if not -5e3 <= value <= 1000e3:
            raise InputError(f"altitude is {value / 1e3:g} km, expected -5 km to 1000 km", source=name)
    if step <= 0.0:
        raise InputError(f"step is {step:g} m, expected more than 0 m", source="--step")
    if stop < start:
        raise InputError(f"{stop / 1e3:g} km lies below --from {start / 1e3:g} km", source="--to")
    count = (stop - start) / step
    if count > MOST_ROWS:
        raise InputError(
            f"{count:.0f} rows would result, expected at most {MOST_ROWS}",
            source="--step",
            remedy="take a larger one",
        )
    values = start + step * np.arange(int(np.floor(count + 1e-9)) + 1)
    if stop - values[-1] > 1e-6 * step:
        values = np.append(values, stop)
    else:
        values[-1] = stop
    return values


def _draw(options: dict[str, Any], columns: dict[str, np.ndarray], footer: str) -> None:
    from aero.survey.output import check_target, whole

    target = Path(options["figure"])
    if target.suffix.lower() not in {".svg", ".png"}:
        raise InputError(
            f"'{target.suffix}' is not a figure format",
            source=str(target),
            remedy="end the name in .svg or .png",
        )
    check_target(target, replace=options["replace"], folder=False)
    import pandas as pd

    from aero.report import figure_air, save_figure

    figure = figure_air(pd.DataFrame(columns), footer=footer, title="The atmosphere")
    with whole(target, replace=options["replace"], folder=False) as new:
        save_figure(figure, new, target.suffix)
