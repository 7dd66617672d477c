"""The models a survey used, each with its source, for the report."""

from __future__ import annotations

from typing import TYPE_CHECKING

from aero.bridge import BRIDGES, bridge_for
from aero.heat import CONVECTIVE
from aero.report import Model

if TYPE_CHECKING:
    from aero.body import Vehicle
    from aero.survey.one_pass import Survey

_CATALYTIC = {
    "full": "fully catalytic wall",
    "partial": "partly catalytic wall",
    "none": "non-catalytic wall",
}
FREE_PATH_TEXT = {
    "hard-sphere": (
        "1/(√2 π d² n) with d = 3.65e-10 m for every mixture",
        "U.S. Standard Atmosphere 1976",
    ),
    "vhs": ("variable hard spheres, averaged over mole fractions", "Bird 1994"),
    "viscosity": ("(µ/p) √(π k T/(2 m))", "Jennings 1988, J. Aerosol Sci. 19"),
}


def models_used(survey: Survey) -> list[Model]:
    """Return the models and assumptions behind a survey, in the order the data flows."""
    low, middle, high = survey.settings.bounds
    text, source = FREE_PATH_TEXT[survey.settings.free_path]
    models = [
        Model("Atmosphere", survey.atmosphere.description, "named in the description"),
        Model("Mean free path", f"{survey.settings.free_path}: {text}", source),
        Model(
            "Regime bounds",
            f"continuum below Kn {low:g}, slip to {middle:g}, transitional to {high:g}, free-molecular from there",
            "common practice, no source",
        ),
        Model(
            "Viscosity",
            "Sutherland's law in the 1976 standard's constants below 80 km, a Wilke mixture above 90 km",
            "U.S. Standard Atmosphere 1976; Wilke 1950, J. Chem. Phys. 18",
        ),
        Model(
            "Shock",
            "normal shock of a perfect gas; stand-off 0.78 R ρ₁/ρ₂; free path behind by variable hard spheres",
            "Rankine-Hugoniot; Bird 1994; stand-off from memory of Seiff 1962",
        ),
        Model(
            "Emitted Knudsen number",
            "an oncoming molecule among those re-emitted from a stagnation point",
            "derived from kinetic theory, see docs/method.md",
        ),
    ]
    return [*models, *_drag(survey), *_heat(survey), *_along(survey)]


def _drag(survey: Survey) -> list[Model]:
    vehicle = survey.vehicle
    bridge = bridge_for(vehicle, "drag")
    surface = vehicle.surface
    continuum = (
        Model("Continuum drag", "the vehicle file's own table", "the vehicle file")
        if vehicle.continuum is not None
        else Model(
            "Continuum drag",
            "modified Newtonian, "
            + (
                "stagnation pressure of equilibrium air"
                if survey.settings.real_gas
                else "stagnation pressure of a perfect gas"
            ),
            "Lees 1955; Rayleigh's pitot formula; an extrapolation below Mach 2",
        )
    )
    return [
        Model("Free-molecular drag", _surface(vehicle), _SURFACE_SOURCE[surface.model]),
        continuum,
        Model("Drag between", f"{bridge}: {BRIDGES[bridge.function].formula}", bridge.source),
    ]


_SURFACE_SOURCE = {
    "maxwell": "Schaaf & Chambre 1958; Sentman 1961; Bird 1994",
    "cll": "Cercignani & Lampis 1971; Lord 1991",
}


def _surface(vehicle: Vehicle) -> str:
    surface = vehicle.surface
    if surface.model == "cll":
        text = (
            "each species with its own speed ratio; Cercignani-Lampis-Lord with normal energy accommodation "
            f"{surface.normal_energy_accommodation:g} and tangential momentum accommodation "
            f"{surface.tangential_momentum_accommodation:g}"
        )
    else:
        text = (
            "each species with its own speed ratio; Maxwell with energy accommodation "
            f"{surface.energy_accommodation}, diffuse fraction {surface.diffuse_fraction:g}"
        )
    if vehicle.parts:
        text += "; parts with surfaces of their own keep them"
    shadows = "elements behind others get none of the flow" if vehicle.shadows else "shadowing off"
    return f"{text}; {shadows}; one reflection"


def _heat(survey: Survey) -> list[Model]:
    if not survey.vehicle.heats:
        return []
    correlation = CONVECTIVE[survey.settings.convective]
    heat = bridge_for(survey.vehicle, "heating")
    return [
        Model(
            "Free-molecular heating",
            "stagnation element facing the flow, internal energy of diatomic molecules included",
            "Bird 1994",
        ),
        Model(
            "Continuum heating",
            f"{survey.settings.convective}, equilibrium, {_CATALYTIC[survey.vehicle.surface.catalysis]}, hot-wall "
            "factor",
            correlation.source,
        ),
        Model("Heating between", str(heat), heat.source),
        Model("Radiation of the shock layer", "equilibrium correlation, 10-16 km/s", "Tauber & Sutton 1991"),
        Model("Wall temperature", _wall(survey), "the vehicle file, the trajectory or the option"),
    ]


def _wall(survey: Survey) -> str:
    chosen = survey.settings.wall
    if isinstance(chosen, float):
        return f"fixed at {chosen:g} K by the option"
    if chosen is None and survey.trajectory.wall_temperature is not None:
        return "the trajectory's own column"
    fixed = survey.vehicle.surface.temperature
    if chosen == "radiative" or fixed is None:
        return f"radiative balance, emissivity {survey.vehicle.surface.emissivity:g}, surroundings equivalent to 250 K"
    return f"fixed at {fixed:g} K by the vehicle file"


def _along(survey: Survey) -> list[Model]:
    models = [
        Model(
            "95 % bands",
            "named contributions in quadrature: density bias and scatter, cross-sections, accommodation, bridge centre "
            "and width, continuum level, wall; one-sided parts on their side",
            "1-sigma values: docs/method.md, most of them judgement",
        )
    ]
    if survey.trajectory.time is not None:
        models.append(
            Model(
                "Between the samples",
                "shape-preserving cubics in time; crossings are roots of the model there; loads are integrals of the "
                "cubics",
                "Fritsch & Butland 1984",
            )
        )
    return models
