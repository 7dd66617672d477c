"""`aero point`: one condition, everything known about it."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import click

from aero.cli import options as shared
from aero.cli.show import CAUTION, print_csv, print_json, say, show
from aero.errors import InputError
from aero.units import quantity

if TYPE_CHECKING:
    from aero.body import Vehicle


@click.command(
    "point",
    epilog="Example: aero point --altitude 100km --speed 7.5km/s --length 1m --length gap=1.5mm",
)
@click.option("--altitude", type=shared.Quantity("length", "100km"), required=True, help="Geodetic altitude.")
@click.option(
    "--speed", type=shared.Quantity("speed", "7.5km/s"), required=True, help="Speed relative to the air."
)
@click.option(
    "--length",
    "lengths",
    multiple=True,
    metavar="[NAME=]1m",
    help="A length whose regime matters; may be repeated.",
)
@click.option("--vehicle", "vehicle_file", type=click.Path(), metavar="FILE", help="A vehicle file (TOML).")
@click.option(
    "--shape", metavar="KIND", help="A body without a file: sphere, cylinder, flat-plate, cone, ..."
)
@click.option("--diameter", help="Of a sphere or cylinder.")
@click.option("--nose-radius", help="Of a sphere-cone.")
@click.option("--half-angle", help="Of a cone or sphere-cone.")
@click.option("--base-radius", help="Of a cone or sphere-cone.")
@click.option("--body-length", help="Of a cylinder, flat plate or box.")
@click.option("--body-width", help="Of a flat plate or box.")
@click.option("--body-height", help="Of a box.")
@click.option(
    "--angle-of-attack",
    type=shared.Quantity("angle", "10deg"),
    help="Replaces the vehicle's own angle of attack.",
)
@click.option(
    "--sideslip", type=shared.Quantity("angle", "5deg"), help="Replaces the vehicle's own sideslip."
)
@shared.place_options
@shared.atmosphere_options
@shared.model_options
@shared.format_option("table", "json", "csv")
def command(**options: Any) -> None:
    """Tell everything known about one flight condition."""
    from aero.survey.one_point import point

    vehicle = _vehicle(options)
    if vehicle is not None:
        vehicle = shared.vehicle_with(vehicle, **options)
    idle = next((name for name in _OF_A_BODY if options[name] not in (None, False)), None)
    if vehicle is None and idle is not None:
        idle = f"--{idle.replace('_', '-')}"
        raise InputError("acts on a body, and none is given", source=idle, remedy="add --vehicle or --shape")
    lengths = _lengths(options["lengths"], vehicle)
    if vehicle is None and not lengths:
        raise InputError(
            "no length is given",
            source="aero point",
            remedy="give --length 1m, --vehicle FILE or --shape sphere",
        )
    missing = missing_of(options)
    air_model, why = shared.choose_atmosphere(
        missing=missing,
        **{k: options[k] for k in ("atmosphere", "activity", "f107", "f107a", "ap", "space_weather")},
    )
    answer = point(
        options["altitude"],
        options["speed"],
        lengths=lengths,
        vehicle=vehicle,
        atmosphere=air_model,
        settings=shared.settings_from(**options),
        latitude=options["latitude"],
        longitude=options["longitude"],
        date=options["date"],
        angle_of_attack=options["angle_of_attack"],
        sideslip=options["sideslip"],
    )
    style = options["style"]
    if style == "json":
        print_json(answer)
    elif style == "csv":
        rows = list(flatten(answer))
        print_csv([name for name, _ in rows], [[value for _, value in rows]])
    else:
        from aero.cli.text import condition_text

        say(f"Air: {air_model.description}, {why}.")
        show(condition_text(answer))
    for note in answer["notes"]:
        say(f"note: {note}", style=style)
    if vehicle is not None:
        say(CAUTION, style=style)


def missing_of(options: dict[str, Any]) -> str | None:
    """Return what the options leave unknown of date and place, None where all is known."""
    place = options["latitude"] is not None and options["longitude"] is not None
    if place and options["date"] is not None:
        return None
    if not place and options["date"] is None:
        return "neither date nor place"
    return "no date" if place else "no place"


def _lengths(given: tuple[str, ...], vehicle: Vehicle | None) -> dict[str, float]:
    lengths: dict[str, float] = {}
    for text in given:
        name, _, value = text.rpartition("=")
        name = name.strip() or "length"
        taken = name in lengths or (vehicle is not None and (name == "reference" or name in vehicle.lengths))
        if taken:
            raise InputError(
                f"two lengths are called '{name}'", source="--length", remedy="name them: --length NAME=1m"
            )
        lengths[name] = quantity(value, "length", source="--length")
        if lengths[name] <= 0.0:
            raise InputError(f"'{value.strip()}' is not a positive length", source="--length")
    return lengths


_OF_A_BODY = ("angle_of_attack", "sideslip", "perfect_gas", "surface_model", "catalysis", "no_shadowing")
# option -> (key of a [shape] table, dimension)
_DIMENSIONS = {
    "diameter": ("diameter", "length"),
    "nose_radius": ("nose_radius", "length"),
    "half_angle": ("half_angle", "angle"),
    "base_radius": ("base_radius", "length"),
    "body_length": ("length", "length"),
    "body_width": ("width", "length"),
    "body_height": ("height", "length"),
}


def _vehicle(options: dict[str, Any]) -> Vehicle | None:
    sized = [name for name in _DIMENSIONS if options[name] is not None]
    if options["vehicle_file"] is not None:
        if options["shape"] is not None or sized:
            extra = "--shape" if options["shape"] is not None else f"--{sized[0].replace('_', '-')}"
            raise InputError("does not go with --vehicle", source=extra, remedy="drop one of them")
        from aero.body import read_vehicle

        return read_vehicle(options["vehicle_file"])
    if options["shape"] is None:
        if sized:
            raise InputError(
                "needs a --shape", source=f"--{sized[0].replace('_', '-')}", remedy="add --shape sphere, say"
            )
        return None
    from aero.body import Vehicle
    from aero.body.shapes import build_shape

    sizes = {_DIMENSIONS[name][0]: options[name] for name in sized}
    flags = {_DIMENSIONS[name][0]: f"--{name.replace('_', '-')}" for name in _DIMENSIONS}
    return Vehicle.from_shape(build_shape(options["shape"], sizes, source="--shape", flags=flags))


def flatten(value: Any, prefix: str = "") -> Any:
    """Yield (dotted name, value) pairs of nested dictionaries and lists of named things."""
    if isinstance(value, dict):
        for key, inner in value.items():
            yield from flatten(inner, f"{prefix}.{key}" if prefix else key)
    elif isinstance(value, list) and value and isinstance(value[0], dict):
        for inner in value:
            named = {k: v for k, v in inner.items() if k != "name"}
            yield from flatten(named, f"{prefix}.{inner['name']}")
    elif isinstance(value, list):
        yield prefix, "; ".join(str(v) for v in value)
    else:
        yield prefix, value
