"""Options that several commands share, and what they mean together."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING, Any

import click
import numpy as np

from aero.errors import InputError
from aero.units import accepted, quantity, utc

if TYPE_CHECKING:
    from aero.air.state import Atmosphere
    from aero.body import Vehicle
    from aero.survey.settings import Settings

Decorator = Callable[[Callable[..., Any]], Callable[..., Any]]
ATMOSPHERE_NAMES = ("standard-1976", "nrlmsise-00", "msis-2.1")
PLACED = ("nrlmsise-00", "msis-2.1")
ACTIVITY_NAMES = ("low", "moderate", "high", "observed")
FREE_PATH_NAMES = ("hard-sphere", "vhs", "viscosity")
SURFACE_MODELS = ("maxwell-full", "maxwell", "oxygen-coverage", "cll", "specular")
CATALYSES = ("full", "partial", "none")
CONVECTIVE_NAMES = ("sutton-graves", "detra-kemp-riddell", "brandis-johnston", "fay-riddell")


class Quantity(click.ParamType[float]):
    """A number with its unit, such as 120km."""

    def __init__(self, dimension: str, example: str) -> None:
        self.dimension = dimension
        self.name = example

    def convert(self, value: object, param: click.Parameter | None, ctx: click.Context | None) -> float:
        """Return the SI value."""
        if isinstance(value, float):
            return value
        try:
            return quantity(value, self.dimension)
        except InputError as error:
            self.fail(str(error).rstrip("."), param, ctx)

    def get_metavar(self, param: click.Parameter, ctx: click.Context) -> str:  # noqa: ARG002 - click's signature
        """Show an example in the help."""
        return self.name


class Date(click.ParamType[np.datetime64]):
    """A UTC date in ISO 8601."""

    name = "UTC"

    def convert(
        self, value: object, param: click.Parameter | None, ctx: click.Context | None
    ) -> np.datetime64:
        """Return the date."""
        if isinstance(value, np.datetime64):
            return value
        try:
            return utc(value)
        except InputError as error:
            self.fail(str(error).rstrip("."), param, ctx)


class Bounds(click.ParamType[tuple[float, float, float]]):
    """Three regime bounds, comma-separated."""

    name = "K,K,K"

    def convert(
        self, value: object, param: click.Parameter | None, ctx: click.Context | None
    ) -> tuple[float, float, float]:
        """Return the bounds."""
        if isinstance(value, tuple):
            return value
        from aero.regime.tags import check_bounds

        try:
            return check_bounds([float(part) for part in str(value).split(",")])
        except InputError as error:
            self.fail(str(error).rstrip("."), param, ctx)
        except ValueError:
            self.fail(f"'{value}' are not three numbers; write them as 0.01,0.1,10", param, ctx)


class Wall(click.ParamType[float | str]):
    """A wall temperature or the word radiative."""

    name = "wall"

    def get_metavar(self, param: click.Parameter, ctx: click.Context) -> str:  # noqa: ARG002 - click's signature
        """Show what may be written in the help."""
        return "300K|radiative"

    def convert(self, value: object, param: click.Parameter | None, ctx: click.Context | None) -> float | str:
        """Return a temperature in kelvin or "radiative"."""
        if isinstance(value, float) or value == "radiative":
            return value
        try:
            return quantity(value, "temperature")
        except InputError:
            self.fail(
                f"'{value}' is neither 'radiative' nor a temperature with its unit ({accepted('temperature')})",
                param,
                ctx,
            )


def together(*decorators: Decorator) -> Decorator:
    """Return one decorator for several options, in the order they are listed."""

    def apply(function: Callable[..., Any]) -> Callable[..., Any]:
        for decorator in reversed(decorators):
            function = decorator(function)
        return function

    return apply


def format_option(*formats: str) -> Decorator:
    """Return `--format`."""
    return click.option(
        "--format",
        "style",
        type=click.Choice(formats or ("table", "json", "csv")),
        default="table",
        show_default=True,
        help="table for a person, json exact for a program.",
    )


place_options = together(
    click.option("--date", type=Date(), help="UTC of the point, or of time 0 where a file has no epoch."),
    click.option("--latitude", type=Quantity("angle", "10deg"), help="Geodetic latitude."),
    click.option("--longitude", type=Quantity("angle", "20deg"), help="Longitude, east positive."),
)
atmosphere_options = together(
    click.option(
        "--atmosphere",
        metavar="NAME|FILE",
        help="standard-1976, nrlmsise-00, msis-2.1, or a CSV table of your own. Default: nrlmsise-00 where date "
        "and place are known, else standard-1976.",
    ),
    click.option(
        "--activity",
        type=click.Choice(ACTIVITY_NAMES),
        help="Solar and geomagnetic activity for the empirical atmospheres. Default: moderate.",
    ),
    click.option("--f107", type=float, help="F10.7 of the day before, in solar flux units (sfu)."),
    click.option("--f107a", type=float, help="81-day mean F10.7, in sfu."),
    click.option("--ap", type=float, help="Daily Ap index, 2 nT units."),
    click.option(
        "--space-weather",
        type=click.Path(dir_okay=False),
        help="A file of daily indices, as docs/formats.md says.",
    ),
)
free_path_option = click.option(
    "--free-path",
    type=click.Choice(FREE_PATH_NAMES),
    default="hard-sphere",
    show_default=True,
    help="Definition of the mean free path shown and used for the tags.",
)
body_options = together(
    click.option(
        "--surface-model",
        type=click.Choice(SURFACE_MODELS),
        help="How molecules leave the surface; replaces the vehicle's own.",
    ),
    click.option(
        "--catalysis",
        type=click.Choice(CATALYSES),
        help="How far the wall recombines atoms; replaces the vehicle's own.",
    ),
    click.option(
        "--no-shadowing", is_flag=True, help="Elements behind others get the flow as if they stood free."
    ),
    click.option("--wall-temperature", "wall", type=Wall(), help="Replaces the vehicle's own."),
    click.option(
        "--perfect-gas", is_flag=True, help="Stagnation pressure of a perfect gas in the continuum limit."
    ),
    click.option(
        "--convective",
        metavar="NAME",
        default="sutton-graves",
        show_default=True,
        help=f"Continuum stagnation heating: {', '.join(CONVECTIVE_NAMES)}.",
    ),
)
model_options = together(
    free_path_option,
    click.option(
        "--bounds",
        type=Bounds(),
        default=(0.01, 0.1, 10.0),
        help="Regime bounds in Knudsen number. [0.01,0.1,10]",
    ),
    body_options,
)
replace_option = click.option("--replace", is_flag=True, help="Replace an existing output.")


def vehicle_with(vehicle: Vehicle, **options: Any) -> Vehicle:
    """Return a vehicle with what the body options replace of it."""
    changed = vehicle
    if options["surface_model"] is not None:
        changed = changed.with_model(options["surface_model"])
    if options["catalysis"] is not None:
        changed = changed.with_catalysis(options["catalysis"])
    return changed.with_shadows(False) if options["no_shadowing"] else changed


def settings_from(**options: Any) -> Settings:
    """Return the settings the model options say."""
    from aero.survey.settings import Settings

    return Settings(
        bounds=options.get("bounds", Settings.bounds),
        free_path=options.get("free_path", Settings.free_path),
        wall=options["wall"],
        convective=options["convective"],
        real_gas=not options["perfect_gas"],
    )


def choose_atmosphere(
    *,
    atmosphere: str | None,
    activity: str | None,
    f107: float | None,
    f107a: float | None,
    ap: float | None,
    space_weather: str | None,
    missing: str | None,
) -> tuple[Atmosphere, str]:
    """Return the atmosphere the options ask for, and a clause that says why it was taken.

    Parameters
    ----------
    missing : str or None
        What is not known of date and place ("no date"), None where all is known.
    """
    indices = {"--f107": f107, "--f107a": f107a, "--ap": ap}
    given = [name for name, value in indices.items() if value is not None]
    solar = [*given, *(["--activity"] if activity else []), *(["--space-weather"] if space_weather else [])]
    name, why = _name_and_reason(atmosphere, missing, solar)
    if name in PLACED and missing:
        raise InputError(
            f"{missing} is known, but {name} needs date, latitude and longitude",
            source="--atmosphere",
            remedy="give --date, --latitude and --longitude, or choose standard-1976",
        )
    if name not in PLACED:
        if solar:
            raise InputError(
                f"does not act on {name}", source=solar[0], remedy="drop it or choose nrlmsise-00 or msis-2.1"
            )
        from aero.air import StandardAtmosphere1976, TableAtmosphere

        chosen: Atmosphere = StandardAtmosphere1976() if name == "standard-1976" else TableAtmosphere(name)
        return chosen, why
    from aero.air import Msis

    if len([s for s in (activity, space_weather, given) if s]) > 1:
        raise InputError(
            "both state the solar activity", source=" and ".join(solar), remedy="keep one of them"
        )
    if given and len(given) < 3:
        absent = [name for name in indices if name not in given]
        raise InputError(f"{', '.join(given)} given without {', '.join(absent)}", remedy="give all three")
    if given:
        return Msis(name, f107=f107, f107a=f107a, ap=ap), why
    if space_weather:
        return Msis(name, space_weather=space_weather), why
    return Msis(name, activity=activity or "moderate"), why


def _name_and_reason(atmosphere: str | None, missing: str | None, solar: list[str]) -> tuple[str, str]:
    if atmosphere in ATMOSPHERE_NAMES:
        return str(atmosphere), "as asked"
    if atmosphere is not None:
        if "." not in atmosphere and "/" not in atmosphere:
            from aero.errors import choose

            choose(atmosphere, ATMOSPHERE_NAMES, "atmosphere", source="--atmosphere")
        return atmosphere, "as asked"
    if missing and solar:
        raise InputError(
            f"needs an empirical atmosphere, and {missing} is known",
            source=solar[0],
            remedy="give --date, --latitude and --longitude",
        )
    if missing:
        return "standard-1976", f"since {missing} is known"
    return "nrlmsise-00", "since date and place are known"
