"""`aero fly`: an entry flown with the tool's own coefficients."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from aero.cli import options as shared
from aero.cli.point import missing_of
from aero.cli.show import CAUTION, print_csv, print_json, say, show
from aero.errors import InputError

if TYPE_CHECKING:
    from aero.survey.database import Database


@click.command(
    "fly",
    epilog="Example: aero fly --vehicle trajectories/marram.toml --altitude 120km --speed 7.6km/s "
    "--flight-path-angle -3deg --latitude 30deg --longitude 10deg --heading 90deg --out descent.csv",
)
@click.option("--vehicle", "vehicle_file", type=click.Path(), metavar="FILE", help="Vehicle file (TOML).")
@click.option(
    "--ballistic-coefficient",
    type=shared.Quantity("ballistic coefficient", "100kg/m2"),
    help="A constant m/(C_D A) in place of the vehicle's own drag; no vehicle file is then needed.",
)
@click.option(
    "--database",
    "database_file",
    type=click.Path(),
    metavar="FILE|DIR",
    help="Interpolate coefficients and heat flux in what aero database wrote, and compute none.",
)
@click.option(
    "--altitude", type=shared.Quantity("length", "120km"), required=True, help="Geodetic, of the start."
)
@click.option("--speed", type=shared.Quantity("speed", "7.6km/s"), required=True, help="At the start.")
@click.option(
    "--flight-path-angle",
    type=shared.Quantity("angle", "-3deg"),
    required=True,
    help="Above the horizontal; negative down.",
)
@click.option(
    "--heading", type=shared.Quantity("angle", "90deg"), help="From north through east. Default: 90deg."
)
@click.option(
    "--velocity-frame",
    type=click.Choice(["air", "inertial"]),
    default="air",
    show_default=True,
    help="What speed and angles are relative to.",
)
@click.option("--angle-of-attack", type=shared.Quantity("angle", "10deg"), help="Held all the way.")
@click.option(
    "--bank",
    type=shared.Quantity("angle", "20deg"),
    help="Turns lift about the velocity, positive to the right; held all the way.",
)
@click.option(
    "--until", metavar="300s|DATE", help="End at the latest at this time, or at a date where --date is given."
)
@click.option(
    "--step", type=shared.Quantity("time", "1s"), help="Time between samples. Default: up to 1000 rows."
)
@click.option(
    "--out",
    type=click.Path(),
    metavar="FILE.csv",
    help="Trajectory file to write (.csv, .tsv, .parquet), which survey reads.",
)
@shared.replace_option
@shared.place_options
@shared.atmosphere_options
@shared.body_options
@shared.format_option("table", "json", "csv")
def command(**options: Any) -> None:
    """Fly an entry in three degrees of freedom, to the ground or out of the atmosphere again."""
    from aero.flight import fly

    acting = body_options_given(options)
    if options["vehicle_file"] is None and acting:
        raise InputError("acts on a vehicle, and none is given", source=acting[0], remedy="drop it")
    if options["out"] is not None:
        _check_out(options)
    vehicle = None
    if options["vehicle_file"] is not None:
        from aero.body import read_vehicle

        vehicle = shared.vehicle_with(read_vehicle(options["vehicle_file"]), **options)
    places = {k: options[k] for k in ("latitude", "longitude", "heading") if options[k] is not None}
    air_model, why = shared.choose_atmosphere(
        missing=missing_of(options),
        **{k: options[k] for k in ("atmosphere", "activity", "f107", "f107a", "ap", "space_weather")},
    )
    flight = fly(
        vehicle,
        altitude=options["altitude"],
        speed=options["speed"],
        flight_path_angle=options["flight_path_angle"],
        velocity_frame=options["velocity_frame"],
        atmosphere=air_model,
        epoch=options["date"],
        ballistic_coefficient=options["ballistic_coefficient"],
        angle_of_attack=options["angle_of_attack"],
        bank=options["bank"],
        database=_database(options),
        settings=shared.settings_from(**options),
        until=_until(options),
        step=options["step"],
        **places,
    )
    assumed = [f"--{name} was not given; {text}." for name, text in _ASSUMED.items() if options[name] is None]
    notes = [*assumed, *flight.notes]
    out = options["out"]
    if out is not None:
        from aero.trajectory import write_trajectory

        Path(out).absolute().parent.mkdir(parents=True, exist_ok=True)
        comments = [_recipe(options, air_model.description), *notes]
        write_trajectory(
            flight.trajectory(Path(out).stem), out, replace=options["replace"], comments=comments
        )
    _show(flight, air_model, why, notes, options)


_ASSUMED = {
    "latitude": "the start is on the equator",
    "longitude": "the start is at longitude 0",
    "heading": "the flight heads due east",
}


def body_options_given(options: dict[str, Any]) -> list[str]:
    """Return the options on coefficients that were given."""
    given = {
        "--wall-temperature": options["wall"] is not None,
        "--perfect-gas": options["perfect_gas"],
        "--convective": options["convective"] != "sutton-graves",
        "--surface-model": options["surface_model"] is not None,
        "--catalysis": options["catalysis"] is not None,
        "--no-shadowing": options["no_shadowing"],
    }
    return [name for name, yes in given.items() if yes]


def _database(options: dict[str, Any]) -> Database | None:
    """Return the database the coefficients come from; options that would act on computing them are refused."""
    if options["database_file"] is None:
        return None
    acting = body_options_given(options)
    if acting:
        raise InputError(
            "does not act on a database, whose coefficients are computed already",
            source=acting[0],
            remedy="drop it, or make the database with it",
        )
    from aero.survey.database import Database

    return Database.read(options["database_file"])


def _check_out(options: dict[str, Any]) -> None:
    from aero.survey.output import check_target

    if Path(options["out"]).suffix.lower() not in {".csv", ".tsv", ".parquet"}:
        raise InputError(
            f"'{Path(options['out']).suffix}' is not a trajectory format",
            source=options["out"],
            remedy="end the name in .csv, .tsv or .parquet",
        )
    check_target(options["out"], replace=options["replace"], folder=False)


def _until(options: dict[str, Any]) -> float | None:
    text = options["until"]
    if text is None:
        return None
    from aero.units import quantity, utc

    if "-" in text[1:] and text[:4].isdigit():
        if options["date"] is None:
            raise InputError(
                "is a date, and the flight has none", source="--until", remedy="give --date as well"
            )
        return float((utc(text, source="--until") - options["date"]).astype(float) * 1e-6)
    return quantity(text, "time", source="--until")


def _recipe(options: dict[str, Any], air: str) -> str:
    """Return what the flight was made with, as a comment of its file."""
    body = Path(options["vehicle_file"]).name if options["vehicle_file"] else "no vehicle file"
    if options["database_file"]:
        body += f" and {Path(options['database_file']).name}"
    return f"flown by aero fly with {body}; air: {air}"


def _show(flight: Any, air_model: Any, why: str, notes: list[str], options: dict[str, Any]) -> None:
    style = options["style"]
    say(f"Flown to: {flight.ended_by}; air: {air_model.description}, {why}.", style=style)
    summary = flight.summary()
    if style == "json":
        print_json({**summary, "notes": notes})
    elif style == "csv":
        from aero.trajectory.write import table_of

        table = table_of(flight.trajectory())
        print_csv(list(table), list(zip(*table.values(), strict=True)))
    else:
        from aero.cli.text import flight_text

        show(flight_text(summary))
    for note in notes:
        say(f"note: {note}", style=style)
    say(CAUTION, style=style)
    if options["out"] is not None:
        say(
            f"Wrote {options['out']}; survey it with: aero survey {options['out']} --vehicle FILE --out DIR",
            style=style,
        )
