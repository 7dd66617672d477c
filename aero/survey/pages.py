"""A survey as figures and one page: the results turned into the plain things the report room takes."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
import pandas as pd

import aero
from aero.report import (
    SEGMENT_COLUMNS,
    Page,
    Picture,
    Section,
    Sheet,
    figure_air,
    figure_coefficients,
    figure_heating,
    figure_map,
    figure_strips,
    footer_text,
    png,
    render,
    svg,
    why_no_heating,
)
from aero.survey.body_pages import body_figure, body_sections, hottest_heating
from aero.survey.field import map_field
from aero.survey.models import models_used

if TYPE_CHECKING:
    from matplotlib.figure import Figure

    from aero.survey.one_pass import Survey

CAUTIONS = (
    "These are screening results. They are not a basis for sizing thermal protection, for clearing debris casualty "
    "risk or for a licence; those need qualified practice and the authority concerned.",
    "Bands are 95 % under the stated uncertainties, several of which are judgement. A band is not a guarantee, and "
    "it holds no error of the trajectory or of the vehicle file.",
    "Stagnation heating is that of one point. Shoulders, gaps, steps and reattaching flow can be hotter.",
)


def write_report(
    survey: Survey,
    record: Mapping[str, Any],
    compared: pd.DataFrame,
    folder: Path,
    progress: Callable[[float], None],
) -> None:
    """Write `figures/*.svg`, `figures/*.png` and `report.html` into a folder.

    Parameters
    ----------
    survey : Survey
    record : mapping
        As from `survey_record`; the page's provenance is made from it.
    compared : DataFrame
        As from `comparisons`.
    folder : Path
    progress : callable
        Called with the share of this work just done.
    """
    footer = footer_text(
        vehicle=survey.vehicle.name,
        trajectory=survey.trajectory.name,
        atmosphere=survey.atmosphere.name,
        free_path=survey.settings.free_path,
        version=aero.__version__,
        digest=str(record["digest"]),
    )
    drawn: dict[str, str] = {}
    place = folder / "figures"
    place.mkdir()
    makers = figure_makers(survey, footer)
    heating = hottest_heating(survey)
    if heating is not None:
        makers["body"] = lambda: body_figure(survey, heating[0], footer)
    for name, make in makers.items():
        figure = make()
        drawn[name] = svg(figure)
        (place / f"{name}.svg").write_text(drawn[name], encoding="utf-8")
        (place / f"{name}.png").write_bytes(png(figure))
        progress(0.9 / len(makers))
    bodies = body_sections(survey, compared, drawn, heating)
    page = report_page(survey, record, drawn, bodies)
    (folder / "report.html").write_text(render(page), encoding="utf-8")
    progress(0.1)


def figure_makers(survey: Survey, footer: str = "") -> dict[str, Callable[[], Figure]]:
    """Return what draws each figure of a survey, by file name, in reading order.

    Figures that would show nothing (strips without times, heating without a nose radius) are left out.
    """
    points, bounds = survey.points, survey.settings.bounds
    segments = survey.segments if len(survey.segments) else None
    makers: dict[str, Callable[[], Figure]] = {
        "strips": lambda: figure_strips(
            points, segments, bounds=bounds, lengths=survey.lengths, footer=footer
        ),
        "map": lambda: figure_map(
            points, survey.crossings, bounds=bounds, field=map_field(survey), footer=footer
        ),
        "coefficients": lambda: figure_coefficients(points, survey.crossings, bounds=bounds, footer=footer),
        "heating": lambda: figure_heating(points, segments, bounds=bounds, footer=footer),
        "air": lambda: figure_air(points, footer=footer),
    }
    if why_no_heating(points) is not None:
        del makers["heating"]
    if not np.isfinite(points["drag_coefficient"].to_numpy()).any():
        del makers["coefficients"]
    return makers


def report_page(
    survey: Survey, record: Mapping[str, Any], drawn: Mapping[str, str], bodies: Sequence[Section] = ()
) -> Page:
    """Return the page of a survey.

    Parameters
    ----------
    survey : Survey
    record : mapping
        As from `survey_record`.
    drawn : mapping of figure name to SVG
    bodies : sequence of Section
        What stands between stagnation heating and the atmosphere.
    """
    first, last = report_sections(survey, record, drawn)
    return Page(
        title=f"{survey.vehicle.name} on {survey.trajectory.name}",
        sentence=survey.summary,
        sections=[*first, *bodies, *last],
        models=models_used(survey),
        notes=survey.notes,
        cautions=CAUTIONS,
        provenance={
            k: record[k] for k in ("inputs", "atmosphere", "options", "versions", "vehicle", "digest")
        },
        facts=facts(survey, record),
    )


def report_sections(
    survey: Survey, record: Mapping[str, Any], drawn: Mapping[str, str]
) -> tuple[list[Section], list[Section]]:
    """Return the sections of the page in reading order: those up to heating, and those after the body."""

    def pictures(name: str, caption: str) -> list[Picture]:
        return [Picture(drawn[name], caption)] if name in drawn else []

    crossings = Sheet(
        survey.crossings,
        "Crossings: where a Knudsen number passes a bound; low and high are the 95 % range over density and "
        "cross-sections.",
        file="crossings.csv",
    )
    segments = Sheet(
        survey.segments,
        "Segments: each length's flight cut at its crossings.",
        columns=SEGMENT_COLUMNS,
        file="segments.csv",
    )
    timed = bool(len(survey.segments))
    first = [
        Section(
            "Regimes along the flight",
            pictures=pictures(
                "strips", "One row a length, coloured by regime; numbers are shares of the heat load."
            ),
            sheets=[crossings] if timed else [],
        ),
        Section(
            "Map of the flight",
            pictures=pictures(
                "map", "Altitude against air-relative speed, over the regimes of the reference length."
            ),
        ),
        Section(
            "Segments and methods",
            sheets=[segments, Sheet(methods(survey.segments), "Why.")] if timed else [],
        ),
        Section(
            "Drag",
            text=[drag_text(survey)],
            pictures=pictures("coefficients", "Drag coefficient between its limits, with the 95 % band."),
        ),
        Section(
            "Stagnation heating",
            text=[heat_text(survey, record)],
            pictures=pictures("heating", "Stagnation heat flux with its limits and band, and the heat load."),
        ),
    ]
    last = [
        Section(
            "Atmosphere",
            text=[survey.atmosphere.description + "."],
            pictures=pictures("air", "The air the flight met."),
        ),
    ]
    return first, last


def facts(survey: Survey, record: Mapping[str, Any]) -> dict[str, str]:
    """Return the short facts under the summary."""
    from aero.report import format_quantity

    found = {
        "Atmosphere": survey.atmosphere.description,
        "Points": f"{len(survey.points):,}",
    }
    shown = (
        ("Peak heat flux", "peak_heat_flux_W_m2", "W/m²", "peak_heat_flux_altitude_m"),
        (
            "Peak drag deceleration",
            "peak_drag_deceleration_m_s2",
            "m/s²",
            "peak_drag_deceleration_altitude_m",
        ),
        ("Heat load", "heat_load_J_m2", "J/m²", None),
    )
    results = record["results"]
    for title, name, unit, where in shown:
        value = results.get(name)
        if value is None:
            continue
        found[title] = format_quantity(value, unit)
        if where is not None:
            found[title] += f" at {format_quantity(results[where], 'm')}"
    return found


def methods(segments: pd.DataFrame) -> pd.DataFrame:
    """Return the method and its reason a segment."""
    return segments[["length", "regime", "method", "method_reason"]]


def drag_text(survey: Survey) -> str:
    """Return a paragraph on the drag coefficient."""
    from aero.bridge import bridge_for

    values = survey.points["drag_coefficient"].to_numpy()
    if not np.isfinite(values).any():
        return "No drag coefficient: the vehicle has no shape, so that its limits are not known."
    bridge = bridge_for(survey.vehicle, "drag")
    return (
        f"On the reference area of {survey.vehicle.reference_area:.4g} m². The coefficient runs from "
        f"{np.nanmin(values):.3g} to {np.nanmax(values):.3g} along this flight. Bridge: {bridge}."
    )


def heat_text(survey: Survey, record: Mapping[str, Any]) -> str:
    """Return a paragraph on stagnation heating."""
    why = why_no_heating(survey.points)
    if why is not None:
        return why
    from aero.bridge import bridge_for
    from aero.report import format_quantity

    peak = record["results"]["peak_heat_flux_W_m2"]
    at = record["results"]["peak_heat_flux_altitude_m"]
    radius = format_quantity(survey.vehicle.nose_radius or np.nan, "m")
    return (
        f"At a nose radius of {radius}; convective bridged plus radiative. The largest flux among the points is "
        f"{format_quantity(peak, 'W/m²')} at {format_quantity(at, 'm')}. Bridge: "
        f"{bridge_for(survey.vehicle, 'heating')}."
    )
