"""`aero database`: coefficients over a grid of altitude, speed and attitude."""

from __future__ import annotations

import math
from collections.abc import Mapping
from typing import TYPE_CHECKING, Any

import click
import numpy as np

from aero.cli import options as shared
from aero.cli.point import missing_of
from aero.cli.show import CAUTION, print_csv, print_json, say, show
from aero.cli.survey import bar
from aero.errors import InputError
from aero.units import quantity

if TYPE_CHECKING:
    from aero.survey.database import Database

MOST_VALUES = 1_000_000  # of one axis, before it is even multiplied with the others
_SHOWN = ("drag_coefficient", "lift_coefficient", "axial_force_coefficient", "normal_force_coefficient")


class Axis(click.ParamType[tuple[float, ...]]):
    """Values of one axis: FROM:TO:STEP with both ends, or a list with commas, each with its unit."""

    def __init__(self, dimension: str, example: str) -> None:
        self.dimension = dimension
        self.name = example

    def get_metavar(self, param: click.Parameter, ctx: click.Context) -> str:  # noqa: ARG002 - click's signature
        """Show an example in the help."""
        return self.name

    def convert(
        self, value: object, param: click.Parameter | None, ctx: click.Context | None
    ) -> tuple[float, ...]:
        """Return the values in SI."""
        if isinstance(value, tuple):
            return value
        try:
            return axis_values(str(value), self.dimension, example=self.name)
        except InputError as error:
            self.fail(str(error).rstrip("."), param, ctx)


def axis_values(text: str, dimension: str, *, example: str) -> tuple[float, ...]:
    """Return the values of an axis as typed, in SI.

    Examples
    --------
    >>> axis_values("90km:101km:5km", "length", example="60km:200km:5km")
    (90000.0, 95000.0, 100000.0, 101000.0)
    >>> axis_values("7km/s,8km/s", "speed", example="1km/s:8km/s:1km/s")
    (7000.0, 8000.0)
    """
    if not text.strip(" ,:"):
        raise InputError("no value is given", remedy=f"write it as {example} or as a list with commas")
    if ":" not in text:
        return tuple(quantity(part, dimension) for part in text.split(","))
    parts = text.split(":")
    if len(parts) != 3:
        raise InputError(f"'{text}' has {len(parts)} parts, expected FROM:TO:STEP", remedy=f"write {example}")
    start, stop, step = (quantity(part, dimension) for part in parts)
    if stop < start:
        raise InputError(
            f"'{text}' runs down, expected FROM below TO", remedy=f"write {parts[1]}:{parts[0]}:{parts[2]}"
        )
    if step <= 0.0:
        raise InputError(f"'{text}' has a step of {parts[2].strip()}, expected more than zero")
    count = math.floor((stop - start) / step + 1e-9)
    if count >= MOST_VALUES:
        raise InputError(f"'{text}' makes {count + 1} values, expected at most {MOST_VALUES}")
    values = start + step * np.arange(count + 1)
    if stop - values[-1] > 1e-6 * step:
        values = np.append(values, stop)
    elif count:
        values[-1] = stop
    return tuple(float(value) for value in values)


@click.command(
    "database",
    epilog="Example: aero database --vehicle trajectories/marram.toml --altitude 60km:200km:5km "
    "--speed 2km/s:8km/s:1km/s --angle-of-attack -10deg:10deg:5deg --out marram.parquet",
)
@click.option(
    "--vehicle", "vehicle_file", type=click.Path(), required=True, metavar="FILE", help="Vehicle file (TOML)."
)
@click.option(
    "--altitude",
    type=Axis("length", "60km:200km:5km"),
    required=True,
    help="FROM:TO:STEP, both ends included, or a list such as 80km,100km,150km.",
)
@click.option(
    "--speed",
    type=Axis("speed", "1km/s:8km/s:1km/s"),
    required=True,
    help="Relative to the air; range or list.",
)
@click.option(
    "--angle-of-attack",
    type=Axis("angle", "-10deg:10deg:5deg"),
    help="Range or list. Default: the vehicle's own.",
)
@click.option(
    "--sideslip", type=Axis("angle", "0deg,5deg"), help="Range or list. Default: the vehicle's own, or 0deg."
)
@click.option(
    "--out",
    type=click.Path(),
    metavar="FILE|DIR",
    help="FILE.parquet, FILE.csv, or a folder for both and the record, whole or not at all.",
)
@shared.replace_option
@shared.place_options
@shared.atmosphere_options
@shared.model_options
@shared.format_option("table", "json", "csv")
def command(**options: Any) -> None:
    """Compute coefficients over a grid of altitude, speed and attitude, for any flight simulation.

    One row a combination, with both limits, the 95 % band and the error of interpolating between the rows.
    """
    from aero.body import read_vehicle
    from aero.survey.database import build_database
    from aero.survey.database_files import check_out
    from aero.survey.grid import check_rows

    style, out = options["style"], options["out"]
    if out is not None:
        check_out(out, replace=options["replace"])
    elif style == "table":
        raise InputError(
            "says nowhere to write the rows", source="aero database", remedy="give --out FILE or --format csv"
        )
    vehicle = shared.vehicle_with(read_vehicle(options["vehicle_file"]), **options)
    axes = [options[k] for k in ("altitude", "speed", "angle_of_attack", "sideslip")]
    axes[2] = (vehicle.angle_of_attack,) if axes[2] is None else axes[2]
    axes[3] = (vehicle.sideslip,) if axes[3] is None else axes[3]
    check_rows([len(values) for values in axes])
    air_model, why = shared.choose_atmosphere(
        missing=missing_of(options),
        **{k: options[k] for k in ("atmosphere", "activity", "f107", "f107a", "ap", "space_weather")},
    )
    rows = math.prod(len(values) for values in axes)
    checks = math.prod(max(len(values) - 1, 1) for values in axes)
    with bar("grid", rows + checks) as advance:
        made = build_database(
            vehicle,
            *axes,
            atmosphere=air_model,
            settings=shared.settings_from(**options),
            latitude=options["latitude"],
            longitude=options["longitude"],
            date=options["date"],
            progress=advance,
        )
    written = [] if out is None else made.write(out, replace=options["replace"])
    _print(made, f"Air: {air_model.description}, {why}.", style, rows=out is None)
    if written:
        say(f"Wrote {out}" + (f": {', '.join(written)}." if len(written) > 1 else "."), style=style)


def _print(made: Database, air: str, style: str, *, rows: bool) -> None:
    record = made.record
    say(air, style=style)
    if style == "csv":
        table = made.table()
        print_csv(list(table), list(zip(*table.values(), strict=True)))
    elif style == "json":
        answer = {"rows": len(made), **record}
        if rows:
            table = made.table()
            answer["points"] = [
                dict(zip(table, row, strict=True)) for row in zip(*table.values(), strict=True)
            ]
        print_json(answer)
    else:
        from aero.cli.text import air_text

        say(f"{made}.")
        show(air_text(_summary(made)))
    for line in (*_errors(record), *(f"note: {note}" for note in record["notes"]), CAUTION):
        say(line, style=style)


def _summary(made: Database) -> Mapping[str, Any]:
    """Return the range of each column and how well it interpolates, as a table for people."""
    names = [name for name, values in made.columns.items() if bool(np.isfinite(values).any())]
    entries = [made.record["interpolation"][name] for name in names]

    def percent(key: str) -> list[float | None]:
        return [None if e.get(key) is None else round(100.0 * e[key], 3) for e in entries]

    return {
        "column": names,
        "smallest": [float(np.nanmin(made.columns[name])) for name in names],
        "largest": [float(np.nanmax(made.columns[name])) for name in names],
        "error_(%)": percent("largest_error"),
        "95_%_below_(%)": percent("error_of_95_percent"),
    }


def _errors(record: Mapping[str, Any]) -> list[str]:
    """Return what to know about interpolating, the errors that matter named with their place."""
    found = []
    for name in (*_SHOWN, "heat_flux_W_m2"):
        entry = record["interpolation"].get(name, {})
        if entry.get("largest_error") is None:
            continue
        at = entry["at"]
        of = "of the value" if entry["relative_to"] == "value" else "of the largest value"
        place = f"{at['altitude_m'] / 1e3:g} km, {at['air_speed_m_s'] / 1e3:g} km/s"
        place += f", {at['angle_of_attack_deg']:g} deg"
        if at["sideslip_deg"]:
            place += f", sideslip {at['sideslip_deg']:g} deg"
        found.append(
            f"Interpolating {name} errs by {100 * entry['largest_error']:.2g} % {of} at most, at {place}."
        )
    by_axis = record["drag_error_by_axis"]
    if found and by_axis:
        parts = ", ".join(f"{name} {100 * error:.2g} %" for name, error in by_axis.items())
        found.append(f"Of the drag coefficient's, along each axis alone: {parts}.")
    return found
