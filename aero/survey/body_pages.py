"""Sections of the report about the body: heating over it, force and moment, and what would change the answer."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

import numpy as np
import pandas as pd

from aero.heat import SURFACE_METHODS, SurfaceHeating, surface_heating
from aero.regime import REGIMES
from aero.report import Picture, Section, Sheet, format_quantity
from aero.survey.comparisons import CORRELATIONS, MODELS, SWITCHES, At

if TYPE_CHECKING:
    from matplotlib.figure import Figure

    from aero.survey.one_pass import Survey

TITLES = {
    MODELS: "Gas-surface models: free-molecular drag at the most rarefied point of the flight",
    CORRELATIONS: "Continuum stagnation heating by each correlation, at the point of greatest heat flux, same wall",
    SWITCHES: "Switches: what each would make of drag at the most rarefied point and of heating at the hottest",
}
SHOWN = ("choice", "altitude_m", "quantity", "value", "change", "error")
MOMENT_ROWS = 8  # of the moment table, spread over the decades of Knudsen number


def hottest_heating(survey: Survey) -> tuple[SurfaceHeating, float] | None:
    """Return the heating over the body at the sample of greatest flux, and its altitude [m].

    None without a flux, without a shape, and for a vehicle that tumbles and so holds no attitude.
    """
    flux = survey.points["heat_flux_W_m2"].to_numpy()
    held = survey.vehicle.shape is not None and not survey.vehicle.tumbling
    if not held or not np.isfinite(flux).any() or np.nanmax(flux) <= 0.0:
        return None
    row = int(np.nanargmax(flux))
    at = At.row(survey, row)
    wall = survey.settings.wall
    found = surface_heating(
        survey.vehicle,
        at.air,
        at.moving,
        survey.points["knudsen.reference"].iloc[row : row + 1].to_numpy(),
        wall=wall,
        angle_of_attack=at.angle,
        sideslip=at.sideslip,
        correlation=survey.settings.convective,
        catalysis=survey.vehicle.surface.catalysis != "full",
    )
    return None if found is None else (found, float(at.inputs.altitude[0]))


def body_figure(survey: Survey, heating: SurfaceHeating, footer: str) -> Figure:
    """Return the picture of the body at the hottest point of the flight."""
    from aero.report.body import figure_body

    bounds = survey.settings.bounds
    here = heating.at(0)
    return figure_body(
        here.elements.vertices,
        here.flux,
        [REGIMES[index] for index in here.regime_index(bounds)],
        bounds=bounds,
        direction=here.direction,
        mark=here.maximum_at,
        footer=footer,
    )


def body_sections(
    survey: Survey,
    table: pd.DataFrame,
    drawn: Mapping[str, str],
    heating: tuple[SurfaceHeating, float] | None,
) -> list[Section]:
    """Return the sections on the body, those without content left out."""
    sections = []
    if heating is not None and "body" in drawn:
        text = heating_text(*heating)
        caption = "Heat flux and local regime over the body at the hottest point of the flight."
        sections.append(Section("Heating over the body", [text], [Picture(drawn["body"], caption)]))
    moment = moment_table(survey)
    if moment is not None:
        sections.append(
            Section(
                "Force and moment",
                text=[
                    "About the moment point of the vehicle file. The global bridge blends each coefficient with one "
                    "fraction; the local bridge gives every surface element its own by its incidence. Form and "
                    "numbers of the local bridge are judgement: where the two differ, the moment is not known."
                ],
                sheets=[Sheet(moment, "Along the flight, by decade of Knudsen number.", file="points.csv")],
            )
        )
    sheets = [
        Sheet(part[list(SHOWN)], TITLES[str(topic)], file="comparisons.csv")
        for topic, part in table.groupby("topic", sort=False)
    ]
    if sheets:
        sections.append(
            Section(
                "What would change the answer",
                text=[
                    "Change is against this survey. An error is the statistical 1-sigma of a sampled value."
                ],
                sheets=sheets,
            )
        )
    return sections


def heating_text(heating: SurfaceHeating, altitude: float) -> str:
    """Return where the hottest element is, and what the picture is made of."""
    here = heating.at(0)
    place = ", ".join(f"{axis} {value:.3g} m" for axis, value in zip("xyz", here.maximum_at, strict=True))
    methods = sorted({SURFACE_METHODS[int(code)] for code in np.unique(here.method)})
    return (
        f"At {format_quantity(altitude, 'm')}: largest convective flux over the body "
        f"{format_quantity(float(here.maximum), 'W/m²')} at {place} (body axes: x forward, y right, z down). "
        f"Radius for heating {here.radius.radius:.3g} m. How elements were found: ({') ('.join(methods)}). Edges, "
        "gaps, shocks that meet the body, turbulence and shock-layer radiation are not in it."
    )


def moment_table(survey: Survey) -> pd.DataFrame | None:
    """Return force and moment at some samples, None for a vehicle without a moment point."""
    points = survey.points
    if "pitch_moment_coefficient" not in points:
        return None
    knudsen = points["knudsen.reference"].to_numpy()
    wanted = np.geomspace(np.nanmax(knudsen), np.nanmin(knudsen), MOMENT_ROWS)
    rows = sorted({int(np.nanargmin(np.abs(np.log(knudsen / k)))) for k in wanted})
    names = (
        "time_s",
        "altitude_m",
        "knudsen.reference",
        "axial_force_coefficient",
        "normal_force_coefficient",
        "pitch_moment_coefficient",
        "pitch_moment_coefficient_local",
        "centre_of_pressure_m",
        "pitch_stability_per_rad",
        "pitch_stability_local_per_rad",
    )
    return points.iloc[rows][list(names)].reset_index(drop=True)
